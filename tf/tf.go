// Package tf holds transfer functions whose coefficients are exact rational
// numbers and whose input and output carry units.
//
// A Continuous is a function of s with, perhaps, a dead time; a Discrete is a
// function of z with a sampling period. Both are immutable values that are safe
// to share. The same words compose them (Series, Parallel, Feedback and their
// kin are generic over Block), and a mixture of the two does not compile.
//
// One convention holds throughout: composition is exact and never cancels. A
// factor that numerator and denominator share stays, so that a hidden mode is
// still among the Poles; LowestTerms removes it and says what it removed.
// Numerator and denominator are kept as the smallest pair of polynomials with
// integer coefficients and a positive leading coefficient below.
//
// Every junction of a composition is checked: two blocks connect where their
// signals have the same unit, radians included, and names that fit; see
// JunctionError.
//
//	pool := tf.MustParse("exp(-180 s) 1.12/(1493 s + 1) [mm -> mm]")
//	fmt.Println(tf.Must(pool.StaticGain()), pool.DeadTime())
package tf

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// The errors of this package that poly, units and lti share.
var (
	ErrLimit          = fault.ErrLimit
	ErrRange          = fault.ErrRange
	ErrDivisionByZero = fault.ErrDivisionByZero
	ErrNotFinite      = fault.ErrNotFinite
)

// core is what Continuous and Discrete share.
type core struct {
	f             ratfun.Func
	input, output units.Signal
	delay         *big.Rat // dead time in seconds (Continuous), > 0; nil is 0
	period        *big.Rat // sampling period in seconds (Discrete), > 0; nil is 1
}

// Continuous is a transfer function in s: a quotient of two polynomials times
// exp(−T s), where T ≥ 0 is the dead time. It is immutable; the zero value is
// 0 from 1 to 1.
type Continuous struct {
	_ [0]func()
	c core
}

// Discrete is a transfer function in z with a sampling period. It is
// immutable; the zero value is 0 from 1 to 1 with a period of 1 s.
type Discrete struct {
	_ [0]func()
	c core
}

// Block is satisfied by Continuous and Discrete and by nothing else. It lets
// the composing functions serve both.
type Block[G any] interface {
	Continuous | Discrete
	core() core
	with(core) G
}

func (g Continuous) core() core           { return g.c }
func (Continuous) with(c core) Continuous { return Continuous{c: c} }
func (g Discrete) core() core             { return g.c }
func (Discrete) with(c core) Discrete     { return Discrete{c: c} }

// New returns numerator/denominator with dimensionless, unnamed signals.
// Nothing is cancelled. The errors are ErrDivisionByZero for a zero denominator,
// and ErrLimit where the Err of a polynomial is not nil, or where a polynomial of
// the result would take more than 2^21 words of 64 bits.
func New(numerator, denominator poly.Poly) (Continuous, error) {
	f, err := quotient(numerator, denominator)
	return Continuous{c: core{f: f}}, err
}

// NewDiscrete returns numerator/denominator in z with dimensionless, unnamed
// signals and the given sampling period, an exact time above 0. Nothing is
// cancelled. The errors are those of New, a
// *units.MismatchError for a period that is no time, and ErrPeriod.
func NewDiscrete(numerator, denominator poly.Poly, period units.Quantity) (Discrete, error) {
	f, err := quotient(numerator, denominator)
	if err != nil {
		return Discrete{}, err
	}
	t, err := seconds(period)
	if err != nil {
		return Discrete{}, fmt.Errorf("tf: sampling period: %w", err)
	}
	if t.Sign() <= 0 {
		return Discrete{}, fmt.Errorf("tf: sampling period of %v: %w", period, ErrPeriod)
	}
	c := core{f: f}
	c.setPeriod(t)
	return Discrete{c: c}, nil
}

func quotient(numerator, denominator poly.Poly) (ratfun.Func, error) {
	n, d := ratpoly.Poly(numerator), ratpoly.Poly(denominator)
	for _, err := range []error{n.Err(), d.Err()} {
		if err != nil {
			return ratfun.Func{}, err
		}
	}
	k := new(big.Rat).SetFrac(d.Denominator(), n.Denominator())
	s := size{max(n.Integer().Degree(), d.Integer().Degree()), max(n.Integer().Words(), d.Integer().Words()) + wordsOf(k)}
	if err := s.check("New"); err != nil {
		return ratfun.Func{}, err
	}
	f, ok := ratfun.NewScaled(k, n.Integer(), d.Integer())
	if !ok {
		return ratfun.Func{}, fault.ErrDivisionByZero
	}
	return f, nil
}

// Must returns v and panics where err is not nil. It is meant for models that
// are written down in a program.
func Must[T any](v T, err error) T {
	if err != nil {
		panic(err)
	}
	return v
}

func asPoly(p intpoly.Poly) poly.Poly { return poly.Poly(ratpoly.FromInteger(p)) }

// Numerator returns the numerator; together with Denominator it is the smallest
// pair of polynomials with integer coefficients, nothing else cancelled.
func (g Continuous) Numerator() poly.Poly { return asPoly(g.c.f.Num()) }

// Denominator returns the denominator. Its leading coefficient is positive.
func (g Continuous) Denominator() poly.Poly { return asPoly(g.c.f.Den()) }

// Input is the signal that goes in.
func (g Continuous) Input() units.Signal { return g.c.input }

// Output is the signal that comes out.
func (g Continuous) Output() units.Signal { return g.c.output }

// Numerator returns the numerator; together with Denominator it is the smallest
// pair of polynomials with integer coefficients, nothing else cancelled.
func (g Discrete) Numerator() poly.Poly { return asPoly(g.c.f.Num()) }

// Denominator returns the denominator. Its leading coefficient is positive.
func (g Discrete) Denominator() poly.Poly { return asPoly(g.c.f.Den()) }

// Input is the signal that goes in.
func (g Discrete) Input() units.Signal { return g.c.input }

// Output is the signal that comes out.
func (g Discrete) Output() units.Signal { return g.c.output }
