package intpoly

import (
	"math/big"
	"math/bits"
)

// Where one coefficient is far longer than most, a common width would waste
// memory: 20,000 ones and a coefficient of half a megabyte would take ten
// gigabytes. Such a polynomial keeps each coefficient in as many limbs as it needs.
// It is rare, so that only what is linear in it works on it as it is.

//
// Its n is −n for the longest of n limbs. The first limb of w is how many terms
// there are, and as many limbs after it say where each of them ends.

// unevenAt returns the limbs of the coefficient i.
func (p Poly) unevenAt(i int) []uint64 {
	from := 1 + p.w[0]
	if i > 0 {
		from = p.w[i]
	}
	return p.w[from:p.w[i+1]]
}

// wastes reports whether a common width takes much memory, most of it for
// nothing.
func wastes(words, needed int) bool { return words > 1<<20 && words > 8*needed }

// unevenOf returns the polynomial with the given coefficients, of which the last
// is not 0.
func unevenOf(c []*big.Int) Poly {
	p := Poly{w: make([]uint64, 1+len(c)), n: -1}
	p.w[0] = uint64(len(c))
	for i, v := range c {
		limbs := width(v)
		from := len(p.w)
		p.w = append(p.w, make([]uint64, limbs)...)
		if v != nil {
			store(p.w[from:], v)
		}
		p.w[1+i], p.n = uint64(len(p.w)), min(p.n, -limbs)
	}
	return p
}

// width is how many limbs hold v in two's complement.
func width(v *big.Int) int {
	switch {
	case v == nil:
		return 1
	case v.Sign() < 0 && v.TrailingZeroBits() == uint(v.BitLen()-1):
		return (v.BitLen()-1)/64 + 1 // −2^b is one bit shorter than its magnitude
	}
	return v.BitLen()/64 + 1
}

// even returns p with one width for all coefficients.
func (p Poly) even() Poly {
	if p.n >= 0 {
		return p
	}
	n := p.Words()
	w := make([]uint64, p.terms()*n)
	for i := range p.terms() {
		extend(w[i*n:(i+1)*n], p.at(i))
	}
	return Poly{w: w, n: n}
}

// unevenSum returns p + q, or p − q where mask is all ones.
func unevenSum(p, q Poly, mask uint64) Poly {
	c := make([]*big.Int, max(p.terms(), q.terms()))
	for i := range c {
		c[i] = p.Coefficient(i)
		if d := q.Coefficient(i); mask == 0 {
			c[i].Add(c[i], d)
		} else {
			c[i].Sub(c[i], d)
		}
	}
	return FromBigs(c...)
}

// maxSparse bounds the products of coefficients for which factors with few terms
// are multiplied term by term.
const maxSparse = 1 << 22

// sparseSum returns a·b + sign·c·d term by term; ok is false where that takes too
// many products.
func sparseSum(a, b, c, d Poly, sign int) (sum Poly, ok bool) {
	if a.present()*b.present()+c.present()*d.present() > maxSparse {
		return Poly{}, false
	}
	out := make([]*big.Int, max(a.terms()+b.terms(), c.terms()+d.terms())-1)
	add := func(p, q Poly, sign int) {
		var t big.Int
		for i := range p.terms() {
			if p.Sign(i) == 0 {
				continue
			}
			x := p.Coefficient(i)
			for j := range q.terms() {
				if q.Sign(j) == 0 {
					continue
				}
				if out[i+j] == nil {
					out[i+j] = new(big.Int)
				}
				if t.Mul(x, q.Coefficient(j)); sign < 0 {
					t.Neg(&t)
				}
				out[i+j].Add(out[i+j], &t)
			}
		}
	}
	add(a, b, 1)
	add(c, d, sign)
	return FromBigs(out...), true
}

// present is how many coefficients are not 0.
func (p Poly) present() int {
	n := 0
	for i := range p.terms() {
		if p.Sign(i) != 0 {
			n++
		}
	}
	return n
}

// unevenSpan is span for coefficients of many widths.
func (p Poly) unevenSpan() int {
	most := 0
	for i := range p.terms() {
		c := p.at(i)
		top := c[len(c)-1]
		most = max(most, 64*(len(c)-1)+bits.Len64(top^signOf(top)))
	}
	return most
}
