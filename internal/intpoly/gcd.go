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
		return FromInt64s(1)
	}
	field := modp.Prime(0)
	var stack [272]uint64
	image := imageOfGCD(&field, p, q, stack[:])
	if len(image) == 1 {
		return FromInt64s(1)
	}
	return modularGCD(p.primitive(), q.primitive())
}

// imageOfGCD returns a multiple of the greatest common divisor modulo a prime,
// or nothing where the prime divides a leading coefficient. room is used where
// it is large enough.
func imageOfGCD(f *modp.Field, p, q Poly, room []uint64) []uint64 {
	m, n := p.terms(), q.terms()
	if m+n > len(room) {
		room = make([]uint64, m+n)
	}
	a, b := room[:m:m], room[m:m+n]
	reduceInto(a, f, p)
	reduceInto(b, f, q)
	if a[m-1] == 0 || b[n-1] == 0 {
		return nil
	}
	return f.GCD(a, b)
}

func reduceInto(a []uint64, f *modp.Field, p Poly) {
	if p.n == 1 {
		for i := range a {
			a[i] = f.Residue(p.w[i : i+1])
		}
		return
	}
	for i := range a {
		a[i] = f.Residue(p.at(i))
	}
}

// modularGCD is GCD for primitive operands of positive degree.
func modularGCD(p, q Poly) Poly {
	lead := FromBigs(p.Leading()).commonInteger(FromBigs(q.Leading()))
	var c chinese
	var room []uint64
	if n := p.terms() + q.terms(); n <= 1<<12 {
		room = make([]uint64, n)
	}
	for i := 0; ; i++ {
		f := modp.Prime(i)
		image := imageOfGCD(&f, p, q, room)
		switch {
		case len(image) == 0:
			continue // the prime divides a leading coefficient
		case len(image) == 1:
			return FromInt64s(1)
		case c.terms > 0 && len(image) > c.terms:
			continue // an unlucky prime
		}
		// lead·image/lc(image), as plain residues
		k := f.Mul(f.Inverse(image[len(image)-1]), f.Residue(lead.w))
		for j, x := range image {
			image[j] = f.Mul(x, k)
		}
		if len(image) < c.terms {
			c = chinese{} // all primes so far were unlucky
		}
		c.add(&f, image)
		g := c.symmetric()
		if g.span() > c.bits()-8 && c.limbs > 0 {
			continue // nearly as long as the modulus: not all of it yet
		}
		g = g.primitive()
		if _, ok := p.QuoExact(g); !ok {
			continue
		}
		if _, ok := q.QuoExact(g); ok {
			return g
		}
	}
}

// commonInteger is the greatest common divisor of two constants.
func (p Poly) commonInteger(q Poly) Poly {
	if p.n == 1 && q.n == 1 {
		g := gcdWord(magnitude(p.w[0]), magnitude(q.w[0]))
		if g < 1<<63 {
			return FromInt64s(int64(g))
		}
	}
	a, b := p.Coefficient(0), q.Coefficient(0)
	return FromBigs(a.GCD(nil, nil, a.Abs(a), b.Abs(b)))
}

// chinese is a polynomial known modulo a product of primes.
type chinese struct {
	terms, limbs int
	x            []uint64 // unsigned residues, limbs each
	modulus      []uint64 // limbs
}

// bits is the length of the modulus.
func (c *chinese) bits() int {
	top := c.modulus[c.limbs-1]
	return 64*(c.limbs-1) + bits.Len64(top)
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
	inverse := f.Inverse(f.Stored(residue(c.modulus, f.P))) // stored
	for i := range c.terms {
		old, v := c.x[i*c.limbs:(i+1)*c.limbs], x[i*n:(i+1)*n]
		copy(v, old)
		// x + modulus·d, d = (residue − x)/modulus
		d := f.Mul(f.Sub(residues[i], residue(old, f.P)), inverse)
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

// residue is an unsigned number modulo p.
func residue(x []uint64, p uint64) uint64 {
	var r uint64
	for k := len(x) - 1; k >= 0; k-- {
		_, r = bits.Div64(r, x[k], p)
	}
	return r
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
