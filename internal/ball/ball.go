// Package ball computes with real and complex balls: a midpoint and a radius
// that is guaranteed to cover the true value.
//
// The convention, once for all functions. A [Real] stands for every number
// within radius of mid. An operation takes the working precision in bits as
// its last argument and returns a ball that contains the result for every
// choice of points of its operands; the midpoint has at most that many bits,
// and all rounding is counted in the radius, which is itself rounded up.
// Precisions are clamped to 8…[MaxPrecision].
//
// What is impossible or undecided (a quotient whose divisor may be zero, the
// logarithm of a ball that touches zero, a value beyond the exponent range)
// is an indeterminate ball: it has an infinite radius, says nothing, and
// makes everything computed from it indeterminate too. No function panics, and
// none can be made to fill the memory by a large exponent.
//
// Balls are immutable and safe to share; the zero value is exactly 0. Nothing
// here depends on the machine: all arithmetic is integer arithmetic or single
// float64 operations that no compiler fuses, so midpoints and radii are the
// same bits everywhere.
//
//	third := ball.FromRat(big.NewRat(1, 3), 128)
//	v, ok := third.Exp(128).Float64() // e^(1/3), correctly rounded if ok
package ball

import (
	"math"
	"math/big"
)

const (
	// MaxPrecision is the largest working precision in bits.
	MaxPrecision = 1 << 20
	minPrecision = 8
	// maxExponent bounds the binary exponent of a midpoint. Products and
	// quotients of two midpoints, and shifts by a precision, stay far within
	// the int32 exponents of big.Float.
	maxExponent = 1 << 29
)

// Real is a real ball.
type Real struct {
	_   [0]func()
	mid *big.Float // nil is 0; otherwise finite, not zero, never modified
	rad mag
}

func precision(prec uint) uint { return min(max(prec, minPrecision), MaxPrecision) }

var indeterminate = Real{rad: mag{m: 1 << 31, e: magInf}}

// Indeterminate returns the ball that contains every number.
func Indeterminate() Real { return indeterminate }

// settle brings midpoint and radius into the documented ranges.
func settle(mid *big.Float, rad mag) Real {
	if rad.isInf() {
		return indeterminate
	}
	if mid == nil || mid.Sign() == 0 {
		return Real{rad: rad}
	}
	e := mid.MantExp(nil)
	switch {
	case mid.IsInf() || e > maxExponent:
		return indeterminate
	case e < -maxExponent:
		return Real{rad: rad.add(magPow2(e))}
	}
	return Real{mid: mid, rad: rad}
}

// FromInt returns the exact ball of n; nil is 0.
func FromInt(n *big.Int) Real {
	if n == nil || n.Sign() == 0 {
		return Real{}
	}
	return settle(new(big.Float).SetInt(n), mag{})
}

// FromInt64 returns the exact ball of n.
func FromInt64(n int64) Real {
	if n == 0 {
		return Real{}
	}
	return Real{mid: new(big.Float).SetInt64(n)}
}

// FromFloat64 returns the exact ball of v; NaN and infinities are indeterminate.
func FromFloat64(v float64) Real {
	switch {
	case v == 0:
		return Real{}
	case math.IsNaN(v) || math.IsInf(v, 0):
		return indeterminate
	}
	return Real{mid: new(big.Float).SetFloat64(v)}
}

// FromFloat returns the exact ball of v; nil is 0, infinities are
// indeterminate.
func FromFloat(v *big.Float) Real {
	if v == nil || v.Sign() == 0 {
		return Real{}
	}
	return settle(new(big.Float).Copy(v), mag{})
}

// FromRat returns a ball of prec bits around q, exact where q fits; nil is 0.
func FromRat(q *big.Rat, prec uint) Real {
	if q == nil || q.Sign() == 0 {
		return Real{}
	}
	if q.IsInt() {
		return FromInt(q.Num()).Round(prec)
	}
	return FromInt(q.Num()).Div(FromInt(q.Denom()), prec)
}

// NewReal returns the ball around mid with the given radius (rounded up). A
// nil is 0; an infinity or a negative radius gives an indeterminate ball.
func NewReal(mid, radius *big.Float) Real {
	x := FromFloat(mid)
	if radius == nil || radius.Sign() == 0 {
		return x
	}
	if radius.Sign() < 0 {
		return indeterminate
	}
	return settle(x.mid, x.rad.add(magUp(radius)))
}

// IsFinite reports whether x is not indeterminate.
func (x Real) IsFinite() bool { return !x.rad.isInf() }

