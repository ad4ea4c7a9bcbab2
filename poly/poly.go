// Package poly computes with polynomials whose coefficients are rational
// numbers, exactly.
package poly

import (
	"math/big"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/internal/ratpoly"
)

// The errors of this package; tf, units and lti return the same values.
var (
	ErrLimit          = fault.ErrLimit
	ErrRange          = fault.ErrRange
	ErrDivisionByZero = fault.ErrDivisionByZero
	ErrNotFinite      = fault.ErrNotFinite
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// Poly is a polynomial with rational coefficients. It is an immutable value,
// safe to share; the zero value is the polynomial 0.
type Poly ratpoly.Poly

// FromRats returns the polynomial with the given coefficients, ascending: the
// first is the constant term. The numbers are copied; nil reads as 0.
func FromRats(ascending ...*big.Rat) Poly { return Poly(ratpoly.FromRats(ascending...)) }

// FromInts returns the polynomial with the given coefficients, ascending.
func FromInts(ascending ...int64) Poly {
	return Poly(ratpoly.FromInteger(intpoly.FromInt64s(ascending...)))
}

// Degree is the degree of p, −1 for the polynomial 0.
func (p Poly) Degree() int { return ratpoly.Poly(p).Integer().Degree() }

// IsZero reports whether p is the polynomial 0.
func (p Poly) IsZero() bool { return ratpoly.Poly(p).Integer().IsZero() }

// Coefficient returns a copy of the coefficient of the power i; it is 0
// outside the range 0 … Degree.
func (p Poly) Coefficient(i int) *big.Rat { return ratpoly.Poly(p).Coefficient(i) }

// Add returns p + q.
func (p Poly) Add(q Poly) Poly { return Poly(ratpoly.Poly(p).Add(ratpoly.Poly(q))) }

// Sub returns p − q.
func (p Poly) Sub(q Poly) Poly { return Poly(ratpoly.Poly(p).Add(ratpoly.Poly(q).Neg())) }

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly { return Poly(ratpoly.Poly(p).Mul(ratpoly.Poly(q))) }

// Scale returns k·p; nil reads as 0.
func (p Poly) Scale(k *big.Rat) Poly {
	if k == nil {
		return Poly{}
	}
	return Poly(ratpoly.Poly(p).Scale(k))
}

// Equal reports whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool { return ratpoly.Poly(p).Equal(ratpoly.Poly(q)) }
