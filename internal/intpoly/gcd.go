package intpoly

import (
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// GCD returns the primitive greatest common divisor with a positive leading
// coefficient; contents are ignored. GCD(0, q) is the primitive part of q, and
// GCD(0, 0) is 0.
//
// The method is modular (Brown 1971; Collins 1971): images modulo primes near
// 2^62 are put together by the Chinese remainder theorem until they divide both
// operands. An image of degree 0 proves at once that the operands are coprime.
func (p Poly) GCD(q Poly) Poly {
	switch {
	case p.IsZero():
		return q.primitive()
	case q.IsZero():
		return p.primitive()
	case p.Degree() == 0 || q.Degree() == 0:
		return unit
	}
	var stack [272]uint64
	return modularGCD(p, q, stack[:])
}

// unit is the polynomial 1.
var unit = FromInt64s(1)

// imageOfGCD returns a multiple of the greatest common divisor modulo a prime,
// or nothing where the prime divides a leading coefficient. room is used where
// it is large enough.
func imageOfGCD(f *modp.Field, p, q Poly, room []uint64) []uint64 {
	m, n := p.terms(), q.terms()
	if m+n > len(room) {
		room = make([]uint64, m+n)
	}
	a, b := room[:m:m], room[m:m+n]
	f.Images(a, p.w, p.n)
	f.Images(b, q.w, q.n)
	if a[m-1] == 0 || b[n-1] == 0 {
		return nil
	}
	return f.GCD(a, b)
}

// modularGCD is GCD for operands of positive degree, with some room on the
// caller's stack.
func modularGCD(p, q Poly, room []uint64) Poly {
	var lead Poly // the greatest common divisor of the leading coefficients
	var c chinese
	var primes modp.Primes
	for {
		f := primes.Next()
		image := imageOfGCD(&f, p, q, room)
		switch {
		case len(image) == 0:
			continue // the prime divides a leading coefficient
		case len(image) == 1:
			return unit
		case c.terms > 0 && len(image) > c.terms:
			continue // an unlucky prime
		case len(image) < c.terms:
			c = chinese{} // all primes so far were unlucky
		}
		if lead.IsZero() {
			lead = leadingCommon(p, q)
		}
		// lead·image/lc(image), as plain residues
		k := f.Mul(f.Inverse(image[len(image)-1]), f.Residue(lead.w))
		for j, x := range image {
			image[j] = f.Mul(x, k)
		}
		c.add(&f, image)
		if !c.looksSmall() {
			continue // as long as the modulus: not all of it yet
		}
		g := c.symmetric().primitive()
		if _, ok := p.QuoExact(g); !ok {
			continue
		}
		if _, ok := q.QuoExact(g); ok {
			return g
		}
	}
}

// leadingCommon is the greatest common divisor of the leading coefficients.
func leadingCommon(p, q Poly) Poly {
	x, y := p.at(p.Degree()), q.at(q.Degree())
	if p.n == 1 && q.n == 1 {
		if g := gcdWord(magnitude(x[0]), magnitude(y[0])); g < 1<<63 {
			return FromInt64s(int64(g))
		}
	}
	a, b := p.Leading(), q.Leading()
	return FromBigs(a.GCD(nil, nil, a.Abs(a), b.Abs(b)))
}

// chinese is a polynomial known modulo a product of primes.
type chinese struct {
	terms, limbs int
	x            []uint64 // unsigned residues, limbs each
	modulus      []uint64 // limbs
}

// bits is a lower bound on the length of the modulus.
func (c *chinese) bits() int { return 64*(c.limbs-1) + bits.Len64(c.modulus[c.limbs-1]) - 1 }

// looksSmall reports whether the coefficients, taken between minus and plus
// half the modulus, are likely to be shorter than it by some bits. Nothing
// depends on the answer but time.
func (c *chinese) looksSmall() bool {
	m := c.modulus[c.limbs-1]
	slack := m>>4 + 1
	for i := c.limbs - 1; i < len(c.x); i += c.limbs {
		if x := c.x[i]; x > slack && x < m-slack {
			return false
		}
	}
	return true
}

// add takes in the plain residues modulo another prime.
func (c *chinese) add(f *modp.Field, residues []uint64) {
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
func (c *chinese) shrink() {
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
func (c *chinese) symmetric() Poly {
	n := c.limbs + 1 // a limb for the sign
	w := make([]uint64, c.terms*n)
	half := make([]uint64, c.limbs)
	for k := range half {
		half[k] = c.modulus[k] >> 1
		if k+1 < c.limbs {
			half[k] |= c.modulus[k+1] << 63
		}
	}
	for i := range c.terms {
		x, v := c.x[i*c.limbs:(i+1)*c.limbs], w[i*n:(i+1)*n]
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
