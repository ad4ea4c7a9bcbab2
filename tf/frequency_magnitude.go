package tf

import (
	"errors"
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// ErrZeroValue is the error of Decibels and Phase where the value is 0, which
// has neither.
var ErrZeroValue = errors.New("the value is 0, which has no phase and no decibels")

const (
	frequencyStartBits = 128
	frequencyLimitBits = 1 << 14 // a transcendental result is given up beyond
)

// sidesAt is numerator and denominator at jω, with the pole as an error.
func (f *frequencyFunction) sidesAt(omega float64, operation string) (sides, error) {
	if math.IsNaN(omega - omega) {
		return sides{}, fmt.Errorf("tf: %s at the frequency %v: %w", operation, omega, fault.ErrNotFinite)
	}
	v, err := sidesAt(f.c.f, dyadicPoint(0, omega))
	if err == nil && v.isPole() {
		err = &PoleError{Operation: operation, Variable: "s", Point: fmt.Sprint(complex(0, omega)), Shared: v.isZero()}
	}
	return v, err
}

// Magnitude returns |g(jω)| in the unit of f, correctly rounded. The errors are
// those of Continuous.At.
func (f FrequencyFunction) Magnitude(omega float64) (float64, error) {
	if f.p != nil && f.p.fast != nil {
		if v, ok := f.p.fast.magnitude(omega); ok {
			return v, nil
		}
	}
	return f.data().exactMagnitude(omega)
}

func (f *frequencyFunction) exactMagnitude(omega float64) (float64, error) {
	v, err := f.sidesAt(omega, "Magnitude")
	if err != nil {
		return 0, err
	}
	return roundRoot(products(v.a, v.a, v.b, v.b), products(v.c, v.c, v.d, v.d), 2*v.exponent)
}

// roundRoot returns the square root of a/b·2^e, a ≥ 0, b > 0, e even, rounded
// once to the nearest float64.
func roundRoot(a, b *big.Int, e int) (float64, error) {
	if a.Sign() == 0 {
		return 0, nil
	}
	// A root of at least 66 bits, and a last bit that stands for all that was
	// dropped, round like the root itself.
	up := 134 - (a.BitLen() - b.BitLen())
	up += up & 1
	q, r := new(big.Int), new(big.Int)
	if up > 0 {
		a = new(big.Int).Lsh(a, uint(up))
	} else {
		b = new(big.Int).Lsh(b, uint(-up))
	}
	q.QuoRem(a, b, r)
	root := new(big.Int).Sqrt(q)
	inexact := r.Sign() != 0 || new(big.Int).Mul(root, root).Cmp(q) != 0
	root.Lsh(root, 1)
	if inexact {
		root.SetBit(root, 0, 1)
	}
	x := new(big.Float).SetInt(root)
	x.SetMantExp(x, (e-up)/2-1)
	v, _ := x.Float64()
	if math.IsInf(v, 0) {
		return 0, fmt.Errorf("tf: magnitude near 2^%d: %w", x.MantExp(nil), fault.ErrRange)
	}
	return v, nil
}

// Decibels returns 20·log₁₀|g(jω)|, correctly rounded: decibels with respect to
// 1 in the unit of f. The errors are those of Continuous.At, and ErrZeroValue
// where the value is 0.
func (f FrequencyFunction) Decibels(omega float64) (float64, error) {
	v, err := f.data().sidesAt(omega, "Decibels")
	if err != nil {
		return 0, err
	}
	if v.isZero() {
		return 0, fmt.Errorf("tf: Decibels at the frequency %v: %w", omega, ErrZeroValue)
	}
	// 10·log₁₀ of a rational number is rational only for a power of ten; then it
	// is a multiple of 10, and of nothing else can it be midway between two
	// float64.
	above, below := products(v.a, v.a, v.b, v.b), products(v.c, v.c, v.d, v.d)
	if k, ok := powerOfTen(above, below, 2*v.exponent); ok {
		return float64(10 * k), nil
	}
	return ball.Round(frequencyStartBits, frequencyLimitBits, func(prec uint) (ball.Real, error) {
		square := ball.FromInt(above).Round(prec).Div(ball.FromInt(below).Round(prec), prec).MulPow2(2 * v.exponent)
		return square.Log(prec).Mul(ball.FromInt64(10), prec).Div(ball.FromInt64(10).Log(prec), prec), nil
	})
}

// powerOfTen returns k with a/b·2^e = 10^k where there is one.
func powerOfTen(a, b *big.Int, e int) (k int, ok bool) {
	// |log₁₀ − k| is below 1 for one of the candidates; a power of ten with an
	// exponent beyond those of a float64's square is not looked for.
	estimate := float64(a.BitLen()-b.BitLen()+e) * math.Log10(2)
	if math.Abs(estimate) > 1e5 {
		return 0, false
	}
	left, right := new(big.Int).Lsh(a, uint(max(e, 0))), new(big.Int).Lsh(b, uint(max(-e, 0)))
	for k = int(math.Floor(estimate)) - 1; k <= int(math.Ceil(estimate))+1; k++ {
		ten := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(k, -k))), nil)
		x, y := left, right
		if k >= 0 {
			y = ten.Mul(ten, right)
		} else {
			x = ten.Mul(ten, left)
		}
		if x.Cmp(y) == 0 {
			return k, true
		}
	}
	return 0, false
}

