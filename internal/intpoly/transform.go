package intpoly

import (
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// transformPrimes is how many primes coefficients between −2^span and 2^span
// need.
func transformPrimes(span int) int { return (span+1)/61 + 1 }

// transformSum returns a·b + sign·c·d, with −2^span ≤ coefficients < 2^span, by
// number-theoretic transforms (Pollard 1971) modulo as many primes as the
// coefficients ask for; the Chinese remainder theorem puts them together.
func transformSum(a, b, c, d Poly, span, sign int) Poly {
	terms := max(a.terms()+b.terms(), c.terms()+d.terms()) - 1
	order := transformOrder(terms, max(a.terms(), b.terms(), c.terms(), d.terms()))
	product, room := make([]uint64, terms), make([]uint64, 2*order)
	var second []uint64
	if !c.IsZero() {
		second = make([]uint64, terms)
	}
	primes := transformPrimes(span)
	all := NewImages(primes)
	for k := range primes {
		t := modp.NewTransform(k, order)
		productImage(t, product, room, a, b)
		if !c.IsZero() {
			productImage(t, second, room, c, d)
			for i, x := range second {
				if sign < 0 {
					x = t.Neg(x)
				}
				product[i] = t.Add(product[i], x)
			}
		}
		all.Add(&t.Field, product)
	}
	return all.symmetric()
}

// transformOrder is the order of the transform for a product: a power of two,
// which a few terms may exceed, but not a factor.
func transformOrder(terms, longest int) int {
	order := 1 << bits.Len(uint(terms-1))
	if half := order / 2; terms-half <= half/32 && longest <= half {
		return half
	}
	return order
}

// productImage writes the plain residues of a·b to out; room has twice the order
// of t.
func productImage(t *modp.Transform, out, room []uint64, a, b Poly) {
	order := len(room) / 2
	x, y := room[:order], room[order:]
	imageInto(&t.Field, x, a)
	imageInto(&t.Field, y, b)
	n := a.terms() + b.terms() - 1
	clear(out)
	// The terms beyond the order, which would wrap around: known beforehand, they
	// are taken off again.
	for k := order; k < n; k++ {
		var s uint64
		for i := max(0, k-b.terms()+1); i < min(k+1, a.terms()); i++ {
			s = t.Add(s, t.Mul(x[i], y[k-i]))
		}
		out[k] = t.Stored(s)
	}
	t.Forward(x)
	if &a.w[0] == &b.w[0] && len(a.w) == len(b.w) {
		y = x // a square
	} else {
		t.Forward(y)
	}
	for i := range x {
		x[i] = t.Mul(t.Below(x[i]), t.Below(y[i]))
	}
	t.Backward(x)
	t.Scale(x)
	copy(out[:min(n, order)], x)
	for k := order; k < n; k++ {
		out[k-order] = t.Sub(out[k-order], out[k])
	}
}

// imageInto writes the plain residues of the coefficients, and zeros behind.
func imageInto(f *modp.Field, out []uint64, p Poly) {
	n := p.terms()
	f.Images(out[:n], p.w, p.n)
	if p.n > 1 {
		grow := f.Grow(f.Stored(1), p.n)
		for i := range n {
			out[i] = f.Mul(out[i], grow)
		}
	}
	clear(out[n:])
}
