package ball

import "math/big"

// roundFloat rounds x (nil is 0) to prec bits and bounds the error.
func roundFloat(x *big.Float, prec uint) (*big.Float, mag) {
	if x == nil || x.Prec() <= prec {
		return x, mag{}
	}
	z := new(big.Float).SetPrec(prec).Set(x)
	return z, roundingError(z)
}

// roundingError bounds the error of the operation that made z: half a unit in
// its last place, nothing if the operation was exact.
func roundingError(z *big.Float) mag {
	if z.Acc() == big.Exact {
		return mag{}
	}
	return magPow2(z.MantExp(nil) - int(z.Prec()) - 1)
}

// addFloat returns x+y rounded to prec bits, and a bound of the error.
func addFloat(x, y *big.Float, prec uint) (*big.Float, mag) {
	if x == nil {
		return roundFloat(y, prec)
	}
	if y == nil {
		return roundFloat(x, prec)
	}
	ex, ey := x.MantExp(nil), y.MantExp(nil)
	if ex < ey {
		x, y, ex, ey = y, x, ey, ex
	}
	// An addition aligns its operands over the whole gap between them. Beyond
	// the last place of the result the smaller one only widens the ball.
	if ex-ey > int(prec)+2 {
		z, err := roundFloat(x, prec)
		return z, err.add(magPow2(ey))
	}
	z := new(big.Float).SetPrec(prec).Add(x, y)
	return z, roundingError(z)
}

// Round returns a ball that contains x and whose midpoint has at most prec bits.
func (x Real) Round(prec uint) Real {
	m, err := roundFloat(x.mid, precision(prec))
	return settle(m, x.rad.add(err))
}

// Add returns x + y.
func (x Real) Add(y Real, prec uint) Real {
	if !x.IsFinite() || !y.IsFinite() {
		return indeterminate
	}
	m, err := addFloat(x.mid, y.mid, precision(prec))
	return settle(m, x.rad.add(y.rad).add(err))
}

// Sub returns x - y.
func (x Real) Sub(y Real, prec uint) Real { return x.Add(y.Neg(), prec) }

// Neg returns -x.
func (x Real) Neg() Real {
	if x.mid == nil {
		return x
	}
	return Real{mid: new(big.Float).Neg(x.mid), rad: x.rad}
}

// Abs returns |x|.
func (x Real) Abs() Real {
	if !x.IsFinite() {
		return x
	}
	if s, ok := x.Sign(); ok {
		if s < 0 {
			return x.Neg()
		}
		return x
	}
	return hull(new(big.Float), makeUpper(x), 64)
}

// makeUpper bounds |x| from above.
func makeUpper(x Real) *big.Float { return magUp(x.mid).add(x.rad).float() }

// hull returns a ball that contains lower…upper (finite, lower ≤ upper).
func hull(lower, upper *big.Float, prec uint) Real {
	lo, hi := FromFloat(lower), FromFloat(upper)
	if !lo.IsFinite() || !hi.IsFinite() {
		return indeterminate
	}
	sum := lo.Add(hi, prec)
	half := hi.Sub(lo, 64)
	r := magUp(half.mid).add(half.rad).mulPow2(-1)
	return sum.MulPow2(-1).widen(r)
}

// widen adds r to the radius.
func (x Real) widen(r mag) Real { return settle(x.mid, x.rad.add(r)) }

// MulPow2 returns x·2^k exactly.
func (x Real) MulPow2(k int) Real {
	if !x.IsFinite() {
		return x
	}
	const most = 2*maxExponent + 2 // turns any midpoint out of its range
	k = min(max(k, -most), most)
	rad := x.rad.mulPow2(k)
	if x.mid == nil {
		return settle(nil, rad)
	}
	if e := x.mid.MantExp(nil) + k; e > maxExponent {
		return indeterminate
	} else if e < -maxExponent {
		return settle(nil, rad.add(magPow2(e)))
	}
	return settle(new(big.Float).SetMantExp(x.mid, k), rad)
}

// Mul returns x·y; exactly 0 when a factor is.
func (x Real) Mul(y Real, prec uint) Real {
	if !x.IsFinite() || !y.IsFinite() {
		return indeterminate
	}
	var rad mag // |(x+d)(y+e) - xy| ≤ |x||e| + |y||d| + |d||e|
	if x.rad.m != 0 || y.rad.m != 0 {
		rad = magUp(x.mid).mul(y.rad).add(magUp(y.mid).mul(x.rad)).add(x.rad.mul(y.rad))
	}
	if x.mid == nil || y.mid == nil {
		return settle(nil, rad)
	}
	z := new(big.Float).SetPrec(precision(prec)).Mul(x.mid, y.mid)
	return settle(z, rad.add(roundingError(z)))
}

// Sqr returns x², never below 0 by more than the rounding: tighter than
// x.Mul(x) when x may be zero.
func (x Real) Sqr(prec uint) Real {
	if _, ok := x.Sign(); ok || !x.IsFinite() {
		return x.Mul(x, prec)
	}
	a := x.Abs()
	up := magUp(a.mid).add(a.rad)
	return hull(new(big.Float), up.mul(up).float(), 64)
}

