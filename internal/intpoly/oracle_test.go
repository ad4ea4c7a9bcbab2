package intpoly

// naive is the plain version of Poly: a slice of big integers and textbook
// algorithms. It is the oracle of the tests.

import "math/big"

// naive is a polynomial with integer coefficients.
type naive struct {
	c []*big.Int // ascending, no leading zero
}

func trimNaive(c []*big.Int) naive {
	n := len(c)
	for n > 0 && c[n-1].Sign() == 0 {
		n--
	}
	return naive{c: c[:n]}
}

// FromInt64s returns the polynomial with the given ascending coefficients.
func naiveInt64s(ascending ...int64) naive {
	c := make([]*big.Int, len(ascending))
	for i, v := range ascending {
		c[i] = big.NewInt(v)
	}
	return trimNaive(c)
}

// FromBigs returns the polynomial with the given ascending coefficients.
func naiveBigs(ascending ...*big.Int) naive {
	c := make([]*big.Int, len(ascending))
	for i, v := range ascending {
		c[i] = new(big.Int)
		if v != nil {
			c[i].Set(v)
		}
	}
	return trimNaive(c)
}

// Degree is the degree, −1 for the polynomial 0.
func (p naive) Degree() int { return len(p.c) - 1 }

// IsZero reports whether p is 0.
func (p naive) IsZero() bool { return len(p.c) == 0 }

// Coefficient returns the coefficient of x^i as a fresh number; 0 outside the
// range.
func (p naive) Coefficient(i int) *big.Int {
	if i < 0 || i >= len(p.c) {
		return new(big.Int)
	}
	return new(big.Int).Set(p.c[i])
}

// Leading returns the leading coefficient, 0 for the polynomial 0.
func (p naive) Leading() *big.Int { return p.Coefficient(p.Degree()) }

// Sign is the sign of the coefficient of x^i.
func (p naive) Sign(i int) int {
	if i < 0 || i >= len(p.c) {
		return 0
	}
	return p.c[i].Sign()
}

// BitLen is the bit length of the absolute value of the coefficient of x^i.
func (p naive) BitLen(i int) int {
	if i < 0 || i >= len(p.c) {
		return 0
	}
	return p.c[i].BitLen()
}

// MaxBitLen is the largest bit length of a coefficient.
func (p naive) MaxBitLen() int {
	m := 0
	for _, c := range p.c {
		m = max(m, c.BitLen())
	}
	return m
}

// IsOne reports whether p is 1.
func (p naive) IsOne() bool { return len(p.c) == 1 && p.c[0].IsInt64() && p.c[0].Int64() == 1 }

