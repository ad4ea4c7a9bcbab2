// Package dd computes with double-double numbers: unevaluated sums Hi + Lo of
// two float64 with |Lo| ≤ half a unit in the last place of Hi, some 106 bits.
//
// Bounds are stated in u = 2^-53 and hold while no intermediate value
// overflows and no product loses bits to underflow: keep magnitudes within
// 2^-450 and 2^450 (or exactly 0). Outside, results may be NaN or inexact, never
// a panic. Products use math.FMA and no other product is added to anything
// without an explicit rounding, so that every machine computes the same bits.
// Who fills a DD with a product of his own writes DD{Hi: float64(a * b)}.
//
// The algorithms and bounds are those of M. Joldes, J.-M. Muller and
// V. Popescu, Tight and rigorous error bounds for basic building blocks of
// double-word arithmetic (2017), unless a comment says otherwise.
package dd

import "math"

// DD is the number Hi + Lo.
type DD struct{ Hi, Lo float64 }

// MinMagnitude and MaxMagnitude bound the documented range.
const (
	MinMagnitude = 0x1p-450
	MaxMagnitude = 0x1p450
)

// Pair returns hi + lo, where |lo| is at most half a unit in the last place of
// hi; the caller sees to that.
func Pair(hi, lo float64) DD { return DD{hi, lo} }

// From returns v exactly.
func From(v float64) DD { return DD{Hi: float64(v)} }

// TwoSum returns a + b exactly as s + e (Knuth, Møller).
//
// The conversions keep a product in the caller's argument from being fused
// into the additions when the call is inlined.
func TwoSum(a, b float64) DD {
	a, b = float64(a), float64(b)
	s := a + b
	bb := s - a
	return DD{s, (a - (s - bb)) + (b - bb)}
}

// fastTwoSum is TwoSum for |a| ≥ |b| or a = 0 (Dekker).
func fastTwoSum(a, b float64) DD {
	a, b = float64(a), float64(b)
	s := a + b
	return DD{s, b - (s - a)}
}

// TwoProduct returns a·b exactly, unless it is below 2^-968 and not 0.
func TwoProduct(a, b float64) DD {
	p := float64(a * b)
	return DD{p, math.FMA(a, b, -p)}
}

// Neg returns -x.
func (x DD) Neg() DD { return DD{-x.Hi, -x.Lo} }

// MulPow2 returns x·2^k for k in -1000…1000, exact unless it underflows.
func (x DD) MulPow2(k int) DD {
	p := math.Float64frombits(uint64(1023+k) << 52)
	return DD{float64(x.Hi * p), float64(x.Lo * p)}
}

// Add returns x + y, relative error at most 3u² + 13u³ (algorithm 6).
func (x DD) Add(y DD) DD {
	s, t := TwoSum(x.Hi, y.Hi), TwoSum(x.Lo, y.Lo)
	v := fastTwoSum(s.Hi, s.Lo+t.Hi)
	return fastTwoSum(v.Hi, t.Lo+v.Lo)
}

// AddLoose returns x + y within 2^-103·(|x| + |y|) (algorithm 5), for half the
// work of Add: enough where a bound is kept on the sum of absolute values.
func (x DD) AddLoose(y DD) DD {
	s := TwoSum(x.Hi, y.Hi)
	return fastTwoSum(s.Hi, s.Lo+(x.Lo+y.Lo))
}

// Sub returns x - y with the error of Add.
func (x DD) Sub(y DD) DD { return x.Add(y.Neg()) }

// AddFloat returns x + y, relative error at most 2u² (algorithm 4).
func (x DD) AddFloat(y float64) DD {
	s := TwoSum(x.Hi, y)
	return fastTwoSum(s.Hi, x.Lo+s.Lo)
}

// Mul returns x·y, relative error at most 5u² (algorithm 12).
func (x DD) Mul(y DD) DD {
	c := TwoProduct(x.Hi, y.Hi)
	t := math.FMA(x.Hi, y.Lo, float64(x.Lo*y.Lo))
	return fastTwoSum(c.Hi, c.Lo+math.FMA(x.Lo, y.Hi, t))
}

// MulFloat returns x·y, relative error at most 2u² (algorithm 9).
func (x DD) MulFloat(y float64) DD {
	c := TwoProduct(x.Hi, y)
	return fastTwoSum(c.Hi, math.FMA(x.Lo, y, c.Lo))
}

