package intpoly

import "github.com/qofs/qofs/internal/modp"

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
	p.imagesInto(a, f)
	q.imagesInto(b, f)
	if a[m-1] == 0 || b[n-1] == 0 {
		return nil
	}
	return f.GCD(a, b)
}

// modularGCD is GCD for operands of positive degree, with some room on the
// caller's stack.
func modularGCD(p, q Poly, room []uint64) Poly {
	var lead Poly // the greatest common divisor of the leading coefficients
	var c Images
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
			c = Images{} // all primes so far were unlucky
		}
		if lead.IsZero() {
			lead = leadingCommon(p, q)
		}
		// lead·image/lc(image), as plain residues
		k := f.Mul(f.Inverse(image[len(image)-1]), f.Residue(lead.w))
		for j, x := range image {
			image[j] = f.Mul(x, k)
		}
		c.Add(&f, image)
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
