package intpoly

import (
	"math/big"
	"math/bits"
)

// longSum returns a·b + sign·c·d, whose coefficients fit n limbs, by
// Kronecker's substitution (1882): the polynomials are packed into integers at
// x = 2^(64 n), and math/big multiplies these with its assembly kernels and
// Karatsuba's method.
func longSum(a, b, c, d Poly, n, sign int) Poly {
	sum := packedProduct(a, b, n)
	if !c.IsZero() {
		second := packedProduct(c, d, n)
		if sign < 0 {
			sum.Sub(sum, second)
		} else {
			sum.Add(sum, second)
		}
	}
	return unpack(sum, n, max(a.terms()+b.terms(), c.terms()+d.terms())-1)
}

// packedProduct returns the value of p·q at 2^(64 n).
func packedProduct(p, q Poly, n int) *big.Int {
	x := pack(p, n)
	if p.shares(q) {
		return product(x, x) // math/big squares
	}
	return product(x, pack(q, n))
}

// pack returns p(2^(64 n)).
func pack(p Poly, n int) *big.Int {
	if p.IsZero() {
		return new(big.Int)
	}
	negative := p.Sign(p.Degree()) < 0
	var mask, borrow uint64
	if negative { // the value of −p, which is positive
		mask = ^uint64(0)
	}
	w := make([]uint64, p.terms()*n)
	for i := range p.terms() {
		// The digit is the coefficient, less what the one below has borrowed.
		c, x := w[i*n:(i+1)*n], p.at(i)
		carry := mask & 1
		for k, v := range x {
			c[k], carry = bits.Add64(v^mask, 0, carry)
		}
		// −x may need a sign of its own: only x = −2^(64 k) has a magnitude that
		// looks negative.
		sign := signOf(x[len(x)-1]) ^ mask
		for k := len(x); k < n; k++ {
			c[k], carry = bits.Add64(sign, 0, carry)
		}
		for k := 0; k < n && borrow != 0; k++ {
			c[k], borrow = bits.Sub64(c[k], 0, borrow)
		}
		borrow = c[n-1] >> 63
	}
	v := fromLimbs(w)
	if negative {
		v.Neg(v)
	}
	return v
}

// unpack returns the polynomial of which v is the value at 2^(64 n).
func unpack(v *big.Int, n, terms int) Poly {
	w := make([]uint64, terms*n)
	negative := v.Sign() < 0
	toLimbs(w, v)
	var carry uint64
	for i := range terms {
		c := w[i*n : (i+1)*n]
		for k := 0; k < n && carry != 0; k++ {
			c[k], carry = bits.Add64(c[k], 0, carry)
		}
		// A digit above the half is a negative coefficient and one more above. A
		// carry out of the digit has left 0 and goes on by itself.
		carry += c[n-1] >> 63
		if negative {
			negate(c)
		}
	}
	return trim(w, n)
}

// fromLimbs is the unsigned number with the limbs w.
func fromLimbs(w []uint64) *big.Int {
	words := make([]big.Word, 0, len(w)*64/bits.UintSize)
	for _, x := range w {
		words = append(words, big.Word(x))
		if bits.UintSize == 32 {
			words = append(words, big.Word(x>>32))
		}
	}
	return new(big.Int).SetBits(words)
}

// toLimbs writes the magnitude of v into w.
func toLimbs(w []uint64, v *big.Int) {
	for i, word := range v.Bits() {
		if k := i * bits.UintSize / 64; k < len(w) {
			w[k] |= uint64(word) << (uint(i*bits.UintSize) % 64)
		}
	}
}
