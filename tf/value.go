package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
)

// maxPointBits bounds degree times bits of the argument in an exact evaluation
// at a float64 point.
const maxPointBits = 1 << 21

// PoleError tells that a transfer function was asked for its value where its
// denominator is 0. It unwraps to ErrDivisionByZero.
type PoleError struct {
	Operation string // "At", "StaticGain", …
	Variable  string // "s" or "z"
	Point     string // the point, such as "0" or "1"
	// Shared tells that the numerator is 0 there too, so that the function may
	// have a value after LowestTerms.
	Shared bool
}

// Error names the pole.
func (e *PoleError) Error() string {
	if e.Shared {
		return fmt.Sprintf("%s: numerator and denominator are both 0 at %s = %s; LowestTerms removes the common factor and shows it", e.Operation, e.Variable, e.Point)
	}
	return fmt.Sprintf("%s: pole at %s = %s", e.Operation, e.Variable, e.Point)
}

// Unwrap returns ErrDivisionByZero.
func (e *PoleError) Unwrap() error { return fault.ErrDivisionByZero }

// ratAt is the exact value at a rational point; operation and variable serve
// the error.
func ratAt(f ratfun.Func, x *big.Rat, operation, variable string) (*big.Rat, error) {
	if x == nil {
		x = new(big.Rat)
	}
	num, den := f.Num(), f.Den()
	above, below := num.AtRat(x.Num(), x.Denom()), den.AtRat(x.Num(), x.Denom())
	if below.Sign() == 0 {
		return nil, &PoleError{Operation: operation, Variable: variable, Point: decimal.Text(x), Shared: above.Sign() == 0}
	}
	if above.Sign() == 0 {
		return new(big.Rat), nil
	}
	v := new(big.Rat).SetFrac(above, below)
	// above = d^n·num(x) and below = d^m·den(x) for the denominator d of x
	if k := den.Degree() - num.Degree(); k != 0 && x.Denom().Cmp(big.NewInt(1)) != 0 {
		d := new(big.Int).Exp(x.Denom(), big.NewInt(int64(max(k, -k))), nil)
		scale := new(big.Rat).SetInt(d)
		if k < 0 {
			scale.Inv(scale)
		}
		v.Mul(v, scale)
	}
	return v, nil
}

// AtRat returns the exact value of g at a rational s; nil reads as 0. The
// errors are *PoleError at a root of the denominator and *DeadTimeError for an
// s ≠ 0 where g has a dead time, because exp(−T s) is irrational there.
func (g Continuous) AtRat(s *big.Rat) (*big.Rat, error) {
	if g.c.delay != nil && s != nil && s.Sign() != 0 {
		return nil, &DeadTimeError{Operation: "AtRat", Earlier: new(big.Rat), Later: g.c.delaySeconds()}
	}
	return ratAt(g.c.f, s, "AtRat", "s")
}

// AtRat returns the exact value of g at a rational z; nil reads as 0. The
// error is a *PoleError at a root of the denominator.
func (g Discrete) AtRat(z *big.Rat) (*big.Rat, error) { return ratAt(g.c.f, z, "AtRat", "z") }

// At returns the value of g at a complex s, dead time included, in the unit of
// the output over that of the input. Each component is the exact one, correctly
// rounded to nearest. The argument is taken as the exact number that its
// float64 components are.
//
// The errors are ErrNotFinite for an infinite or NaN component, *PoleError at a
// root of the denominator, ErrRange where a component overflows, and ErrLimit
// where degree times exponent range of s exceeds 2097152 bits.
func (g Continuous) At(s complex128) (complex128, error) {
	return valueAt(&g.c, s, "s")
}

// At returns the value of g at a complex z in the unit of the output over that
// of the input, each component correctly rounded; errors as for Continuous.
func (g Discrete) At(z complex128) (complex128, error) {
	return valueAt(&g.c, z, "z")
}

func valueAt(c *core, s complex128, variable string) (complex128, error) {
	x, y := real(s), imag(s)
	if math.IsNaN(x-x) || math.IsNaN(y-y) {
		return 0, fmt.Errorf("tf: value at %s = %v: %w", variable, s, fault.ErrNotFinite)
	}
	v, err := sidesAt(c.f, dyadicPoint(x, y))
	if err != nil {
		return 0, err
	}
	if v.isPole() {
		return 0, &PoleError{Operation: "At", Variable: variable, Point: fmt.Sprint(s), Shared: v.isZero()}
	}
	q := v.quotient()
	if c.delay != nil && s != 0 {
		return q.delayed(c.delay, x, y)
	}
	re, err := roundQuotient(q.re, q.below, q.exponent)
	if err != nil {
		return 0, err
	}
	im, err := roundQuotient(q.im, q.below, q.exponent)
	return complex(re, im), err
}

