// Package ratpoly holds the polynomial with rational coefficients that poly
// exports: an integer polynomial over one positive integer denominator with
// which its content shares no factor.
//
// poly.Poly is defined as this type, so that the other packages of the module
// reach the integer polynomial by a conversion, ratpoly.Poly(p).Integer(),
// without copying.
package ratpoly

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// Poly is num/den. It is immutable; the zero value is 0.
type Poly struct {
	_   [0]func()
	num intpoly.Poly
	den *big.Int // nil is 1
}

// New returns num/den for den ≠ 0.
func New(num intpoly.Poly, den *big.Int) Poly {
	if num.IsZero() {
		return Poly{}
	}
	if den.IsInt64() && den.Int64() == 1 {
		return Poly{num: num}
	}
	g := new(big.Int).GCD(nil, nil, num.Content(), new(big.Int).Abs(den))
	if den.Sign() < 0 {
		g.Neg(g)
	}
	if !g.IsInt64() || g.Int64() != 1 {
		num, den = num.QuoInt(g), new(big.Int).Quo(den, g)
	}
	if den.IsInt64() && den.Int64() == 1 {
		return Poly{num: num}
	}
	return Poly{num: num, den: new(big.Int).Set(den)}
}

// FromRats returns the polynomial with the given ascending coefficients.
func FromRats(ascending ...*big.Rat) Poly {
	den := big.NewInt(1)
	for _, r := range ascending {
		if r != nil {
			g := new(big.Int).GCD(nil, nil, den, r.Denom())
			den = new(big.Int).Mul(den, new(big.Int).Quo(r.Denom(), g))
		}
	}
	c := make([]*big.Int, len(ascending))
	for i, r := range ascending {
		if r != nil {
			c[i] = new(big.Int).Quo(den, r.Denom())
			c[i].Mul(c[i], r.Num())
		}
	}
	return New(intpoly.FromBigs(c...), den)
}

// FromInteger returns p as a rational polynomial.
func FromInteger(p intpoly.Poly) Poly { return Poly{num: p} }

// Integer returns the numerator; Denominator()·p = Integer().
func (p Poly) Integer() intpoly.Poly { return p.num }

// Denominator returns a copy of the common denominator, > 0.
func (p Poly) Denominator() *big.Int {
	if p.den == nil {
		return big.NewInt(1)
	}
	return new(big.Int).Set(p.den)
}

// DenominatorBits is the bit length of the denominator.
func (p Poly) DenominatorBits() int {
	if p.den == nil {
		return 1
	}
	return p.den.BitLen()
}

// Coefficient returns the coefficient of x^i as a fresh number.
func (p Poly) Coefficient(i int) *big.Rat {
	return new(big.Rat).SetFrac(p.num.Coefficient(i), p.Denominator())
}

// Add returns p + q.
func (p Poly) Add(q Poly) Poly {
	if p.den == nil && q.den == nil {
		return Poly{num: p.num.Add(q.num)}
	}
	dp, dq := p.Denominator(), q.Denominator()
	return New(p.num.MulInt(dq).Add(q.num.MulInt(dp)), dp.Mul(dp, dq))
}

// Neg returns −p.
func (p Poly) Neg() Poly { return Poly{num: p.num.Neg(), den: p.den} }

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly {
	if p.den == nil && q.den == nil {
		return Poly{num: p.num.Mul(q.num)}
	}
	dp := p.Denominator()
	return New(p.num.Mul(q.num), dp.Mul(dp, q.Denominator()))
}

// Scale returns k·p.
func (p Poly) Scale(k *big.Rat) Poly {
	d := p.Denominator()
	return New(p.num.MulInt(k.Num()), d.Mul(d, k.Denom()))
}

// Equal reports whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool {
	return p.num.Equal(q.num) && p.Denominator().Cmp(q.Denominator()) == 0
}
