package tf

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
)

// MaxPadeDegree bounds the degree of PadeApproximant.
const MaxPadeDegree = 128

// WithoutDeadTime returns the rational part of g.
func (g Continuous) WithoutDeadTime() Continuous {
	g.c.delay = nil
	return g
}

// PadeApproximant returns g with its dead time T replaced by the Padé
// approximant of exp(−T s) of degree n above and below,
//
//	Σ c_k (−T s)^k / Σ c_k (T s)^k,  c_k = (2n−k)! n! / ((2n)! k! (n−k)!),
//
// with exact coefficients. Its Taylor series at s = 0 agrees with that of
// exp(−T s) up to s^(2n); its magnitude on the imaginary axis is exactly 1, and
// all its poles lie in the open left half-plane. A g without dead time comes
// back as it is, and so does its rational part for n = 0. The error is ErrLimit
// for n < 0 or above MaxPadeDegree.
//
// Source: H. Padé, Annales scientifiques de l'École Normale Supérieure 9
// (1892), supplement; the closed form is common practice.
func (g Continuous) PadeApproximant(n int) (Continuous, error) {
	if n < 0 || n > MaxPadeDegree {
		return Continuous{}, fmt.Errorf("tf: degree %d of a Padé approximant, want 0 to %d: %w", n, MaxPadeDegree, fault.ErrLimit)
	}
	c := g.c
	if c.delay != nil {
		c.f = c.f.Mul(pade(c.delay, n))
		c.delay = nil
	}
	return Continuous{c: c}, nil
}

// pade is the Padé approximant of exp(−t s) of degree n, t > 0.
func pade(t *big.Rat, n int) ratfun.Func {
	above, below := make([]*big.Rat, n+1), make([]*big.Rat, n+1)
	c := big.NewRat(1, 1) // c_k t^k
	for k := range n + 1 {
		below[k] = new(big.Rat).Set(c)
		above[k] = new(big.Rat).Set(c)
		if k%2 == 1 {
			above[k].Neg(c)
		}
		// c_(k+1)/c_k = (n−k)/((2n−k)(k+1))
		c.Mul(c, big.NewRat(int64(n-k), max(1, int64(2*n-k)*int64(k+1))))
		c.Mul(c, t)
	}
	num, den := ratpoly.FromRats(above...), ratpoly.FromRats(below...)
	f, ok := ratfun.New(num.Integer().MulInt(den.Denominator()), den.Integer().MulInt(num.Denominator()))
	if !ok { // the constant term below is 1
		return unity
	}
	return f
}
