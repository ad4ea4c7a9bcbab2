// Package picture draws panels of curves above one another, in one style for all
// examples: thin axes, a shaded band for what is allowed, dimension lines, and
// labels beside the curves.
package picture

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

// The inks: one for each signal, and a pale ground for what is allowed.
var (
	Water  = color.RGBA{R: 0x17, G: 0x5e, B: 0x78, A: 0xff}
	Wood   = color.RGBA{R: 0x8a, G: 0x5a, B: 0x1c, A: 0xff}
	Iron   = color.RGBA{R: 0x5b, G: 0x4b, B: 0x6e, A: 0xff}
	Slate  = color.RGBA{R: 0x55, G: 0x5d, B: 0x62, A: 0xff}
	ground = color.RGBA{R: 0xe6, G: 0xee, B: 0xe9, A: 0xff}
)

const width = 18 * vg.Centimeter

// Place says where a label stands, seen from its point.
type Place struct {
	across text.XAlignment
	along  text.YAlignment
	up     vg.Length
}

// The places of labels.
var (
	AboveRight = Place{text.XLeft, text.YBottom, 4}  // begins at the point
	AboveLeft  = Place{text.XRight, text.YBottom, 4} // ends at the point
	BelowRight = Place{text.XLeft, text.YTop, -4}
	BelowLeft  = Place{text.XRight, text.YTop, -3}
	LevelRight = Place{text.XLeft, text.YCenter, 0}
	LevelLeft  = Place{text.XRight, text.YCenter, 0}
)

// Panel is one picture of a stack.
type Panel struct {
	// Low and High bound the range that is drawn; what lies beyond is cut off.
	Low, High float64

	plot   *plot.Plot
	x      []float64
	ground []plot.Plotter // below the curves
	curves []plot.Plotter
	labels []plot.Plotter
	err    error
}

// New returns a panel with a curve through the points (x, y), ascending in x, and
// an axis named for what it shows, such as "level / mm".
func New(axis string, x, y []float64, ink color.Color) *Panel { return newPanel(axis, x, y, ink, 1.6) }

// NewFine is New with a fine line, for what scatters.
func NewFine(axis string, x, y []float64, ink color.Color) *Panel {
	return newPanel(axis, x, y, ink, 0.6)
}

func newPanel(axis string, x, y []float64, ink color.Color, width float64) *Panel {
	p := &Panel{plot: plot.New(), x: x}
	p.plot.Y.Label.Text = axis
	for _, a := range []*plot.Axis{&p.plot.X, &p.plot.Y} {
		a.Padding = 0
		a.Color, a.Tick.Color, a.Tick.Label.Color, a.Label.TextStyle.Color = Slate, Slate, Slate, Slate
		a.Tick.Marker = evenTicks{}
	}
	p.Low, p.High = slices.Min(y), slices.Max(y)
	if p.Low > 0 && p.Low < p.High/2 {
		p.Low = 0
	}
	if p.High < 0 && p.High > p.Low/2 {
		p.High = 0
	}
	room := 0.18 * (p.High - p.Low)
	if room == 0 {
		room = 1
	}
	p.Low, p.High = p.Low-room, p.High+room
	if p.Low < 0 && p.High > 0 {
		zero, err := plotter.NewLine(plotter.XYs{{X: x[0], Y: 0}, {X: x[len(x)-1], Y: 0}})
		p.note(err)
		zero.Width, zero.Color = 0.4, Slate
		p.ground = append(p.ground, zero)
	}
	p.Curve(x, y, ink, width)
	return p
}

// Logarithmic draws the x axis, which must be above 0, by powers of ten.
func (p *Panel) Logarithmic() {
	p.plot.X.Scale = plot.LogScale{}
	p.plot.X.Tick.Marker = decadeTicks{}
}

func (p *Panel) note(err error) {
	if err != nil && p.err == nil {
		p.err = err
	}
}

// Curve adds a curve of a width in points.
func (p *Panel) Curve(x, y []float64, ink color.Color, width float64) {
	points := make(plotter.XYs, len(x))
	for i := range x {
		points[i] = plotter.XY{X: x[i], Y: y[i]}
	}
	line, err := plotter.NewLine(points)
	if err != nil {
		p.note(err)
		return
	}
	line.Width, line.Color = vg.Points(width), ink
	p.curves = append(p.curves, line)
}

