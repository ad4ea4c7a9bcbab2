package tf

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/dd"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
)

// axisTerm is one coefficient of the even and one of the odd part of a
// polynomial p(jω) = E(−ω²) + jω·O(−ω²), each the sum of two float64, and their
// absolute values.
type axisTerm struct{ even, evenLow, evenSize, odd, oddLow, oddSize float64 }

// axisRatio evaluates a ratio of polynomials on the imaginary axis in float64
// with compensation. It is immutable.
//
// An error of an operation that must be known exactly is taken by math.FMA; what
// only counts to first order is written x*y + z, which costs half as much where
// Go looks for the instruction at run time, and which the compiler may fuse
// elsewhere: the bounds hold either way.
type axisRatio struct {
	num, den []axisTerm // highest power first
	unit     float64    // a power of two: ω is evaluated as ω·unit
	factor   float64    // a power of two: the ratio of what was scaled
	// Multiples of 2^−106 for the error bounds of value and magnitude.
	bound, boundK, boundSquare float64
}

// Binary exponents within which the error bound of value holds: a coefficient
// that is not 0 is at least 2^−axisSpan after scaling, and both |ω|, scaled,
// and the sizes of numerator and denominator lie between minSize and maxSize.
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
	balance := balancingPower(den)
	if den.Degree() == 0 {
		balance = balancingPower(num)
	}
	r = &axisRatio{unit: math.Ldexp(1, -balance)}
	var e, d int
	if r.num, e, ok = axisTerms(num, balance); !ok {
		return nil, false
	}
	if r.den, d, ok = axisTerms(den, balance); !ok {
		return nil, false
	}
	if k := e - d; k < -400 || k > 400 { // a quotient between 2^−600 and 2^500 stays normal
		return nil, false
	}
	r.factor = math.Ldexp(1, e-d)
	m := float64(max(len(r.num), len(r.den)))
	// 1.01 for terms of higher order and the rounding of the bounds themselves
	horner := 6*m*(3*m+7) + 10*m + 14
	r.bound = 1.01 * 0x1p-106 * (horner + 60*m + 96)
	r.boundK = 1.01 * 0x1p-106 * (5*m + 10) * (10*m + 16)
	r.boundSquare = 1.01 * 0x1p-106 * (2*horner + 25*m*m + 80*m)
	return r, true
}

// balancingPower is the power h for which the highest and the lowest coefficient
// of p(2^h x) are of about the same size; |h| ≤ 500.
func balancingPower(p intpoly.Poly) int {
	low, top := p.Valuation(), p.Degree()
	if top <= low {
		return 0
	}
	return max(-500, min((p.BitLen(low)-p.BitLen(top))/(top-low), 500))
}

// axisTerms scales the coefficients of p(2^balance x) by a power of two,
// 2^−exponent, and splits them into two float64 each.
func axisTerms(p intpoly.Poly, balance int) (terms []axisTerm, exponent int, ok bool) {
	exponent = math.MinInt
	for i := range p.Degree() + 1 {
		if p.Sign(i) != 0 {
			exponent = max(exponent, p.BitLen(i)+i*balance)
		}
	}
	terms = make([]axisTerm, p.Degree()/2+1)
	for i := range p.Degree() + 1 {
		if p.Sign(i) == 0 {
			continue
		}
		if p.BitLen(i)+i*balance < exponent-axisSpan+1 {
			return nil, 0, false
		}
		c := new(big.Float).SetInt(p.Coefficient(i))
		c.SetMantExp(c, i*balance-exponent)
		high, _ := c.Float64()
		low, _ := c.Sub(c, new(big.Float).SetFloat64(high)).Float64()
		if t := &terms[len(terms)-1-i/2]; i%2 == 0 {
			t.even, t.evenLow, t.evenSize = high, low, math.Abs(high)
		} else {
			t.odd, t.oddLow, t.oddSize = high, low, math.Abs(high)
		}
	}
	return terms, exponent, true
}

