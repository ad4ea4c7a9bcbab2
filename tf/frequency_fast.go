package tf

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
)

// axisTerm is one coefficient of the even and one of the odd part of a
// polynomial p(jω) = E(−ω²) + jω·O(−ω²), each the sum of two float64.
type axisTerm struct{ even, evenLow, odd, oddLow float64 }

// axisRatio evaluates a ratio of polynomials on the imaginary axis in float64
// with compensation. It is immutable.
type axisRatio struct {
	num, den []axisTerm // highest power first
	factor   float64    // a power of two
	bound    float64    // see value
}

// Binary exponents within which the error bound of value holds: a coefficient
// that is not 0 is at least 2^−axisSpan after scaling, and both |ω| and the
// sizes of numerator and denominator lie between minSize and maxSize.
const (
	axisSpan = 150
	minSize  = 0x1p-250
	maxSize  = 0x1p250
)

// newAxisRatio prepares f; ok is false where its coefficients spread too far
// for float64.
func newAxisRatio(f ratfun.Func) (r *axisRatio, ok bool) {
	num, den := f.Num(), f.Den()
	if num.IsZero() || max(num.Degree(), den.Degree()) > 1000 {
		return nil, false
	}
	r = &axisRatio{}
	var e, d int
	if r.num, e, ok = axisTerms(num); !ok {
		return nil, false
	}
	if r.den, d, ok = axisTerms(den); !ok {
		return nil, false
	}
	if k := e - d; k < -800 || k > 800 {
		return nil, false
	}
	r.factor = math.Ldexp(1, e-d)
	m := float64(max(len(r.num), len(r.den)))
	r.bound = (12*m*(2*m+5) + 25*m*m + 80*m) * 0x1p-106
	return r, true
}

// axisTerms scales the coefficients by a power of two, 2^−exponent, and splits
// them into two float64 each.
func axisTerms(p intpoly.Poly) (terms []axisTerm, exponent int, ok bool) {
	exponent = p.MaxBitLen()
	terms = make([]axisTerm, p.Degree()/2+1)
	for i := range p.Degree() + 1 {
		if p.Sign(i) == 0 {
			continue
		}
		if p.BitLen(i) < exponent-axisSpan+1 {
			return nil, 0, false
		}
		c := new(big.Float).SetInt(p.Coefficient(i))
		c.SetMantExp(c, -exponent)
		high, _ := c.Float64()
		low, _ := c.Sub(c, new(big.Float).SetFloat64(high)).Float64()
		if t := &terms[len(terms)-1-i/2]; i%2 == 0 {
			t.even, t.evenLow = high, low
		} else {
			t.odd, t.oddLow = high, low
		}
	}
	return terms, exponent, true
}

// axisValue is E and ω·O, each as an unevaluated sum of two float64, and the
// same with the absolute values of all terms, added up.
type axisValue struct{ re, reLow, im, imLow, size float64 }

// evaluate is the compensated Horner scheme (Graillat, Langlois and Louvet 2009)
// at w = −ω² = wh + wl, for the even and the odd part together.
func evaluate(terms []axisTerm, omega, wh, wl float64) axisValue {
	var e, eLow, eSize, o, oLow, oSize float64
	wa := math.Abs(wh)
	for i := range terms {
		t := &terms[i]
		// p + (rounding error of p) = e·wh exactly; s + sLow = p + t.even exactly
		p := float64(e * wh)
		pLow := math.FMA(e, wh, -p)
		s := p + t.even
		v := s - p
		sLow := (p - (s - v)) + (t.even - v)
		eLow = math.FMA(eLow, wh, math.FMA(e, wl, pLow)+(sLow+t.evenLow))
		eSize = math.FMA(eSize, wa, math.Abs(t.even))
		e = s

		p = float64(o * wh)
		pLow = math.FMA(o, wh, -p)
		s = p + t.odd
		v = s - p
		sLow = (p - (s - v)) + (t.odd - v)
		oLow = math.FMA(oLow, wh, math.FMA(o, wl, pLow)+(sLow+t.oddLow))
		oSize = math.FMA(oSize, wa, math.Abs(t.odd))
		o = s
	}
	im := float64(o * omega)
	return axisValue{
		re: e, reLow: eLow,
		im: im, imLow: math.FMA(oLow, omega, math.FMA(o, omega, -im)),
		size: math.FMA(oSize, math.Abs(omega), eSize),
	}
}

// twoSum returns s + e = a + b exactly, s = fl(a + b) (Knuth 1969).
func twoSum(a, b float64) (s, e float64) {
	s = a + b
	v := s - a
	return s, (a - (s - v)) + (b - v)
}

// pair is a·c + b·d for unevaluated sums a = (a, aLow) and so on.
func pair(a, aLow, c, cLow, b, bLow, d, dLow float64) (high, low float64) {
	p := float64(a * c)
	q := float64(b * d)
	s, e := twoSum(p, q)
	t := math.FMA(a, cLow, math.FMA(aLow, c, math.FMA(a, c, -p)))
	u := math.FMA(b, dLow, math.FMA(bLow, d, math.FMA(b, d, -q)))
	return twoSum(s, e+(t+u))
}

