package intpoly

import (
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// maxEqualWords is up to how many words products are formed to compare them.
const maxEqualWords = 1 << 22

// EqualProducts reports whether a·b = c·d.
//
// Values at a point modulo a prime tell nearly all differences, so that products
// are formed for equal ones only, and where these are long, as those of a
// polynomial of many short coefficients and one of few long ones, after a common
// factor is divided out: what is left of a then divides d, and by Mignotte's bound
// (1974) has coefficients not much longer.
func EqualProducts(a, b, c, d Poly) bool {
	if a.IsZero() || b.IsZero() || c.IsZero() || d.IsZero() {
		return (a.IsZero() || b.IsZero()) && (c.IsZero() || d.IsZero())
	}
	if a.Degree()+b.Degree() != c.Degree()+d.Degree() {
		return false
	}
	if differAt(a, b, c, d) != 0 {
		return false
	}
	if (a.terms()+b.terms())*max(a.n+b.n, c.n+d.n) <= maxEqualWords {
		return a.Mul(b).Equal(c.Mul(d))
	}
	if a.Degree() > b.Degree() {
		a, b = b, a
	}
	if c.Degree() > d.Degree() {
		c, d = d, c
	}
	content := new(big.Int).GCD(nil, nil, a.Content(), c.Content())
	common := a.GCD(c).MulInt(content)
	a, _ = a.QuoExact(common)
	c, _ = c.QuoExact(common)
	divides := func(p, q Poly) bool { return p.span() <= p.Degree()+q.span()+bits.Len(uint(q.terms()))/2+1 }
	return divides(a, d) && divides(c, b) && a.Mul(b).Equal(c.Mul(d))
}

// differAt is a·b − c·d at a point modulo a prime.
func differAt(a, b, c, d Poly) uint64 {
	var primes modp.Primes
	f := primes.Next()
	x := f.Stored(0x1e3779b97f4a7c15) // any number serves
	value := func(p Poly) uint64 { return f.At(p.Residues(&f), x) }
	return f.Sub(f.Mul(value(a), value(b)), f.Mul(value(c), value(d)))
}
