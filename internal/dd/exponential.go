package dd

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

// Exp returns e^x for |x| ≤ MaxExp, by table look-up with a short series (Tang
// 1989), in some tens of nanoseconds; NaN beyond.
//
// With x = k·ln2/64 + r, |r| < 0.0055, e^x = 2^(k/64)·(1 + r + r²/2 + r³/6 + …).
// Powers to r³ are kept in double-double; the float64 tail r⁴/24 + … is below
// 2^−34 and brings an error of 2^−87; the series ends with r⁸/8!, after which
// less than 2^−85 of the whole is left.
func Exp(x DD) DD {
	xh, xl := x.Hi, x.Lo
	if !(math.Abs(xh) <= MaxExp) {
		return DD{math.NaN(), math.NaN()}
	}
	k := math.RoundToEven(xh * (64 / math.Ln2))
	// k has at most 16 bits, ln2a and ln2b 36: both products are exact, and so
	// is the first difference (Sterbenz 1974).
	d := math.FMA(-k, ln2a, xh)
	rh, rl := sum2(d, float64(-k*ln2b))
	rl += xl - float64(k*ln2c)
	rh, rl = fastSum2(rh, rl)

	sh, sl := product2(rh, rh) // r²
	sl = math.FMA(2*rh, rl, sl)
	ch, cl := product2(sh, rh) // r³
	cl = math.FMA(sh, rl, math.FMA(sl, rh, cl))
	tail := math.FMA(rh, 1.0/40320, 1.0/5040)
	tail = math.FMA(rh, tail, 1.0/720)
	tail = math.FMA(rh, tail, 1.0/120)
	tail = math.FMA(rh, tail, 1.0/24)
	tail = float64(float64(sh*sh) * tail)
	// r³/6 with 1/6 in two parts.
	gh, gl := product2(ch, sixthH)
	gl = math.FMA(ch, sixthL, math.FMA(cl, sixthH, gl))
	ph, pl := fastSum2(rh, 0.5*sh)
	pl += rl + 0.5*sl
	qh, ql := fastSum2(ph, gh)
	pl += ql + gl + tail
	ph, pl = fastSum2(qh, pl)

	n := int(k)
	t := &powers[n&63]
	// t·(1 + p)
	mh, ml := product2(t[0], ph)
	ml = math.FMA(t[0], pl, math.FMA(t[1], ph, ml))
	h, e := fastSum2(t[0], mh)
	h, l := fastSum2(h, e+(ml+t[1]))
	scale := math.Float64frombits(uint64(n>>6+1023) << 52)
	return DD{float64(h * scale), float64(l * scale)}
}

// SinCos returns sin x and cos x for |x| ≤ MaxAngle; NaN beyond.
//
// With x = k·π/128 + r, |r| < 0.0123, the tables hold the values at k·π/128;
// sin r keeps r³ in double-double, cos r keeps r², and the float64 tails
// r⁵/120 − … and r⁴/24 − … are below 2^−38 and 2^−30.
func SinCos(x DD) (sin, cos DD) {
	xh, xl := x.Hi, x.Lo
	if !(math.Abs(xh) <= MaxAngle) {
		nan := DD{math.NaN(), math.NaN()}
		return nan, nan
	}
	k := math.RoundToEven(xh * (128 / math.Pi))
	// k has at most 26 bits, pia to pic 26: their products are exact.
	d := math.FMA(-k, pia, xh)
	rh, rl := sum2(d, float64(-k*pib))
	uh, ul := sum2(rh, float64(-k*pic))
	rl += ul + (xl - float64(k*pid))
	rh, rl = fastSum2(uh, rl)

	sh, sl := product2(rh, rh) // r²
	sl = math.FMA(2*rh, rl, sl)
	ch, cl := product2(sh, rh) // r³
	cl = math.FMA(sh, rl, math.FMA(sl, rh, cl))

	// sin r = r − r³/6 + r³·(r²/120 − r⁴/5040 + …)
	tail := math.FMA(sh, 1.0/362880, -1.0/5040)
	tail = math.FMA(sh, tail, 1.0/120)
	tail = float64(float64(ch*sh) * tail)
	gh, gl := product2(ch, -sixthH)
	gl = math.FMA(ch, -sixthL, math.FMA(cl, -sixthH, gl))
	ph, pl := fastSum2(rh, gh)
	pl += rl + (gl + tail)

	// cos r − 1 = −r²/2 + r⁴·(1/24 − r²/720 + …)
	tail = math.FMA(sh, 1.0/40320, -1.0/720)
	tail = math.FMA(sh, tail, 1.0/24)
	tail = float64(float64(sh*sh) * tail)
	qh, ql := fastSum2(-0.5*sh, tail)
	ql -= 0.5 * sl

	n := int(k) & 255
	s, c := &sines[n], &sines[(n+64)&255]
	return rotated(s, c, qh, ql, ph, pl), rotated(c, s, qh, ql, -ph, -pl)
}

// rotated returns a + a·q + b·p.
func rotated(a, b *[2]float64, qh, ql, ph, pl float64) DD {
	mh, ml := product2(a[0], qh)
	ml = math.FMA(a[0], ql, math.FMA(a[1], qh, ml))
	nh, nl := product2(b[0], ph)
	nl = math.FMA(b[0], pl, math.FMA(b[1], ph, nl))
	vh, vl := sum2(nh, mh)
	h, e := sum2(a[0], vh)
	return fastTwoSum(h, e+(vl+(a[1]+(ml+nl))))
}

// sum2 returns a + b exactly (Knuth 1969).
func sum2(a, b float64) (s, e float64) {
	s = a + b
	t := s - a
	e = (a - (s - t)) + (b - t)
	return
}

// fastSum2 does so for |a| ≥ |b| (Dekker 1971).
func fastSum2(a, b float64) (s, e float64) {
	s = a + b
	e = b - (s - a)
	return
}

// product2 returns a·b exactly where nothing underflows.
func product2(a, b float64) (p, e float64) {
	p = float64(a * b)
	e = math.FMA(a, b, -p)
	return
}