// evaluate is the compensated Horner scheme (Graillat, Langlois and Louvet 2009)
// at w = −ω² = wh + wl, for the even and the odd part together. It returns E and
// ω·O, each as an unevaluated sum of two float64, and the same with the absolute
// values of all terms, added up.
func evaluate(terms []axisTerm, omega, wh, wl float64) (re, reLow, im, imLow, size float64) {
	t := &terms[0]
	e, eLow, eSize := t.even, t.evenLow, t.evenSize
	o, oLow, oSize := t.odd, t.oddLow, t.oddSize
	wa := -wh
	rest := terms[1:]
	if o == 0 && len(rest) > 0 { // an even degree: the odd part begins later
		t = &rest[0]
		p := float64(e * wh)
		s, sLow := split(dd.TwoSum(p, t.even))
		eLow = eLow*wh + ((e*wl + math.FMA(e, wh, -p)) + (sLow + t.evenLow))
		eSize = eSize*wa + t.evenSize
		e, o, oLow, oSize = s, t.odd, t.oddLow, t.oddSize
		rest = rest[1:]
	}
	for i := range rest {
		t := &rest[i]
		// p + (rounding error of p) = e·wh exactly; s + sLow = p + t.even exactly
		p := float64(e * wh)
		pLow := math.FMA(e, wh, -p)
		s := p + t.even
		v := s - p
		sLow := (p - (s - v)) + (t.even - v)
		eLow = eLow*wh + ((e*wl + pLow) + (sLow + t.evenLow))
		eSize = eSize*wa + t.evenSize
		e = s

		p = float64(o * wh)
		pLow = math.FMA(o, wh, -p)
		s = p + t.odd
		v = s - p
		sLow = (p - (s - v)) + (t.odd - v)
		oLow = oLow*wh + ((o*wl + pLow) + (sLow + t.oddLow))
		oSize = oSize*wa + t.oddSize
		o = s
	}
	im = float64(o * omega)
	return e, eLow, im, oLow*omega + math.FMA(o, omega, -im), oSize*math.Abs(omega) + eSize
}

// split returns the two parts of a double-double.
func split(x dd.DD) (hi, lo float64) { return x.Hi, x.Lo }

// value returns the ratio at jω; reOK and imOK tell which component is certainly
// the exact one correctly rounded.
//
// A quotient q in plain float64 is corrected once by (num − q·den)/den, where the
// residual is taken without error but for terms of second order.
//
// Error bound. Let u = 2^−53 and let m be the number of steps of the Horner
// scheme. The local corrections of step k are at most u·(2|s_(k+1) w| + |s_k| +
// |c_k|), so that all of them together are at most 4 m u·p̃, where p̃ ("size")
// has all terms by absolute value; they are added up with at most 3m + 7
// roundings each, the power of w instead of wh included. Hence
//
//	|p − (s + sLow)| ≤ 4 m (3m + 7) u² p̃, |sLow| ≤ 5 m u p̃.
//
// The second half of a coefficient leaves u² p̃, and the product with ω adds
// (10m + 14) u² p̃: together at most K u² p̃ with K = 6 m (3m + 7) + 10 m + 14. Let
//
//	e = (size(num) + |q|·size(den))/|den|, k = size(den)/|den| ≥ 1.
//
// The plain quotient is off by (5m + 10) u e at most, and so is the correction.
// The division of the residual by the high parts of den alone and its roundings
// make it wrong by (10m + 16) u k of itself; the low terms in the residual add up
// with (60m + 96) u² e; and the errors of num and den themselves count K u² e. So
// the corrected quotient is off by at most
//
//	u² e·(K + 60 m + 96 + (5m + 10)(10m + 16) k).
//
// Underflow adds nothing that counts. An operation that underflows is off by
// 2^−1074, which later steps multiply by |w|^k. Where |w| ≤ 1 that stays below
// 2^−1060, and u² times a size is above 2^−360; where |w| > 1, a size is at least
// 2^−axisSpan·|w|^(m−1), and 2^−1060·|w|^(m−1) is again far below. The bound
// itself is above 2^−106·minSize/maxSize, so that a component that passes the
// test of its rounding is far from underflow.
func (r *axisRatio) value(omega float64) (v complex128, reOK, imOK bool) {
	omega *= r.unit
	w := float64(omega * omega)
	if !(w >= minSize*minSize && w <= maxSize*maxSize) {
		return 0, false, false
	}
	wl := -math.FMA(omega, omega, -w)
	a, aLow, b, bLow, above := evaluate(r.num, omega, -w, wl)
	c, cLow, d, dLow, below := evaluate(r.den, omega, -w, wl)
	if !(above >= minSize && below >= minSize && above+below <= maxSize) {
		return 0, false, false
	}
	inverse := 1 / (c*c + d*d)
	reciprocal := math.Sqrt(inverse) // 1/|den|
	k := below * reciprocal
	if !(k <= 0x1p20) { // den may be 0
		return 0, false, false
	}
	x := float64((a*c + b*d) * inverse)
	y := float64((b*c - a*d) * inverse)
	// a − x·c + y·d and b − y·c − x·d, where both are small
	xc, xd, yc, yd := float64(x*c), float64(x*d), float64(y*c), float64(y*d)
	re, reLow := split(dd.TwoSum(a, -xc))
	im, imLow := split(dd.TwoSum(b, -yc))
	restRe := (re + yd) + ((y*dLow - x*cLow) + ((reLow + aLow) + (math.FMA(y, d, -yd) - math.FMA(x, c, -xc))))
	restIm := (im - xd) + (((imLow + bLow) - (math.FMA(y, c, -yc) + math.FMA(x, d, -xd))) - (x*dLow + y*cLow))
	x, xLow := split(dd.TwoSum(x, float64((restRe*c+restIm*d)*inverse)))
	y, yLow := split(dd.TwoSum(y, float64((restIm*c-restRe*d)*inverse)))
	scale := reciprocal * (k*r.boundK + r.bound)
	off := (above + above*k) * scale // as |q| ≤ size(num)/|den|
	reOK, imOK = rounds(x, xLow, off), rounds(y, yLow, off)
	if !(reOK && imOK) {
		off = (above + (math.Abs(x)+math.Abs(y))*below) * scale
		reOK, imOK = rounds(x, xLow, off), rounds(y, yLow, off)
	}
	return complex(x*r.factor, y*r.factor), reOK, imOK
}

