package dd

import "math"

const (
	// MaxExp and MaxSinCos bound the arguments of Exp and SinCos.
	MaxExp    = 300
	MaxSinCos = 1 << 20
	// ExpError bounds the relative error of Exp, SinCosError the absolute
	// errors of SinCos.
	ExpError    = 0x1p-100
	SinCosError = 0x1p-99
)

// Parts of log 2 with 41, 41 and 53 bits, of π/2 with 32, 32, 32 and 53: a
// multiple by an integer below 2^11 or 2^21 of any but the last is exact.
const (
	log2Part1    = 0x1.62e42fefa3000p-1
	log2Part2    = 0x1.3de6af278e000p-42
	log2Part3    = 0x1.9cc01f97b57a0p-83
	quarterPart1 = 0x1.921fb54400000p+0
	quarterPart2 = 0x1.0b4611a600000p-34
	quarterPart3 = 0x1.3198a2e000000p-69
	quarterPart4 = 0x1.b839a252049c1p-104
)

// 1/(j+1)!, the Taylor coefficients of (e^q - 1)/q.
var expHead = [...]DD{
	{0x1p+0, 0x0.0p+0},
	{0x1p-1, 0x0.0p+0},
	{0x1.5555555555555p-3, 0x1.5555555555555p-57},
	{0x1.5555555555555p-5, 0x1.5555555555555p-59},
	{0x1.1111111111111p-7, 0x1.1111111111111p-63},
	{0x1.6c16c16c16c17p-10, -0x1.f49f49f49f49fp-65},
	{0x1.a01a01a01a01ap-13, 0x1.a01a01a01a01ap-73},
}

var expTail = [...]float64{
	0x1.a01a01a01a01ap-16,
	0x1.71de3a556c734p-19,
	0x1.27e4fb7789f5cp-22,
	0x1.ae64567f544e4p-26,
	0x1.1eed8eff8d898p-29,
	0x1.6124613a86d09p-33,
	0x1.93974a8c07c9dp-37,
}

// (-1)^j/(2j+1)!, the coefficients of sin q/q in q².
var sinHead = [...]DD{
	{0x1p+0, 0x0.0p+0},
	{-0x1.5555555555555p-3, -0x1.5555555555555p-57},
	{0x1.1111111111111p-7, 0x1.1111111111111p-63},
	{-0x1.a01a01a01a01ap-13, -0x1.a01a01a01a01ap-73},
	{0x1.71de3a556c734p-19, -0x1.c154f8ddc6c00p-73},
}

var sinTail = [...]float64{
	-0x1.ae64567f544e4p-26,
	0x1.6124613a86d09p-33,
	-0x1.ae7f3e733b81fp-41,
	0x1.952c77030ad4ap-49,
	-0x1.2f49b46814157p-57,
}

// (-1)^j/(2j+2)!, the coefficients of (1 - cos q)/q² in q².
var cosHead = [...]DD{
	{0x1p-1, 0x0.0p+0},
	{-0x1.5555555555555p-5, -0x1.5555555555555p-59},
	{0x1.6c16c16c16c17p-10, -0x1.f49f49f49f49fp-65},
	{-0x1.a01a01a01a01ap-16, -0x1.a01a01a01a01ap-76},
	{0x1.27e4fb7789f5cp-22, 0x1.cbbc05b4fa99ap-76},
}

var cosTail = [...]float64{
	-0x1.1eed8eff8d898p-29,
	0x1.93974a8c07c9dp-37,
	-0x1.ae7f3e733b81fp-45,
	0x1.6827863b97d97p-53,
	-0x1.e542ba4020225p-62,
}

// series returns Σ head[j] q^j + q^len(head) Σ tail[j] q^j, the tail in float64.
func series(head []DD, tail []float64, q DD) DD {
	t := 0.0
	for j := len(tail) - 1; j >= 0; j-- {
		t = float64(t*q.Hi) + tail[j]
	}
	v := From(t)
	for j := len(head) - 1; j >= 0; j-- {
		v = v.Mul(q).Add(head[j])
	}
	return v
}

