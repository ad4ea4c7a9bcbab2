package ball

import "math/big"

// Log returns the natural logarithm, indeterminate unless x is positive.
func (x Real) Log(prec uint) Real {
	if s, ok := x.Sign(); !ok || s <= 0 {
		return indeterminate
	}
	if x.rad.m == 0 {
		return logPoint(x.mid, precision(prec))
	}
	// |log(m+d) - log m| ≤ r/(m-r).
	spread := x.rad.div(x.least())
	if spread.exponent() > wide {
		lo, hi := x.Lower(), x.Upper()
		if lo.Sign() <= 0 { // positive by less than Lower resolves
			return indeterminate
		}
		p := precision(prec)
		return hull(logPoint(lo, p).Lower(), logPoint(hi, p).Upper(), p)
	}
	return logPoint(x.mid, Real{rad: spread}.useful(prec)).widen(spread)
}

// nearOne: an argument within 2^-nearOne of the centre of a series needs no
// further reduction.
const nearOne = 24

// logPoint returns log m for m > 0. With m = f·2^k, f about 1, and y the
// float64 logarithm of f, log m = k log 2 + y + log(f e^-y), and the last
// logarithm, of a number within 2^-40 of one, is a short artanh series.
func logPoint(m *big.Float, prec uint) Real {
	half, k, _ := split(m)
	if half < 0.7071 {
		k--
	}
	f := new(big.Float).SetMantExp(m, -k)
	z := new(big.Float).SetPrec(f.Prec()+2).Sub(f, big.NewFloat(1)) // exact
	w := int(prec) + 12
	var r *big.Int
	err := uint64(4)
	switch e := z.MantExp(nil); {
	case z.Sign() == 0:
		if k == 0 {
			return Real{}
		}
		r = new(big.Int)
	case k == 0 && e < -int(prec)-2: // |log(1+z) - z| ≤ z²
		mid, cut := roundFloat(z, prec)
		return settle(mid, cut.add(magPow2(2*e)))
	case e < -nearOne:
		if k == 0 {
			w -= e
		}
		// log(1+z) = 2 artanh(z/(2+z)); one unit for z, one for the quotient.
		zf := toFixed(z, w)
		s, serr := atanSeries(quotient(zf, new(big.Int).Add(one(uint(w)+1), zf), w), uint(w), 1)
		r, err = s.Lsh(s, 1), err+2*serr+4
	default:
		if k == 0 {
			w += max(0, -e)
		}
		r, err = logNear(f, w)
	}
	if k != 0 {
		guard := bitLen(uint64(max(k, -k))) + 1
		l := log2Fixed(uint(w + guard))
		l.Mul(l, big.NewInt(int64(k)))
		r.Add(r, l.Rsh(l, uint(guard)))
		err += 2 // constantError·|k| units of 2^-(w+guard), and the shift
	}
	return fixedBall(r, w, err, prec)
}

// quotient returns a/b in units of 2^-w, cut towards zero.
func quotient(a, b *big.Int, w int) *big.Int {
	q := new(big.Int).Lsh(a, uint(w))
	return q.Quo(q, b)
}

// logNear returns log f for 0.7 < f < 1.42 in units of 2^-w, w ≥ 20, and its
// error in them. With E = e^|y|, log f is |y| + log(f/E) or -|y| + log(f·E).
// The relative errors of f (1.42 units), E (its own and 1), f·E (1.1) and the
// quotient (1, doubled) add up; y is exact, being what was cut to w bits.
func logNear(f *big.Float, w int) (*big.Int, uint64) {
	v, _ := f.Float64()
	y := logApproximation(v)
	if y == 0 {
		y = 0x1p-60
	}
	a, b := toFixed(f, w), one(uint(w))
	t := toFixed(big.NewFloat(max(y, -y)), w)
	s, scale, err := expFixed(t, uint(w))
	s.Rsh(s, scale-uint(w))
	if y > 0 {
		b = s
	} else {
		a.Rsh(a.Mul(a, s), uint(w))
		t.Neg(t)
	}
	num, den := new(big.Int).Sub(a, b), new(big.Int).Add(a, b)
	r, serr := atanSeries(quotient(num, den, w), uint(w), 1)
	r.Lsh(r, 1)
	return r.Add(r, t), err + 2*serr + 12
}

// logApproximation returns log f, 0.7 < f < 1.42, with an error below 2^-40,
// the same bits everywhere: every product is rounded by itself.
func logApproximation(f float64) float64 {
	s := (f - 1) / (f + 1)
	square := float64(s * s)
	sum := 0.0
	for n := 17; n >= 1; n -= 2 {
		sum = float64(sum*square) + 1/float64(n)
	}
	return float64(2 * float64(s*sum))
}