// Div returns x/y, indeterminate when y contains 0.
func (x Real) Div(y Real, prec uint) Real {
	if !x.IsFinite() || y.ContainsZero() {
		return indeterminate
	}
	if x.IsZero() {
		return x
	}
	z, rad := x.mid, mag{}
	if z != nil {
		z = new(big.Float).SetPrec(precision(prec)).Quo(x.mid, y.mid)
		rad = roundingError(z)
	}
	if x.rad.m != 0 || y.rad.m != 0 {
		// With q = x/y: |(x+d)/(y+e) - q| = |d - q e|/|y+e| ≤ (|d| + |q||e|)/(|y| - |e|).
		// |q| is below magUp(z) plus its rounding error.
		least := y.least()
		rad = rad.add(x.rad.add(magUp(z).add(rad).mul(y.rad)).div(least))
	}
	return settle(z, rad)
}

// least returns a lower bound of |x|, 0 if x contains 0. When the radius is
// nearly the whole midpoint it takes the exact difference.
func (x Real) least() mag {
	if !x.IsFinite() || x.mid == nil {
		return mag{}
	}
	down := magDown(x.mid)
	if x.rad.m == 0 || x.rad.mulPow2(8).cmp(down) < 0 {
		return down.subDown(x.rad)
	}
	d := new(big.Float).Abs(x.mid)
	if d.Cmp(x.rad.float()) <= 0 {
		return mag{}
	}
	// Here the exponents differ by a few bits: the difference is exact.
	d.SetPrec(d.Prec()+64).Sub(d, x.rad.float())
	return magDown(d)
}

// Inv returns 1/x.
func (x Real) Inv(prec uint) Real { return FromInt64(1).Div(x, prec) }

// PowInt returns x^n by repeated squaring (x^0 is 1; a negative power of a
// ball that contains 0 is indeterminate). The midpoint carries enough guard
// bits that the rounding of a long chain stays near the last place.
func (x Real) PowInt(n int, prec uint) Real {
	if !x.IsFinite() {
		return x
	}
	prec = precision(prec)
	k := uint64(n)
	if n < 0 {
		k = -k
	}
	if k == 0 {
		return FromInt64(1)
	}
	work := prec + 2*uint(bitLen(k)) + 4
	z := x.powUint(k, work)
	if n < 0 {
		return z.Inv(prec)
	}
	return z.Round(prec)
}

func (x Real) powUint(k uint64, work uint) Real {
	z := x
	for i := bitLen(k) - 2; i >= 0; i-- {
		z = z.Sqr(work)
		if k>>i&1 != 0 {
			z = z.Mul(x, work)
		}
		if !z.IsFinite() {
			return indeterminate
		}
	}
	return z
}

// Sqrt returns the square root; x must not reach below 0 (else indeterminate).
// A perfect square that fits is exact.
func (x Real) Sqrt(prec uint) Real {
	if x.IsZero() {
		return x
	}
	if s, ok := x.Sign(); ok && s > 0 {
		return x.sqrtPositive(precision(prec))
	}
	if x.IsFinite() && x.Lower().Sign() >= 0 {
		return x.sqrtClipped(prec)
	}
	return indeterminate
}

// sqrtClipped returns the square root of the non-negative part of x.
func (x Real) sqrtClipped(prec uint) Real {
	if s, ok := x.Sign(); ok && s >= 0 || !x.IsFinite() {
		return x.Sqrt(prec)
	}
	top := FromFloat(makeUpper(x))
	if !top.IsFinite() || top.mid == nil {
		return top
	}
	return hull(new(big.Float), makeUpper(top.sqrtPositive(64)), 64)
}

func (x Real) sqrtPositive(prec uint) Real {
	s, err := sqrtFloat(x.mid, prec)
	if x.rad.m == 0 {
		return settle(s, err)
	}
	low := magDown(x.mid)
	ratio := x.rad.div(low) // ρ = r/m
	if ratio.cmp(magPow2(-4)) > 0 {
		lo, loErr := sqrtFloat(x.Lower(), prec)
		hi, hiErr := sqrtFloat(x.Upper(), prec)
		return hull(settle(lo, loErr).Lower(), settle(hi, hiErr).Upper(), prec)
	}
	// |√(m+d) - √m| = |d|/(√(m+d) + √m) ≤ r/(√m (√(1-ρ) + 1)), and for ρ ≤ 1/16
	// √(1-ρ) ≥ 1-ρ and 1/(2-ρ) ≤ (1+ρ)/2.
	root := magDown(s).subDown(err)
	rad := x.rad.div(root).mulPow2(-1).mul(magPow2(0).add(ratio))
	return settle(s, rad.add(err))
}

// sqrtFloat returns √x for x > 0 (x ≤ 0 gives nil) and a bound of the error,
// taken from the residual: |s - √x| = |s² - x|/(s + √x) ≤ |s² - x|/s. It asks
// nothing of how s was found.
func sqrtFloat(x *big.Float, prec uint) (*big.Float, mag) {
	if x.Sign() <= 0 {
		return nil, mag{}
	}
	s := new(big.Float).SetPrec(prec).Sqrt(x)
	square := new(big.Float).SetPrec(2*prec).Mul(s, s) // exact
	rest := new(big.Float).SetPrec(64).SetMode(big.AwayFromZero).Sub(square, x)
	return s, magUp(rest).div(magDown(s))
}
