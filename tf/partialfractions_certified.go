package tf

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/algebraic"
	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/ratpoly"
)

// certifiedCoefficients returns the coefficients at a root x of a factor of
// degree 3 or more, from balls at doubling precision.
func (e *expansion) certifiedCoefficients(f factor, x *algebraic.Number, scale func(k int) *big.Rat) ([]coefficient, error) {
	out := make([]coefficient, f.multiplicity)
	for k := range out {
		enclose := func(prec uint) (ball.Complex, error) {
			i := 0
			for i < rungs-1 && uint(firstPrecision)<<i < prec {
				i++
			}
			return e.enclosedCoefficient(x, k, i, scale(k))
		}
		re, err := e.component(f, x, k, scale(k), false)
		if err != nil {
			return nil, err
		}
		var im float64
		if !x.IsReal() {
			if im, err = e.component(f, x, k, scale(k), true); err != nil {
				return nil, err
			}
		}
		out[k] = coefficient{value: complex(re, im), enclose: enclose}
	}
	return out, nil
}

// enclosedCoefficient returns the ball of coefficient k at the pole x on rung
// i, times scale.
func (e *expansion) enclosedCoefficient(x *algebraic.Number, k, i int, scale *big.Rat) (ball.Complex, error) {
	parts, err := e.principals(i)
	if err != nil {
		return ball.Complex{}, err
	}
	for _, p := range parts {
		if p.root == x {
			prec := uint(firstPrecision)<<i + 32
			return p.coefficients[k].MulReal(ball.FromRat(scale, prec), prec), nil
		}
	}
	return ball.Complex{}, errUndecided
}

// component returns a component of a coefficient correctly rounded. A ball that
// stays across a boundary b of rounding (a float64, or the point between two
// of them) is narrowed until it is decided whether the component equals b: two
// different numbers of this kind are further apart than separation tells.
func (e *expansion) component(f factor, x *algebraic.Number, k int, scale *big.Rat, imaginary bool) (float64, error) {
	var residue ratpoly.Poly
	known := false
	for i := range rungs {
		z, err := e.enclosedCoefficient(x, k, i, scale)
		if err != nil {
			return 0, err
		}
		v := z.Re
		if imaginary {
			v = z.Im
		}
		if y, ok := v.Float64(); ok {
			return y, nil
		}
		if v.IsBeyondRange() {
			return 0, fault.ErrRange
		}
		// Where the ball is still wide, more digits are cheaper than algebra.
		b := boundaryIn(v)
		if b == nil || i == 0 || !isNarrow(z, v) {
			continue
		}
		if !known {
			ring := residues{f.q}
			c, ok := expand(ring, e.num, e.den, ring.variable(), f.multiplicity)
			if !ok {
				return 0, errUndecided
			}
			residue, known = c[k].Scale(scale), true
		}
		gap, err := e.separation(f, residue, k, scale, b, x.IsReal(), imaginary)
		if err != nil {
			return 0, err
		}
		if v.Radius().MantExp(nil)+1 < -gap {
			r, _ := b.Rat(nil)
			return rounded(r)
		}
	}
	return 0, errUndecided
}

// isNarrow reports whether the component v of z is known to 128 bits of the larger
// one.
func isNarrow(z ball.Complex, v ball.Real) bool {
	if !z.Re.IsFinite() || !z.Im.IsFinite() {
		return false
	}
	size := max(z.Re.Mid().MantExp(nil), z.Im.Mid().MantExp(nil))
	return v.Radius().Sign() == 0 || v.Radius().MantExp(nil) < size-128
}

// boundaryIn returns the point of v that is 0, or has at most 54 bits, or nil.
func boundaryIn(v ball.Real) *big.Float {
	if v.ContainsZero() {
		return new(big.Float)
	}
	b := new(big.Float).SetPrec(54).Set(v.Mid())
	if r, _ := b.Rat(nil); v.ContainsRat(r) {
		return b
	}
	return nil
}

// separation returns n such that a component that differs from b differs by
// more than 2^−n.
//
// Let γ_i = g(α_i) be the conjugates of the coefficient, g = G/d a residue with
// integer G modulo the factor of degree n with the leading coefficient l. With
// a = d^n·l^(n·deg g) the polynomial a·Π(y − γ_i) has integer coefficients, and
// so has a^(2(n−1))·Π(y − (γ_i ± γ_j)) over all i ≠ j. A number that is a root
// of an integer polynomial with leading coefficient A and roots β_i, and not 0,
// is at least 1/(A·Π max(1, |β_i|)) (Mahler 1960). Here β_i = γ_i ± γ_j − 2b.
func (e *expansion) separation(f factor, g ratpoly.Poly, k int, scale *big.Rat, b *big.Float, isReal, imaginary bool) (int, error) {
	n := f.q.Degree()
	lead := n*g.Denominator().BitLen() + n*max(0, g.Integer().Degree())*f.q.Leading().BitLen()
	fraction := 0 // bits of 2b after the binary point
	size := 0     // 2|b| < 2^size
	if b.Sign() != 0 {
		size = max(0, b.MantExp(nil)+1)
		fraction = max(0, int(b.MinPrec())-b.MantExp(nil))
	}
	var sizes []int // |γ_i| < 2^sizes
	for _, x := range f.roots {
		s, err := e.coefficientSize(x, k, scale)
		if err != nil {
			return 0, err
		}
		sizes = append(sizes, s)
	}
	total := 0
	if isReal {
		for _, s := range sizes {
			total += max(s, size) + 1
		}
		return total + lead + n*fraction, nil
	}
	for i, s := range sizes {
		for j, r := range sizes {
			if i != j {
				total += max(max(s, r)+1, size) + 1
			}
		}
	}
	return total + 2*(n-1)*lead + n*(n-1)*fraction + 1, nil
}

// coefficientSize returns s ≥ 0 such that coefficient k at x is below 2^s.
func (e *expansion) coefficientSize(x *algebraic.Number, k int, scale *big.Rat) (int, error) {
	if imag(x.Value()) < 0 {
		x = e.mirror(x)
	}
	for i := range rungs {
		z, err := e.enclosedCoefficient(x, k, i, scale)
		if err != nil {
			return 0, err
		}
		if z.IsFinite() {
			return max(0, magnitude(z.Re), magnitude(z.Im)) + 1, nil
		}
	}
	return 0, errUndecided
}

// magnitude returns n with |v| < 2^n.
func magnitude(v ball.Real) int {
	lo, hi := v.Lower(), v.Upper()
	n := math.MinInt32
	for _, end := range []*big.Float{lo, hi} {
		if end.Sign() != 0 {
			n = max(n, end.MantExp(nil))
		}
	}
	return n
}

// mirror returns the root above the real axis of which x is the conjugate.
func (e *expansion) mirror(x *algebraic.Number) *algebraic.Number {
	for i := 1; i < len(e.roots); i++ {
		if e.roots[i].Number == x {
			return e.roots[i-1].Number
		}
	}
	return x
}
