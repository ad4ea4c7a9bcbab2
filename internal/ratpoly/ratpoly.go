// Package ratpoly holds the polynomial with rational coefficients that poly
// exports: an integer polynomial over one positive integer denominator with
// which its content shares no factor.
//
// poly.Poly is defined as this type, so that the other packages of the module
// reach the integer polynomial by a conversion, ratpoly.Poly(p).Integer(),
// without copying.
package ratpoly

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// Poly is num/den. It is immutable; the zero value is 0.
type Poly struct {
	_       [0]func()
	num     intpoly.Poly
	den     *big.Int // nil is 1
	tooLong bool     // stands for a polynomial that was not formed, num is 0
}

// A polynomial takes at most MaxWords words of 64 bits, terms times the words of
// the longest integer coefficient. Neither such a coefficient nor the denominator
// is longer than MaxBits, because the greatest common divisor of two integers
// takes the square of their length: a second at 2^20 bits.
const (
	MaxWords = 1 << 21
	MaxBits  = 1 << 19
)

// TooLong is what stands for a polynomial beyond MaxWords or MaxBits.
var TooLong = Poly{tooLong: true}

// Fits reports whether a polynomial of so many terms, with coefficients and a
// denominator of so many bits, may be formed.
func Fits(terms, bits, denominator int) bool {
	return bits <= MaxBits && denominator <= MaxBits && float64(terms)*float64(bits/64+1) <= MaxWords
}

// Checked returns p, or TooLong where it is.
func (p Poly) Checked() Poly {
	if p.tooLong || !Fits(p.num.Degree()+1, p.num.Span(), p.DenominatorBits()) {
		return TooLong
	}
	return p
}

// Small reports whether p and q are so small polynomials with integer
// coefficients that their sum and their product fit: nearly all are.
func Small(p, q *Poly) bool {
	return p.den == nil && q.den == nil && !p.tooLong && !q.tooLong &&
		p.num.Degree()+q.num.Degree() < 1<<10 && p.num.Words()+q.num.Words() < 1<<10
}

var errTooLong = fmt.Errorf("poly: a polynomial takes at most 2^21 words of 64 bits, a coefficient 2^19 bits: %w", fault.ErrLimit)

// Err is nil for a polynomial, and tells the bounds for TooLong.
func (p Poly) Err() error {
	if p.tooLong {
		return errTooLong
	}
	return nil
}

// New returns num/den for den ≠ 0.
func New(num intpoly.Poly, den *big.Int) Poly {
	if num.IsZero() {
		return Poly{}
	}
	if den.IsInt64() && den.Int64() == 1 {
		return Poly{num: num}
	}
	g := new(big.Int).GCD(nil, nil, num.Content(), new(big.Int).Abs(den))
	if den.Sign() < 0 {
		g.Neg(g)
	}
	if !g.IsInt64() || g.Int64() != 1 {
		num, den = num.QuoInt(g), new(big.Int).Quo(den, g)
	}
	if den.IsInt64() && den.Int64() == 1 {
		return Poly{num: num}
	}
	return Poly{num: num, den: new(big.Int).Set(den)}
}

// FromRats returns the polynomial with the given ascending coefficients, or
// TooLong.
func FromRats(ascending ...*big.Rat) Poly {
	terms := 0
	for i, r := range ascending {
		if r != nil && r.Sign() != 0 {
			terms = i + 1
		}
	}
	ascending = ascending[:terms]
	den := big.NewInt(1)
	var g big.Int
	for _, r := range ascending {
		if r == nil || r.IsInt() {
			continue
		}
		if !Fits(terms, r.Num().BitLen(), r.Denom().BitLen()) {
			return TooLong
		}
		g.GCD(nil, nil, den, r.Denom())
		den.Mul(den, g.Quo(r.Denom(), &g))
		if !Fits(terms, 0, den.BitLen()) {
			return TooLong
		}
	}
	for _, r := range ascending { // what the coefficient will take, to a bit
		if r != nil && !Fits(terms, r.Num().BitLen()+den.BitLen()-r.Denom().BitLen(), 0) {
			return TooLong
		}
	}
	c := make([]*big.Int, terms)
	for i, r := range ascending {
		if r != nil {
			c[i] = new(big.Int).Mul(g.Quo(den, r.Denom()), r.Num())
		}
	}
	// The fractions are in lowest terms, so that a prime factor of the smallest
	// common denominator leaves one of the numerators alone.
	p := Poly{num: intpoly.FromBigs(c...)}
	if terms > 0 && den.BitLen() > 1 {
		p.den = den
	}
	return p
}

// Monic returns p divided by its leading coefficient, for a primitive p with a
// positive one.
func Monic(p intpoly.Poly) Poly {
	lead := p.Leading()
	if lead.IsInt64() && lead.Int64() == 1 {
		return Poly{num: p}
	}
	return Poly{num: p, den: lead}
}

// FromInteger returns p as a rational polynomial.
func FromInteger(p intpoly.Poly) Poly { return Poly{num: p} }

// Integer returns the numerator; Denominator()·p = Integer().
func (p Poly) Integer() intpoly.Poly { return p.num }

// Denominator returns a copy of the common denominator, > 0.
func (p Poly) Denominator() *big.Int {
	if p.den == nil {
		return big.NewInt(1)
	}
	return new(big.Int).Set(p.den)
}

// DenominatorBits is the bit length of the denominator.
func (p Poly) DenominatorBits() int {
	if p.den == nil {
		return 1
	}
	return p.den.BitLen()
}

// Coefficient returns the coefficient of x^i as a fresh number.
func (p Poly) Coefficient(i int) *big.Rat {
	return new(big.Rat).SetFrac(p.num.Coefficient(i), p.Denominator())
}

// Add returns p + q.
func (p Poly) Add(q Poly) Poly {
	if p.den == nil && q.den == nil {
		return Poly{num: p.num.Add(q.num)}
	}
	// With the gcd g of the denominators, only its factors can cancel.
	dp, dq := p.Denominator(), q.Denominator()
	g := new(big.Int).GCD(nil, nil, dp, dq)
	rest := dp.Quo(dp, g)
	sum := p.num.MulInt(new(big.Int).Quo(dq, g)).Add(q.num.MulInt(rest))
	return New(sum, rest.Mul(rest, dq))
}

// Neg returns −p.
func (p Poly) Neg() Poly { return Poly{num: p.num.Neg(), den: p.den, tooLong: p.tooLong} }

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly {
	if p.den == nil && q.den == nil {
		return Poly{num: p.num.Mul(q.num)}
	}
	dp := p.Denominator()
	return New(p.num.Mul(q.num), dp.Mul(dp, q.Denominator()))
}

// Scale returns k·p.
func (p Poly) Scale(k *big.Rat) Poly {
	d := p.Denominator()
	return New(p.num.MulInt(k.Num()), d.Mul(d, k.Denom()))
}

// Equal reports whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool {
	return p.num.Equal(q.num) && p.Denominator().Cmp(q.Denominator()) == 0
}
