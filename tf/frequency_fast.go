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
	x := math.Abs(omega)
	if !(x >= minSize && x <= maxSize) {
		return 0, false, false
	}
	w := float64(omega * omega)
	wl := -math.FMA(omega, omega, -w)
	a := evaluate(r.num, omega, -w, wl)
	b := evaluate(r.den, omega, -w, wl)
	if !(a.size >= minSize && a.size <= maxSize && b.size >= minSize && b.size <= maxSize) {
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
	x, reOK = roundPair(re, reLow, norm, normLow, inverse, errNum, errNorm)
	y, imOK := roundPair(im, imLow, norm, normLow, inverse, errNum, errNorm)
	return complex(x*r.factor, y*r.factor), reOK, imOK
}

// roundPair divides n by d and tells whether the rounding is certain. inverse
// is 1/d to a few units in the last place.
func roundPair(n, nLow, d, dLow, inverse, errNum, errDen float64) (q float64, ok bool) {
	q1 := float64(n * inverse)
	// q1 is off by 5 u at most, so that rest is at most 5 u·|n| and its rounding,
	// that of the correction and that of q2 are below 32 u² of the quotient.
	rest := math.FMA(-q1, d, n)
	q2 := (rest + math.FMA(-q1, dLow, nLow)) * inverse
	high, low := twoSum(q1, q2)
	size := math.Abs(high)
	off := 1.02*inverse*math.FMA(size, errDen, errNum) + 0x1p-101*size
	return high, high == high+(low+off) && high == high+(low-off) && size > 0x1p-200
}
