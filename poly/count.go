package poly

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// Remainder sequences grow with the square of the degree in length; these
// bounds on degree²·bits keep them to some seconds.
const (
	maxCountWork = 1 << 23 // of the sequences of HalfPlane, half as long
	maxSturmWork = 3 << 20
)

// countable refuses what cannot be counted.
func (p Poly) countable(most int) error {
	if err := p.Err(); err != nil {
		return err
	}
	return countable(p.integer(), most)
}

func countable(p intpoly.Poly, most int) error {
	n := p.Degree() + 1
	switch {
	case p.IsZero():
		return ErrZeroPolynomial
	case n > 1<<10 || n*n*(p.MaxBitLen()+16) > most:
		return ErrLimit
	}
	return nil
}

// Counts is how many roots lie on either side of a curve and on it, each
// counted with its multiplicity.
type Counts struct {
	Inside  int // the stable side: Re < 0, or |z| < 1
	On      int // on the imaginary axis, or on the unit circle
	Outside int // the unstable side: Re > 0, or |z| > 1
}

// HalfPlane counts the roots of p to the left of the imaginary axis (Inside),
// on it and to the right of it, exactly. The degenerate cases, in which a Routh
// array has a row of zeros, need no special treatment: roots that lie
// symmetrically about the origin are split off by a greatest common divisor
// first, and the rest is counted by the Cauchy index of its even and odd parts
// (Hermite 1856; Gantmacher, The Theory of Matrices, 1959, chapter XV).
//
// The errors are ErrZeroPolynomial, and ErrLimit where the square of the degree
// times the bits of the largest integer coefficient passes 2^23 (a degree of 400
// with 32-bit coefficients); the signs of Roots, which are exact, go further.
func (p Poly) HalfPlane() (Counts, error) {
	if err := p.countable(maxCountWork); err != nil {
		return Counts{}, err
	}
	return halfPlane(p.integer()), nil
}

// UnitCircle counts the roots of p within the unit circle (Inside), on it and
// outside of it, exactly, as HalfPlane does after the exact change of variable
// z = (1 + w)/(1 − w), which makes the coefficients longer by about twice the
// degree in bits. The errors are those of HalfPlane.
func (p Poly) UnitCircle() (Counts, error) {
	if err := p.countable(maxCountWork); err != nil {
		return Counts{}, err
	}
	// With v = 1 − w, z = −1 + 2/v: shift by −1, scale by 2, reverse, and
	// substitute v = 1 − w. A root at z = −1 goes to infinity and is dropped by
	// Reverse; it counts as one on the circle.
	q := p.integer().TaylorShift(big.NewInt(-1)).ScaleArgument(big.NewInt(2), big.NewInt(1))
	r := q.Reverse().TaylorShift(big.NewInt(1)).ScaleArgument(big.NewInt(-1), big.NewInt(1))
	if err := countable(r, maxCountWork); err != nil {
		return Counts{}, err
	}
	c := halfPlane(r)
	c.On += q.Valuation()
	return c, nil
}

// halfPlane counts the roots of p ≠ 0.
func halfPlane(p intpoly.Poly) Counts {
	_, p = p.Primitive()
	var c Counts
	c.On = p.Valuation()
	p = p.QuoPower(c.On)
	even, odd := p.EvenOdd()
	g := even.GCD(odd)
	if g.Degree() > 0 {
		// p = g(s²)·q(s): the roots of g(s²) come in pairs ±s. Negative x = s²
		// are pairs on the axis; any other pair has one root on each side.
		negative := 0
		for _, f := range g.SquareFree() {
			negative += f.Multiplicity * countBelowZero(f.Poly)
		}
		c.On += 2 * negative
		c.Inside += g.Degree() - negative
		c.Outside += g.Degree() - negative
		p, _ = p.QuoExact(doubled(g))
	}
	n := p.Degree()
	if n < 1 {
		return c
	}
	// n_left − n_right is the winding of p(iω) = U(ω) + i V(ω) in half turns.
	u, v := axisParts(p)
	var winding int
	if n%2 == 0 {
		winding = -cauchyIndex(v, u)
	} else {
		winding = cauchyIndex(u, v)
	}
	c.Inside += (n + winding) / 2
	c.Outside += (n - winding) / 2
	return c
}