// Dots adds points without a line, behind the curves.
func (p *Panel) Dots(x, y []float64, ink color.Color) {
	points := make(plotter.XYs, len(x))
	for i := range x {
		points[i] = plotter.XY{X: x[i], Y: y[i]}
	}
	dots, err := plotter.NewScatter(points)
	if err != nil {
		p.note(err)
		return
	}
	dots.GlyphStyle = draw.GlyphStyle{Color: ink, Radius: 0.8, Shape: draw.CircleGlyph{}}
	p.ground = append(p.ground, dots)
}

// Band shades what is allowed.
func (p *Panel) Band(low, high float64) {
	from, to := p.x[0], p.x[len(p.x)-1]
	area, err := plotter.NewPolygon(plotter.XYs{{X: from, Y: low}, {X: to, Y: low}, {X: to, Y: high}, {X: from, Y: high}})
	if err != nil {
		p.note(err)
		return
	}
	area.Color, area.LineStyle.Width = ground, 0
	p.ground = append([]plot.Plotter{area}, p.ground...)
}

// Label writes beside a point of the plane.
func (p *Panel) Label(x, y float64, what string, ink color.Color, place Place) {
	l, err := plotter.NewLabels(plotter.XYLabels{XYs: plotter.XYs{{X: x, Y: y}}, Labels: []string{what}})
	if err != nil {
		p.note(err)
		return
	}
	l.TextStyle[0].Color, l.TextStyle[0].XAlign, l.TextStyle[0].YAlign = ink, place.across, place.along
	l.TextStyle[0].Font.Size = 9
	l.Offset.Y = place.up
	p.labels = append(p.labels, l)
}

// Dimension draws a dimension line at the lower edge, or at the upper one, with its
// length in words beside it.
func (p *Panel) Dimension(from, to float64, what string) { p.dimension(from, to, what, false) }

// DimensionAbove is Dimension at the upper edge.
func (p *Panel) DimensionAbove(from, to float64, what string) { p.dimension(from, to, what, true) }

func (p *Panel) dimension(from, to float64, what string, above bool) {
	p.labels = append(p.labels, dimension{from, to, what, above, p.plot.X.Tick.Label})
}

type dimension struct {
	from, to float64
	what     string
	above    bool // at the upper edge
	style    draw.TextStyle
}

// Plot draws a line with arrowheads between two short end lines.
func (d dimension) Plot(c draw.Canvas, p *plot.Plot) {
	toX, _ := p.Transforms(&c)
	y := c.Min.Y + 3*vg.Millimeter
	if d.above {
		y = c.Max.Y - 3*vg.Millimeter
	}
	a, b := toX(d.from), toX(d.to)
	thin := draw.LineStyle{Color: Slate, Width: 0.6}
	tick, arrow := vg.Length(4), vg.Length(3)
	c.StrokeLine2(thin, a, y, b, y)
	for _, e := range []struct{ x, way vg.Length }{{a, 1}, {b, -1}} {
		c.StrokeLine2(thin, e.x, y-tick, e.x, y+tick)
		c.StrokeLine2(thin, e.x, y, e.x+e.way*arrow, y+arrow/2)
		c.StrokeLine2(thin, e.x, y, e.x+e.way*arrow, y-arrow/2)
	}
	style := d.style
	style.Color, style.XAlign, style.YAlign = Slate, text.XLeft, text.YCenter
	style.Font.Size = 9
	c.FillText(style, vg.Point{X: b + 2*vg.Millimeter, Y: y}, d.what)
}

func (p *Panel) finish() error {
	p.plot.Add(p.ground...)
	p.plot.Add(p.curves...)
	p.plot.Add(p.labels...)
	p.plot.Y.Min, p.plot.Y.Max = p.Low, p.High // Add widens them to the data
	p.plot.X.Min, p.plot.X.Max = p.x[0], p.x[len(p.x)-1]
	return p.err
}

