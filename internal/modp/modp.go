// Package modp computes modulo primes just below 2^62, in Montgomery's
// representation (1985): the stored number x stands for x·2^−64.
package modp

import (
	"math/big"
	"math/bits"
)

// Field is the integers modulo a prime between 2^61 and 2^62.
type Field struct {
	P       uint64
	inverse uint64 // −P⁻¹ modulo 2^64
	one     uint64 // 2^64 modulo P, which stands for 1
}

// offsets are the k for which 2^62 − k is prime, the smallest first.
var offsets = [...]uint16{57, 87, 117, 143, 153, 167, 171, 195, 203, 273, 287, 317, 443, 483, 495, 575, 581, 603, 633, 663, 765, 773, 777, 791, 813, 831, 923, 981, 993, 1001, 1007, 1017, 1197, 1241, 1293, 1353, 1433, 1515, 1553, 1575, 1581, 1595, 1617, 1673, 1697, 1701, 1703, 1823}

// Primes walks through the primes below 2^62, the largest first.
type Primes struct {
	index int
	last  uint64
}

// Next returns the field of the next prime.
func (p *Primes) Next() Field {
	if p.index < len(offsets) {
		p.last = 1<<62 - uint64(offsets[p.index])
		p.index++
		return newField(p.last)
	}
	for p.last -= 2; !new(big.Int).SetUint64(p.last).ProbablyPrime(0); p.last -= 2 {
		// The test is proved for numbers below 2^64.
	}
	return newField(p.last)
}

func newField(p uint64) Field {
	v := 3*p ^ 2 // the inverse modulo 2^5; each step doubles the bits
	for range 4 {
		v *= 2 - p*v
	}
	_, one := bits.Div64(1, 0, p)
	return Field{P: p, inverse: -v, one: one}
}

// reduce returns (hi·2^64 + lo)·2^−64 modulo P, for hi < P.
func (f *Field) reduce(hi, lo uint64) uint64 {
	m := lo * f.inverse
	h, l := bits.Mul64(m, f.P)
	_, c := bits.Add64(l, lo, 0)
	t, _ := bits.Add64(h, hi, c)
	if t >= f.P {
		t -= f.P
	}
	return t
}

// Mul returns the stored product of stored numbers. With one stored and one
// plain number the product is the plain one.
func (f *Field) Mul(x, y uint64) uint64 {
	hi, lo := bits.Mul64(x, y)
	return f.reduce(hi, lo)
}

// Sub returns x − y.
func (f *Field) Sub(x, y uint64) uint64 {
	t, borrow := bits.Sub64(x, y, 0)
	return t + f.P&-borrow
}

// Neg returns −x.
func (f *Field) Neg(x uint64) uint64 { return f.Sub(0, x) }

// Inverse returns the stored inverse of a stored number that is not 0, by Euclid's
// algorithm.
func (f *Field) Inverse(x uint64) uint64 {
	// Always t·x is b, or −b where negative holds, modulo P.
	a, b := f.P, x
	s, t := uint64(0), uint64(1)
	negative := false
	for b > 1 {
		q := a / b
		a, b = b, a-q*b
		s, t = t, s+q*t
		negative = !negative
	}
	if negative {
		t = f.P - t
	}
	return f.Stored(f.Stored(t))
}

// Stored returns the stored form of a plain number below P.
func (f *Field) Stored(x uint64) uint64 {
	_, r := bits.Div64(x, 0, f.P) // x·2^64 modulo P
	return r
}

// Residue returns the plain residue of a number in two's complement.
func (f *Field) Residue(c []uint64) uint64 {
	if len(c) == 1 {
		x := int64(c[0])
		r := uint64(x>>63 ^ x) // |x|, or |x| − 1 for a negative x; below 2^63 < 3 P
		if r >= f.P {
			r -= f.P
		}
		if r >= f.P {
			r -= f.P
		}
		if x < 0 {
			return f.P - 1 - r
		}
		return r
	}
	mask := uint64(int64(c[len(c)-1]) >> 63)
	var r uint64
	for k := len(c) - 1; k >= 0; k-- {
		_, r = bits.Div64(r, c[k]^mask, f.P)
	}
	if mask != 0 {
		return f.P - 1 - r
	}
	return r
}

