package main

import (
	"bytes"
	"fmt"
	"image/color"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// The inks: one for each signal, and pale grounds for what is allowed.
var (
	water  = color.RGBA{R: 0x17, G: 0x5e, B: 0x78, A: 0xff}
	wood   = color.RGBA{R: 0x8a, G: 0x5a, B: 0x1c, A: 0xff}
	iron   = color.RGBA{R: 0x5b, G: 0x4b, B: 0x6e, A: 0xff}
	slate  = color.RGBA{R: 0x55, G: 0x5d, B: 0x62, A: 0xff}
	ground = color.RGBA{R: 0xe6, G: 0xee, B: 0xe9, A: 0xff}
)

const (
	width  = 18 * vg.Centimeter
	height = 20 * vg.Centimeter
)

// draw writes the pictures as PNG and SVG and returns their absolute paths; it
// writes none where there are no step responses.
func (r *results) draw(folder string) ([]string, error) {
	if r.unanswered != nil {
		return nil, nil
	}
	folder, err := filepath.Abs(folder)
	if err != nil {
		return nil, err
	}
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return nil, err
	}
	var paths []string
	for _, p := range []struct {
		name string
		a    answers
	}{{"setpoint", r.following}, {"offtake", r.offtaken}} {
		panels, err := r.panels(p.a)
		if err != nil {
			return nil, err
		}
		for _, form := range []struct {
			suffix string
			write  func([]*plot.Plot) ([]byte, error)
		}{{".png", asPNG}, {".svg", asSVG}} {
			b, err := form.write(panels)
			if err != nil {
				return nil, err
			}
			path := filepath.Join(folder, p.name+form.suffix)
			if err := os.WriteFile(path, b, 0o644); err != nil {
				return nil, err
			}
			paths = append(paths, path)
		}
	}
	return paths, nil
}

func asPNG(panels []*plot.Plot) ([]byte, error) {
	c := vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(130), vgimg.UseBackgroundColor(color.White))
	stack(panels, draw.New(c))
	var b bytes.Buffer
	_, err := vgimg.PngCanvas{Canvas: c}.WriteTo(&b)
	return b.Bytes(), err
}

func asSVG(panels []*plot.Plot) ([]byte, error) {
	c := vgsvg.New(width, height)
	stack(panels, draw.New(c))
	var b bytes.Buffer
	_, err := c.WriteTo(&b)
	return b.Bytes(), err
}

// stack draws panels above one another with their time axes aligned.
func stack(panels []*plot.Plot, c draw.Canvas) {
	rows := make([][]*plot.Plot, len(panels))
	for i, p := range panels {
		rows[i] = []*plot.Plot{p}
	}
	margin := 4 * vg.Millimeter
	caution := panels[0].X.Label.TextStyle
	caution.Color, caution.XAlign, caution.YAlign = slate, text.XLeft, text.YBottom
	caution.Font.Size = 8
	c.FillText(caution, vg.Point{X: c.Min.X + margin, Y: c.Min.Y + margin/2},
		"Linear model about one operating point, dead time as an approximant; not a basis for limits or interlocks.")
	tiles := draw.Tiles{Rows: len(panels), Cols: 1, PadY: 3 * vg.Millimeter, PadTop: margin, PadBottom: 2 * margin, PadLeft: margin, PadRight: margin}
	for i, row := range plot.Align(rows, tiles, c) {
		panels[i].Draw(row[0])
	}
}

