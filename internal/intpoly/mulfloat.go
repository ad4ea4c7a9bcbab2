package intpoly

import "math/bits"

// Sums of products of words that are longer than a word are found from two
// cheap ones: the sum modulo 2^64, and the sum in float64, which tells the
// multiple of 2^64 that the first has lost.
const (
	// maxFloatSpan is the largest span of a sum for which this is exact. With
	// span ≥ span a + span b + log2(terms) + 1, each product is below
	// 2^(span−1)/terms; converting the factors, multiplying and adding changes
	// the sum by less than (terms + 3)·2^−53·2^(span−1) ≤ 2^(span−54)·2^12 for
	// terms below 4000, hence by less than 2^62 for span ≤ 104. Adding the low
	// part and rounding to a multiple of 2^64 then gives the multiple itself.
	maxFloatSpan = 104
	// minFloatTerms is from how many terms on it pays.
	minFloatTerms = 7
	// floatRoom is how many terms of each factor fit on the stack.
	floatRoom = 48
)

// addFloatSums adds p·q, or subtracts it for sign < 0, to the two-limb
// coefficients w.
func addFloatSums(w []uint64, p, q Poly, sign int) {
	a, b, square := p.w, q.w, p.shares(q)
	var storeA, storeB [floatRoom]float64
	var storeR [floatRoom]uint64
	fa, fb, rb := storeA[:0], storeB[:0], storeR[:0]
	if len(a) > floatRoom || len(b) > floatRoom {
		fa, fb, rb = make([]float64, 0, len(a)), make([]float64, 0, len(b)), make([]uint64, 0, len(b))
	}
	for _, x := range a {
		fa = append(fa, float64(int64(x)))
	}
	for j := len(b) - 1; j >= 0; j-- { // backwards, so that both run upwards
		fb, rb = append(fb, float64(int64(b[j]))), append(rb, b[j])
	}
	for k := 0; k < len(a)+len(b)-1; k++ {
		from, to := max(0, k-len(b)+1), min(k, len(a)-1)+1
		at := len(b) - 1 - k + from
		x, fx := a[from:to], fa[from:to]
		y, fy := rb[at:at+len(x)], fb[at:at+len(x)]
		var lo, high uint64
		if !square {
			lo, high = floatDot(x, y, fx, fy)
		} else {
			half := len(x) / 2 // the products of different coefficients come twice
			lo, high = floatDot(x[:half], y[:half], fx[:half], fy[:half])
			lo, high = lo<<1, high<<1|lo>>63
			if k%2 == 0 {
				h, l := bits.Mul64(magnitude(x[half]), magnitude(x[half]))
				var carry uint64
				lo, carry = bits.Add64(lo, l, 0)
				high += h + carry
			}
		}
		c := w[2*k : 2*k+2]
		var carry uint64
		if sign < 0 {
			c[0], carry = bits.Sub64(c[0], lo, 0)
			c[1] -= high + carry
		} else {
			c[0], carry = bits.Add64(c[0], lo, 0)
			c[1] += high + carry
		}
	}
}

// floatDot returns Σ x·y modulo 2^128 from the words and their float64 values.
func floatDot(x, y []uint64, fx, fy []float64) (lo, hi uint64) {
	n := len(x)
	y, fx, fy = y[:n], fx[:n], fy[:n]
	var s, t uint64
	var f, g float64
	i := 0
	for ; i+1 < n; i += 2 {
		s += x[i] * y[i]
		t += x[i+1] * y[i+1]
		f += fx[i] * fy[i]
		g += fx[i+1] * fy[i+1]
	}
	if i < n {
		s += x[i] * y[i]
		f += fx[i] * fy[i]
	}
	s += t
	// The exact sum is hi·2^64 + s for an integer hi.
	h := (f + g - float64(s)) * 0x1p-64
	if h >= 0 {
		return s, uint64(int64(h + 0.5))
	}
	return s, uint64(int64(h - 0.5))
}
