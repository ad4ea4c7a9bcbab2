// Package intpoly computes with polynomials that have integer coefficients.
//
// A Poly is an immutable value; its zero value is the polynomial 0. Methods
// return new values and never change an operand; a *big.Int is copied on the
// way in and out, and nil reads as 0. Coefficients ascend: index i belongs to
// x^i.
package intpoly

import "math/big"

// Poly is a polynomial with integer coefficients.
type Poly struct {
	_ [0]func()
	c []*big.Int // ascending, no leading zero
}

func trim(c []*big.Int) Poly {
	n := len(c)
	for n > 0 && c[n-1].Sign() == 0 {
		n--
	}
	return Poly{c: c[:n]}
}

// FromInt64s returns the polynomial with the given ascending coefficients.
func FromInt64s(ascending ...int64) Poly {
	c := make([]*big.Int, len(ascending))
	for i, v := range ascending {
		c[i] = big.NewInt(v)
	}
	return trim(c)
}

// FromBigs returns the polynomial with the given ascending coefficients.
func FromBigs(ascending ...*big.Int) Poly {
	c := make([]*big.Int, len(ascending))
	for i, v := range ascending {
		c[i] = new(big.Int)
		if v != nil {
			c[i].Set(v)
		}
	}
	return trim(c)
}

// Degree is the degree, −1 for the polynomial 0.
func (p Poly) Degree() int { return len(p.c) - 1 }

// IsZero reports whether p is 0.
func (p Poly) IsZero() bool { return len(p.c) == 0 }

// Coefficient returns the coefficient of x^i as a fresh number; 0 outside the
// range.
func (p Poly) Coefficient(i int) *big.Int {
	if i < 0 || i >= len(p.c) {
		return new(big.Int)
	}
	return new(big.Int).Set(p.c[i])
}

// Leading returns the leading coefficient, 0 for the polynomial 0.
func (p Poly) Leading() *big.Int { return p.Coefficient(p.Degree()) }

// Sign is the sign of the coefficient of x^i.
func (p Poly) Sign(i int) int {
	if i < 0 || i >= len(p.c) {
		return 0
	}
	return p.c[i].Sign()
}

// BitLen is the bit length of the absolute value of the coefficient of x^i.
func (p Poly) BitLen(i int) int {
	if i < 0 || i >= len(p.c) {
		return 0
	}
	return p.c[i].BitLen()
}

// MaxBitLen is the largest bit length of a coefficient.
func (p Poly) MaxBitLen() int {
	m := 0
	for _, c := range p.c {
		m = max(m, c.BitLen())
	}
	return m
}

// IsOne reports whether p is 1.
func (p Poly) IsOne() bool { return len(p.c) == 1 && p.c[0].IsInt64() && p.c[0].Int64() == 1 }

// Equal reports whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool {
	if len(p.c) != len(q.c) {
		return false
	}
	for i := range p.c {
		if p.c[i].Cmp(q.c[i]) != 0 {
			return false
		}
	}
	return true
}

// Add returns p + q.
func (p Poly) Add(q Poly) Poly {
	c := make([]*big.Int, max(len(p.c), len(q.c)))
	for i := range c {
		c[i] = new(big.Int).Add(p.Coefficient(i), q.Coefficient(i))
	}
	return trim(c)
}

// Neg returns −p.
func (p Poly) Neg() Poly { return p.MulInt(big.NewInt(-1)) }

// Sub returns p − q.
func (p Poly) Sub(q Poly) Poly { return p.Add(q.Neg()) }

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly {
	if p.IsZero() || q.IsZero() {
		return Poly{}
	}
	c := make([]*big.Int, len(p.c)+len(q.c)-1)
	for i := range c {
		c[i] = new(big.Int)
	}
	var t big.Int
	for i, a := range p.c {
		for j, b := range q.c {
			c[i+j].Add(c[i+j], t.Mul(a, b))
		}
	}
	return trim(c)
}

