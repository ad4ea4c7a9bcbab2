package ball

import (
	"math"
	"math/big"
)

// Atan returns the arc tangent.
func (x Real) Atan(prec uint) Real {
	if !x.IsFinite() || x.IsZero() {
		return x
	}
	p := precision(prec)
	if x.rad.m != 0 && x.rad.exponent() > wide {
		lo, hi := FromFloat(x.Lower()).Atan(p), FromFloat(x.Upper()).Atan(p)
		return hull(lo.Lower(), hi.Upper(), p)
	}
	if x.mid == nil {
		return x
	}
	if x.rad.m == 0 {
		return atanPoint(x.mid, p)
	}
	// The derivative is at most 1/(1+l²) ≤ 1/max(1, l²), |x| ≥ l.
	spread, l := x.rad, x.least()
	if l.exponent() > 0 && l.m != 0 {
		spread = spread.div(l).div(l)
	}
	return atanPoint(x.mid, Real{rad: spread}.useful(prec)).widen(spread)
}

// atanPoint returns the arc tangent of m ≠ 0. With a = min(|m|, 1/|m|) and y the
// float64 arc tangent of a, it turns the point (1, a) back by y and takes the
// short series of what is left.
func atanPoint(m *big.Float, prec uint) Real {
	e := m.MantExp(nil)
	negative := m.Sign() < 0
	if 2*e < -int(prec)-2 { // |atan m - m| ≤ |m|³/3
		z, cut := roundFloat(m, prec)
		return settle(z, cut.add(magPow2(3*e-1)))
	}
	if e > int(prec)+4 { // π/2 - atan m is in 0…1/m
		z := Pi(prec).MulPow2(-1).widen(magPow2(1 - e))
		if negative {
			z = z.Neg()
		}
		return z
	}
	w := int(prec) + 12
	inverse := e > 0 && !(e == 1 && m.MinPrec() == 1) // |m| > 1
	if !inverse {
		w += max(0, -e)
	}
	a := toFixed(m, w)
	a.Abs(a)
	if inverse { // one unit for the quotient, one for the cut of m ≥ 1
		a = a.Quo(one(uint(2*w)), a)
	}
	r, err := atanNear(a, w)
	if inverse {
		r.Sub(piFixed(uint(w-1)), r)
		err += constantError
	}
	if negative {
		r.Neg(r)
	}
	return fixedBall(r, w, err, prec)
}

// atanNear returns atan a for 0 < a ≤ 1, given within 2 units of 2^-w, in these
// units, and its error. An error of err units in each of sine and cosine turns
// the direction by less than 2 err; the quotient costs a unit.
func atanNear(a *big.Int, w int) (*big.Int, uint64) {
	if a.BitLen() < w-nearOne {
		r, err := atanSeries(a, uint(w), -1)
		return r, err + 2
	}
	f, _ := new(big.Float).SetInt(a).Float64()
	if w > 900 {
		g := new(big.Float).SetInt(a)
		f, _ = g.SetMantExp(g, -w).Float64()
	} else {
		f = math.Ldexp(f, -w)
	}
	t := toFixed(big.NewFloat(atanApproximation(f)), w)
	s, c, scale, err := sinCosFixed(t, uint(w))
	s.Rsh(s, scale-uint(w))
	c.Rsh(c, scale-uint(w))
	num := new(big.Int).Mul(a, c)
	num.Sub(num, new(big.Int).Lsh(s, uint(w)))
	den := new(big.Int).Mul(a, s)
	den.Add(den, new(big.Int).Lsh(c, uint(w)))
	r, serr := atanSeries(quotient(num, den, w), uint(w), -1)
	return r.Add(r, t), 2*(err+1) + serr + 5
}

// atanApproximation returns atan a, 0 ≤ a ≤ 1, with an error below 2^-40, the
// same bits everywhere: every product is rounded by itself. Two halvings of
// the angle bring it below 0.2.
func atanApproximation(a float64) float64 {
	for range 2 {
		a /= 1 + math.Sqrt(1+float64(a*a))
	}
	square := float64(a * a)
	sum := 0.0
	for n := 17; n >= 1; n -= 2 {
		sum = 1/float64(n) - float64(sum*square)
	}
	return 4 * float64(a*sum)
}

// Atan2 returns the angle of the point (x, y) in (-π, π]. On the negative real
// axis it is π for y = 0. When the ball touches the cut without lying on it,
// the result is only -π…π; when it contains the origin, indeterminate.
func Atan2(y, x Real, prec uint) Real {
	sy, oky := y.Sign()
	sx, okx := x.Sign()
	prec = precision(prec)
	switch {
	case !x.IsFinite() || !y.IsFinite(), x.ContainsZero() && y.ContainsZero():
		return indeterminate
	case oky && sy == 0 && sx > 0:
		return Real{}
	case oky && sy == 0:
		return Pi(prec)
	case okx && sx != 0 && (!oky || magUp(y.mid).cmp(magUp(x.mid)) <= 0):
		z := y.Div(x, prec+4).Atan(prec + 4)
		if sx > 0 {
			return z.Round(prec)
		}
		if !oky {
			return Real{rad: magPow2(2)}
		}
		if sy > 0 {
			return z.Add(Pi(prec+4), prec)
		}
		return z.Sub(Pi(prec+4), prec)
	default: // y has a sign: ±π/2 - atan(x/y)
		quarter := Pi(prec + 4).MulPow2(-1)
		if sy < 0 {
			quarter = quarter.Neg()
		}
		return quarter.Sub(x.Div(y, prec+4).Atan(prec+4), prec)
	}
}
