package ball

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
)

// Float64 returns the float64 nearest to the number that x stands for (ties to
// even, subnormals included); ok is false when x does not decide it or when it
// overflows (see [Real.IsBeyondRange]). What rounds to zero from either side
// gives +0, so that the result does not depend on a sign that is never seen.
func (x Real) Float64() (v float64, ok bool) {
	if !x.IsFinite() {
		return 0, false
	}
	if x.rad.m == 0 {
		if x.mid == nil {
			return 0, true
		}
		v, _ = x.mid.Float64()
		return v + 0, !math.IsInf(v, 0)
	}
	if v, ok = x.clearFloat64(); ok {
		return v, true
	}
	lo, hi := x.ends()
	return hi + 0, lo == hi && !math.IsInf(lo, 0)
}

// clearFloat64 decides the common case without forming the ends: v, the
// float64 nearest to the midpoint, is neither near the ends of the exponent
// range nor a power of two (below which the neighbours are closer), and the
// whole ball is strictly within half a unit of the last place around it.
func (x Real) clearFloat64() (v float64, ok bool) {
	if x.mid == nil {
		return 0, false
	}
	v, _ = x.mid.Float64()
	f, e := math.Frexp(v)
	if v == 0 || e < -900 || e > 1000 || f == 0.5 || f == -0.5 || x.rad.exponent() > e-54 {
		return 0, false
	}
	rest := new(big.Float).SetPrec(64).SetMode(big.AwayFromZero)
	rest.Sub(x.mid, new(big.Float).SetFloat64(v))
	return v, magUp(rest).add(x.rad).cmp(magPow2(e-54)) < 0
}

func (x Real) ends() (lo, hi float64) {
	lo, _ = x.Lower().Float64()
	hi, _ = x.Upper().Float64()
	return lo, hi
}

// IsBeyondRange reports whether every point of x overflows a float64, that is,
// has a magnitude of at least 2^1024 - 2^970.
func (x Real) IsBeyondRange() bool {
	if !x.IsFinite() {
		return false
	}
	lo, hi := x.ends()
	return lo == hi && math.IsInf(lo, 0)
}

// Round runs f at start, 2·start, 4·start, … up to limit bits until the ball
// that it returns decides a float64, which is the correctly rounded result. It
// passes on an error of f and returns fault.ErrRange on overflow and
// fault.ErrLimit when limit bits do not suffice.
func Round(start, limit uint, f func(prec uint) (Real, error)) (float64, error) {
	for prec := max(start, minPrecision); ; prec *= 2 {
		prec = min(prec, max(limit, minPrecision))
		x, err := f(prec)
		if err != nil {
			return 0, err
		}
		if v, ok := x.Float64(); ok {
			return v, nil
		}
		if x.IsBeyondRange() {
			return 0, fmt.Errorf("%w: about %v", fault.ErrRange, x)
		}
		if prec >= limit {
			return 0, fmt.Errorf("%w: %d bits do not decide the rounding of %v", fault.ErrLimit, prec, x)
		}
	}
}
