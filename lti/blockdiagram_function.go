package lti

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// function is a transfer function taken apart, in s or in z.
type function struct {
	num, den      intpoly.Poly
	delay         *big.Rat // dead time in seconds, > 0; nil is 0
	input, output units.Signal
}

// takeApart returns what a transfer function is made of.
func takeApart[G tf.Block[G]](g G) function {
	var num, den poly.Poly
	var f function
	switch g := any(g).(type) {
	case tf.Continuous:
		num, den, f.input, f.output = g.Numerator(), g.Denominator(), g.Input(), g.Output()
		if t := g.DeadTime(); t.Sign() > 0 {
			f.delay = t.Value()
		}
	case tf.Discrete:
		num, den, f.input, f.output = g.Numerator(), g.Denominator(), g.Input(), g.Output()
	}
	// Both have integer coefficients.
	f.num, f.den = ratpoly.Poly(num).Integer(), ratpoly.Poly(den).Integer()
	return f
}

// putTogether undoes takeApart; like serves for the sampling period.
func putTogether[G tf.Block[G]](f function, like G) (g G, err error) {
	num, den := asPoly(f.num), asPoly(f.den)
	var out any
	switch like := any(like).(type) {
	case tf.Continuous:
		c, err := tf.New(num, den)
		if err != nil {
			return g, err
		}
		if f.delay != nil {
			if c, err = c.WithDeadTime(units.NewQuantity(f.delay, units.MustParse("s"))); err != nil {
				return g, err
			}
		}
		if out, err = c.WithSignals(f.input, f.output); err != nil {
			return g, err
		}
	case tf.Discrete:
		c, err := tf.NewDiscrete(num, den, like.Period())
		if err != nil {
			return g, err
		}
		if out, err = c.WithSignals(f.input, f.output); err != nil {
			return g, err
		}
	}
	return out.(G), nil
}

func asPoly(p intpoly.Poly) poly.Poly { return poly.Poly(ratpoly.FromInteger(p)) }

// constantPoint returns the value of the variable that stands for a constant
// signal: s = 0, z = 1.
func constantPoint[G tf.Block[G]]() int64 {
	var g G
	if _, ok := any(g).(tf.Discrete); ok {
		return 1
	}
	return 0
}

// periodOf returns the sampling period of a Discrete; ok is false for a
// Continuous.
func periodOf[G tf.Block[G]](g G) (period units.Quantity, ok bool) {
	if d, ok := any(g).(tf.Discrete); ok {
		return d.Period(), true
	}
	return units.Quantity{}, false
}
