package intpoly

import (
	"math/big"
	"math/bits"
)

// Arithmetic modulo 2^(64 n) on n limbs.

// lowBig is from how many limbs on math/big multiplies, with Karatsuba's method.
const lowBig = 64

// multiplyLow sets z to x·y; z must not overlap x or y.
func multiplyLow(z, x, y []uint64) {
	clear(z)
	n := len(z)
	if n >= lowBig {
		toLimbs(z, new(big.Int).Mul(fromLimbs(x[:n]), fromLimbs(y[:n])))
		return
	}
	if n == 1 {
		z[0] = x[0] * y[0]
		return
	}
	for i := range n {
		var carry uint64
		row := z[i:]
		v := x[i]
		for j, u := range y[:n-i] {
			hi, lo := bits.Mul64(v, u)
			var c uint64
			lo, c = bits.Add64(lo, carry, 0)
			hi += c
			row[j], c = bits.Add64(row[j], lo, 0)
			carry = hi + c
		}
	}
}

// subtractProduct subtracts x·y from z; x may be shorter than z, with its sign
// extended.
func subtractProduct(z, x, y []uint64) {
	n := len(z)
	if n == 1 {
		z[0] -= x[0] * y[0]
		return
	}
	if len(x) >= lowBig {
		product := make([]uint64, n)
		toLimbs(product, new(big.Int).Mul(fromLimbs(x), fromLimbs(y[:n])))
		var borrow uint64
		for j, u := range product {
			z[j], borrow = bits.Sub64(z[j], u, borrow)
		}
	} else {
		for i, v := range x {
			var carry uint64
			row := z[i:]
			for j, u := range y[:n-i] {
				hi, lo := bits.Mul64(v, u)
				var c uint64
				lo, c = bits.Add64(lo, carry, 0)
				hi += c
				row[j], c = bits.Sub64(row[j], lo, 0)
				carry = hi + c
			}
		}
	}
	if len(x) < n && int64(x[len(x)-1]) < 0 { // x stands for x − 2^(64·len x)
		var carry uint64
		row := z[len(x):]
		for j, u := range y[:n-len(x)] {
			row[j], carry = bits.Add64(row[j], u, carry)
		}
	}
}

// invert sets z to the inverse of the odd x, by Newton's iteration.
func invert(z, x []uint64) {
	// 3·x xor 2 is right to 5 bits (Montgomery), and each step doubles them.
	v := 3*x[0] ^ 2
	for range 4 {
		v *= 2 - x[0]*v
	}
	clear(z)
	z[0] = v
	n := len(z)
	if n == 1 {
		return
	}
	t, u := make([]uint64, n), make([]uint64, n)
	for correct := 1; correct < n; correct *= 2 {
		m := min(n, 2*correct)
		multiplyLow(t[:m], x[:m], z[:m])
		negate(t[:m])
		var carry uint64
		t[0], carry = bits.Add64(t[0], 2, 0)
		for k := 1; k < m && carry != 0; k++ {
			t[k], carry = bits.Add64(t[k], 0, carry)
		}
		multiplyLow(u[:m], z[:m], t[:m])
		copy(z[:m], u[:m])
	}
}
