package algebraic

import (
	"math"
	"math/big"
	"math/bits"
)

// scaled is the number m·2^e with 1/2 ≤ |m| < 1, or 0: a float64 without a
// bound on the exponent. One operation has a relative error of a few 2^-53;
// bounds are made safe by up and down.
type scaled struct {
	m float64
	e int
}

func newScaled(m float64, e int) scaled {
	f, k := math.Frexp(m)
	if f == 0 {
		return scaled{}
	}
	return scaled{f, e + k}
}

// fromBig returns x·2^e, with a relative error below 2^-52.
func fromBig(x *big.Int, e int) scaled {
	w := x.Bits()
	n := len(w)
	if n == 0 {
		return scaled{}
	}
	var m float64
	if bits.UintSize == 32 {
		m, _ = new(big.Float).SetPrec(53).SetMantExp(new(big.Float).SetInt(x), -x.BitLen()).Float64()
		return newScaled(m, e+x.BitLen())
	}
	m = float64(w[n-1])
	if n > 1 {
		m += float64(w[n-2]) * 0x1p-64
		e += 64 * (n - 1)
	}
	if x.Sign() < 0 {
		m = -m
	}
	return newScaled(m, e)
}

const (
	upward   = 1 + 0x1p-40 // covers the rounding of a thousand operations
	downward = 1 - 0x1p-40
)

func (a scaled) up() scaled             { return newScaled(a.m*upward, a.e) }
func (a scaled) down() scaled           { return newScaled(a.m*downward, a.e) }
func (a scaled) mul(b scaled) scaled    { return newScaled(a.m*b.m, a.e+b.e) }
func (a scaled) div(b scaled) scaled    { return newScaled(a.m/b.m, a.e-b.e) }
func (a scaled) times(f float64) scaled { return newScaled(a.m*f, a.e) }
func (a scaled) neg() scaled            { return scaled{-a.m, a.e} }
func (a scaled) shift(k int) scaled {
	if a.m == 0 {
		return a
	}
	return scaled{a.m, a.e + k}
}
func (a scaled) sub(b scaled) scaled { return a.add(b.neg()) }

func (a scaled) add(b scaled) scaled {
	switch {
	case a.m == 0:
		return b
	case b.m == 0:
		return a
	case a.e < b.e:
		a, b = b, a
	}
	return newScaled(a.m+math.Ldexp(b.m, max(b.e-a.e, -2000)), a.e)
}

func (a scaled) less(b scaled) bool { return a.sub(b).m < 0 }

// float returns the value as a big.Float, exactly.
func (a scaled) float() *big.Float {
	f := big.NewFloat(a.m)
	return f.SetMantExp(f, a.e)
}

// pair is a complex scaled number (re + i·im)·2^e.
type pair struct {
	re, im float64
	e      int
}

func newPair(re, im scaled) pair {
	e := re.e
	if re.m == 0 || (im.m != 0 && im.e > e) {
		e = im.e
	}
	return pair{ldexp(re, e), ldexp(im, e), e}
}

func ldexp(a scaled, e int) float64 {
	if a.m == 0 {
		return 0
	}
	return math.Ldexp(a.m, max(a.e-e, -2000))
}

func (a pair) normal() pair {
	m := max(math.Abs(a.re), math.Abs(a.im))
	if m == 0 {
		return pair{}
	}
	_, k := math.Frexp(m)
	return pair{math.Ldexp(a.re, -k), math.Ldexp(a.im, -k), a.e + k}
}

func (a pair) isZero() bool { return a.re == 0 && a.im == 0 }
func (a pair) abs() scaled  { return newScaled(math.Hypot(a.re, a.im), a.e) }

func (a pair) mul(b pair) pair {
	return pair{a.re*b.re - a.im*b.im, a.re*b.im + a.im*b.re, a.e + b.e}.normal()
}

func (a pair) div(b pair) pair {
	b = b.normal()
	n := b.re*b.re + b.im*b.im
	return pair{(a.re*b.re + a.im*b.im) / n, (a.im*b.re - a.re*b.im) / n, a.e - b.e}.normal()
}

func (a pair) add(b pair) pair {
	switch {
	case a.isZero():
		return b
	case b.isZero():
		return a
	case a.e < b.e:
		a, b = b, a
	}
	k := max(b.e-a.e, -2000)
	return pair{a.re + math.Ldexp(b.re, k), a.im + math.Ldexp(b.im, k), a.e}.normal()
}

func (a pair) neg() pair { return pair{-a.re, -a.im, a.e} }