// Exp returns e^x for |x| ≤ MaxExp with a relative error of at most ExpError;
// NaN beyond.
//
// Proof, in u². The remainder r = x - k log 2, |r| ≤ 0.348, has three additions
// of at most 3|r| each (products with the parts are exact): below 4. With
// q = r/32, |q| < 0.0109: the tail of the series in float64 is off by less than
// 3u·q^7/8! < 0.02, truncation costs q^14/15! < 0.01; the last Horner step
// dominates the rest, 3 + 0.06, so that (e^q-1)/q is within 3.3 and p = e^q - 1
// within 8.4, relatively. Doubling p(2+p) multiplies the relative error by at
// most 1 + |p|/(2-|p|) and adds 8; the factors for 5 steps (|p| < 0.011, 0.023,
// 0.045, 0.091, 0.19) have a product below 1.22: 1.22(8.4+40) < 60. Adding 1
// leaves 60·0.42 + 3 < 29 of e^r for positive r, and 60·0.30/0.70 + 3 < 29 for
// negative r. Together 33 < 64.
func Exp(x DD) DD {
	if !(math.Abs(x.Hi) <= MaxExp) {
		return DD{math.NaN(), math.NaN()}
	}
	k := math.RoundToEven(float64(x.Hi * (1 / math.Ln2)))
	r := TwoSum(x.Hi, -float64(k*log2Part1))
	r = r.Add(TwoSum(x.Lo, -float64(k*log2Part2))).AddFloat(-float64(k * log2Part3))
	q := r.MulPow2(-5)
	p := q.Mul(series(expHead[:], expTail[:], q))
	for range 5 {
		p = p.Mul(p.AddFloat(2))
	}
	return p.AddFloat(1).MulPow2(int(k))
}

// SinCos returns sin x and cos x for |x| ≤ MaxSinCos, each with an absolute
// error of at most SinCosError; NaN beyond.
//
// Proof, in u². The remainder r = x - kπ/2, |r| ≤ 0.79, has three additions
// of at most 3·0.8: below 8 (k times the error of the last part is far below
// one). With q = r/8, q² < 0.0098: tails and truncation cost less than 0.1;
// sin q is within 8.5 and v = 1 - cos q within 13.4, relatively. Doubling
// s(1-v)·2 has the relative error δs + δv·v/(1-v) + 8 and v = 2s² has 2δs + 5:
// 16.6, 22; 25.2, 39; 36.5, 56 after three steps (v < 0.005, 0.02, 0.077
// before them). Absolutely 36.5·0.711 < 26 for the sine and 56·0.297 + 3 < 20
// for the cosine; with the remainder below 34 < 128.
func SinCos(x DD) (sin, cos DD) {
	if !(math.Abs(x.Hi) <= MaxSinCos) {
		nan := DD{math.NaN(), math.NaN()}
		return nan, nan
	}
	k := math.RoundToEven(float64(x.Hi * (2 / math.Pi)))
	r := TwoSum(x.Hi, -float64(k*quarterPart1))
	r = r.Add(TwoSum(x.Lo, -float64(k*quarterPart2)))
	r = r.AddFloat(-float64(k * quarterPart3)).AddFloat(-float64(k * quarterPart4))
	q := r.MulPow2(-3)
	square := q.Mul(q)
	sin = q.Mul(series(sinHead[:], sinTail[:], square))
	v := square.Mul(series(cosHead[:], cosTail[:], square))
	for range 3 {
		c := v.Neg().AddFloat(1)
		v = sin.Mul(sin).MulPow2(1)
		sin = sin.Mul(c).MulPow2(1)
	}
	cos = v.Neg().AddFloat(1)
	switch int64(k) & 3 {
	case 1:
		return cos, sin.Neg()
	case 2:
		return sin.Neg(), cos.Neg()
	case 3:
		return cos.Neg(), sin
	}
	return sin, cos
}
