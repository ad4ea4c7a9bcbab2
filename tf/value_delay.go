package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
)

const (
	delayStartBits = 96
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
	// Both components come from the same ball, which is computed once for a
	// precision.
	var z ball.Complex
	var have uint
	at := func(prec uint) ball.Complex {
		if prec != have {
			z, have = q.turned(growth, angle, prec), prec
		}
		return z
	}
	re, err := ball.Round(delayStartBits, delayLimitBits, func(prec uint) (ball.Real, error) { return at(prec).Re, nil })
	if err != nil {
		return 0, err
	}
	im, err := ball.Round(delayStartBits, delayLimitBits, func(prec uint) (ball.Real, error) { return at(prec).Im, nil })
	return complex(re, im), err
}

// turned is q·exp(growth − angle·i). A component that is exactly 0 is 0 in the
// result.
func (q *complexQuotient) turned(growth, angle *big.Rat, prec uint) ball.Complex {
	re, im := ball.FromInt(q.re).Round(prec), ball.FromInt(q.im).Round(prec)
	if angle.Sign() != 0 {
		sin, cos := ball.FromRat(angle, prec).SinCos(prec)
		re, im = re.Mul(cos, prec).Add(im.Mul(sin, prec), prec), im.Mul(cos, prec).Sub(re.Mul(sin, prec), prec)
	}
	scale := ball.FromInt(q.below).Round(prec)
	if growth.Sign() != 0 {
		scale = scale.Mul(ball.FromRat(growth, prec).Neg().Exp(prec), prec)
	}
	return ball.NewComplex(re.Div(scale, prec).MulPow2(q.exponent), im.Div(scale, prec).MulPow2(q.exponent))
}

// exactFloat is x as a rational number.
func exactFloat(x float64) *big.Rat {
	r := new(big.Rat)
	r.SetFloat64(x)
	return r
}
