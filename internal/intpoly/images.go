package intpoly

import (
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// Images is a polynomial known modulo a product of primes. The zero value knows
// nothing; all images have the same number of terms.
type Images struct {
	terms, limbs int
	stride       int      // limbs from one number of x to the next; those beyond are 0
	x            []uint64 // unsigned residues
	modulus      []uint64 // limbs
}

// NewImages returns one with room for a number of primes.
func NewImages(primes int) *Images { return &Images{stride: primes} }

// at returns the residue i.
func (c *Images) at(i int) []uint64 { return c.x[i*c.stride : i*c.stride+c.limbs] }

// bits is a lower bound on the length of the modulus.
func (c *Images) bits() int { return 64*(c.limbs-1) + bits.Len64(c.modulus[c.limbs-1]) - 1 }

// looksSmall reports whether the coefficients, taken between minus and plus
// half the modulus, are likely to be shorter than it by some bits. Nothing
// depends on the answer but time: with many limbs a trial is dear, and one prime
// more is not.
func (c *Images) looksSmall() bool {
	last := c.limbs - 1
	shift := uint(bits.LeadingZeros64(c.modulus[last]))
	top := func(x []uint64) uint64 { // its first 64 bits, where the modulus begins
		v := x[last] << shift
		if last > 0 {
			v |= x[last-1] >> (64 - shift)
		}
		return v
	}
	m := top(c.modulus)
	slack := m>>4 + 1
	if c.limbs >= 8 {
		slack = m >> 30
	}
	for i := range c.terms {
		if x := top(c.at(i)); x > slack && x < m-slack {
			return false
		}
	}
	return true
}

// Add takes in the plain residues modulo another prime.
func (c *Images) Add(f *modp.Field, residues []uint64) {
	if c.limbs == 0 {
		c.terms, c.limbs, c.stride = len(residues), 1, max(1, c.stride)
		c.x = make([]uint64, c.terms*c.stride)
		for i, r := range residues {
			c.x[i*c.stride] = r
		}
		c.modulus = []uint64{f.P}
		return
	}
	if c.limbs == c.stride {
		c.widen()
	}
	// Image is quicker for few limbs; its results come multiplied by
	// 2^(−64 limbs), which grow undoes.
	few := c.limbs < 8
	var grow uint64
	var weights []uint64
	if few {
		grow = f.Grow(f.Stored(1), c.limbs)
	} else {
		weights = make([]uint64, c.limbs)
		f.Weights(weights)
	}
	residue := func(x []uint64) uint64 {
		if few {
			return f.Mul(f.Image(x), grow)
		}
		return f.Remainder(x, weights)
	}
	inverse := f.Inverse(f.Stored(residue(c.modulus)))
	for i := range c.terms {
		v := c.at(i)
		// x + modulus·d, d = (residue − x)/modulus
		d := f.Mul(f.Sub(residues[i], residue(v)), inverse)
		if top := addProduct(v, c.modulus, d); top != 0 {
			c.x[i*c.stride+c.limbs] = top
		}
	}
	modulus := make([]uint64, c.limbs, c.limbs+1)
	if top := addProduct(modulus, c.modulus, f.P); top != 0 {
		modulus = append(modulus, top)
	}
	c.modulus, c.limbs = modulus, len(modulus)
}

// widen makes room for twice the limbs.
func (c *Images) widen() {
	n := 2 * c.stride
	x := make([]uint64, c.terms*n)
	for i := range c.terms {
		copy(x[i*n:], c.at(i))
	}
	c.x, c.stride = x, n
}

// addProduct adds x·d to z, of the same length, and returns the carry.
func addProduct(z, x []uint64, d uint64) uint64 {
	z = z[:len(x)]
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
		x, v := c.at(from+i), w[i*n:(i+1)*n]
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