// IsExact reports whether x is a single number.
func (x Real) IsExact() bool { return x.rad.m == 0 }

// IsZero reports whether x is exactly zero.
func (x Real) IsZero() bool { return x.mid == nil && x.rad.m == 0 }

// Mid returns the midpoint (0 for an indeterminate ball).
func (x Real) Mid() *big.Float {
	if x.mid == nil {
		return new(big.Float)
	}
	return new(big.Float).Copy(x.mid)
}

// Radius returns an upper bound of the distance to the midpoint: exactly the
// radius that the ball keeps, +Inf for an indeterminate ball.
func (x Real) Radius() *big.Float { return x.rad.float() }

// Lower returns a lower bound of x, at most 2^-64 of the midpoint (or of the
// radius) below the true lower end; -Inf for an indeterminate ball.
func (x Real) Lower() *big.Float { return x.end(big.ToNegativeInf) }

// Upper returns an upper bound of x, as [Real.Lower] does on the other side.
func (x Real) Upper() *big.Float { return x.end(big.ToPositiveInf) }

func (x Real) end(mode big.RoundingMode) *big.Float {
	r := x.rad.float()
	if mode == big.ToNegativeInf {
		r.Neg(r)
	}
	if x.mid == nil || r.IsInf() {
		return r
	}
	if r.Sign() == 0 {
		return x.Mid()
	}
	prec := x.mid.Prec() + 64
	me, re := x.mid.MantExp(nil), x.rad.exponent()
	switch {
	case re < me-int(prec): // Add would align over the whole gap
		re = me - int(prec)
		r.SetMantExp(big.NewFloat(float64(r.Sign())), re)
	case re > me+int(prec) && (x.mid.Sign() > 0) != (mode == big.ToPositiveInf):
		return r // likewise; mid lies towards zero
	case re > me+int(prec):
		m := big.NewFloat(float64(x.mid.Sign()))
		return r.Add(r.SetPrec(128).SetMode(mode), m.SetMantExp(m, re-64))
	}
	return new(big.Float).SetMode(mode).SetPrec(prec).Add(x.mid, r)
}

// Sign returns the sign that all points of x share; ok is false when there is
// none, as when x contains 0 and other numbers.
func (x Real) Sign() (s int, ok bool) {
	if x.mid == nil {
		return 0, x.rad.m == 0
	}
	if x.rad.m == 0 || magDown(x.mid).cmp(x.rad) > 0 {
		return x.mid.Sign(), true
	}
	if x.rad.cmp(magUp(x.mid)) >= 0 {
		return 0, false
	}
	if m := new(big.Float).Abs(x.mid); m.Cmp(x.rad.float()) > 0 {
		return x.mid.Sign(), true
	}
	return 0, false
}

// ContainsZero reports whether 0 is a point of x.
func (x Real) ContainsZero() bool {
	s, ok := x.Sign()
	return !ok || s == 0
}

// ContainsRat reports whether q lies between [Real.Lower] and [Real.Upper].
func (x Real) ContainsRat(q *big.Rat) bool {
	if !x.IsFinite() {
		return true
	}
	if q == nil {
		q = new(big.Rat)
	}
	num, den := new(big.Float).SetInt(q.Num()), new(big.Float).SetInt(q.Denom())
	times := func(end *big.Float) *big.Float {
		return new(big.Float).SetPrec(end.Prec()+den.Prec()).Mul(end, den)
	}
	return times(x.Lower()).Cmp(num) <= 0 && times(x.Upper()).Cmp(num) >= 0
}

// RelativeBits returns roughly how many leading bits of x are known: 0 when it
// may be zero, math.MaxInt32 when it is exact.
func (x Real) RelativeBits() int {
	if x.rad.m == 0 {
		return math.MaxInt32
	}
	if x.mid == nil || x.rad.isInf() {
		return 0
	}
	return max(0, x.mid.MantExp(nil)-x.rad.exponent())
}

// String returns midpoint and radius in decimal, for messages and debugging.
func (x Real) String() string {
	if !x.IsFinite() {
		return "indeterminate"
	}
	m, r := x.Mid(), x.Radius()
	if e := m.MantExp(nil); e > 1<<16 || e < -1<<16 { // decimal conversion is quadratic in the exponent
		return m.Text('p', 0) + " ± " + r.Text('p', 0)
	}
	if e := r.MantExp(nil); e > 1<<16 || e < -1<<16 {
		return m.Text('g', 20) + " ± " + r.Text('p', 0)
	}
	return m.Text('g', 20) + " ± " + r.Text('g', 3)
}
