package ball

import (
	"math"
	"math/big"
)

// maxExpArgument: beyond 2^maxExpArgument in magnitude the exponential is only
// bounded (0…2^-2^28 below, indeterminate above).
const maxExpArgument = 28

// wide is the radius exponent from which monotonic functions take the hull of
// the values at both ends instead of a bound from the derivative.
const wide = -4

// useful limits the precision for a ball with a radius: bits far below the
// radius are of no use to anyone.
func (x Real) useful(prec uint) uint {
	prec = precision(prec)
	if x.rad.m == 0 {
		return prec
	}
	return uint(min(int(prec), max(64, 32-x.rad.exponent())))
}

// Exp returns e^x. Above 2^28 it is indeterminate, below -2^28 a ball that
// covers 0…2^-2^28.
func (x Real) Exp(prec uint) Real {
	if !x.IsFinite() {
		return x
	}
	if x.rad.m != 0 && x.rad.exponent() > wide {
		lo, hi := FromFloat(x.Lower()).Exp(prec), FromFloat(x.Upper()).Exp(prec)
		if !lo.IsFinite() || !hi.IsFinite() {
			return indeterminate
		}
		return hull(lo.Lower(), hi.Upper(), precision(prec))
	}
	if x.mid == nil && x.rad.m == 0 {
		return FromInt64(1)
	}
	z := FromInt64(1)
	if x.mid != nil {
		z = expPoint(x.mid, x.useful(prec))
	}
	if x.rad.m == 0 || !z.IsFinite() {
		return z
	}
	// e^(m+d) - e^m is at most e^m (e^r - 1) ≤ e^m (r + r²) for r ≤ 1.
	spread := x.rad.add(x.rad.mul(x.rad))
	return z.widen(magUp(z.mid).add(z.rad).mul(spread))
}

// expPoint returns e^m for a midpoint m.
func expPoint(m *big.Float, prec uint) Real {
	e := m.MantExp(nil)
	switch {
	case e > maxExpArgument && m.Sign() > 0:
		return indeterminate
	case e > maxExpArgument:
		return Real{rad: magPow2(-1 << maxExpArgument)}
	case e < -int(prec)-2: // |e^m - 1| ≤ 2|m|
		return FromInt64(1).widen(magPow2(e + 1))
	}
	// t = m - k log 2 in [0, log 2 + a bit]. The float64 quotient is wrong by
	// less than one; the guard bits of log 2 absorb the factor k.
	w := prec + 12
	f, _ := m.Float64()
	k := int64(math.Floor(f / math.Ln2))
	guard := uint(bitLen(uint64(max(k, -k)))) + 2
	v := w + guard
	ln2 := log2Fixed(v)
	t := toFixed(m, int(v))
	t.Sub(t, new(big.Int).Mul(ln2, big.NewInt(k)))
	if t.Sign() < 0 {
		t.Add(t, ln2)
		k--
	}
	// Cutting m costs 1 unit of 2^-v, k log 2 at most constantError·(|k|+1):
	// together below one unit of 2^-w; the shift costs another.
	t.Rsh(t, guard)
	if t.Sign() < 0 { // by no more than these errors
		t.SetInt64(0)
	}
	s, scale, err := expFixed(t, w)
	z, cut := fromFixed(s, int(scale)-int(k), prec)
	// s·2^-scale < 2.1; the relative error is err + 2.1 units of 2^-w.
	return settle(z, cut.add(makeMag(3*(err+3), k-int64(w))))
}

// Sinh returns the hyperbolic sine.
func (x Real) Sinh(prec uint) Real {
	if !x.IsFinite() || x.IsZero() {
		return x
	}
	prec = precision(prec)
	extra := uint(4)
	if up := magUp(x.mid).add(x.rad); up.exponent() < 0 {
		lead := -up.exponent()
		if lead > int(prec) { // |sinh x - x| ≤ |x|³/5 for |x| ≤ 1/2
			return x.Round(prec).widen(up.mul(up).mul(up))
		}
		extra += uint(lead)
	}
	a, b := x.Exp(prec+extra), x.Neg().Exp(prec+extra)
	return a.Sub(b, prec).MulPow2(-1)
}

// Cosh returns the hyperbolic cosine.
func (x Real) Cosh(prec uint) Real {
	if !x.IsFinite() {
		return x
	}
	prec = precision(prec)
	return x.Exp(prec+4).Add(x.Neg().Exp(prec+4), prec).MulPow2(-1)
}