// rounds reports whether all numbers within off of x + xLow round to x, which is
// fl(x + xLow): both ends do.
func rounds(x, xLow, off float64) bool { return x+(xLow+off) == x+(xLow-off) }

// magnitude returns the absolute value at jω; ok tells that it is certainly
// correctly rounded.
//
// Error bound, with the terms of value: a product of two unevaluated sums drops
// the product of their low parts, 25 m² u², and rounds four sums of size 5 m u at
// most, 30 m u²; with the errors of both operands, the sum of two squares is off
// by (2 K + 25 m² + 80 m) u² size². The quotient of two such pairs adds 32 u² of
// itself, and a square root halves it all.
func (r *axisRatio) magnitude(omega float64) (v float64, ok bool) {
	omega *= r.unit
	w := float64(omega * omega)
	if !(w >= minSize*minSize && w <= maxSize*maxSize) {
		return 0, false
	}
	wl := -math.FMA(omega, omega, -w)
	above, aboveLow, sizeAbove := squares(evaluate(r.num, omega, -w, wl))
	below, belowLow, sizeBelow := squares(evaluate(r.den, omega, -w, wl))
	if !(sizeAbove >= minSize && sizeBelow >= minSize && sizeAbove+sizeBelow <= maxSize) {
		return 0, false
	}
	errAbove, errBelow := r.boundSquare*sizeAbove*sizeAbove, r.boundSquare*sizeBelow*sizeBelow
	if !(errAbove <= 0x1p-20*above && errBelow <= 0x1p-20*below) {
		return 0, false
	}
	// The first quotient is off by 5 u at most, so that rest is at most
	// 5 u·above, and its rounding, that of the correction and that of the last
	// quotient are below 32 u² of the whole.
	q := above / below
	rest := math.FMA(-q, below, above)
	square, squareLow := split(dd.TwoSum(q, (rest+math.FMA(-q, belowLow, aboveLow))/below))
	off := float64(1.02*math.FMA(square, errBelow, errAbove)/below) + float64(0x1p-101*square)
	root := math.Sqrt(square)
	// root² + rest = square + squareLow: one step of Newton's iteration
	rest = math.FMA(-root, root, square) + squareLow
	high, low := split(dd.TwoSum(root, rest/float64(2*root)))
	off = float64(0.51*off/root) + float64(0x1p-101*high)
	return high * r.factor, high+(low+off) == high+(low-off) && high > 0x1p-300
}

// squares is re² + im² as a sum of two float64; it passes size on.
func squares(re, reLow, im, imLow, size float64) (high, low, sameSize float64) {
	p := float64(re * re)
	q := float64(im * im)
	s, e := split(dd.TwoSum(p, q))
	t := math.FMA(2*re, reLow, math.FMA(re, re, -p))
	u := math.FMA(2*im, imLow, math.FMA(im, im, -q))
	high, low = split(dd.TwoSum(s, e+(t+u)))
	return high, low, size
}
