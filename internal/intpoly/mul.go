package intpoly

import "math/bits"

// Thresholds between the ways to multiply, in terms of the shorter factor;
// BenchmarkThresholds measures around them.
const (
	karatsubaWord = 160 // word-size coefficients
	karatsubaWide = 24  // wider ones
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
	if isLong(a, b) || isLong(c, d) {
		ab := karatsuba(a, b)
		if c.IsZero() {
			return ab
		}
		if sign < 0 {
			return ab.Sub(karatsuba(c, d))
		}
		return ab.Add(karatsuba(c, d))
	}
	terms := max(a.terms()+b.terms(), c.terms()+d.terms()) - 1
	// |Σ| ≤ terms·2^(span + span); one more bit for the second sum.
	span := a.span() + b.span() + bits.Len(uint(min(a.terms(), b.terms())))
	if !c.IsZero() {
		span = max(span, c.span()+d.span()+bits.Len(uint(min(c.terms(), d.terms())))) + 1
	}
	n := limbsFor(span)
	w := make([]uint64, terms*n)
	if max(a.n, b.n, c.n, d.n) == 1 && n <= 2 {
		wordSums(w, n, a.w, b.w, c.w, d.w, sign)
	} else {
		wideSums(w, n, a, b, c, d, sign)
	}
	return trim(w, n)
}

// isLong reports whether a product pays for Karatsuba's method.
func isLong(a, b Poly) bool {
	shorter := min(a.terms(), b.terms())
	if max(a.n, b.n) == 1 {
		return shorter > karatsubaWord
	}
	return shorter > karatsubaWide
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

// karatsuba returns a·b, by splitting the factors where they are long
// (Karatsuba and Ofman 1962).
func karatsuba(a, b Poly) Poly {
	if !isLong(a, b) {
		return trimmed(a).Mul(trimmed(b))
	}
	if a.terms() < b.terms() {
		a, b = b, a
	}
	if a.terms() >= 2*b.terms() { // slices of a, each as long as b
		var w []uint64
		m := b.terms()
		n := limbsFor(a.span() + b.span() + bits.Len(uint(m)) + 1)
		w = make([]uint64, (a.terms()+m-1)*n)
		for i := 0; i < a.terms(); i += m {
			addAt(w, n, i, karatsuba(a.part(i, i+m), b), 0)
		}
		return trim(w, n)
	}
	m := (a.terms() + 1) / 2
	a0, a1, b0, b1 := a.part(0, m), a.part(m, a.terms()), b.part(0, m), b.part(m, b.terms())
	low, high := karatsuba(a0, b0), karatsuba(a1, b1)
	middle := karatsuba(a0.Add(a1), b0.Add(b1))
	n := limbsFor(a.span() + b.span() + bits.Len(uint(b.terms())) + 2)
	w := make([]uint64, (a.terms()+b.terms()-1)*n)
	addAt(w, n, 0, low, 0)
	addAt(w, n, 2*m, high, 0)
	addAt(w, n, m, middle, 0)
	addAt(w, n, m, low, ^uint64(0))
	addAt(w, n, m, high, ^uint64(0))
	return trim(w, n)
}

// trimmed drops needless limbs, which part may have left.
func trimmed(p Poly) Poly {
	if p.n <= 1 || limbsFor(p.span()) >= p.n && p.span() > 64*(p.n-1) {
		return p
	}
	w := make([]uint64, len(p.w))
	copy(w, p.w)
	return trim(w, max(p.n, 1))
}

// addAt adds p·x^k to the limbs w, or subtracts it where mask is all ones. Terms
// beyond the end of w are zero.
func addAt(w []uint64, n, k int, p Poly, mask uint64) {
	for i := range p.terms() {
		if (k+i+1)*n > len(w) {
			return
		}
		c, x := w[(k+i)*n:(k+i+1)*n], p.at(i)
		accumulate(c, x[:min(len(x), n)], mask)
	}
}