// MulInt returns c·p.
func (p Poly) MulInt(c *big.Int) Poly {
	out := make([]*big.Int, len(p.c))
	for i, a := range p.c {
		out[i] = new(big.Int).Mul(a, c)
	}
	return trim(out)
}

// QuoInt returns p/c, where c divides every coefficient and is not 0.
func (p Poly) QuoInt(c *big.Int) Poly {
	out := make([]*big.Int, len(p.c))
	for i, a := range p.c {
		out[i] = new(big.Int).Quo(a, c)
	}
	return trim(out)
}

// MulPower returns p·x^k, k ≥ 0.
func (p Poly) MulPower(k int) Poly {
	if p.IsZero() {
		return p
	}
	c := make([]*big.Int, k+len(p.c))
	for i := range k {
		c[i] = new(big.Int)
	}
	copy(c[k:], p.c)
	return trim(c)
}

// Valuation is the multiplicity of the root 0 (the number of low zero
// coefficients), 0 for the polynomial 0.
func (p Poly) Valuation() int {
	for i, c := range p.c {
		if c.Sign() != 0 {
			return i
		}
	}
	return 0
}

// QuoPower returns p/x^k, where k ≤ p.Valuation().
func (p Poly) QuoPower(k int) Poly { return trim(p.c[min(k, len(p.c)):]) }

// Content is the greatest common divisor of the coefficients, ≥ 0.
func (p Poly) Content() *big.Int {
	g := new(big.Int)
	for _, c := range p.c {
		g.GCD(nil, nil, g, new(big.Int).Abs(c))
	}
	return g
}

// Primitive returns p/content with a positive leading coefficient, and the
// content with the sign that makes content·primitive = p.
func (p Poly) Primitive() (content *big.Int, primitive Poly) {
	content = p.Content()
	if p.IsZero() {
		return content, p
	}
	if p.c[len(p.c)-1].Sign() < 0 {
		content.Neg(content)
	}
	return content, p.QuoInt(content)
}

// PseudoQuoRem returns quo, rem and k with lc(q)^k·p = quo·q + rem and
// deg rem < deg q, where k = max(0, deg p − deg q + 1). q must not be 0.
func (p Poly) PseudoQuoRem(q Poly) (quo, rem Poly, k int) {
	n := q.Degree()
	k = max(0, p.Degree()-n+1)
	lc := q.Leading()
	rem = p
	left := k
	for rem.Degree() >= n {
		t := FromBigs(rem.Leading()).MulPower(rem.Degree() - n)
		quo = quo.MulInt(lc).Add(t)
		rem = rem.MulInt(lc).Sub(t.Mul(q))
		left--
	}
	for ; left > 0; left-- {
		quo, rem = quo.MulInt(lc), rem.MulInt(lc)
	}
	return quo, rem, k
}

// QuoExact returns p/q and true where q divides p over the integers.
func (p Poly) QuoExact(q Poly) (Poly, bool) {
	if q.IsZero() {
		return Poly{}, false
	}
	n := q.Degree()
	lc := q.Leading()
	var quo Poly
	for p.Degree() >= n {
		d, r := new(big.Int).QuoRem(p.Leading(), lc, new(big.Int))
		if r.Sign() != 0 {
			return Poly{}, false
		}
		t := FromBigs(d).MulPower(p.Degree() - n)
		quo, p = quo.Add(t), p.Sub(t.Mul(q))
	}
	return quo, p.IsZero()
}

// GCD returns the primitive greatest common divisor with a positive leading
// coefficient; contents are ignored. GCD(0, q) is the primitive part of q, and
// GCD(0, 0) is 0.
func (p Poly) GCD(q Poly) Poly {
	_, p = p.Primitive()
	_, q = q.Primitive()
	for !q.IsZero() {
		_, r, _ := p.PseudoQuoRem(q)
		_, r = r.Primitive()
		p, q = q, r
	}
	return p
}

