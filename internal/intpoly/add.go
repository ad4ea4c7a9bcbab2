package intpoly

import (
	"math/big"
	"math/bits"
)

// Add returns p + q.
func (p Poly) Add(q Poly) Poly { return combine(p, q, 0) }

// Sub returns p − q.
func (p Poly) Sub(q Poly) Poly { return combine(p, q, ^uint64(0)) }

// Neg returns −p.
func (p Poly) Neg() Poly {
	if p.IsZero() {
		return p
	}
	n := limbsFor(p.span() + 1) // −(−2^b) needs a bit more
	w := make([]uint64, p.terms()*n)
	for i := range p.terms() {
		c := w[i*n : (i+1)*n]
		extend(c, p.at(i))
		negate(c)
	}
	return trim(w, n)
}

// limbsFor returns how many limbs hold −2^b … 2^b − 1.
func limbsFor(b int) int { return b/64 + 1 }

// extend copies c into the limbs of out, with its sign.
func extend(out, c []uint64) {
	k := copy(out, c)
	sign := signOf(c[len(c)-1])
	for ; k < len(out); k++ {
		out[k] = sign
	}
}

// combine returns p + q, or p − q where mask is all ones.
func combine(p, q Poly, mask uint64) Poly {
	switch {
	case q.IsZero():
		return p
	case p.IsZero() && mask == 0:
		return q
	case p.IsZero():
		return q.Neg()
	}
	n := limbsFor(max(p.span(), q.span()) + 1)
	terms := max(p.terms(), q.terms())
	w := make([]uint64, terms*n)
	if n == 1 {
		copy(w, p.w)
		for i, x := range q.w {
			w[i] += (x ^ mask) - mask
		}
		return trim(w, 1)
	}
	for i := range terms {
		c := w[i*n : (i+1)*n]
		if i < p.terms() {
			extend(c, p.at(i))
		}
		if i < q.terms() {
			accumulate(c, q.at(i), mask)
		}
	}
	return trim(w, n)
}

// accumulate adds x to c, or subtracts it where mask is all ones.
func accumulate(c, x []uint64, mask uint64) {
	carry := mask & 1
	for k, v := range x {
		c[k], carry = bits.Add64(c[k], v^mask, carry)
	}
	sign := signOf(x[len(x)-1]) ^ mask
	for k := len(x); k < len(c); k++ {
		c[k], carry = bits.Add64(c[k], sign, carry)
	}
}

// MulInt returns c·p.
func (p Poly) MulInt(c *big.Int) Poly {
	if c.IsInt64() {
		switch c.Int64() {
		case 1:
			return p
		case -1:
			return p.Neg()
		}
	}
	return p.Mul(FromBigs(c))
}

// QuoInt returns p/c, where c divides every coefficient and is not 0.
func (p Poly) QuoInt(c *big.Int) Poly {
	if c.IsInt64() {
		switch v := c.Int64(); {
		case v == 1:
			return p
		case v == -1:
			return p.Neg()
		case p.n == 1:
			w := make([]uint64, len(p.w))
			for i, x := range p.w {
				w[i] = uint64(int64(x) / v)
			}
			return trim(w, 1)
		}
	}
	out := p.bigs()
	for _, a := range out {
		a.Quo(a, c)
	}
	return FromBigs(out...)
}
