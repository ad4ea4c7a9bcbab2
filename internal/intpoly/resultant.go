package intpoly

import (
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// Resultant returns the resultant of p and q: 0 when they have a common root
// or one of them is 0. Images modulo primes near 2^62 are put together until
// their product passes twice the bound of Hadamard (1893) for the determinant
// of Sylvester's matrix (Collins 1971).
func (p Poly) Resultant(q Poly) *big.Int {
	if p.IsZero() || q.IsZero() {
		return new(big.Int)
	}
	m, n := p.Degree(), q.Degree()
	// log2 of (‖p‖₂)^n·(‖q‖₂)^m, rounded up, and one bit for the sign
	need := n*(p.MaxBitLen()+bits.Len(uint(m+1))/2+1) + m*(q.MaxBitLen()+bits.Len(uint(n+1))/2+1) + 2
	var c Images
	a, b := make([]uint64, m+1), make([]uint64, n+1)
	var primes modp.Primes
	for c.limbs == 0 || c.bits() <= need {
		f := primes.Next()
		if !storedInto(a, &f, p) || !storedInto(b, &f, q) {
			continue // the prime divides a leading coefficient
		}
		c.Add(&f, []uint64{f.Plain(f.Resultant(a, b))})
	}
	return c.symmetric().Coefficient(0)
}

// Residues returns the stored residues of the coefficients, ascending.
func (p Poly) Residues(f *modp.Field) []uint64 {
	out := make([]uint64, p.terms())
	for i := range out {
		out[i] = f.StoredResidue(p.at(i))
	}
	return out
}

// imagesInto writes the residues of the coefficients up to one factor.
func (p Poly) imagesInto(out []uint64, f *modp.Field) {
	f.Images(out, p.w, p.n)
}

// storedInto writes the stored residues of the coefficients; it returns false
// where the leading one is 0.
func storedInto(out []uint64, f *modp.Field, p Poly) bool {
	for i := range out {
		out[i] = f.StoredResidue(p.at(i))
	}
	return out[len(out)-1] != 0
}

// Cofactors returns u, v and r with u·p + v·q = r, r a number that is not 0,
// deg u < deg q and deg v < deg p, for p and q without a common root; ok is
// false where they have one or where a degree is below 1. The numbers u, v and r
// have no common divisor, and r is positive.
//
// The images of u, v and r for r the resultant, which are integers by Cramer's
// rule, are put together until they satisfy the equation.
func (p Poly) Cofactors(q Poly) (u, v Poly, r *big.Int, ok bool) {
	m, n := p.Degree(), q.Degree()
	if m < 1 || n < 1 || !p.GCD(q).IsOne() {
		return Poly{}, Poly{}, nil, false
	}
	var c Images
	a, b := make([]uint64, m+1), make([]uint64, n+1)
	var primes modp.Primes
	for {
		f := primes.Next()
		if !storedInto(a, &f, p) || !storedInto(b, &f, q) {
			continue
		}
		res := f.Resultant(a, b)
		if res == 0 {
			continue // a common root modulo the prime alone
		}
		storedInto(a, &f, p)
		storedInto(b, &f, q)
		fu, fv, _ := f.Cofactors(a, b)
		image := make([]uint64, 0, m+n+3)
		for _, x := range append(append(fu[:n:n], fv[:m]...), f.Stored(1)) {
			image = append(image, f.Plain(f.Mul(x, res)))
		}
		c.Add(&f, image)
		if !c.looksSmall() {
			continue
		}
		all := c.symmetric()
		if all.terms() != m+n+1 {
			continue
		}
		u, v, r := all.slice(0, n), all.slice(n, n+m), all.Leading()
		if SumOfProducts(u, p, v, q, 1).Equal(FromBigs(r)) {
			g := all.Content()
			if r.Sign() < 0 {
				g.Neg(g)
			}
			return u.QuoInt(g), v.QuoInt(g), r.Quo(r, g), true
		}
	}
}

// slice returns the coefficients from … to−1 as a polynomial.
func (p Poly) slice(from, to int) Poly {
	w := make([]uint64, (to-from)*p.n)
	copy(w, p.w[from*p.n:])
	return trim(w, p.n)
}