// panels draws level, gate and valve after one step.
func (r *results) panels(a answers) ([]*plot.Plot, error) {
	swing, err := r.in.valveSwing.Float64()
	if err != nil {
		return nil, err
	}
	delay, err := r.in.deadTime.Float64()
	if err != nil {
		return nil, err
	}
	end := intervals * a.level.step

	level, err := newPanel("level / mm", a.level, water, end)
	if err != nil {
		return nil, err
	}
	peak, at := a.level.extreme()
	note := fmt.Sprintf("%s mm at %s", number(peak), duration(at))
	if q, err := a.level.function.FinalValue(); err == nil {
		final, err := q.Float64()
		if err != nil {
			return nil, err
		}
		band, what := 0.02*math.Abs(final), "within 2 % of the setpoint"
		if final == 0 {
			band, what = 0.1*math.Abs(peak), "within a tenth of the largest move"
		}
		level.band(final-band, final+band, end)
		level.label(end, final-band, what+" ", slate, text.XRight, text.YTop, -2)
		if final != 0 {
			note = fmt.Sprintf("overshoot %s %%", number(100*(peak/final-1)))
		}
	}
	side, gap := text.YBottom, vg.Length(4)
	if peak < 0 {
		side, gap = text.YTop, -4
	}
	level.label(at, peak, note, water, text.XLeft, side, gap)
	level.dimension(0, delay, fmt.Sprintf("dead time %g s", delay), peak < 0)

	gate, err := newPanel("gate / mm", a.gate, wood, end)
	if err != nil {
		return nil, err
	}
	last := a.gate.values[len(a.gate.values)-1]
	gate.label(end, last, "opening, "+number(last)+" mm at the end ", wood, text.XRight, text.YBottom, 4)

	valve, err := newPanel("valve current about rest / mA", a.current, iron, end)
	if err != nil {
		return nil, err
	}
	asked, at := a.current.extreme()
	valve.low, valve.high = -1.4*swing, 1.4*swing // what lies beyond is cut off
	valve.band(-swing, swing, end)
	valve.label(end, swing, "what the valve can give ", slate, text.XRight, text.YTop, -3)
	said := fmt.Sprintf("asks for %s mA at %s", number(asked), duration(at))
	if math.Abs(asked) > swing {
		said += ": beyond the valve, where the linear result is not valid"
	}
	valve.label(0.02*end, math.Copysign(0.62*swing, asked), said, iron, text.XLeft, text.YCenter, 0)
	valve.plot.X.Label.Text = "t / s"
	level.plot.X.Tick.Marker, gate.plot.X.Tick.Marker = evenTicks{bare: true}, evenTicks{bare: true}

	var out []*plot.Plot
	for _, p := range []*panel{level, gate, valve} {
		if err := p.finish(); err != nil {
			return nil, err
		}
		out = append(out, p.plot)
	}
	return out, nil
}

// panel is one picture of a stack.
type panel struct {
	plot      *plot.Plot
	low, high float64        // the range drawn
	ground    []plot.Plotter // below the curve
	curve     plot.Plotter
	labels    []plot.Plotter
	err       error
}

func newPanel(axis string, c curve, ink color.Color, end float64) (*panel, error) {
	p := &panel{plot: plot.New()}
	points := make(plotter.XYs, len(c.values))
	for i, v := range c.values {
		points[i] = plotter.XY{X: float64(i) * c.step, Y: v}
	}
	line, err := plotter.NewLine(points)
	if err != nil {
		return nil, err
	}
	line.Width, line.Color = 1.6, ink
	p.curve = line
	low, high := min(0, slices.Min(c.values)), max(0, slices.Max(c.values))
	room := 0.18 * (high - low)
	if room == 0 {
		room = 1
	}
	p.low, p.high = low-room, high+room
	p.plot.Y.Label.Text = axis
	for _, a := range []*plot.Axis{&p.plot.X, &p.plot.Y} {
		a.Padding = 0
		a.Color, a.Tick.Color, a.Tick.Label.Color, a.Label.TextStyle.Color = slate, slate, slate, slate
		a.Tick.Marker = evenTicks{}
	}
	zero, err := plotter.NewLine(plotter.XYs{{X: 0, Y: 0}, {X: end, Y: 0}})
	if err != nil {
		return nil, err
	}
	zero.Width, zero.Color = 0.4, slate
	p.ground = append(p.ground, zero)
	return p, nil
}