// Div returns x/y, relative error at most 15u² + 56u³ (algorithm 17).
func (x DD) Div(y DD) DD {
	t := x.Hi / y.Hi
	// y·t by algorithm 7.
	c := TwoProduct(y.Hi, t)
	s := fastTwoSum(c.Hi, float64(y.Lo*t))
	r := fastTwoSum(s.Hi, s.Lo+c.Lo)
	return fastTwoSum(t, ((x.Hi-r.Hi)+(x.Lo-r.Lo))/y.Hi)
}

// Sqrt returns √x, relative error at most 25u²/8 (V. Lefèvre, N. Louvet, J.-M.
// Muller, J. Picot and L. Rideau, 2023); NaN for x < 0.
func (x DD) Sqrt() DD {
	if x.Hi == 0 {
		return DD{}
	}
	s := math.Sqrt(x.Hi)
	return fastTwoSum(s, (x.Lo+math.FMA(-s, s, x.Hi))/float64(2*s))
}

// Round returns the float64 nearest to every number within bound (absolute) of
// x; ok is false when there is more than one, or when the result would not be
// a normal number in the documented range.
func (x DD) Round(bound float64) (v float64, ok bool) {
	// Both sums are rounded to nearest after Lo ± bound is pushed outwards by
	// more than its own rounding.
	lo := math.Nextafter(x.Lo-bound, math.Inf(-1))
	hi := math.Nextafter(x.Lo+bound, math.Inf(1))
	a, b := x.Hi+lo, x.Hi+hi
	m := math.Abs(a)
	return a, a == b && m >= MinMagnitude && m <= MaxMagnitude
}

// Complex is the number Re + i·Im.
type Complex struct{ Re, Im DD }

// FromComplex returns z exactly.
func FromComplex(z complex128) Complex { return Complex{From(real(z)), From(imag(z))} }

// Add returns z + w, each part with the error of [DD.Add].
func (z Complex) Add(w Complex) Complex { return Complex{z.Re.Add(w.Re), z.Im.Add(w.Im)} }

// Sub returns z - w, each part with the error of [DD.Add].
func (z Complex) Sub(w Complex) Complex { return Complex{z.Re.Sub(w.Re), z.Im.Sub(w.Im)} }

// Mul returns z·w within 12u²|z||w|: each part is off by at most 5u² of both
// products and 3u² of their sum, 8.01u²(|a||c|+|b||d|) ≤ 8.01u²|z||w|; √2 of
// that together.
func (z Complex) Mul(w Complex) Complex {
	return Complex{
		z.Re.Mul(w.Re).Sub(z.Im.Mul(w.Im)),
		z.Re.Mul(w.Im).Add(z.Im.Mul(w.Re)),
	}
}

// Div returns z/w within 50u²|z/w|: 12u² for z·conj(w), 8.01u² for |w|² and
// 15.1u² for each quotient add up to 36u².
func (z Complex) Div(w Complex) Complex {
	n := w.Re.Mul(w.Re).Add(w.Im.Mul(w.Im))
	q := z.Mul(Complex{w.Re, w.Im.Neg()})
	return Complex{q.Re.Div(n), q.Im.Div(n)}
}

// Horner returns Σ c[j] z^j and a bound of |error|.
//
// A step v ← v·z + c adds at most 12u²|v||z| + 3u²|v z + c| (1 + tiny), which is
// below 15.1u² of the same step for Σ|c[j]||z|^j =: S, so that n steps leave
// at most 15.1u²·n·S. S in float64 is low by at most (4n+4)u relatively.
// The bound is NaN or +Inf when the range is left upwards; below, the caller
// keeps to the range of the package.
func Horner(c []DD, z Complex) (v Complex, bound float64) {
	if len(c) == 0 {
		return Complex{}, 0
	}
	// math.Hypot has other last bits on other machines.
	r := math.Sqrt(float64(z.Re.Hi*z.Re.Hi) + float64(z.Im.Hi*z.Im.Hi))
	r += float64(r * 0x1p-50) // over Lo and three roundings
	n := len(c) - 1
	v.Re = c[n]
	s := math.Abs(c[n].Hi)
	for j := n - 1; j >= 0; j-- {
		v = v.Mul(z)
		v.Re = v.Re.Add(c[j])
		s = float64(s*r) + math.Abs(c[j].Hi)
	}
	slack := 1 + float64(float64(n+1)*0x1p-49)
	return v, float64(float64(float64(16*float64(n))*0x1p-106) * float64(s*slack))
}