// delayShape is what the group delay depends on: numerator and denominator
// without the factors whose phase is constant along the axis, and derivatives.
type delayShape struct{ num, numSlope, den, denSlope intpoly.Poly }

// newDelayShape divides out gcd(p(s), p(−s)): with every root its mirror image
// across the imaginary axis is among the roots of that factor, so that its
// value on the axis is real or imaginary, and its phase is constant but for
// jumps.
func (f *frequencyFunction) newDelayShape() (*delayShape, error) {
	if f.c.f.IsZero() {
		return &delayShape{num: intpoly.FromInt64s(1), den: intpoly.FromInt64s(1)}, nil
	}
	if f.c.f.Num().GCDWork(f.c.f.Num()) > intpoly.MaxGCDWork || f.c.f.Den().GCDWork(f.c.f.Den()) > intpoly.MaxGCDWork {
		return nil, fmt.Errorf("tf: GroupDelay: a greatest common divisor: %w", fault.ErrLimit)
	}
	reduce := func(p intpoly.Poly) intpoly.Poly {
		symmetric := p.GCD(p.ScaleArgument(big.NewInt(-1), big.NewInt(1)))
		if symmetric.Degree() < 1 {
			return p
		}
		_, p = p.Primitive()
		q, _ := p.QuoExact(symmetric)
		return q
	}
	num, den := reduce(f.c.f.Num()), reduce(f.c.f.Den())
	return &delayShape{num, num.Derivative(), den, den.Derivative()}, nil
}

// GroupDelay returns −dφ/dω for the phase φ of g(jω), in seconds, dead time
// included: the true value, which is rational, correctly rounded. Jumps of the
// phase at zeros and poles on the axis do not count, so that it has a value at
// each of them too; for g = 0 it is the dead time. The errors are ErrNotFinite
// for an infinite or NaN ω, ErrRange, and ErrLimit as for Continuous.At
// and LowestTerms.
func (f FrequencyFunction) GroupDelay(omega float64) (float64, error) {
	if math.IsNaN(omega - omega) {
		return 0, fmt.Errorf("tf: GroupDelay at the frequency %v: %w", omega, fault.ErrNotFinite)
	}
	d := f.data()
	shape, err := d.delayShape()
	if err != nil {
		return 0, err
	}
	s := dyadicPoint(0, omega)
	if n := max(shape.num.Degree(), shape.den.Degree()); n*max(s.im.BitLen(), int(s.shift)) > maxPointBits {
		return 0, fmt.Errorf("tf: GroupDelay at the frequency %v: %w", omega, fault.ErrLimit)
	}
	// −dφ/dω = T + Re(den'/den) − Re(num'/num); each derivative is scaled by
	// 2^shift less than its polynomial.
	slope := func(p, dp intpoly.Poly) (above, below *big.Int) {
		a, b := s.polynomialAt(dp)
		c, e := s.polynomialAt(p)
		return products(a, c, b, e), products(c, c, e, e)
	}
	a, b := slope(shape.den, shape.denSlope)
	c, e := slope(shape.num, shape.numSlope)
	above := products(a, e, new(big.Int).Neg(c), b)
	above.Lsh(above, s.shift)
	below := b.Mul(b, e)
	t := d.c.delaySeconds()
	return roundQuotient(products(above, t.Denom(), t.Num(), below), new(big.Int).Mul(below, t.Denom()), 0)
}
