// Package poly computes with polynomials whose coefficients are rational
// numbers, exactly.
//
// A Poly is an immutable value, safe to share between goroutines; its zero
// value is the polynomial 0. Coefficients ascend: the first one is the constant
// term. A *big.Rat is copied on the way in and out, and nil reads as 0. There
// is no tolerance anywhere: two polynomials have a common factor or they have
// none, a root is double or it is not.
//
//	p := poly.MustParse("0.02 s^2 + 0.4 s + 9")
//	roots, err := p.Roots()
package poly

import (
	"math"
	"math/big"
	"math/bits"
	"strconv"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/internal/ratpoly"
)

// The errors of this package that are plain values; units, tf and lti return
// the same ones.
var (
	ErrLimit          = fault.ErrLimit          // a documented bound on size or work was reached
	ErrRange          = fault.ErrRange          // a result does not fit a float64
	ErrDivisionByZero = fault.ErrDivisionByZero // a division by the number or polynomial 0
	ErrNotFinite      = fault.ErrNotFinite      // a NaN or an infinity where a number is needed
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// Poly is a polynomial with rational coefficients. It is an immutable value,
// safe to share; the zero value is the polynomial 0.
//
// Sums and products cannot fail, and yet no polynomial grows without bound: over
// their common denominator the coefficients take at most 2^21 words of 64 bits
// (terms times the words of the longest), and neither a coefficient nor the
// denominator is longer than 2^19 bits. What would take more is not formed. As
// arithmetic with float64 goes on with an infinity, it goes on here with a value
// that has no coefficients and tells by Err: results that it enters have the
// error too, and every function that can fail returns it, tf.New among them.
type Poly ratpoly.Poly

// Err is nil for a polynomial, and wraps ErrLimit for the value that stands for
// one which would have passed the bounds of Poly. A program whose numbers come
// from an untrusted source asks it once, at the end of a calculation, unless that
// ends in a function that returns an error.
func (p Poly) Err() error { return p.rational().Err() }

// FromRats returns the polynomial with the given coefficients, ascending: the
// first is the constant term. The numbers are copied; nil reads as 0.
func FromRats(ascending ...*big.Rat) Poly { return Poly(ratpoly.FromRats(ascending...)) }

// FromInts returns the polynomial with the given coefficients, ascending.
func FromInts(ascending ...int64) Poly {
	return Poly(ratpoly.FromInteger(intpoly.FromInt64s(ascending...)))
}

// FromFloats returns the polynomial with the given coefficients, ascending,
// each read as the binary number that it is: 0.1 is
// 3602879701896397/2^55. The error is ErrNotFinite for a NaN or an infinity.
func FromFloats(ascending ...float64) (Poly, error) {
	return fromFloats(ascending, func(x float64) *big.Rat { return new(big.Rat).SetFloat64(x) })
}

// FromDecimals returns the polynomial with the given coefficients, ascending,
// each read as the shortest decimal that rounds to it: 0.1 is 1/10, as a data
// sheet means it. The error is ErrNotFinite for a NaN or an infinity.
func FromDecimals(ascending ...float64) (Poly, error) {
	return fromFloats(ascending, func(x float64) *big.Rat {
		r, _ := new(big.Rat).SetString(strconv.FormatFloat(x, 'g', -1, 64))
		return r
	})
}

func fromFloats(ascending []float64, read func(float64) *big.Rat) (Poly, error) {
	c := make([]*big.Rat, len(ascending))
	for i, x := range ascending {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return Poly{}, ErrNotFinite
		}
		c[i] = read(x)
	}
	return FromRats(c...), nil
}

// rational and integer reach the representation.
func (p Poly) rational() ratpoly.Poly { return ratpoly.Poly(p) }
func (p Poly) integer() intpoly.Poly  { return ratpoly.Poly(p).Integer() }

func fromInteger(p intpoly.Poly) Poly { return Poly(ratpoly.FromInteger(p)) }

// Degree is the degree of p, −1 for the polynomial 0 and where Err is not nil.
func (p Poly) Degree() int { return p.integer().Degree() }

