package intpoly

import (
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// Images is a polynomial known modulo a product of primes. The zero value knows
// nothing; all images have the same number of terms.
type Images struct {
	terms, limbs int
	x            []uint64 // unsigned residues, limbs each
	modulus      []uint64 // limbs
}

// bits is a lower bound on the length of the modulus.
func (c *Images) bits() int { return 64*(c.limbs-1) + bits.Len64(c.modulus[c.limbs-1]) - 1 }

// looksSmall reports whether the coefficients, taken between minus and plus
// half the modulus, are likely to be shorter than it by some bits. Nothing
// depends on the answer but time.
func (c *Images) looksSmall() bool {
	m := c.modulus[c.limbs-1]
	slack := m>>4 + 1
	for i := c.limbs - 1; i < len(c.x); i += c.limbs {
		if x := c.x[i]; x > slack && x < m-slack {
			return false
		}
	}
	return true
}

// Add takes in the plain residues modulo another prime, the next of modp.Primes.
func (c *Images) Add(f *modp.Field, residues []uint64) {
	if c.limbs == 0 {
		c.terms, c.limbs = len(residues), 1
		c.x = append([]uint64(nil), residues...)
		c.modulus = []uint64{f.P}
		return
	}
	n := c.limbs + 1
	x := make([]uint64, c.terms*n)
	// Residues come multiplied by 2^(−64 limbs); grow undoes that.
	grow := f.Grow(f.Stored(1), c.limbs)
	residue := func(x []uint64) uint64 { return f.Mul(f.Image(x), grow) }
	inverse := f.Inverse(f.Stored(residue(c.modulus)))
	for i := range c.terms {
		old, v := c.x[i*c.limbs:(i+1)*c.limbs], x[i*n:(i+1)*n]
		copy(v, old)
		// x + modulus·d, d = (residue − x)/modulus
		d := f.Mul(f.Sub(residues[i], residue(old)), inverse)
		v[c.limbs] = addProduct(v[:c.limbs], c.modulus, d)
	}
	modulus := make([]uint64, n)
	modulus[c.limbs] = addProduct(modulus[:c.limbs], c.modulus, f.P)
	c.x, c.limbs, c.modulus = x, n, modulus
	if modulus[n-1] == 0 { // the top limb is not needed yet
		c.shrink()
	}
}

// shrink drops the top limb, which is 0 everywhere.
func (c *Images) shrink() {
	n := c.limbs - 1
	for i := range c.terms {
		copy(c.x[i*n:(i+1)*n], c.x[i*c.limbs:])
	}
	c.x, c.modulus, c.limbs = c.x[:c.terms*n], c.modulus[:n], n
}

// addProduct adds x·d to z, of the same length, and returns the carry.
func addProduct(z, x []uint64, d uint64) uint64 {
	var carry uint64
	for k, u := range x {
		hi, lo := bits.Mul64(u, d)
		var c uint64
		lo, c = bits.Add64(lo, carry, 0)
		hi += c
		z[k], c = bits.Add64(z[k], lo, 0)
		carry = hi + c
	}
	return carry
}

// symmetric returns the polynomial whose coefficients lie between minus and
// plus half the modulus.
func (c *Images) symmetric() Poly { return c.Poly(0, c.terms) }

// Poly returns the polynomial with the terms from … to − 1, taken between minus
// and plus half the modulus.
func (c *Images) Poly(from, to int) Poly {
	n := c.limbs + 1 // a limb for the sign
	w := make([]uint64, (to-from)*n)
	half := make([]uint64, c.limbs)
	for k := range half {
		half[k] = c.modulus[k] >> 1
		if k+1 < c.limbs {
			half[k] |= c.modulus[k+1] << 63
		}
	}
	for i := range to - from {
		x, v := c.x[(from+i)*c.limbs:(from+i+1)*c.limbs], w[i*n:(i+1)*n]
		copy(v, x)
		var borrow uint64
		for k := range half { // half − x
			_, borrow = bits.Sub64(half[k], x[k], borrow)
		}
		if borrow != 0 {
			var b uint64
			for k := range c.modulus {
				v[k], b = bits.Sub64(v[k], c.modulus[k], b)
			}
			v[c.limbs] -= b
		}
	}
	return trim(w, n)
}
