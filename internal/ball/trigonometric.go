package ball

import "math/big"

// maxTrigArgument: beyond 2^maxTrigArgument in magnitude, or with a radius of
// 1 or more, sine and cosine are only bounded, by ±1.
const maxTrigArgument = 1 << 14

var unitInterval = Real{rad: magPow2(0)}

// Sin returns the sine; for arguments of 2^16384 and more only -1…1.
func (x Real) Sin(prec uint) Real {
	s, _ := x.SinCos(prec)
	return s
}

// Cos returns the cosine; for arguments of 2^16384 and more only -1…1.
func (x Real) Cos(prec uint) Real {
	_, c := x.SinCos(prec)
	return c
}

// SinCos returns both at the cost of one. Near a zero of either, that one is
// still known to prec bits relative to itself when x is exact.
func (x Real) SinCos(prec uint) (sin, cos Real) {
	switch {
	case !x.IsFinite():
		return x, x
	case x.rad.m != 0 && x.rad.exponent() > 0:
		return unitInterval, unitInterval
	case x.mid == nil:
		sin, cos = Real{}, FromInt64(1)
	default:
		sin, cos = sinCosPoint(x, x.useful(prec))
	}
	if x.rad.m == 0 {
		return sin, cos
	}
	// |sin(m+d) - sin m| ≤ r and ≤ |cos m| r + r²/2; the cosine likewise.
	half := x.rad.mul(x.rad).mulPow2(-1)
	spread := func(other Real) mag {
		s := magUp(other.mid).add(other.rad).mul(x.rad).add(half)
		if s.cmp(x.rad) > 0 {
			return x.rad
		}
		return s
	}
	return sin.widen(spread(cos)), cos.widen(spread(sin))
}

// sinCosPoint returns sine and cosine of the midpoint of x, with no more bits
// near zeros than the radius of x makes sense of.
func sinCosPoint(x Real, prec uint) (sin, cos Real) {
	m := new(big.Float).Abs(x.mid)
	e := m.MantExp(nil)
	switch {
	case e > maxTrigArgument:
		return unitInterval, unitInterval
	case 2*e < -int(prec)-2: // |sin m - m| ≤ |m|³/6, |cos m - 1| ≤ m²/2
		s, cut := roundFloat(x.mid, prec)
		return settle(s, cut.add(magPow2(3*e-2))), FromInt64(1).widen(magPow2(2*e - 1))
	}
	t, w, k := reduceQuarter(m, e, prec+12, x.rad)
	negative := t.Sign() < 0
	t.Abs(t)
	s, c, scale, err := sinCosFixed(t, w)
	if negative {
		s.Neg(s)
	}
	// 2 units for the reduction; err and they count 2^-w.
	ball := func(n *big.Int, minus bool) Real {
		if minus {
			n.Neg(n)
		}
		z, cut := fromFixed(n, int(scale), prec)
		return settle(z, cut.add(makeMag(err+2, -int64(w))))
	}
	odd := x.mid.Sign() < 0 // the sine of -|m|
	switch k {
	case 0:
		return ball(s, odd), ball(c, false)
	case 1:
		return ball(c, odd), ball(s, true)
	case 2:
		return ball(s, !odd), ball(c, true)
	default:
		return ball(c, !odd), ball(s, false)
	}
}

// reduceQuarter returns t = m - kπ/2 as T·2^-scale, |t| ≤ 0.79, within 2 units
// of 2^-scale, and k mod 4; e is the exponent of m > 0. The scale is w plus
// the number of leading zero bits of t, unless rad shows that they do not
// matter or they pass the bound below.
func reduceQuarter(m *big.Float, e int, w uint, rad mag) (t *big.Int, scale uint, k int) {
	if e <= -1 { // m < 1/2
		scale = w + uint(-e)
		return toFixed(m, int(scale)), scale, 0
	}
	// An error of 1 unit from m and constantError·k from kπ/2, k < 2^(e+1).
	guard := uint(e) + 4
	enough := uint(4*(int(m.MinPrec())+e) + 4*int(w))
	if rad.m != 0 {
		enough = uint(max(0, 32-rad.exponent()))
	}
	for zeros := uint(0); ; {
		v := w + zeros + guard
		quarter := piFixed(v - 1)
		n := toFixed(m, int(v))
		n.Add(n, new(big.Int).Rsh(quarter, 1))
		t = new(big.Int)
		q, _ := new(big.Int).DivMod(n, quarter, t)
		t.Sub(t, new(big.Int).Rsh(quarter, 1))
		found := v - uint(t.BitLen())
		if found <= zeros+4 || w+zeros >= enough {
			scale = w + zeros
			return t.Rsh(t, guard), scale, int(q.Bit(1))<<1 | int(q.Bit(0))
		}
		zeros = found
	}
}