// Equal reports whether p and q are the same polynomial.
func (p naive) Equal(q naive) bool {
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
func (p naive) Add(q naive) naive {
	c := make([]*big.Int, max(len(p.c), len(q.c)))
	for i := range c {
		c[i] = new(big.Int).Add(p.Coefficient(i), q.Coefficient(i))
	}
	return trimNaive(c)
}

// Neg returns −p.
func (p naive) Neg() naive { return p.MulInt(big.NewInt(-1)) }

// Sub returns p − q.
func (p naive) Sub(q naive) naive { return p.Add(q.Neg()) }

// Mul returns p·q.
func (p naive) Mul(q naive) naive {
	if p.IsZero() || q.IsZero() {
		return naive{}
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
	return trimNaive(c)
}

// MulInt returns c·p.
func (p naive) MulInt(c *big.Int) naive {
	out := make([]*big.Int, len(p.c))
	for i, a := range p.c {
		out[i] = new(big.Int).Mul(a, c)
	}
	return trimNaive(out)
}

// QuoInt returns p/c, where c divides every coefficient and is not 0.
func (p naive) QuoInt(c *big.Int) naive {
	out := make([]*big.Int, len(p.c))
	for i, a := range p.c {
		out[i] = new(big.Int).Quo(a, c)
	}
	return trimNaive(out)
}

// MulPower returns p·x^k, k ≥ 0.
func (p naive) MulPower(k int) naive {
	if p.IsZero() {
		return p
	}
	c := make([]*big.Int, k+len(p.c))
	for i := range k {
		c[i] = new(big.Int)
	}
	copy(c[k:], p.c)
	return trimNaive(c)
}

// Valuation is the multiplicity of the root 0 (the number of low zero
// coefficients), 0 for the polynomial 0.
func (p naive) Valuation() int {
	for i, c := range p.c {
		if c.Sign() != 0 {
			return i
		}
	}
	return 0
}

// QuoPower returns p/x^k, where k ≤ p.Valuation().
func (p naive) QuoPower(k int) naive { return trimNaive(p.c[min(k, len(p.c)):]) }

// Content is the greatest common divisor of the coefficients, ≥ 0.
func (p naive) Content() *big.Int {
	g := new(big.Int)
	for _, c := range p.c {
		g.GCD(nil, nil, g, new(big.Int).Abs(c))
	}
	return g
}

// Primitive returns p/content with a positive leading coefficient, and the
// content with the sign that makes content·primitive = p.
func (p naive) Primitive() (content *big.Int, primitive naive) {
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
func (p naive) PseudoQuoRem(q naive) (quo, rem naive, k int) {
	n := q.Degree()
	k = max(0, p.Degree()-n+1)
	lc := q.Leading()
	rem = p
	left := k
	for rem.Degree() >= n {
		t := naiveBigs(rem.Leading()).MulPower(rem.Degree() - n)
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
func (p naive) QuoExact(q naive) (naive, bool) {
	if q.IsZero() {
		return naive{}, false
	}
	n := q.Degree()
	lc := q.Leading()
	var quo naive
	for p.Degree() >= n {
		d, r := new(big.Int).QuoRem(p.Leading(), lc, new(big.Int))
		if r.Sign() != 0 {
			return naive{}, false
		}
		t := naiveBigs(d).MulPower(p.Degree() - n)
		quo, p = quo.Add(t), p.Sub(t.Mul(q))
	}
	return quo, p.IsZero()
}

// GCD returns the primitive greatest common divisor with a positive leading
// coefficient; contents are ignored. GCD(0, q) is the primitive part of q, and
// GCD(0, 0) is 0.
func (p naive) GCD(q naive) naive {
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
func (p naive) Derivative() naive {
	if len(p.c) < 2 {
		return naive{}
	}
	c := make([]*big.Int, len(p.c)-1)
	for i := range c {
		c[i] = new(big.Int).Mul(p.c[i+1], big.NewInt(int64(i+1)))
	}
	return trimNaive(c)
}

// Factor is a square-free factor and its multiplicity.
type naiveFactor struct {
	Poly         naive
	Multiplicity int
}

// SquareFree returns the square-free decomposition of the primitive part of p:
// factors of positive degree, primitive with positive leading coefficients,
// pairwise coprime, in ascending multiplicity (Yun 1976). A constant has none.
func (p naive) SquareFree() []naiveFactor {
	_, p = p.Primitive()
	if p.Degree() < 1 {
		return nil
	}
	d := p.Derivative()
	g := p.GCD(d)
	b, _ := p.QuoExact(g)
	c, _ := d.QuoExact(g)
	var out []naiveFactor
	for i := 1; b.Degree() > 0; i++ {
		d := c.Sub(b.Derivative())
		a := b.GCD(d)
		if a.Degree() > 0 {
			out = append(out, naiveFactor{a, i})
		}
		b, _ = b.QuoExact(a)
		c, _ = d.QuoExact(a)
	}
	return out
}

// EvenOdd returns E and O with p(x) = E(x²) + x·O(x²).
func (p naive) EvenOdd() (even, odd naive) {
	var e, o []*big.Int
	for i, c := range p.c {
		if i%2 == 0 {
			e = append(e, c)
		} else {
			o = append(o, c)
		}
	}
	return trimNaive(e), trimNaive(o)
}

// Reverse returns x^k·p(1/x) for k = deg p.
func (p naive) Reverse() naive {
	c := make([]*big.Int, len(p.c))
	for i := range c {
		c[i] = p.c[len(p.c)-1-i]
	}
	return trimNaive(c)
}

// ScaleArgument returns den^n·p(num·x/den), n = deg p.
func (p naive) ScaleArgument(num, den *big.Int) naive {
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
	return trimNaive(c)
}

// TaylorShift returns p(x + a).
func (p naive) TaylorShift(a *big.Int) naive {
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
	return trimNaive(c)
}

// AtInt returns p(x).
func (p naive) AtInt(x *big.Int) *big.Int {
	v := new(big.Int)
	for i := len(p.c) - 1; i >= 0; i-- {
		v.Add(v.Mul(v, x), p.c[i])
	}
	return v
}

// AtRat returns den^n·p(num/den), n = deg p.
func (p naive) AtRat(num, den *big.Int) *big.Int {
	v, d := new(big.Int), big.NewInt(1)
	var t big.Int
	for i := len(p.c) - 1; i >= 0; i-- {
		v.Add(v.Mul(v, num), t.Mul(p.c[i], d))
		d.Mul(d, den)
	}
	return v
}

// Compose returns p(q(x)).
func (p naive) Compose(q naive) naive {
	var v naive
	for i := len(p.c) - 1; i >= 0; i-- {
		v = v.Mul(q).Add(naiveBigs(p.c[i]))
	}
	return v
}

// Pow returns p^n, n ≥ 0.
func (p naive) Pow(n int) naive {
	v := naiveInt64s(1)
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
func (p naive) Resultant(q naive) *big.Int {
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
