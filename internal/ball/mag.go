package ball

import (
	"math"
	"math/big"
	"math/bits"
)

// mag is a non-negative bound m·2^e: m is 0 or has its bit 31 set. Every
// operation rounds up by at most one unit of m, a relative 2^-31, unless it
// says that it rounds down.
type mag struct {
	m uint32
	e int32
}

const (
	magInf = math.MaxInt32 // exponent of the infinite radius
	// magExponent bounds the exponents of finite radii; it exceeds what sums
	// and products of midpoints and radii reach.
	magExponent = 1<<30 + 1<<29
)

func (a mag) isInf() bool { return a.e == magInf }

// makeMag returns an upper bound of m·2^e.
func makeMag(m uint64, e int64) mag {
	if m == 0 {
		return mag{}
	}
	if n := bits.Len64(m); n > 32 {
		s := n - 32
		up := m&(1<<s-1) != 0
		m >>= s
		e += int64(s)
		if up {
			if m++; m == 1<<32 {
				m, e = 1<<31, e+1
			}
		}
	} else {
		m <<= 32 - n
		e -= int64(32 - n)
	}
	switch {
	case e > magExponent:
		return mag{1 << 31, magInf}
	case e < -magExponent:
		return mag{1 << 31, -magExponent}
	}
	return mag{uint32(m), int32(e)}
}

// magPow2 is 2^e.
func magPow2(e int) mag { return makeMag(1, int64(e)) }

// exponent returns k with 2^(k-1) ≤ a < 2^k, for finite a > 0.
func (a mag) exponent() int { return int(a.e) + 32 }

func (a mag) mul(b mag) mag {
	if a.m == 0 || b.m == 0 {
		return mag{}
	}
	if a.isInf() || b.isInf() {
		return mag{1 << 31, magInf}
	}
	return makeMag(uint64(a.m)*uint64(b.m), int64(a.e)+int64(b.e))
}

func (a mag) mulPow2(k int) mag {
	if a.m == 0 || a.isInf() {
		return a
	}
	k = min(max(k, -1<<31), 1<<31-1)
	return makeMag(uint64(a.m), int64(a.e)+int64(k))
}

func (a mag) add(b mag) mag {
	if b.m == 0 {
		return a
	}
	if a.m == 0 {
		return b
	}
	if a.e < b.e {
		a, b = b, a
	}
	if a.isInf() {
		return a
	}
	m := uint64(a.m) << 31
	if d := int64(a.e) - int64(b.e); d < 31 {
		m += uint64(b.m) << (31 - d)
	} else if d < 63 {
		m += uint64(b.m)>>(d-31) + 1
	} else {
		m++
	}
	return makeMag(m, int64(a.e)-31)
}

// div returns an upper bound of a/b for a lower bound b > 0.
func (a mag) div(b mag) mag {
	if a.m == 0 || a.isInf() {
		return a
	}
	if b.m == 0 {
		return mag{1 << 31, magInf}
	}
	return makeMag(uint64(a.m)<<32/uint64(b.m)+1, int64(a.e)-32-int64(b.e))
}

// subDown returns a lower bound of a - b, or 0 if that is not positive; b must
// be finite.
func (a mag) subDown(b mag) mag {
	if b.m == 0 || a.isInf() {
		return a
	}
	if a.cmp(b) <= 0 {
		return mag{}
	}
	m, d := uint64(a.m)<<31, int64(a.e)-int64(b.e)
	if d < 31 {
		m -= uint64(b.m) << (31 - d)
	} else if d < 63 {
		m -= uint64(b.m)>>(d-31) + 1
	} else {
		m--
	}
	return makeMagDown(m, int64(a.e)-31)
}

// makeMagDown returns a lower bound of m·2^e.
func makeMagDown(m uint64, e int64) mag {
	if n := bits.Len64(m); n > 32 {
		m >>= n - 32
		e += int64(n - 32)
	}
	if m == 0 || e < -magExponent {
		return mag{}
	}
	return makeMag(m, e)
}

// cmp compares a and b; two infinities are equal.
func (a mag) cmp(b mag) int {
	switch {
	case a == b || a.isInf() && b.isInf():
		return 0
	case a.m == 0:
		return -1
	case b.m == 0:
		return 1
	case a.e < b.e || a.e == b.e && a.m < b.m:
		return -1
	}
	return 1
}

// split returns the leading 53 bits of |x| as f·2^e with 0.5 ≤ f ≤ 1, and
// whether they are all of x. The mantissa is rounded to nearest: relative
// error at most 2^-53. x must be finite and not nil or zero.
func split(x *big.Float) (f float64, e int, exact bool) {
	e = x.MantExp(nil)
	if -1000 < e && e < 1000 { // no allocation
		v, acc := x.Float64()
		return math.Abs(math.Ldexp(v, -e)), e, acc == big.Exact
	}
	m := new(big.Float)
	x.MantExp(m)
	v, acc := m.Float64()
	return math.Abs(v), e, acc == big.Exact
}

// magUp returns an upper bound of |x|.
func magUp(x *big.Float) mag {
	if x == nil || x.Sign() == 0 {
		return mag{}
	}
	if x.IsInf() {
		return mag{1 << 31, magInf}
	}
	// f·2^32 is a multiple of 2^-21 and within 2^-21 of |x|·2^(32-e) (f ≤ 1),
	// so that its floor plus one is not below it.
	f, e, exact := split(x)
	m := uint64(f * (1 << 32))
	if !exact || float64(m) != f*(1<<32) {
		m++
	}
	return makeMag(m, int64(e)-32)
}

// magDown returns a lower bound of |x|.
func magDown(x *big.Float) mag {
	if x == nil || x.Sign() == 0 {
		return mag{}
	}
	if x.IsInf() {
		return mag{1 << 31, magInf}
	}
	f, e, exact := split(x)
	m := uint64(f * (1 << 32))
	if !exact {
		m-- // the 53 bits may have been rounded up over a unit
	}
	return makeMagDown(m, int64(e)-32)
}

// float returns a, +Inf for the infinite radius, with 64 bits.
func (a mag) float() *big.Float {
	z := new(big.Float)
	if a.isInf() {
		return z.SetInf(false)
	}
	z.SetUint64(uint64(a.m))
	return z.SetMantExp(z, int(a.e))
}
