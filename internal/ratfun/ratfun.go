// Package ratfun holds the rational function that Continuous and Discrete
// transfer functions share.
//
// A Func is a quotient of two integer polynomials with no common integer
// factor and a denominator with a positive leading coefficient. Polynomial
// factors that numerator and denominator have in common stay until LowestTerms
// is asked to remove them. The zero value is 0/1.
package ratfun

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// Func is a quotient of two integer polynomials. It is immutable.
type Func struct {
	_        [0]func()
	num, den intpoly.Poly // den zero stands for 1
}

// New returns num/den without cancelling; ok is false where den is 0.
func New(num, den intpoly.Poly) (f Func, ok bool) {
	if den.IsZero() {
		return Func{}, false
	}
	if num.IsZero() {
		_, den = den.Primitive()
		return Func{den: den}, true
	}
	g := new(big.Int).GCD(nil, nil, num.Content(), den.Content())
	if den.Leading().Sign() < 0 {
		g.Neg(g)
	}
	return Func{num: num.QuoInt(g), den: den.QuoInt(g)}, true
}

func must(num, den intpoly.Poly) Func { f, _ := New(num, den); return f }

// Num returns the numerator.
func (f Func) Num() intpoly.Poly { return f.num }

// Den returns the denominator; it is never 0.
func (f Func) Den() intpoly.Poly {
	if f.den.IsZero() {
		return intpoly.FromInt64s(1)
	}
	return f.den
}

// IsZero reports whether f is 0.
func (f Func) IsZero() bool { return f.num.IsZero() }

// Mul returns f·g.
func (f Func) Mul(g Func) Func { return must(f.num.Mul(g.num), f.Den().Mul(g.Den())) }

// Add returns f + g over the product of the denominators, even where they are
// equal: two parallel blocks with the same poles hold each pole twice.
func (f Func) Add(g Func) Func {
	return must(f.num.Mul(g.Den()).Add(g.num.Mul(f.Den())), f.Den().Mul(g.Den()))
}

// Neg returns −f.
func (f Func) Neg() Func { return Func{num: f.num.Neg(), den: f.den} }

// Scale returns k·f.
func (f Func) Scale(k *big.Rat) Func {
	return must(f.num.MulInt(k.Num()), f.Den().MulInt(k.Denom()))
}

// Inverse returns 1/f; ok is false where f is 0.
func (f Func) Inverse() (Func, bool) { return New(f.Den(), f.num) }

// Feedback returns f/(1 + sign·f·g), sign = ±1: the loop with f forward and g
// back. ok is false where 1 + sign·f·g is 0.
func (f Func) Feedback(g Func, sign int) (Func, bool) {
	num := f.num.Mul(g.Den())
	loop := f.num.Mul(g.num)
	if sign < 0 {
		loop = loop.Neg()
	}
	return New(num, f.Den().Mul(g.Den()).Add(loop))
}

// LowestTerms returns f with its common polynomial factor removed, and that
// factor: primitive, with a positive leading coefficient.
func (f Func) LowestTerms() (Func, intpoly.Poly) {
	g := f.num.GCD(f.Den())
	if g.IsOne() {
		return f, g
	}
	num, _ := f.num.QuoExact(g)
	den, _ := f.Den().QuoExact(g)
	return must(num, den), g
}

// Equal reports whether f and g have the same numerator and denominator.
func (f Func) Equal(g Func) bool { return f.num.Equal(g.num) && f.Den().Equal(g.Den()) }

// Equivalent reports whether f and g are the same function.
func (f Func) Equivalent(g Func) bool { return f.num.Mul(g.Den()).Equal(g.num.Mul(f.Den())) }
