package tf

import (
	"errors"
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/units"
)

// ErrImpulseDerivative: the time function would hold a derivative of an impulse,
// because the numerator of its transform has a higher degree than the
// denominator.
var ErrImpulseDerivative = errors.New("the time function would hold a derivative of an impulse")

// TimeFunction is a function of time t in seconds, closed in form: for t ≥ 0 a
// sum of terms t^k·e^(σt)·cos(ωt) and t^k·e^(σt)·sin(ωt), and an impulse at
// t = 0 where the transform it came from is not strictly proper. It is 0 for
// t < 0; a dead time D moves all of it to the right by D.
//
// It keeps the exact transform, so that At, Sample and Terms are values of the
// exact function, each rounded once to the nearest float64. The numbers are the
// same bits on every machine. It is immutable, safe to share, and its zero
// value is the function 0.
type TimeFunction struct {
	_       [0]func()
	e       *expansion // nil is 0
	impulse *big.Rat   // nil is 0
	delay   *big.Rat   // nil is 0
	signal  units.Signal
}

// InverseLaplace returns the time function whose Laplace transform is g
// (A&S 1964, section 29.2): the response of g to a unit impulse at t = 0. With
// an impulse δ(t) in 1/s, a function from volts to millimetres responds in
// mm/(V·s), and that is the unit of the result; a g whose input has the unit
// 1/s gives the unit of its output.
//
// A constant part of g gives an impulse; a part that grows with s would give
// derivatives of one and is refused with ErrImpulseDerivative. The error is
// ErrLimit for a denominator beyond the limits of Poles or LowestTerms, or of a
// degree above 512. Common factors of
// numerator and denominator cancel here: they cannot be seen from outside.
func (g Continuous) InverseLaplace() (TimeFunction, error) {
	return newTimeFunction(g.c.f, g.c.delay, impulseResponseSignal(g.c.input, g.c.output))
}

// maxTimePoles bounds the first value of a time function to some seconds.
const maxTimePoles = 512

func newTimeFunction(f ratfun.Func, delay *big.Rat, signal units.Signal) (TimeFunction, error) {
	f, err := reduced(f, "inverse transform")
	if err != nil {
		return TimeFunction{}, err
	}
	if f.Num().Degree() > f.Den().Degree() {
		return TimeFunction{}, fmt.Errorf("tf: inverse transform of a function with numerator of degree %d over degree %d: %w (feedback or a lag of the derivative makes it proper)",
			f.Num().Degree(), f.Den().Degree(), ErrImpulseDerivative)
	}
	h := TimeFunction{signal: signal}
	if delay != nil && delay.Sign() != 0 {
		h.delay = new(big.Rat).Set(delay)
	}
	num := f.Num()
	if num.Degree() == f.Den().Degree() {
		h.impulse = new(big.Rat).SetFrac(num.Leading(), f.Den().Leading())
		f = f.Add(ratfun.Constant(new(big.Rat).Neg(h.impulse)))
	}
	if f.IsZero() {
		return h, nil
	}
	if n := f.Den().Degree(); n > maxTimePoles {
		return TimeFunction{}, fmt.Errorf("tf: time function with %d poles, at most %d: %w", n, maxTimePoles, fault.ErrLimit)
	}
	h.e, err = newExpansion(f.Num(), f.Den())
	return h, err
}

// transform returns the exact Laplace transform without the dead time.
func (f TimeFunction) transform() ratfun.Func {
	g := ratfun.Constant(f.impulse)
	if f.e != nil {
		h, _ := ratfun.New(f.e.num, f.e.den)
		g = g.Add(h)
	}
	return g
}

// Impulse returns the weight of the impulse at t = 0, exactly, in the unit of
// the function times seconds; with a dead time it falls at the end of it. At and
// Sample do not show it.
func (f TimeFunction) Impulse() units.Quantity {
	return units.NewQuantity(f.impulse, f.signal.Unit.Mul(second))
}

// DeadTime returns the time in seconds before which the function is 0.
func (f TimeFunction) DeadTime() *big.Rat {
	if f.delay == nil {
		return new(big.Rat)
	}
	return new(big.Rat).Set(f.delay)
}

// Unit returns the unit of the values.
func (f TimeFunction) Unit() units.Unit { return f.signal.Unit }

// Signal returns the name and the unit of the values.
func (f TimeFunction) Signal() units.Signal { return f.signal }

// At returns the value at the time t in seconds, correctly rounded to nearest
// (ties to even) for every finite t, and 0 for t < 0. At a jump it is the limit
// from the right; an impulse is left out.
//
// The error is ErrNotFinite for a NaN or an infinity, ErrRange where the value
// is too large for a float64, and ErrLimit where 65536 bits of working precision
// do not decide the rounding. By the theorem of Lindemann and Weierstrass a
// value at a rational time is transcendental, or a rational number that is known
// exactly, so that no value lies on a boundary of rounding for ever; ErrLimit is
// left to values such as 1 + 2^−53 + e^(−t) at t = 10^6, where a constant lies
// exactly between two float64 and all that decides is below 2^−65536.
func (f TimeFunction) At(t float64) (float64, error) {
	if math.IsNaN(t) || math.IsInf(t, 0) {
		return 0, fmt.Errorf("tf: time %v: %w", t, fault.ErrNotFinite)
	}
	if t < 0 || f.e == nil {
		return 0, nil
	}
	if f.delay == nil {
		if v, ok := f.e.quickAt(t, 0); ok {
			return v, nil
		}
	}
	x := new(big.Rat).SetFloat64(t)
	if f.delay != nil {
		x.Sub(x, f.delay)
	}
	return f.e.at(x)
}

// InitialValue returns the value just after t = 0, exactly, in the unit of f:
// the limit of s·F(s) for s → ∞ where F is the transform without its impulse,
// and 0 where there is a dead time.
func (f TimeFunction) InitialValue() units.Quantity {
	v := new(big.Rat)
	if f.e != nil && f.delay == nil {
		v = f.e.initial()
	}
	return units.NewQuantity(v, f.signal.Unit)
}

// FinalValue returns the limit for t → ∞, exactly, in the unit of f. It exists
// where every pole lies in the open left half plane, but for at most a simple
// pole at 0; that is decided exactly, and else the error is a *NoLimitError.
func (f TimeFunction) FinalValue() (units.Quantity, error) { return f.Laplace().FinalValue() }

// Derivative returns df/dt, whose transform is s·F(s): a jump at t = 0 becomes
// an impulse. The unit is that of f per second. The error is
// ErrImpulseDerivative where f holds an impulse.
func (f TimeFunction) Derivative() (TimeFunction, error) {
	s, _ := ratfun.New(intpoly.FromInt64s(0, 1), intpoly.FromInt64s(1))
	return newTimeFunction(f.transform().Mul(s), f.delay, perSecond(f.signal))
}

// Integral returns the integral of f from just before 0 to t, whose transform
// is F(s)/s: an impulse becomes a jump. The unit is that of f times seconds.
func (f TimeFunction) Integral() (TimeFunction, error) {
	s, _ := ratfun.New(intpoly.FromInt64s(1), intpoly.FromInt64s(0, 1))
	return newTimeFunction(f.transform().Mul(s), f.delay, timesSeconds(f.signal))
}
