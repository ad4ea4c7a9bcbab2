package ball

import (
	"math/big"
	"math/bits"
)

func bitLen(k uint64) int { return bits.Len64(k) }

// toFixed returns x·2^w cut to an integer (towards zero), w of any sign.
func toFixed(x *big.Float, w int) *big.Int {
	n, _ := new(big.Float).SetMantExp(x, w).Int(nil)
	return n
}

// fromFixed returns n·2^-w rounded to prec bits, and a bound of the error.
func fromFixed(n *big.Int, w int, prec uint) (*big.Float, mag) {
	if n.Sign() == 0 {
		return nil, mag{}
	}
	z := new(big.Float).SetPrec(prec).SetInt(n)
	acc := z.Acc()
	z.SetMantExp(z, -w)
	if acc == big.Exact {
		return z, mag{}
	}
	return z, magPow2(z.MantExp(nil) - int(prec) - 1)
}

// fixedBall returns the ball around n·2^-w with the radius ulps·2^-w.
func fixedBall(n *big.Int, w int, ulps uint64, prec uint) Real {
	z, err := fromFixed(n, w, prec)
	return settle(z, err.add(makeMag(ulps, -int64(w))))
}

// one returns 2^w.
func one(w uint) *big.Int { return new(big.Int).Lsh(big.NewInt(1), w) }

// halvings returns how often an argument is halved before a Taylor series at w
// bits: about as many as half the terms that remain.
func halvings(w uint) uint {
	return uint(new(big.Int).Sqrt(big.NewInt(int64(w))).Int64()) * 3 / 4
}

// expFixed returns e^t for t·2^w = T, 0 ≤ t < 1, as s·2^-scale. The relative
// error of s is at most err·2^-w.
//
// The series runs in r = t/2^h = T·2^-(w+h), so that nothing is lost by the
// division, at the scale w+h: every term costs at most two units, the tail less
// than four. h squarings double the relative error each and add a unit:
// 2^h (2N+5) units of 2^-(w+h).
func expFixed(t *big.Int, w uint) (s *big.Int, scale uint, err uint64) {
	h := halvings(w)
	if small := int(w) - t.BitLen(); small > 0 {
		h = uint(max(0, int(h)-small))
	}
	scale = w + h
	s = one(scale)
	term := new(big.Int).Set(s)
	tmp, div := new(big.Int), new(big.Int)
	n := uint64(0)
	for term.Sign() != 0 {
		n++
		tmp.Mul(term, t)
		tmp.Rsh(tmp, scale)
		term.Quo(tmp, div.SetUint64(n))
		s.Add(s, term)
	}
	for range h {
		tmp.Mul(s, s)
		s.Rsh(tmp, scale)
	}
	return s, scale, 2*n + 6
}

// sinCosFixed returns sin t and cos t for t·2^w = T, 0 ≤ t ≤ 0.8, as integers
// of the returned scale. The absolute errors are at most err·2^-w.
//
// With u = 1 - cos: the series for r = t/2^h has errors of at most D = 2N+6
// units of 2^-scale. Doubling, s' = 2s(1-u) and u' = 2s², turns a common bound
// D into 2(1+s)D + 2; the product of (1+s) over all steps is below e^0.8 < 2.3,
// which leaves 2^h·2.3(D+2).
func sinCosFixed(t *big.Int, w uint) (sin, cos *big.Int, scale uint, err uint64) {
	h := halvings(w) * 3 / 4
	if small := int(w) - t.BitLen(); small > 0 {
		h = uint(max(0, int(h)-small))
	}
	scale = w + h
	sin, u := new(big.Int), new(big.Int)
	term := one(scale)
	tmp, div := new(big.Int), new(big.Int)
	n := uint64(0)
	for {
		n++
		tmp.Mul(term, t)
		tmp.Rsh(tmp, scale)
		term.Quo(tmp, div.SetUint64(n))
		if term.Sign() == 0 {
			break
		}
		switch n & 3 { // sin = r - r³/6 + …, u = r²/2 - r⁴/24 + …
		case 1:
			sin.Add(sin, term)
		case 2:
			u.Add(u, term)
		case 3:
			sin.Sub(sin, term)
		case 0:
			u.Sub(u, term)
		}
	}
	unit := one(scale)
	cos = new(big.Int)
	for range h {
		cos.Sub(unit, u)
		tmp.Mul(sin, sin)
		u.Rsh(tmp, scale-1)
		tmp.Mul(sin, cos)
		sin.Rsh(tmp, scale-1)
	}
	cos.Sub(unit, u)
	return sin, cos, scale, 5*n + 20
}

// atanSeries returns Σ sign^j q^(2j+1)/(2j+1) for q = Q·2^-w, |q| < 2^-8, in
// units of 2^-w: the arc tangent for sign = -1, the inverse hyperbolic tangent
// for +1. The error is at most err units, apart from that of q.
//
// q² and its powers are below 2^-16, so that cutting costs each power less than
// two units and each quotient one more; the tail is below three.
func atanSeries(q *big.Int, w uint, sign int) (sum *big.Int, err uint64) {
	a := new(big.Int).Abs(q)
	square := new(big.Int).Mul(a, a)
	square.Rsh(square, w)
	sum = new(big.Int).Set(a)
	tmp, div := new(big.Int), new(big.Int)
	n := uint64(0)
	for {
		n++
		tmp.Mul(a, square)
		a.Rsh(tmp, w)
		if a.Sign() == 0 {
			break
		}
		tmp.Quo(a, div.SetUint64(2*n+1))
		if sign < 0 && n&1 != 0 {
			sum.Sub(sum, tmp)
		} else {
			sum.Add(sum, tmp)
		}
	}
	if q.Sign() < 0 {
		sum.Neg(sum)
	}
	return sum, 3*n + 4
}