// IsZero reports whether p is the polynomial 0.
func (p Poly) IsZero() bool { return p.integer().IsZero() && p.Err() == nil }

// Coefficient returns a copy of the coefficient of the power i; it is 0
// outside the range 0 … Degree, and nil where Err is not: no number would be true.
func (p Poly) Coefficient(i int) *big.Rat {
	if p.Err() != nil {
		return nil
	}
	return p.rational().Coefficient(i)
}

// Coefficients returns copies of the coefficients, ascending; none for 0 and
// where Err is not nil.
func (p Poly) Coefficients() []*big.Rat {
	c := make([]*big.Rat, p.Degree()+1)
	for i := range c {
		c[i] = p.Coefficient(i)
	}
	return c
}

// Equal reports whether p and q are the same polynomial; false where the Err of
// one of them is not nil.
func (p Poly) Equal(q Poly) bool {
	return p.Err() == nil && q.Err() == nil && p.rational().Equal(q.rational())
}

// Add returns p + q.
func (p Poly) Add(q Poly) Poly {
	a, b := p.rational(), q.rational()
	if ratpoly.Small(&a, &b) {
		return Poly(a.Add(b))
	}
	// Over the product of the denominators each numerator grows by the other one's.
	bits := max(p.span()+q.denominatorBits(), q.span()+p.denominatorBits()) + 1
	if !formed(p, q, max(p.Degree(), q.Degree())+1, bits) {
		return Poly(ratpoly.TooLong)
	}
	return Poly(a.Add(b))
}

// Sub returns p − q.
func (p Poly) Sub(q Poly) Poly { return p.Add(q.Neg()) }

// Neg returns −p.
func (p Poly) Neg() Poly { return Poly(p.rational().Neg()) }

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly {
	a, b := p.rational(), q.rational()
	if ratpoly.Small(&a, &b) {
		return Poly(a.Mul(b))
	}
	bits := p.span() + q.span() + bits.Len(uint(min(p.Degree(), q.Degree())+1))
	if !formed(p, q, p.Degree()+q.Degree()+1, bits) {
		return Poly(ratpoly.TooLong)
	}
	return Poly(a.Mul(b))
}

// Scale returns k·p; nil reads as 0.
func (p Poly) Scale(k *big.Rat) Poly {
	if k == nil {
		k = new(big.Rat)
	}
	if !p.fits(p.Degree()+1, p.span()+k.Num().BitLen(), p.denominatorBits()+k.Denom().BitLen()) {
		return Poly(ratpoly.TooLong)
	}
	return Poly(p.rational().Scale(k))
}

// Derivative returns dp/dx.
func (p Poly) Derivative() Poly {
	if !p.fits(p.Degree(), p.span()+bits.Len(uint(p.Degree()+1)), p.denominatorBits()) {
		return Poly(ratpoly.TooLong)
	}
	return Poly(ratpoly.New(p.integer().Derivative(), p.rational().Denominator()))
}

// Integral returns the integral of p from 0.
func (p Poly) Integral() Poly {
	if p.Err() != nil {
		return p
	}
	c := make([]*big.Rat, p.Degree()+2)
	for i := range c[1:] {
		c[i+1] = p.Coefficient(i)
		c[i+1].Quo(c[i+1], big.NewRat(int64(i+1), 1))
	}
	return FromRats(c...)
}

// Monic returns p divided by its leading coefficient; the polynomial 0 stays 0.
func (p Poly) Monic() Poly {
	if p.integer().IsZero() {
		return p
	}
	return Poly(ratpoly.New(p.integer(), p.integer().Leading()))
}

// formed reports whether a sum or a product of p and q, of so many terms and bits,
// may be formed over the product of their denominators.
func formed(p, q Poly, terms, bits int) bool {
	return q.Err() == nil && p.fits(terms, bits, p.denominatorBits()+q.denominatorBits())
}

func (p Poly) fits(terms, bits, denominator int) bool {
	return p.Err() == nil && ratpoly.Fits(terms, bits, denominator)
}

func (p Poly) span() int            { return p.integer().Span() }
func (p Poly) denominatorBits() int { return p.rational().DenominatorBits() }