// doubled returns g(x²).
func doubled(g intpoly.Poly) intpoly.Poly {
	c := make([]*big.Int, 2*g.Degree()+1)
	for i := 0; i <= g.Degree(); i++ {
		c[2*i] = g.Coefficient(i)
	}
	return intpoly.FromBigs(c...)
}

// axisParts returns the real and imaginary part of p(iω) as polynomials in ω.
func axisParts(p intpoly.Poly) (u, v intpoly.Poly) {
	a, b := make([]*big.Int, p.Degree()+1), make([]*big.Int, p.Degree()+1)
	for k := 0; k <= p.Degree(); k++ {
		c := p.Coefficient(k)
		if k%4 >= 2 {
			c.Neg(c)
		}
		if k%2 == 0 {
			a[k] = c
		} else {
			b[k] = c
		}
	}
	return intpoly.FromBigs(a...), intpoly.FromBigs(b...)
}

// cauchyIndex returns the Cauchy index of f/g over the real line, deg f < deg g:
// the number of poles where f/g jumps from −∞ to +∞ less those of the opposite
// jump (Sturm's theorem).
func cauchyIndex(f, g intpoly.Poly) int {
	chain := sturm(g, f)
	return variations(chain, signAtMinusInfinity) - variations(chain, signAtInfinity)
}

// countBelowZero counts the distinct negative roots of a square-free p.
func countBelowZero(p intpoly.Poly) int {
	chain := sturm(p, p.Derivative())
	atZero := func(q intpoly.Poly) int { return q.Sign(0) }
	n := variations(chain, signAtMinusInfinity) - variations(chain, atZero)
	if p.Sign(0) == 0 { // Sturm counts (−∞, 0]
		n--
	}
	return n
}

// sturm returns the signed remainder sequence of p and q, each member made
// primitive with its sign kept.
func sturm(p, q intpoly.Poly) []intpoly.Poly {
	chain := []intpoly.Poly{p}
	for !q.IsZero() {
		chain = append(chain, q)
		_, r, k := p.PseudoQuoRem(q) // r = lc(q)^k·p mod q
		if !(k%2 == 1 && q.Leading().Sign() < 0) {
			r = r.Neg()
		}
		if content := r.Content(); content.Sign() > 0 {
			r = r.QuoInt(content)
		}
		p, q = q, r
	}
	return chain
}

func signAtInfinity(p intpoly.Poly) int { return p.Sign(p.Degree()) }

func signAtMinusInfinity(p intpoly.Poly) int {
	if p.Degree()%2 == 1 {
		return -p.Sign(p.Degree())
	}
	return p.Sign(p.Degree())
}

// variations counts changes of sign along the chain; zeros are passed over.
func variations(chain []intpoly.Poly, sign func(intpoly.Poly) int) int {
	count, last := 0, 0
	for _, p := range chain {
		if s := sign(p); s != 0 {
			if last*s < 0 {
				count++
			}
			last = s
		}
	}
	return count
}

// CountRealRoots counts the distinct real roots of p with lower < x ≤ upper,
// exactly, by Sturm's theorem; a nil bound is infinite. The errors are
// ErrZeroPolynomial, and ErrLimit where the square of the degree times the bits
// of the largest integer coefficient passes 3·2^20. RealRoots isolates the roots
// that are counted here.
func (p Poly) CountRealRoots(lower, upper *big.Rat) (int, error) {
	if err := p.countable(maxSturmWork); err != nil {
		return 0, err
	}
	if lower != nil && upper != nil && lower.Cmp(upper) >= 0 {
		return 0, nil
	}
	q := squareFreePart(p.integer())
	chain := sturm(q, q.Derivative())
	at := func(x *big.Rat, infinite func(intpoly.Poly) int) int {
		if x == nil {
			return variations(chain, infinite)
		}
		return variations(chain, func(q intpoly.Poly) int { return q.AtRat(x.Num(), x.Denom()).Sign() })
	}
	return at(lower, signAtMinusInfinity) - at(upper, signAtInfinity), nil
}
