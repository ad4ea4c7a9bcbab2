// Package tf holds transfer functions whose coefficients are exact rational
// numbers and whose input and output carry units.
package tf

import (
	"math/big"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// core is what Continuous and Discrete share.
type core struct {
	f             ratfun.Func
	input, output units.Signal
	delay         *big.Rat // dead time in seconds (Continuous); nil is 0
	period        *big.Rat // sampling period in seconds (Discrete)
}

// Continuous is a transfer function in s. It is immutable; the zero value is 0
// from 1 to 1.
type Continuous struct {
	_ [0]func()
	c core
}

// Discrete is a transfer function in z with a sampling period. It is immutable.
type Discrete struct {
	_ [0]func()
	c core
}

// New returns numerator/denominator with dimensionless signals. Nothing is
// cancelled. The error is ErrDivisionByZero for a zero denominator.
func New(numerator, denominator poly.Poly) (Continuous, error) {
	n, d := ratpoly.Poly(numerator), ratpoly.Poly(denominator)
	f, ok := ratfun.New(n.Integer().MulInt(d.Denominator()), d.Integer().MulInt(n.Denominator()))
	if !ok {
		return Continuous{}, fault.ErrDivisionByZero
	}
	return Continuous{c: core{f: f}}, nil
}

// Must returns v and panics where err is not nil. It is meant for models that
// are written down in a program.
func Must[T any](v T, err error) T {
	if err != nil {
		panic(err)
	}
	return v
}
