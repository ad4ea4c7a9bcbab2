package main

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"

	"github.com/qofs/qofs/lti/response"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// curve is a time function on a grid of one step from t = 0.
type curve struct {
	function tf.TimeFunction
	step     float64 // s
	values   []float64
}

// answers are the three curves that follow from one step at one input.
type answers struct{ level, gate, current curve }

// intervals is how many steps the duration has on the grid on which overshoot,
// rise time and their kin are read; they are good to about one step.
const intervals = 5400

// answer computes the step responses of a loop in mm, mm and mA.
func answer(l loop, height units.Quantity, duration units.Quantity) (answers, error) {
	var a answers
	seconds, err := duration.Float64()
	if err != nil {
		return a, err
	}
	step := seconds / intervals
	for _, c := range []struct {
		to   *curve
		g    tf.Continuous
		unit string
	}{{&a.level, l.level, "mm"}, {&a.gate, l.gate, "mm"}, {&a.current, l.current, "mA"}} {
		g, err := c.g.ConvertUnits(c.g.Input().Unit, units.MustParse(c.unit))
		if err != nil {
			return a, err
		}
		f, err := response.Step(g, height)
		if err != nil {
			return a, err
		}
		values, err := f.Sample(step, intervals+1)
		if err != nil {
			return a, err
		}
		*c.to = curve{f, step, values}
	}
	return a, nil
}

// extreme returns the value furthest from 0 and when it occurs.
func (c curve) extreme() (value, t float64) {
	for i, v := range c.values {
		if math.Abs(v) > math.Abs(value) {
			value, t = v, float64(i)*c.step
		}
	}
	return value, t
}

// beyond returns for how long the curve is further from 0 than limit, to about a
// step.
func (c curve) beyond(limit float64) float64 {
	n := 0
	for _, v := range c.values {
		if math.Abs(v) > limit {
			n++
		}
	}
	return float64(n) * c.step
}

// firstPast returns when the curve first reaches fraction·final, NaN where it
// never does.
func (c curve) firstPast(final, fraction float64) float64 {
	for i, v := range c.values {
		if v/final >= fraction {
			if i == 0 {
				return 0
			}
			before := c.values[i-1] / final
			return (float64(i-1) + (fraction-before)/(v/final-before)) * c.step
		}
	}
	return math.NaN()
}

// settled returns from when on the curve stays within band of final, NaN where
// it is outside at the end.
func (c curve) settled(final, band float64) float64 {
	for i := len(c.values) - 1; i >= 0; i-- {
		if math.Abs(c.values[i]-final) > band {
			if i == len(c.values)-1 {
				return math.NaN()
			}
			return float64(i+1) * c.step
		}
	}
	return 0
}

// mode is a pole, or a pair of conjugate poles, of a closed loop.
type mode struct {
	root poly.Root
	// stands tells that the mode stays where it is, within 1 %, when the dead
	// time gets an approximant of two degrees more: it belongs to the canal and
	// not to the approximant.
	stands bool
}

// modesOf returns the modes, slowest first, with the upper pole of each pair.
func modesOf(g, finer tf.Continuous) ([]mode, error) {
	poles, err := g.Poles()
	if err != nil {
		return nil, err
	}
	others, err := finer.Poles()
	if err != nil {
		return nil, err
	}
	var out []mode
	for _, p := range poles {
		if imag(p.Value) < 0 {
			continue
		}
		stands := slices.ContainsFunc(others, func(q poly.Root) bool {
			return cmplx.Abs(p.Value-q.Value) <= 0.01*cmplx.Abs(p.Value)
		})
		out = append(out, mode{p, stands})
	}
	slices.SortStableFunc(out, func(a, b mode) int { return cmp.Compare(real(b.root.Value), real(a.root.Value)) })
	return out, nil
}

// phaseLimit returns the frequency in rad/s up to which the phase of the Padé
// approximant differs by less than a degree from that of the dead time. Both
// have the magnitude 1 everywhere. The phase is followed from ω = 0 in steps of
// 1/50 rad of the dead time.
func phaseLimit(deadTime units.Quantity, degree int) (float64, error) {
	delay, err := tf.New(poly.FromInts(1), poly.FromInts(1))
	if err != nil {
		return 0, err
	}
	if delay, err = delay.WithDeadTime(deadTime); err != nil {
		return 0, err
	}
	approximant, err := delay.PadeApproximant(degree)
	if err != nil {
		return 0, err
	}
	seconds, err := deadTime.Float64()
	if err != nil {
		return 0, err
	}
	for angle := 0.02; ; angle += 0.02 {
		v, err := approximant.At(complex(0, angle/seconds))
		if err != nil {
			return 0, err
		}
		// The quotient of the two is near 1 until the error passes a degree.
		if math.Abs(cmplx.Phase(v*cmplx.Exp(complex(0, angle)))) > math.Pi/180 {
			return (angle - 0.02) / seconds, nil
		}
	}
}
