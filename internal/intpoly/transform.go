package intpoly

import (
	"math"
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// transformPrimes is how many primes coefficients between −2^span and 2^span
// need: their product is then more than 2^(span+1).
func transformPrimes(span int) int { return (span+1)/61 + 1 }

// transformSum returns a·b + sign·c·d, with −2^span ≤ coefficients < 2^span, by
// number-theoretic transforms (Pollard 1971) modulo as many primes as the
// coefficients ask for; the Chinese remainder theorem puts them together.
func transformSum(a, b, c, d Poly, span, sign int) Poly {
	terms := max(a.terms()+b.terms(), c.terms()+d.terms()) - 1
	order := transformOrder(terms, max(a.terms(), b.terms(), c.terms(), d.terms()))
	transforms := make([]*modp.Transform, transformPrimes(span))
	for k := range transforms {
		transforms[k] = modp.NewTransform(k, order)
	}
	r := newRemainders(transforms, limbsFor(span))
	room := make([]uint64, 3*order+max(0, terms-order))
	sum := room[2*order:]
	digits := make([]uint64, terms*len(transforms))
	for k, t := range transforms {
		clear(sum)
		addValues(t, sum, room[:2*order], a, b, 1)
		if !c.IsZero() {
			addValues(t, sum, room[:2*order], c, d, sign)
		}
		t.Backward(sum[:order])
		t.ScaleBy(sum[:order], r.factors[k])
		// The terms beyond the order, which have wrapped around, are known.
		for i := order; i < len(sum); i++ {
			sum[i] = t.Mul(sum[i], r.factors[k])
			sum[i-order] = t.Sub(sum[i-order], sum[i])
		}
		for i, x := range sum[:terms] {
			digits[i*len(transforms)+k] = x
		}
	}
	n := r.limbs
	w := make([]uint64, terms*n)
	for i := range terms {
		r.join(w[i*n:(i+1)*n], digits[i*len(transforms):(i+1)*len(transforms)])
	}
	return trim(w, n)
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

// addValues adds the values of sign·a·b to those in sum, times 2^(−64), and behind
// them the plain coefficients beyond the order of the transform. The room has twice
// that order.
func addValues(t *modp.Transform, sum, room []uint64, a, b Poly, sign int) {
	order := len(room) / 2
	x, y := room[:order], room[order:]
	imageInto(&t.Field, x, a)
	square := a.shares(b)
	if square {
		y = x
	} else {
		imageInto(&t.Field, y, b)
	}
	add := t.Add
	if sign < 0 {
		add = t.Sub
	}
	for k := order; k < a.terms()+b.terms()-1; k++ {
		var s uint64
		for i := max(0, k-b.terms()+1); i < min(k+1, a.terms()); i++ {
			s = t.Add(s, t.Mul(x[i], y[k-i]))
		}
		sum[k] = add(sum[k], t.Stored(s))
	}
	t.Forward(x)
	if !square {
		t.Forward(y)
	}
	for i, v := range x {
		x[i] = t.Mul(t.Below(v), t.Below(y[i]))
	}
	if sign > 0 {
		for i, v := range x {
			sum[i] = t.Add(sum[i], v)
		}
		return
	}
	for i, v := range x {
		sum[i] = t.Sub(sum[i], v)
	}
}

// imageInto writes the plain residues of the coefficients, and zeros behind.
func imageInto(f *modp.Field, out []uint64, p Poly) {
	n := p.terms()
	f.PlainImages(out[:n], p.w, p.n)
	clear(out[n:])
}

// remainders puts numbers together that are known modulo each of some primes p_k.
// With M their product, x = Σ d_k·M/p_k − q·M for the digits
// d_k = x·(M/p_k)⁻¹ modulo p_k and the integer q next to Σ d_k/p_k.
type remainders struct {
	limbs    int
	cofactor []uint64  // the limbs of M/p_k, the lowest ones, one after the other
	product  []uint64  // of M
	factors  []uint64  // (M/p_k)⁻¹ modulo p_k, stored
	share    []float64 // 1/p_k
}

// newRemainders is for numbers of so many limbs, of less than a quarter of M.
func newRemainders(transforms []*modp.Transform, limbs int) *remainders {
	n := len(transforms)
	full := make([]uint64, n+1)
	full[0] = 1
	for k, t := range transforms {
		timesWord(full[:k+2], t.P)
	}
	r := &remainders{limbs: limbs, cofactor: make([]uint64, n*limbs), product: make([]uint64, limbs),
		factors: make([]uint64, n), share: make([]float64, n)}
	copy(r.product, full)
	quotient := make([]uint64, n+1)
	for k, t := range transforms {
		var rem uint64
		for i := n; i >= 0; i-- {
			quotient[i], rem = bits.Div64(rem, full[i], t.P)
		}
		copy(r.cofactor[k*limbs:(k+1)*limbs], quotient)
		r.factors[k] = t.Inverse(t.StoredResidue(quotient)) // the top limb is 0
		r.share[k] = 1 / float64(t.P)
	}
	return r
}

// timesWord multiplies x, which has room for it, by a word.
func timesWord(x []uint64, v uint64) {
	var carry uint64
	for k, u := range x {
		hi, lo := bits.Mul64(u, v)
		var c uint64
		x[k], c = bits.Add64(lo, carry, 0)
		carry = hi + c
	}
}

// join writes the number with the given digits to z, which holds 0.
func (r *remainders) join(z, digits []uint64) {
	n := len(z)
	var multiple float64
	for k, d := range digits {
		multiple += float64(d) * r.share[k]
		addProduct(z, r.cofactor[k*n:(k+1)*n], d)
	}
	subtractMultiple(z, r.product, uint64(math.Round(multiple)))
}

// subtractMultiple subtracts x·d from z, of the same length, modulo 2^(64 n).
func subtractMultiple(z, x []uint64, d uint64) {
	var carry uint64
	for k, u := range x {
		hi, lo := bits.Mul64(u, d)
		var c uint64
		lo, c = bits.Add64(lo, carry, 0)
		hi += c
		z[k], c = bits.Sub64(z[k], lo, 0)
		carry = hi + c
	}
}
