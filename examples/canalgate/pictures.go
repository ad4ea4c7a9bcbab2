package main

import (
	"fmt"
	"math"
	"path/filepath"

	"github.com/qofs/qofs/examples/picture"
)

const pictureCaution = "Linear model about one operating point, dead time as an approximant; not a basis for limits or interlocks."

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
	var paths []string
	for _, p := range []struct {
		name string
		a    answers
	}{{"setpoint", r.following}, {"offtake", r.offtaken}} {
		panels, err := r.panels(p.a)
		if err != nil {
			return nil, err
		}
		written, err := picture.Save(folder, p.name, "t / s", pictureCaution, panels...)
		if err != nil {
			return nil, err
		}
		paths = append(paths, written...)
	}
	return paths, nil
}

// times returns the instants of the values.
func (c curve) times() []float64 {
	out := make([]float64, len(c.values))
	for i := range out {
		out[i] = float64(i) * c.step
	}
	return out
}

// panels draws level, gate and valve after one step.
func (r *results) panels(a answers) ([]*picture.Panel, error) {
	swing, err := r.in.valveSwing.Float64()
	if err != nil {
		return nil, err
	}
	delay, err := r.in.deadTime.Float64()
	if err != nil {
		return nil, err
	}
	end := intervals * a.level.step

	level := picture.New("level / mm", a.level.times(), a.level.values, picture.Water)
	peak, at := a.level.extreme()
	note := fmt.Sprintf("%s mm at %s", picture.Number(peak), duration(at))
	if q, err := a.level.function.FinalValue(); err == nil {
		final, err := q.Float64()
		if err != nil {
			return nil, err
		}
		band, what := 0.02*math.Abs(final), "within 2 % of the setpoint"
		if final == 0 {
			band, what = 0.1*math.Abs(peak), "within a tenth of the largest move"
		}
		level.Band(final-band, final+band)
		level.Label(end, final-band, what+" ", picture.Slate, picture.BelowLeft)
		if final != 0 {
			note = fmt.Sprintf("overshoot %s %%", picture.Number(100*(peak/final-1)))
		}
	}
	if peak < 0 {
		level.Label(at, peak, note, picture.Water, picture.BelowRight)
		level.DimensionAbove(0, delay, fmt.Sprintf("dead time %g s", delay))
	} else {
		level.Label(at, peak, note, picture.Water, picture.AboveRight)
		level.Dimension(0, delay, fmt.Sprintf("dead time %g s", delay))
	}

	gate := picture.New("gate / mm", a.gate.times(), a.gate.values, picture.Wood)
	last := a.gate.values[len(a.gate.values)-1]
	gate.Label(end, last, "opening, "+picture.Number(last)+" mm at the end ", picture.Wood, picture.AboveLeft)

	valve := picture.New("valve current about rest / mA", a.current.times(), a.current.values, picture.Iron)
	asked, at := a.current.extreme()
	valve.Low, valve.High = -1.4*swing, 1.4*swing // what lies beyond is cut off
	valve.Band(-swing, swing)
	valve.Label(end, swing, "what the valve can give ", picture.Slate, picture.BelowLeft)
	said := fmt.Sprintf("asks for %s mA at %s", picture.Number(asked), duration(at))
	if math.Abs(asked) > swing {
		said += ": beyond the valve, where the linear result is not valid"
	}
	valve.Label(0.02*end, math.Copysign(0.62*swing, asked), said, picture.Iron, picture.LevelRight)
	return []*picture.Panel{level, gate, valve}, nil
}