// value returns the ratio at jω; reOK and imOK tell which component is certainly
// the exact one correctly rounded, and norm and error bounds serve magnitude.
//
// Error bound. Let u = 2^−53 and let m be the number of steps of the Horner
// scheme. The local corrections of step k are at most u·(2|s_(k+1) w| + |s_k| +
// |c_k|), so that all of them together are at most 4 m u·p̃, where p̃ ("size")
// has all terms by absolute value; they are added up with at most 2m + 5
// roundings each, the power of w instead of wh included. Hence
//
//	|p − (s + sLow)| ≤ 4 m (2m + 5) u² p̃, |sLow| ≤ 5 m u p̃.
//
// The second half of a coefficient leaves u² p̃, and the product with ω adds
// (8m + 10) u² p̃. A product of two such sums drops the product of the low parts,
// 25 m² u², and rounds four sums of size 5 m u at most, 30 m u². Together
// with both operands' errors a component of num·conj(den) is off by at most
// bound·sizeNum·sizeDen, bound = (12 m (2m+5) + 25 m² + 80 m) u², which leaves
// room for the terms of third order; for |den|² likewise.
//
// Underflow adds nothing that counts. An operation that underflows is off by
// 2^−1074, which later steps multiply by |w|^k. Where |w| ≤ 1 that stays below
// 2^−1060, and bound·size is above 2^−360; where |w| > 1, size is at least
// 2^−axisSpan·|w|^(m−1), and 2^−1060·|w|^(m−1) is again far below bound·size.
func (r *axisRatio) value(omega float64) (v complex128, reOK, imOK bool) {
	a, b, ok := r.parts(omega)
	if !ok {
		return 0, false, false
	}
	norm, normLow := pair(b.re, b.reLow, b.re, b.reLow, b.im, b.imLow, b.im, b.imLow)
	errNorm := r.bound * b.size * b.size
	if !(errNorm <= 0x1p-20*norm) {
		return 0, false, false
	}
	errNum := r.bound * a.size * b.size
	re, reLow := pair(a.re, a.reLow, b.re, b.reLow, a.im, a.imLow, b.im, b.imLow)
	im, imLow := pair(a.im, a.imLow, b.re, b.reLow, -a.re, -a.reLow, b.im, b.imLow)
	inverse := 1 / norm
	x, reOK := roundPair(re, reLow, norm, normLow, inverse, errNum, errNorm)
	y, imOK := roundPair(im, imLow, norm, normLow, inverse, errNum, errNorm)
	return complex(x*r.factor, y*r.factor), reOK, imOK
}

// parts evaluates numerator and denominator; ok is false where the error bound
// does not hold.
func (r *axisRatio) parts(omega float64) (a, b axisValue, ok bool) {
	if x := math.Abs(omega); !(x >= minSize && x <= maxSize) {
		return a, b, false
	}
	w := float64(omega * omega)
	wl := -math.FMA(omega, omega, -w)
	a = evaluate(r.num, omega, -w, wl)
	b = evaluate(r.den, omega, -w, wl)
	return a, b, a.size >= minSize && a.size <= maxSize && b.size >= minSize && b.size <= maxSize
}

// magnitude returns the absolute value at jω; ok tells that it is certainly
// correctly rounded. The error of the ratio of squares is that of value, and a
// square root halves it.
func (r *axisRatio) magnitude(omega float64) (v float64, ok bool) {
	a, b, ok := r.parts(omega)
	if !ok {
		return 0, false
	}
	above, aboveLow := pair(a.re, a.reLow, a.re, a.reLow, a.im, a.imLow, a.im, a.imLow)
	below, belowLow := pair(b.re, b.reLow, b.re, b.reLow, b.im, b.imLow, b.im, b.imLow)
	errAbove, errBelow := r.bound*a.size*a.size, r.bound*b.size*b.size
	if !(errAbove <= 0x1p-20*above && errBelow <= 0x1p-20*below) {
		return 0, false
	}
	square, squareLow, off := dividePair(above, aboveLow, below, belowLow, 1/below, errAbove, errBelow)
	root := math.Sqrt(square)
	// root² + rest = square + squareLow up to u² square: one step of Newton's
	rest := math.FMA(-root, root, square) + squareLow
	high, low := twoSum(root, rest/(2*root))
	off = float64(0.51*off/root) + float64(0x1p-101*high)
	return high * r.factor, high == high+(low+off) && high == high+(low-off) && high > 0x1p-200
}

// dividePair divides n by d into the sum of two float64 that is at most off from
// the quotient. inverse is 1/d to a few units in the last place.
func dividePair(n, nLow, d, dLow, inverse, errNum, errDen float64) (high, low, off float64) {
	q := float64(n * inverse)
	// q is off by 5 u at most, so that rest is at most 5 u·|n| and its rounding,
	// that of the correction and that of the last product are below 32 u² of
	// the quotient.
	rest := math.FMA(-q, d, n)
	high, low = twoSum(q, (rest+math.FMA(-q, dLow, nLow))*inverse)
	size := math.Abs(high)
	return high, low, float64(1.02*inverse*math.FMA(size, errDen, errNum)) + float64(0x1p-101*size)
}

// roundPair divides n by d and tells whether the rounding is certain.
func roundPair(n, nLow, d, dLow, inverse, errNum, errDen float64) (q float64, ok bool) {
	high, low, off := dividePair(n, nLow, d, dLow, inverse, errNum, errDen)
	return high, high == high+(low+off) && high == high+(low-off) && math.Abs(high) > 0x1p-200
}