// point is the complex number (re + im·i)/2^shift.
type point struct {
	re, im *big.Int
	shift  uint
}

// dyadicPoint is x + y·i, exactly.
func dyadicPoint(x, y float64) point {
	mx, ex := integerPart(x)
	my, ey := integerPart(y)
	low := min(ex, ey, 0)
	return point{
		re:    new(big.Int).Lsh(big.NewInt(mx), uint(ex-low)),
		im:    new(big.Int).Lsh(big.NewInt(my), uint(ey-low)),
		shift: uint(-low),
	}
}

// integerPart returns m and e with x = m·2^e and m odd or 0.
func integerPart(x float64) (m int64, e int) {
	if x == 0 {
		return 0, 0
	}
	f, e := math.Frexp(x)
	m = int64(math.Ldexp(f, 53))
	e -= 53
	for m&1 == 0 {
		m >>= 1
		e++
	}
	return m, e
}

// polynomialAt returns 2^(shift·deg p)·p(s), by Horner's rule.
func (s *point) polynomialAt(p intpoly.Poly) (re, im *big.Int) {
	re, im = new(big.Int), new(big.Int)
	var t, u, w big.Int
	n := p.Degree()
	for i := n; i >= 0; i-- {
		t.Mul(re, s.im)
		u.Mul(im, s.im)
		re.Sub(w.Mul(re, s.re), &u)
		im.Add(u.Mul(im, s.re), &t)
		if p.Sign(i) != 0 {
			re.Add(re, t.Lsh(p.Coefficient(i), s.shift*uint(n-i)))
		}
	}
	return re, im
}

// complexQuotient is (re + im·i)/below·2^exponent with below ≥ 0.
type complexQuotient struct {
	re, im, below *big.Int
	exponent      int
}

// sides are numerator and denominator at a point: (a + b·i)/(c + d·i)·2^exponent.
type sides struct {
	a, b, c, d *big.Int
	exponent   int
}

// sidesAt evaluates numerator and denominator exactly.
func sidesAt(f ratfun.Func, s point) (v sides, err error) {
	num, den := f.Num(), f.Den()
	n, m := max(0, num.Degree()), den.Degree()
	if bits := max(n, m) * max(s.re.BitLen(), s.im.BitLen(), int(s.shift)); bits > maxPointBits {
		return v, fmt.Errorf("tf: value at a point: degree times bits of the point is %d, at most %d: %w", bits, maxPointBits, fault.ErrLimit)
	}
	v.a, v.b = s.polynomialAt(num)
	v.c, v.d = s.polynomialAt(den)
	v.exponent = int(s.shift) * (m - n)
	return v, nil
}

// isZero and isPole tell that the numerator, and the denominator, is 0.
func (v *sides) isZero() bool { return v.a.Sign() == 0 && v.b.Sign() == 0 }
func (v *sides) isPole() bool { return v.c.Sign() == 0 && v.d.Sign() == 0 }

// quotient divides; the denominator is not 0.
func (v *sides) quotient() complexQuotient {
	return complexQuotient{
		re:       products(v.a, v.c, v.b, v.d),
		im:       products(v.b, v.c, new(big.Int).Neg(v.a), v.d),
		below:    products(v.c, v.c, v.d, v.d),
		exponent: v.exponent,
	}
}

// products is x·y + z·w.
func products(x, y, z, w *big.Int) *big.Int {
	r := new(big.Int).Mul(x, y)
	return r.Add(r, new(big.Int).Mul(z, w))
}

// roundQuotient returns a/b·2^e, b > 0, rounded once to the nearest float64.
func roundQuotient(a, b *big.Int, e int) (float64, error) {
	if a.Sign() == 0 {
		return 0, nil
	}
	// A quotient of at least 65 bits, and a last bit that stands for all that
	// was dropped, round like the number itself.
	up := 66 - (a.BitLen() - b.BitLen())
	q, r := new(big.Int), new(big.Int).Abs(a)
	if up > 0 {
		r.Lsh(r, uint(up))
	} else {
		b = new(big.Int).Lsh(b, uint(-up))
	}
	q.QuoRem(r, b, r)
	q.Lsh(q, 1)
	if r.Sign() != 0 {
		q.SetBit(q, 0, 1)
	}
	x := new(big.Float).SetInt(q) // keeps every bit
	x.SetMantExp(x, e-up-1)
	if a.Sign() < 0 {
		x.Neg(x)
	}
	v, _ := x.Float64()
	if math.IsInf(v, 0) {
		return 0, fmt.Errorf("tf: value near 2^%d: %w", x.MantExp(nil), fault.ErrRange)
	}
	return v + 0, nil // a −0 becomes 0
}
