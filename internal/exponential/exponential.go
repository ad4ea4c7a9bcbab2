// Package exponential evaluates e^x, sin x and cos x for double-double x, to
// about 80 bits, in some tens of nanoseconds: the first stage of time and
// frequency responses.
//
// A double-double is an unevaluated sum hi + lo with |lo| ≤ ulp(hi)/2. The
// method is table look-up with a short series (Tang 1989): the argument is
// reduced by a multiple of ln 2/64 or π/128, whose product with an integer is
// subtracted in four parts of which three are exact. All products are written
// so that no compiler fuses them differently: the bits are the same
// everywhere.
package exponential

import "math"

const (
	// ExpError bounds the relative error of Exp, SinCosError the absolute
	// error of SinCos; those of the argument come on top. The largest errors
	// that TestErrors finds are 2^−84.7 and 2^−80.7.
	ExpError    = 0x1p-81
	SinCosError = 0x1p-79

	// MaxExp and MaxAngle bound the arguments.
	MaxExp   = 600
	MaxAngle = 1 << 20
)

// Exp returns e^(xh+xl) for |xh| ≤ MaxExp and |xl| ≤ ulp(xh)/2.
//
// With x = k·ln2/64 + r, |r| < 0.0055, e^x = 2^(k/64)·(1 + r + r²/2 + r³/6 + …).
// Powers to r³ are kept in double-double; the float64 tail r⁴/24 + … is below
// 2^−34 and brings an error of 2^−87; the series ends with r⁸/8!, after which
// less than 2^−85 of the whole is left.
func Exp(xh, xl float64) (h, l float64) {
	k := math.RoundToEven(xh * (64 / math.Ln2))
	// k has at most 16 bits, ln2a and ln2b 36: both products are exact, and so
	// is the first difference (Sterbenz 1974).
	d := math.FMA(-k, ln2a, xh)
	rh, rl := twoSum(d, float64(-k*ln2b))
	rl += xl - float64(k*ln2c)
	rh, rl = fastTwoSum(rh, rl)

	sh, sl := twoProduct(rh, rh) // r²
	sl = math.FMA(2*rh, rl, sl)
	ch, cl := twoProduct(sh, rh) // r³
	cl = math.FMA(sh, rl, math.FMA(sl, rh, cl))
	tail := math.FMA(rh, 1.0/40320, 1.0/5040)
	tail = math.FMA(rh, tail, 1.0/720)
	tail = math.FMA(rh, tail, 1.0/120)
	tail = math.FMA(rh, tail, 1.0/24)
	tail = float64(float64(sh*sh) * tail)
	// r³/6 with 1/6 in two parts.
	gh, gl := twoProduct(ch, sixthH)
	gl = math.FMA(ch, sixthL, math.FMA(cl, sixthH, gl))
	ph, pl := fastTwoSum(rh, 0.5*sh)
	pl += rl + 0.5*sl
	qh, ql := fastTwoSum(ph, gh)
	pl += ql + gl + tail
	ph, pl = fastTwoSum(qh, pl)

	n := int(k)
	t := &powers[n&63]
	// t·(1 + p)
	mh, ml := twoProduct(t[0], ph)
	ml = math.FMA(t[0], pl, math.FMA(t[1], ph, ml))
	h, e := fastTwoSum(t[0], mh)
	l = e + (ml + t[1])
	h, l = fastTwoSum(h, l)
	scale := math.Float64frombits(uint64(n>>6+1023) << 52)
	return float64(h * scale), float64(l * scale)
}

// SinCos returns sin(xh+xl) and cos(xh+xl) for |xh| ≤ MaxAngle and
// |xl| ≤ ulp(xh)/2.
//
// With x = k·π/128 + r, |r| < 0.0123, the tables hold the values at k·π/128;
// sin r keeps r³ in double-double, cos r keeps r², and the float64 tails
// r⁵/120 − … and r⁴/24 − … are below 2^−38 and 2^−30.
func SinCos(xh, xl float64) (sinH, sinL, cosH, cosL float64) {
	k := math.RoundToEven(xh * (128 / math.Pi))
	// k has at most 26 bits, pia to pic 26: their products are exact.
	d := math.FMA(-k, pia, xh)
	rh, rl := twoSum(d, float64(-k*pib))
	uh, ul := twoSum(rh, float64(-k*pic))
	rl += ul + (xl - float64(k*pid))
	rh, rl = fastTwoSum(uh, rl)

	sh, sl := twoProduct(rh, rh) // r²
	sl = math.FMA(2*rh, rl, sl)
	ch, cl := twoProduct(sh, rh) // r³
	cl = math.FMA(sh, rl, math.FMA(sl, rh, cl))

	// sin r = r − r³/6 + r³·(r²/120 − r⁴/5040 + …)
	tail := math.FMA(sh, 1.0/362880, -1.0/5040)
	tail = math.FMA(sh, tail, 1.0/120)
	tail = float64(float64(ch*sh) * tail)
	gh, gl := twoProduct(ch, -sixthH)
	gl = math.FMA(ch, -sixthL, math.FMA(cl, -sixthH, gl))
	ph, pl := fastTwoSum(rh, gh)
	pl += rl + (gl + tail)

	// cos r − 1 = −r²/2 + r⁴·(1/24 − r²/720 + …)
	tail = math.FMA(sh, 1.0/40320, -1.0/720)
	tail = math.FMA(sh, tail, 1.0/24)
	tail = float64(float64(sh*sh) * tail)
	qh, ql := fastTwoSum(-0.5*sh, tail)
	ql -= 0.5 * sl

	n := int(k) & 255
	s, c := &sines[n], &sines[(n+64)&255]
	sinH, sinL = rotated(s, c, qh, ql, ph, pl)
	cosH, cosL = rotated(c, s, qh, ql, -ph, -pl)
	return
}

// rotated returns a + a·q + b·p.
func rotated(a, b *[2]float64, qh, ql, ph, pl float64) (h, l float64) {
	mh, ml := twoProduct(a[0], qh)
	ml = math.FMA(a[0], ql, math.FMA(a[1], qh, ml))
	nh, nl := twoProduct(b[0], ph)
	nl = math.FMA(b[0], pl, math.FMA(b[1], ph, nl))
	vh, vl := twoSum(nh, mh)
	h, e := twoSum(a[0], vh)
	l = e + (vl + (a[1] + (ml + nl)))
	return fastTwoSum(h, l)
}

// twoSum returns a + b exactly (Knuth 1969).
func twoSum(a, b float64) (s, e float64) {
	s = a + b
	t := s - a
	e = (a - (s - t)) + (b - t)
	return
}

// fastTwoSum does so for |a| ≥ |b| (Dekker 1971).
func fastTwoSum(a, b float64) (s, e float64) {
	s = a + b
	e = b - (s - a)
	return
}

// twoProduct returns a·b exactly where nothing underflows.
func twoProduct(a, b float64) (p, e float64) {
	p = float64(a * b)
	e = math.FMA(a, b, -p)
	return
}
