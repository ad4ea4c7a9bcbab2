package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
)

const (
	delayStartBits = 128
	// delayLimitBits is the precision at which a value with dead time is given
	// up. An argument of the cosine near 2^1024 alone takes 1024 bits.
	delayLimitBits = 1 << 14
	// maxExponential bounds the argument of an exponential that balls see. A
	// rational part has far fewer bits than exp(maxExponential), so that
	// beyond it the exponential alone decides between 0 and overflow.
	maxExponential = 1 << 27
)

// delayed returns q·exp(−t·(x + y·i)), each component correctly rounded, for
// t > 0 and x + y·i ≠ 0.
//
// A component is exactly 0 only where y is 0 and that of q is 0: otherwise
// cos(t·y)·a + sin(t·y)·b with rational t·y ≠ 0 would vanish or be rational,
// which Lindemann's theorem (1882) rules out. It also rules out a component
// midway between two float64, so that the loop over precisions ends.
func (q *complexQuotient) delayed(t *big.Rat, x, y float64) (complex128, error) {
	if q.re.Sign() == 0 && q.im.Sign() == 0 {
		return 0, nil
	}
	growth := exactFloat(-x)
	growth.Mul(growth, t)
	angle := exactFloat(y)
	angle.Mul(angle, t)
	if g, _ := growth.Float64(); math.Abs(g) > maxExponential {
		if g < 0 {
			return 0, nil
		}
		return 0, fmt.Errorf("tf: value with a factor exp(%.4g): %w", g, fault.ErrRange)
	}
	component := func(imaginary bool) (float64, error) {
		if angle.Sign() == 0 && (imaginary && q.im.Sign() == 0 || !imaginary && q.re.Sign() == 0) {
			return 0, nil
		}
		return ball.Round(delayStartBits, delayLimitBits, func(prec uint) (ball.Real, error) {
			a, b := ball.FromInt(q.re).Round(prec), ball.FromInt(q.im).Round(prec)
			if angle.Sign() != 0 {
				phi := ball.FromRat(angle, prec)
				cos, sin := phi.Cos(prec), phi.Sin(prec)
				if imaginary {
					a, b = b, a.Neg()
				}
				a = a.Mul(cos, prec).Add(b.Mul(sin, prec), prec)
			} else if imaginary {
				a = b
			}
			e := ball.FromRat(growth, prec).Exp(prec)
			return a.Mul(e, prec).Div(ball.FromInt(q.below).Round(prec), prec).MulPow2(q.exponent), nil
		})
	}
	re, err := component(false)
	if err != nil {
		return 0, err
	}
	im, err := component(true)
	return complex(re, im), err
}

// exactFloat is x as a rational number.
func exactFloat(x float64) *big.Rat {
	r := new(big.Rat)
	r.SetFloat64(x)
	return r
}