// band shades what is allowed.
func (p *panel) band(low, high, end float64) {
	area, err := plotter.NewPolygon(plotter.XYs{{X: 0, Y: low}, {X: end, Y: low}, {X: end, Y: high}, {X: 0, Y: high}})
	if err != nil {
		p.err = err
		return
	}
	area.Color, area.LineStyle.Width = ground, 0
	p.ground = append([]plot.Plotter{area}, p.ground...)
}

// label writes at a point of the plane.
func (p *panel) label(x, y float64, what string, ink color.Color, across text.XAlignment, along text.YAlignment, up vg.Length) {
	l, err := plotter.NewLabels(plotter.XYLabels{XYs: plotter.XYs{{X: x, Y: y}}, Labels: []string{what}})
	if err != nil {
		p.err = err
		return
	}
	l.TextStyle[0].Color, l.TextStyle[0].XAlign, l.TextStyle[0].YAlign = ink, across, along
	l.TextStyle[0].Font.Size = 9
	l.Offset.Y = up
	p.labels = append(p.labels, l)
}

// dimension draws a dimension line near the edge where the curve is not, with
// its length in words beside it.
func (p *panel) dimension(from, to float64, what string, below bool) {
	p.labels = append(p.labels, dimension{from, to, what, below, p.plot.X.Tick.Label})
}

type dimension struct {
	from, to float64
	what     string
	below    bool // the curve is below, so that the line goes to the upper edge
	style    draw.TextStyle
}

// Plot draws a line with arrowheads between two short end lines.
func (d dimension) Plot(c draw.Canvas, p *plot.Plot) {
	toX, _ := p.Transforms(&c)
	y := c.Min.Y + 3*vg.Millimeter
	if d.below {
		y = c.Max.Y - 3*vg.Millimeter
	}
	a, b := toX(d.from), toX(d.to)
	thin := draw.LineStyle{Color: slate, Width: 0.6}
	tick, arrow := vg.Length(4), vg.Length(3)
	c.StrokeLine2(thin, a, y, b, y)
	for _, e := range []struct{ x, way vg.Length }{{a, 1}, {b, -1}} {
		c.StrokeLine2(thin, e.x, y-tick, e.x, y+tick)
		c.StrokeLine2(thin, e.x, y, e.x+e.way*arrow, y+arrow/2)
		c.StrokeLine2(thin, e.x, y, e.x+e.way*arrow, y-arrow/2)
	}
	style := d.style
	style.Color, style.XAlign, style.YAlign = slate, text.XLeft, text.YCenter
	style.Font.Size = 9
	c.FillText(style, vg.Point{X: b + 2*vg.Millimeter, Y: y}, d.what)
}

func (p *panel) finish() error {
	p.plot.Add(p.ground...)
	p.plot.Add(p.curve)
	p.plot.Add(p.labels...)
	p.plot.Y.Min, p.plot.Y.Max = p.low, p.high // Add widens them to the data
	return p.err
}

// evenTicks marks about six multiples of 1, 2 or 5 times a power of ten.
type evenTicks struct{ bare bool } // bare: without numbers

// Ticks implements plot.Ticker.
func (e evenTicks) Ticks(low, high float64) []plot.Tick {
	if !(high > low) {
		return nil
	}
	step := math.Pow(10, math.Floor(math.Log10((high-low)/4)))
	for _, k := range []float64{5, 2} {
		if (high-low)/(k*step) >= 4 {
			step *= k
			break
		}
	}
	var out []plot.Tick
	for k := math.Ceil(low / step); k*step <= high; k++ {
		t := plot.Tick{Value: k*step + 0} // + 0 makes a 0 of −0
		if t.Label = number(t.Value); e.bare {
			t.Label = " "
		}
		out = append(out, t)
	}
	return out
}

// number writes three digits and a true minus sign.
func number(v float64) string {
	s := fmt.Sprintf("%.3g", v)
	if math.Abs(v) >= 1000 {
		s = fmt.Sprintf("%.0f", v)
	}
	return strings.Replace(s, "-", "−", 1)
}