// Save stacks panels above one another with their x axes aligned, the lowest one
// with the name of the axis, and a caution below. It writes them as PNG and SVG
// into a folder and returns the paths.
func Save(folder, name, axis, caution string, panels ...*Panel) ([]string, error) {
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return nil, err
	}
	var plots []*plot.Plot
	for i, p := range panels {
		if i < len(panels)-1 {
			p.plot.X.Tick.Marker = bare{p.plot.X.Tick.Marker}
		} else {
			p.plot.X.Label.Text = axis
		}
		if err := p.finish(); err != nil {
			return nil, err
		}
		plots = append(plots, p.plot)
	}
	height := (4 + 16/3.0*vg.Length(len(panels))) * vg.Centimeter
	var paths []string
	for _, form := range []struct {
		suffix string
		write  func([]*plot.Plot, string, vg.Length) ([]byte, error)
	}{{".png", asPNG}, {".svg", asSVG}} {
		b, err := form.write(plots, caution, height)
		if err != nil {
			return nil, err
		}
		path := filepath.Join(folder, name+form.suffix)
		if err := os.WriteFile(path, b, 0o644); err != nil {
			return nil, err
		}
		paths = append(paths, path)
	}
	return paths, nil
}

func asPNG(panels []*plot.Plot, caution string, height vg.Length) ([]byte, error) {
	c := vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(130), vgimg.UseBackgroundColor(color.White))
	stack(panels, caution, draw.New(c))
	var b bytes.Buffer
	_, err := vgimg.PngCanvas{Canvas: c}.WriteTo(&b)
	return b.Bytes(), err
}

func asSVG(panels []*plot.Plot, caution string, height vg.Length) ([]byte, error) {
	c := vgsvg.New(width, height)
	stack(panels, caution, draw.New(c))
	var b bytes.Buffer
	_, err := c.WriteTo(&b)
	return b.Bytes(), err
}

// stack draws panels above one another with their x axes aligned.
func stack(panels []*plot.Plot, caution string, c draw.Canvas) {
	rows := make([][]*plot.Plot, len(panels))
	for i, p := range panels {
		rows[i] = []*plot.Plot{p}
	}
	margin := 4 * vg.Millimeter
	style := panels[0].X.Label.TextStyle
	style.Color, style.XAlign, style.YAlign = Slate, text.XLeft, text.YBottom
	style.Font.Size = 8
	c.FillText(style, vg.Point{X: c.Min.X + margin, Y: c.Min.Y + margin/2}, caution)
	tiles := draw.Tiles{Rows: len(panels), Cols: 1, PadY: 3 * vg.Millimeter, PadTop: margin, PadBottom: 2 * margin, PadLeft: margin, PadRight: margin}
	for i, row := range plot.Align(rows, tiles, c) {
		panels[i].Draw(row[0])
	}
}

// evenTicks marks about six multiples of 1, 2 or 5 times a power of ten.
type evenTicks struct{}

// Ticks implements plot.Ticker.
func (evenTicks) Ticks(low, high float64) []plot.Tick {
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
		v := k*step + 0 // + 0 makes a 0 of −0
		out = append(out, plot.Tick{Value: v, Label: Number(v)})
	}
	return out
}

// bare leaves out the numbers.
type bare struct{ plot.Ticker }

// Ticks implements plot.Ticker.
func (b bare) Ticks(low, high float64) []plot.Tick {
	out := b.Ticker.Ticks(low, high)
	for i := range out {
		if out[i].Label != "" {
			out[i].Label = " "
		}
	}
	return out
}

// decadeTicks marks 1, 2 and 5 times the powers of ten.
type decadeTicks struct{}

// Ticks implements plot.Ticker.
func (decadeTicks) Ticks(low, high float64) []plot.Tick {
	var out []plot.Tick
	for e := math.Floor(math.Log10(low)); e <= math.Log10(high); e++ {
		for k := 1.0; k < 10; k++ {
			t := plot.Tick{Value: k * math.Pow(10, e)}
			if k == 1 || k == 2 || k == 5 {
				t.Label = Number(t.Value)
			}
			if t.Value >= low*(1-1e-9) && t.Value <= high*(1+1e-9) {
				out = append(out, t)
			}
		}
	}
	return out
}

// Number writes three digits and a true minus sign.
func Number(v float64) string {
	s := fmt.Sprintf("%.3g", v)
	if math.Abs(v) >= 1000 {
		s = fmt.Sprintf("%.0f", v)
	}
	return strings.Replace(s, "-", "−", 1)
}