// Derivative returns dp/dx.
func (p Poly) Derivative() Poly {
	if len(p.c) < 2 {
		return Poly{}
	}
	c := make([]*big.Int, len(p.c)-1)
	for i := range c {
		c[i] = new(big.Int).Mul(p.c[i+1], big.NewInt(int64(i+1)))
	}
	return trim(c)
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
	_, p = p.Primitive()
	if p.Degree() < 1 {
		return nil
	}
	d := p.Derivative()
	g := p.GCD(d)
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

// EvenOdd returns E and O with p(x) = E(x²) + x·O(x²).
func (p Poly) EvenOdd() (even, odd Poly) {
	var e, o []*big.Int
	for i, c := range p.c {
		if i%2 == 0 {
			e = append(e, c)
		} else {
			o = append(o, c)
		}
	}
	return trim(e), trim(o)
}

// Reverse returns x^k·p(1/x) for k = deg p.
func (p Poly) Reverse() Poly {
	c := make([]*big.Int, len(p.c))
	for i := range c {
		c[i] = p.c[len(p.c)-1-i]
	}
	return trim(c)
}

// ScaleArgument returns den^n·p(num·x/den), n = deg p.
func (p Poly) ScaleArgument(num, den *big.Int) Poly {
	c := make([]*big.Int, len(p.c))
	up := big.NewInt(1)
	for i := range c {
		c[i] = new(big.Int).Mul(p.c[i], up)
		up = new(big.Int).Mul(up, num)
	}
	down := big.NewInt(1)
	for i := len(c) - 1; i >= 0; i-- {
		c[i].Mul(c[i], down)
		down = new(big.Int).Mul(down, den)
	}
	return trim(c)
}

// TaylorShift returns p(x + a).
func (p Poly) TaylorShift(a *big.Int) Poly {
	c := make([]*big.Int, len(p.c))
	for i := range c {
		c[i] = p.Coefficient(i)
	}
	var t big.Int
	for i := range c {
		for j := len(c) - 2; j >= i; j-- {
			c[j].Add(c[j], t.Mul(a, c[j+1]))
		}
	}
	return trim(c)
}

// AtInt returns p(x).
func (p Poly) AtInt(x *big.Int) *big.Int {
	v := new(big.Int)
	for i := len(p.c) - 1; i >= 0; i-- {
		v.Add(v.Mul(v, x), p.c[i])
	}
	return v
}

// AtRat returns den^n·p(num/den), n = deg p.
func (p Poly) AtRat(num, den *big.Int) *big.Int {
	v, d := new(big.Int), big.NewInt(1)
	var t big.Int
	for i := len(p.c) - 1; i >= 0; i-- {
		v.Add(v.Mul(v, num), t.Mul(p.c[i], d))
		d.Mul(d, den)
	}
	return v
}

// Compose returns p(q(x)).
func (p Poly) Compose(q Poly) Poly {
	var v Poly
	for i := len(p.c) - 1; i >= 0; i-- {
		v = v.Mul(q).Add(FromBigs(p.c[i]))
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
		p = p.Mul(p)
	}
	return v
}

// Resultant returns the resultant of p and q: 0 when they have a common root
// or one of them is 0.
func (p Poly) Resultant(q Poly) *big.Int {
	if p.IsZero() || q.IsZero() {
		return new(big.Int)
	}
	// Euclid over the rationals: res(p, q) = (−1)^{mn} lc(q)^{m − deg r} res(q, r).
	res := big.NewRat(1, 1)
	pow := func(c *big.Rat, k int) {
		for range k {
			res.Mul(res, c)
		}
	}
	for q.Degree() > 0 {
		m, n := p.Degree(), q.Degree()
		_, r, k := p.PseudoQuoRem(q) // r = lc(q)^k p mod q
		if r.IsZero() {
			return new(big.Int)
		}
		if m*n%2 == 1 {
			res.Neg(res)
		}
		lc := new(big.Rat).SetInt(q.Leading())
		pow(lc, m-r.Degree())
		// res(q, r_true), r_true = r/lc^k: res(q, r)·lc^(−k n)
		pow(new(big.Rat).Inv(lc), k*n)
		p, q = q, r
	}
	pow(new(big.Rat).SetInt(q.Leading()), p.Degree())
	return new(big.Int).Set(res.Num())
}