// Images writes the residues of numbers in two's complement, n limbs each, all
// multiplied by 2^(−64 n): what a greatest common divisor up to a factor needs,
// without a division. The slice out has as many numbers as w.
func (f *Field) Images(out, w []uint64, n int) {
	if n == 1 {
		for i := range w {
			out[i] = f.Residue(w[i : i+1])
		}
		return
	}
	scale := f.Shrink(1, n)
	if n >= 8 && len(out) >= 8 {
		f.manyImages(out, w, n, scale)
		return
	}
	for i := range out {
		c := w[i*n : (i+1)*n]
		mask := uint64(int64(c[n-1]) >> 63)
		var r uint64
		for _, x := range c {
			lo, carry := bits.Add64(r, x^mask, 0)
			r = f.reduce(carry, lo)
		}
		if mask != 0 { // the limbs stood for −c − 1
			r = f.Sub(f.Neg(r), scale)
		}
		out[i] = r
	}
}

// Image returns the residue of an unsigned number times 2^(−64 n), n its limbs.
func (f *Field) Image(c []uint64) uint64 {
	var r uint64
	for _, x := range c {
		lo, carry := bits.Add64(r, x, 0)
		r = f.reduce(carry, lo)
	}
	return r
}

// Shrink returns x·2^(−64 n).
func (f *Field) Shrink(x uint64, n int) uint64 {
	for range n {
		x = f.reduce(0, x)
	}
	return x
}

// Grow returns x·2^(64 n).
func (f *Field) Grow(x uint64, n int) uint64 {
	square := f.Stored(f.one) // 2^128
	for range n {
		x = f.Mul(x, square)
	}
	return x
}

// GCD computes the greatest common divisor of two polynomials with ascending
// coefficients and leading coefficients that are not 0, up to a factor. It
// overwrites both and returns one of them. An empty slice is 0.
func (f *Field) GCD(a, b []uint64) []uint64 {
	if len(a) < len(b) {
		a, b = b, a
	}
	for len(b) > 1 {
		a = f.remainder(a, b)
		a, b = b, a
	}
	if len(b) == 1 {
		return b
	}
	return a
}

// remainder returns a multiple of a modulo b, in the place of a.
func (f *Field) remainder(a, b []uint64) []uint64 {
	n := len(b)
	for len(a) > n {
		a = f.twoSteps(a, b)
	}
	if len(a) == n {
		// lc(b)·a − lc(a)·b
		x, y := b[n-1], f.Neg(a[n-1])
		a = a[:n-1]
		for j := range a {
			h0, l0 := bits.Mul64(a[j], x)
			h1, l1 := bits.Mul64(b[j], y)
			l, c := bits.Add64(l0, l1, 0)
			a[j] = f.reduce2(h0+h1+c, l)
		}
	}
	return dropZeros(a)
}

// twoSteps removes the two leading terms of a, which is longer than b, at
// once: lc(b)²·a − (u·x + v)·x^k·b, k = deg a − deg b − 1.
func (f *Field) twoSteps(a, b []uint64) []uint64 {
	m, n := len(a), len(b)
	k := m - n - 1
	lc := b[n-1]
	square := f.Mul(lc, lc)
	below := uint64(0)
	if n > 1 {
		below = b[n-2]
	}
	// u = lc(b)·a_top, v = lc(b)·a_next − a_top·b_next
	u := f.Neg(f.Mul(lc, a[m-1]))
	v := f.Sub(f.Mul(a[m-1], below), f.Mul(lc, a[m-2]))
	a = a[:m-2]
	for j := range k {
		a[j] = f.Mul(a[j], square)
	}
	previous := uint64(0)
	for j := range a[k:] {
		h0, l0 := bits.Mul64(a[k+j], square)
		h1, l1 := bits.Mul64(b[j], v)
		h2, l2 := bits.Mul64(previous, u)
		previous = b[j]
		l, c := bits.Add64(l0, l1, 0)
		h, _ := bits.Add64(h0, h1, c)
		l, c = bits.Add64(l, l2, 0)
		h, _ = bits.Add64(h, h2, c)
		a[k+j] = f.reduce2(h, l)
	}
	return dropZeros(a)
}

// reduce2 is reduce for sums of up to three products, for which hi < 3·P²/2^64.
func (f *Field) reduce2(hi, lo uint64) uint64 {
	m := lo * f.inverse
	h, l := bits.Mul64(m, f.P)
	_, c := bits.Add64(l, lo, 0)
	t, _ := bits.Add64(h, hi, c) // < P + 3·P/4
	if t >= f.P {
		t -= f.P
	}
	return t
}

func dropZeros(a []uint64) []uint64 {
	for len(a) > 0 && a[len(a)-1] == 0 {
		a = a[:len(a)-1]
	}
	return a
}
