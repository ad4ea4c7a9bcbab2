package intpoly

import (
	"math/big"
	"math/bits"
)

// Derivative returns dp/dx.
func (p Poly) Derivative() Poly {
	if p.terms() < 2 {
		return Poly{}
	}
	n := limbsFor(p.span() + bits.Len(uint(p.Degree())))
	w := make([]uint64, p.Degree()*n)
	k := make([]uint64, 1)
	x := make([]uint64, n)
	for i := 1; i < p.terms(); i++ {
		k[0] = -uint64(i)
		extend(x, p.at(i))
		subtractProduct(w[(i-1)*n:i*n], k, x)
	}
	return trim(w, n)
}

// ScaleArgument returns den^n·p(num·x/den), n = deg p.
func (p Poly) ScaleArgument(num, den *big.Int) Poly {
	c := p.bigs()
	up := big.NewInt(1)
	for i := range c {
		c[i].Mul(c[i], up)
		up = new(big.Int).Mul(up, num)
	}
	down := big.NewInt(1)
	for i := len(c) - 1; i >= 0; i-- {
		c[i].Mul(c[i], down)
		down = new(big.Int).Mul(down, den)
	}
	return FromBigs(c...)
}

// shiftTerms is up to how many terms TaylorShift works by synthetic division.
const shiftTerms = 64

// TaylorShift returns p(x + a): short ones by repeated synthetic division (Horner
// 1819), long ones as p₀(x + a) + (x + a)^m·p₁(x + a) with fast products.
func (p Poly) TaylorShift(a *big.Int) Poly {
	if a == nil || a.Sign() == 0 {
		return p
	}
	powers := []Poly{FromBigs(a, big.NewInt(1))} // (x + a)^(2^i)
	for 1<<len(powers) < p.terms() {
		last := powers[len(powers)-1]
		powers = append(powers, last.Mul(last))
	}
	return p.shift(a, powers)
}

func (p Poly) shift(a *big.Int, powers []Poly) Poly {
	if p.terms() <= shiftTerms {
		return p.shiftShort(a)
	}
	i := bits.Len(uint(p.terms()-1)) - 1
	m := 1 << i
	return p.slice(0, m).shift(a, powers).Add(powers[i].Mul(p.slice(m, p.terms()).shift(a, powers)))
}

func (p Poly) shiftShort(a *big.Int) Poly {
	if a.IsInt64() && (a.Int64() == 1 || a.Int64() == -1) {
		return p.shiftUnit(uint64(a.Int64() >> 1))
	}
	c := p.bigs()
	var t big.Int
	for i := range c {
		for j := len(c) - 2; j >= i; j-- {
			c[j].Add(c[j], t.Mul(a, c[j+1]))
		}
	}
	return FromBigs(c...)
}

// shiftUnit returns p(x + 1), or p(x − 1) where mask is all ones: by sums alone,
// which stay below 2^degree times the largest coefficient.
func (p Poly) shiftUnit(mask uint64) Poly {
	if p.IsZero() {
		return p
	}
	terms, n := p.terms(), limbsFor(p.span()+p.Degree())
	w := make([]uint64, terms*n)
	for i := range terms {
		extend(w[i*n:(i+1)*n], p.at(i))
	}
	for i := range terms {
		for j := terms - 2; j >= i; j-- {
			c, above := w[j*n:(j+1)*n], w[(j+1)*n:(j+2)*n]
			carry := mask & 1
			for k, v := range above {
				c[k], carry = bits.Add64(c[k], v^mask, carry)
			}
		}
	}
	return trim(w, n)
}

// AtInt returns p(x).
func (p Poly) AtInt(x *big.Int) *big.Int {
	v := new(big.Int)
	var c big.Int
	for i := p.Degree(); i >= 0; i-- {
		v.Add(v.Mul(v, x), load(&c, p.at(i)))
	}
	return v
}

// AtRat returns den^n·p(num/den), n = deg p.
func (p Poly) AtRat(num, den *big.Int) *big.Int {
	if den.IsInt64() && den.Int64() == 1 {
		return p.AtInt(num)
	}
	v, d := new(big.Int), big.NewInt(1)
	var c, t big.Int
	for i := p.Degree(); i >= 0; i-- {
		v.Add(v.Mul(v, num), t.Mul(load(&c, p.at(i)), d))
		d.Mul(d, den)
	}
	return v
}

// Compose returns p(q(x)), by Horner's rule.
func (p Poly) Compose(q Poly) Poly {
	var v Poly
	for i := p.Degree(); i >= 0; i-- {
		v = v.Mul(q).Add(FromBigs(p.Coefficient(i)))
	}
	return v
}

// Pow returns p^n, n ≥ 0.
func (p Poly) Pow(n int) Poly {
	v := FromInt64s(1)
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			v = v.Mul(p)
		}
		if n > 1 {
			p = p.Mul(p)
		}
	}
	return v
}

// Factor is a square-free factor and its multiplicity.
type Factor struct {
	Poly         Poly
	Multiplicity int
}

// SquareFree returns the square-free decomposition of the primitive part of p:
// factors of positive degree, primitive with positive leading coefficients,
// pairwise coprime, in ascending multiplicity (Yun 1976). A constant has none.
func (p Poly) SquareFree() []Factor {
	p = p.primitive()
	if p.Degree() < 1 {
		return nil
	}
	d := p.Derivative()
	g := p.GCD(d)
	if g.IsOne() {
		return []Factor{{p, 1}}
	}
	b, _ := p.QuoExact(g)
	c, _ := d.QuoExact(g)
	var out []Factor
	for i := 1; b.Degree() > 0; i++ {
		d := c.Sub(b.Derivative())
		a := b.GCD(d)
		if a.Degree() > 0 {
			out = append(out, Factor{a, i})
		}
		b, _ = b.QuoExact(a)
		c, _ = d.QuoExact(a)
	}
	return out
}
