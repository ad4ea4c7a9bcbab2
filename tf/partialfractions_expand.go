package tf

import (
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratpoly"
)

// field is the arithmetic in which a function is expanded about a pole: balls
// of some precision, or the exact numbers ℚ[x]/q.
type field[T any] interface {
	add(a, b T) T
	sub(a, b T) T
	mul(a, b T) T
	// inverse fails where a is zero or not known to differ from it.
	inverse(a T) (T, bool)
	// taylor returns the first k Taylor coefficients of p about x.
	taylor(p intpoly.Poly, x T, k int) []T
}

// expand returns the principal part of num/den at its pole of multiplicity m:
// c[j] belongs to 1/(s−pole)^(j+1). The method is the division of the two
// Taylor series about the pole, of which the first m coefficients of den are
// known to vanish.
func expand[T any](f field[T], num, den intpoly.Poly, pole T, m int) ([]T, bool) {
	n := f.taylor(num, pole, m)
	d := f.taylor(den, pole, 2*m)[m:]
	inv, ok := f.inverse(d[0])
	if !ok {
		return nil, false
	}
	c := make([]T, m)
	for i := range m { // coefficient of (s−pole)^(i−m)
		v := n[i]
		for j := 1; j <= i; j++ {
			v = f.sub(v, f.mul(d[j], c[m-1-(i-j)]))
		}
		c[m-1-i] = f.mul(v, inv)
	}
	return c, true
}

// synthetic returns the first k Taylor coefficients of p about x, by repeated
// synthetic division (Horner 1819).
func synthetic[T any](f field[T], integer func(*big.Int) T, p intpoly.Poly, x T, k int) []T {
	n := p.Degree()
	c := make([]T, max(n+1, k))
	for i := range c {
		c[i] = integer(p.Coefficient(i))
	}
	for i := 0; i < min(k, n); i++ {
		for j := n - 1; j >= i; j-- {
			c[j] = f.add(c[j], f.mul(x, c[j+1]))
		}
	}
	return c[:k]
}

// balls is the field of complex balls at a working precision.
type balls struct{ prec uint }

func (f balls) add(a, b ball.Complex) ball.Complex { return a.Add(b, f.prec) }
func (f balls) sub(a, b ball.Complex) ball.Complex { return a.Sub(b, f.prec) }
func (f balls) mul(a, b ball.Complex) ball.Complex { return a.Mul(b, f.prec) }
func (f balls) taylor(p intpoly.Poly, x ball.Complex, k int) []ball.Complex {
	return synthetic(f, func(n *big.Int) ball.Complex { return ball.NewComplex(ball.FromInt(n), ball.FromInt64(0)) }, p, x, k)
}
func (f balls) inverse(a ball.Complex) (ball.Complex, bool) {
	v := ball.NewComplex(ball.FromInt64(1), ball.FromInt64(0)).Div(a, f.prec)
	return v, v.Re.IsFinite() && v.Im.IsFinite()
}

// residues is the ring ℚ[x]/q for a square-free q: what is computed in it
// holds at every root of q at once.
type residues struct{ q intpoly.Poly }

func (f residues) add(a, b ratpoly.Poly) ratpoly.Poly { return a.Add(b) }
func (f residues) sub(a, b ratpoly.Poly) ratpoly.Poly { return a.Add(b.Neg()) }
func (f residues) mul(a, b ratpoly.Poly) ratpoly.Poly { return f.reduce(a.Mul(b)) }

// taylor holds at x, the residue of the variable: the derivatives over k!.
func (f residues) taylor(p intpoly.Poly, _ ratpoly.Poly, k int) []ratpoly.Poly {
	c := make([]ratpoly.Poly, k)
	for i := range c {
		c[i] = f.reduce(ratpoly.FromInteger(p))
		p = p.Derivative().QuoInt(big.NewInt(int64(i + 1)))
	}
	return c
}

// variable is the residue of x: the root itself.
func (f residues) variable() ratpoly.Poly {
	return f.reduce(ratpoly.FromInteger(intpoly.FromInt64s(0, 1)))
}

func (f residues) reduce(a ratpoly.Poly) ratpoly.Poly {
	_, rem, k := a.Integer().PseudoQuoRem(f.q)
	den := new(big.Int).Exp(f.q.Leading(), big.NewInt(int64(k)), nil)
	return ratpoly.New(rem, den.Mul(den, a.Denominator()))
}

// inverse comes from the cofactors of the resultant; it fails where a shares a
// factor with q, and beyond the bound on their work.
func (f residues) inverse(a ratpoly.Poly) (ratpoly.Poly, bool) {
	a = f.reduce(a)
	p, d := a.Integer(), a.Denominator()
	switch {
	case p.IsZero():
		return ratpoly.Poly{}, false
	case p.Degree() == 0:
		return ratpoly.New(intpoly.FromBigs(d), p.Leading()), true
	case p.CofactorWork(f.q) > intpoly.MaxCofactorWork:
		return ratpoly.Poly{}, false
	}
	u, _, r, ok := p.Cofactors(f.q) // u·p ≡ r
	if !ok {
		return ratpoly.Poly{}, false
	}
	return ratpoly.New(u.MulInt(d), r), true
}

// rationals is the field ℚ.
type rationals struct{}

func (rationals) add(a, b *big.Rat) *big.Rat { return new(big.Rat).Add(a, b) }
func (rationals) sub(a, b *big.Rat) *big.Rat { return new(big.Rat).Sub(a, b) }
func (rationals) mul(a, b *big.Rat) *big.Rat { return new(big.Rat).Mul(a, b) }
func (f rationals) taylor(p intpoly.Poly, x *big.Rat, k int) []*big.Rat {
	return synthetic(f, func(n *big.Int) *big.Rat { return new(big.Rat).SetInt(n) }, p, x, k)
}
func (rationals) inverse(a *big.Rat) (*big.Rat, bool) {
	if a.Sign() == 0 {
		return nil, false
	}
	return new(big.Rat).Inv(a), true
}
