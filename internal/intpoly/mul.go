package intpoly

import "math/bits"

// From how many limbs on, that is terms of the shorter factor times limbs of a
// result coefficient, a product goes through math/big. BenchmarkThresholds
// measures around these numbers; word-size factors and magnitudes of few limbs
// have faster ways of their own.
const (
	kroneckerWord = 640
	kroneckerRows = 140 // for each limb of magnitudes of up to maxUnrolled
	kroneckerWide = 64
	kroneckerLong = 50 // limbs of a result coefficient, however few terms there are
)

// From how many terms of the shorter factor on, and from how many limbs, such a
// product goes through transforms modulo primes, and up to how many primes: with
// more of them it is quicker to pack.
const (
	transformTerms = 64
	transformLimbs = 640
	transformMost  = 100
)

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly { return SumOfProducts(p, q, Poly{}, Poly{}, 1) }

// SumOfProducts returns a·b + sign·c·d for sign = ±1, without a temporary
// polynomial where the factors are short.
func SumOfProducts(a, b, c, d Poly, sign int) Poly {
	if a.IsZero() || b.IsZero() {
		if c.IsZero() || d.IsZero() {
			return Poly{}
		}
		a, b, c, d = c, d, Poly{}, Poly{}
		if sign < 0 {
			return a.Mul(b).Neg()
		}
	}
	if c.IsZero() || d.IsZero() {
		c, d = Poly{}, Poly{}
	}
	terms := max(a.terms()+b.terms(), c.terms()+d.terms()) - 1
	// |Σ| ≤ terms·2^(span + span); one more bit for the second sum.
	span := a.span() + b.span() + bits.Len(uint(min(a.terms(), b.terms())))
	if !c.IsZero() {
		span = max(span, c.span()+d.span()+bits.Len(uint(min(c.terms(), d.terms())))) + 1
	}
	n := limbsFor(span)
	words := max(a.n, b.n, c.n, d.n) == 1 && n <= 2
	limbs := n * max(min(a.terms(), b.terms()), min(c.terms(), d.terms()))
	if isLong(limbs, n, words, a, b) {
		if limbs >= transformLimbs && limbs >= n*transformTerms && transformPrimes(span) <= transformMost {
			return transformSum(a, b, c, d, span, sign)
		}
		return longSum(a, b, c, d, n, sign)
	}
	w := make([]uint64, terms*n)
	if words && n == 2 && span <= maxFloatSpan && limbs >= 2*minFloatTerms {
		addFloatSums(w, a, b, 1)
		if !c.IsZero() {
			addFloatSums(w, c, d, sign)
		}
	} else if words {
		wordSums(w, n, a.w, b.w, c.w, d.w, sign)
	} else {
		wideSums(w, n, a, b, c, d, sign)
	}
	return trim(w, n)
}

// shares reports whether p and q are the same value: their product is then a
// square, which takes half the work.
func (p Poly) shares(q Poly) bool {
	return len(p.w) == len(q.w) && len(p.w) > 0 && &p.w[0] == &q.w[0]
}

// isLong reports whether a product pays for packing.
func isLong(limbs, n int, words bool, a, b Poly) bool {
	switch {
	case words:
		return limbs >= kroneckerWord
	case a.span() <= 64*maxUnrolled && b.span() <= 64*maxUnrolled:
		return limbs >= kroneckerRows*((max(a.span(), b.span())+63)/64)
	}
	return limbs >= kroneckerWide && min(a.terms(), b.terms()) > 4 || n >= kroneckerLong
}

// wordSums computes a·b + sign·c·d for word-size coefficients into w, one or
// two limbs to a coefficient.
func wordSums(w []uint64, n int, a, b, c, d []uint64, sign int) {
	if n == 1 {
		for k := range w {
			s := dot(a, b, k)
			if len(c) > 0 {
				t := dot(c, d, k)
				if sign < 0 {
					t = -t
				}
				s += t
			}
			w[k] = s
		}
		return
	}
	for k := 0; 2*k < len(w); k++ {
		lo, hi := dot2(a, b, k)
		if len(c) > 0 {
			l, h := dot2(c, d, k)
			var carry uint64
			if sign < 0 {
				lo, carry = bits.Sub64(lo, l, 0)
				hi -= h + carry
			} else {
				lo, carry = bits.Add64(lo, l, 0)
				hi += h + carry
			}
		}
		w[2*k], w[2*k+1] = lo, hi
	}
}

// window returns the parts of a and b, b to be read backwards, that meet in
// the coefficient k of the product.
func window(a, b []uint64, k int) (x, y []uint64) {
	from, to := max(0, k-len(b)+1), min(k, len(a)-1)
	if from > to {
		return nil, nil
	}
	return a[from : to+1], b[k-to : k-from+1]
}

// dot returns the coefficient k of a·b modulo 2^64.
func dot(a, b []uint64, k int) uint64 {
	x, y := window(a, b, k)
	var s uint64
	j := len(y) - 1
	for _, v := range x {
		s += v * y[j]
		j--
	}
	return s
}

// dot2 returns the coefficient k of a·b, signed, modulo 2^128.
func dot2(a, b []uint64, k int) (lo, hi uint64) {
	x, y := window(a, b, k)
	j := len(y) - 1
	var c, signs uint64
	for _, v := range x {
		u := y[j]
		j--
		h, l := bits.Mul64(v, u)
		lo, c = bits.Add64(lo, l, 0)
		hi, _ = bits.Add64(hi, h, c)
		// As signed numbers v and u are 2^64 less where the sign bit is set.
		signs += signOf(v)&u + signOf(u)&v
	}
	return lo, hi - signs
}
