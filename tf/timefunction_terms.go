package tf

import (
	"cmp"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/algebraic"
	"github.com/qofs/qofs/internal/ball"
)

// TimeTerm is t^Power·e^(Decay·t)·(Cosine·cos(Frequency·t) +
// Sine·sin(Frequency·t)), t counted from the end of the dead time. Each number
// is the exact one, correctly rounded; a Frequency of 0 leaves Cosine alone.
type TimeTerm struct {
	_         [0]func()
	Power     int
	Decay     float64 // 1/s; negative for a term that dies away
	Frequency float64 // rad/s, ≥ 0
	Cosine    float64
	Sine      float64

	root         *algebraic.Number
	rate         gaussian    // the pole where it is rational
	coefficients coefficient // Cosine − j·Sine
}

// Exact returns the numbers of the term that are known to be rational, and nil
// for the others.
func (t TimeTerm) Exact() (decay, frequency, cosine, sine *big.Rat) {
	sine = copied(t.coefficients.exact.im)
	if sine != nil {
		sine.Neg(sine)
	}
	return copied(t.rate.re), copied(t.rate.im), copied(t.coefficients.exact.re), sine
}

func copied(r *big.Rat) *big.Rat {
	if r == nil {
		return nil
	}
	return new(big.Rat).Set(r)
}

// Terms returns the terms of the function in a defined order: descending
// Decay, then ascending Frequency, then ascending Power. Terms that are 0 are
// left out, and so are the impulse and the dead time, which Impulse and
// DeadTime tell. The error is ErrRange where a coefficient does not fit a
// float64, and ErrLimit where its digits stay undecided.
func (f TimeFunction) Terms() ([]TimeTerm, error) {
	if f.e == nil {
		return nil, nil
	}
	factors, err := f.e.factorize()
	if err != nil {
		return nil, err
	}
	var out []TimeTerm
	for _, factor := range factors {
		for i := 0; i < len(factor.roots); i++ {
			x := factor.roots[i]
			scale := overFactorial(1)
			if !x.IsReal() {
				i++ // the conjugate follows; a pair is twice its real part
				scale = overFactorial(2)
			}
			c, err := f.e.coefficients(factor, x, scale)
			if err != nil {
				return nil, err
			}
			for k, v := range c {
				if v.value != 0 {
					out = append(out, TimeTerm{Power: k,
						Decay: real(x.Value()), Frequency: imag(x.Value()),
						Cosine: real(v.value), Sine: 0 - imag(v.value),
						root: x, rate: factor.exactRoot(x), coefficients: v})
				}
			}
		}
	}
	slices.SortStableFunc(out, func(a, b TimeTerm) int {
		return cmp.Or(cmp.Compare(b.Decay, a.Decay), cmp.Compare(a.Frequency, b.Frequency), cmp.Compare(a.Power, b.Power))
	})
	return out, nil
}

// overFactorial returns the scale n/k!.
func overFactorial(n int64) func(k int) *big.Rat {
	return func(k int) *big.Rat {
		return new(big.Rat).SetFrac(big.NewInt(n), new(big.Int).MulRange(1, int64(k)))
	}
}

// figure is a real number to be printed: exact, or enclosed by balls.
type figure struct {
	exact   *big.Rat
	value   float64
	enclose func(prec uint) (ball.Real, error)
}

func (t TimeTerm) decay() figure {
	return figure{t.rate.re, t.Decay, func(prec uint) (ball.Real, error) {
		z, err := enclosure(t.root, prec)
		return z.Re, err
	}}
}

func (t TimeTerm) frequency() figure {
	return figure{t.rate.im, t.Frequency, func(prec uint) (ball.Real, error) {
		z, err := enclosure(t.root, prec)
		return z.Im, err
	}}
}

func (t TimeTerm) cosine() figure { return t.coefficients.real(t.Cosine) }

func (t TimeTerm) sine() figure { return t.coefficients.imaginary(t.Sine).neg() }

func (c coefficient) real(value float64) figure {
	return figure{c.exact.re, value, func(prec uint) (ball.Real, error) {
		z, err := c.enclose(prec)
		return z.Re, err
	}}
}

func (c coefficient) imaginary(value float64) figure {
	return figure{c.exact.im, value, func(prec uint) (ball.Real, error) {
		z, err := c.enclose(prec)
		return z.Im, err
	}}
}

// neg returns −f with the value that f already has for the result.
func (f figure) neg() figure {
	g := figure{value: f.value, enclose: func(prec uint) (ball.Real, error) {
		z, err := f.enclose(prec)
		return z.Neg(), err
	}}
	if f.exact != nil {
		g.exact = new(big.Rat).Neg(f.exact)
	}
	return g
}
