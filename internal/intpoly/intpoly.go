// Package intpoly computes with polynomials that have integer coefficients.
//
// A Poly is an immutable value; its zero value is the polynomial 0. Methods
// return new values and never change an operand; a *big.Int is copied on the
// way in and out, and nil reads as 0. Coefficients ascend: index i belongs to
// x^i.
//
// All coefficients of a polynomial lie in one slice and have the same number
// of 64-bit limbs, the smallest that holds the largest of them in two's
// complement. A polynomial of word-size coefficients is an array of int64. Who
// takes in numbers bounds terms times limbs; see ratpoly.Fits.
package intpoly

import (
	"math/big"
	"math/bits"
	"slices"
)

// Poly is a polynomial with integer coefficients.
type Poly struct {
	_ [0]func()
	w []uint64 // limbs, least significant first; coefficient i is w[i·n : (i+1)·n]
	n int      // limbs of a coefficient; 0 for the polynomial 0
}

// trim returns the polynomial with the limbs w, n to a coefficient, without
// leading zero coefficients and needless limbs. It keeps w.
func trim(w []uint64, n int) Poly {
	for len(w) > 0 && isZero(w[len(w)-n:]) {
		w = w[:len(w)-n]
	}
	if len(w) == 0 {
		return Poly{}
	}
	need := 1
	for i := n; i <= len(w) && need < n; i += n {
		c := w[i-n : i]
		for k := n; k > need; k-- {
			if c[k-1] != signOf(c[k-2]) {
				need = k
				break
			}
		}
	}
	if need < n {
		for i, k := 0, 0; i < len(w); i, k = i+n, k+need {
			copy(w[k:k+need], w[i:i+need])
		}
		w, n = w[:len(w)/n*need], need
	}
	return Poly{w: w, n: n}
}

// signOf returns the limb of which a sign extension consists.
func signOf(limb uint64) uint64 { return uint64(int64(limb) >> 63) }

func isZero(c []uint64) bool {
	for _, x := range c {
		if x != 0 {
			return false
		}
	}
	return true
}

// FromInt64s returns the polynomial with the given ascending coefficients.
func FromInt64s(ascending ...int64) Poly {
	w := make([]uint64, len(ascending))
	for i, v := range ascending {
		w[i] = uint64(v)
	}
	return trim(w, 1)
}

// FromBigs returns the polynomial with the given ascending coefficients.
func FromBigs(ascending ...*big.Int) Poly {
	n := 1
	for len(ascending) > 0 && (ascending[len(ascending)-1] == nil || ascending[len(ascending)-1].Sign() == 0) {
		ascending = ascending[:len(ascending)-1]
	}
	for _, v := range ascending {
		if v != nil {
			n = max(n, v.BitLen()/64+1)
		}
	}
	w := make([]uint64, n*len(ascending))
	for i, v := range ascending {
		if v != nil {
			store(w[i*n:(i+1)*n], v)
		}
	}
	return trim(w, n)
}

// store writes v into c, which has enough limbs.
func store(c []uint64, v *big.Int) {
	for i, word := range v.Bits() {
		c[i*bits.UintSize/64] |= uint64(word) << (uint(i*bits.UintSize) % 64)
	}
	if v.Sign() < 0 {
		negate(c)
	}
}

// load sets v to the coefficient c.
func load(v *big.Int, c []uint64) *big.Int {
	negative := int64(c[len(c)-1]) < 0
	if len(c) == 1 {
		return v.SetInt64(int64(c[0]))
	}
	words := make([]big.Word, 0, len(c)*64/bits.UintSize)
	carry := uint64(1)
	for _, x := range c {
		if negative {
			x, carry = bits.Add64(^x, 0, carry)
		}
		words = append(words, big.Word(x))
		if bits.UintSize == 32 {
			words = append(words, big.Word(x>>32))
		}
	}
	v.SetBits(words)
	if negative {
		v.Neg(v)
	}
	return v
}

// negate sets c to −c.
func negate(c []uint64) {
	carry := uint64(1)
	for i, x := range c {
		c[i], carry = bits.Add64(^x, 0, carry)
	}
}

// at returns the limbs of the coefficient i.
func (p Poly) at(i int) []uint64 {
	return p.w[i*p.n : (i+1)*p.n]
}

// terms is the number of coefficients.
func (p Poly) terms() int {
	if p.n > 1 {
		return len(p.w) / p.n
	}
	return len(p.w)
}

// bigs returns the coefficients as fresh numbers.
func (p Poly) bigs() []*big.Int {
	c := make([]*big.Int, p.terms())
	for i := range c {
		c[i] = load(new(big.Int), p.at(i))
	}
	return c
}

// Degree is the degree, −1 for the polynomial 0.
func (p Poly) Degree() int { return p.terms() - 1 }

// Words is how many 64-bit words each coefficient takes, 0 for the polynomial 0.
func (p Poly) Words() int { return p.n }

// IsZero reports whether p is 0.
func (p Poly) IsZero() bool { return len(p.w) == 0 }

// Coefficient returns the coefficient of x^i as a fresh number; 0 outside the
// range.
func (p Poly) Coefficient(i int) *big.Int {
	if i < 0 || i >= p.terms() {
		return new(big.Int)
	}
	return load(new(big.Int), p.at(i))
}

// Leading returns the leading coefficient, 0 for the polynomial 0.
func (p Poly) Leading() *big.Int { return p.Coefficient(p.Degree()) }

// Sign is the sign of the coefficient of x^i.
func (p Poly) Sign(i int) int {
	if i < 0 || i >= p.terms() {
		return 0
	}
	c := p.at(i)
	switch {
	case int64(c[len(c)-1]) < 0:
		return -1
	case isZero(c):
		return 0
	}
	return 1
}

// BitLen is the bit length of the absolute value of the coefficient of x^i.
func (p Poly) BitLen(i int) int {
	if i < 0 || i >= p.terms() {
		return 0
	}
	c := p.at(i)
	sign := signOf(c[len(c)-1])
	for k := len(c) - 1; k >= 0; k-- {
		x := c[k] ^ sign
		if x == 0 {
			continue
		}
		length := 64*k + bits.Len64(x)
		// −2^b has the complement 2^b − 1, one bit shorter than its magnitude.
		if sign != 0 && x&(x+1) == 0 && allOnes(c[:k], sign) {
			length++
		}
		return length
	}
	return int(sign & 1) // 0 or −1
}

// allOnes reports whether the limbs, complemented by sign, are all ones.
func allOnes(c []uint64, sign uint64) bool {
	for _, x := range c {
		if ^(x ^ sign) != 0 {
			return false
		}
	}
	return true
}

// MaxBitLen is the largest bit length of a coefficient.
func (p Poly) MaxBitLen() int {
	m := 0
	for i := range p.terms() {
		if p.n != 1 || m < 64 {
			m = max(m, p.BitLen(i))
		}
	}
	return m
}

// Span returns b such that −2^b ≤ c < 2^b for every coefficient c: the largest bit
// length, but for a power of two below 0. It is quicker than MaxBitLen.
func (p Poly) Span() int {
	if p.IsZero() {
		return 0
	}
	return p.span()
}

// span is Span for a polynomial that is not 0.
func (p Poly) span() int {
	var or uint64
	for i := p.n - 1; i < len(p.w); i += p.n {
		or |= p.w[i] ^ signOf(p.w[i])
	}
	return 64*(p.n-1) + bits.Len64(or)
}

// IsOne reports whether p is 1.
func (p Poly) IsOne() bool { return len(p.w) == 1 && p.w[0] == 1 }

// Equal reports whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool {
	return p.n == q.n && slices.Equal(p.w, q.w)
}

// MulPower returns p·x^k, k ≥ 0.
func (p Poly) MulPower(k int) Poly {
	if p.IsZero() || k == 0 {
		return p
	}
	w := make([]uint64, len(p.w)+k*p.n)
	copy(w[k*p.n:], p.w)
	return Poly{w: w, n: p.n}
}

// Valuation is the multiplicity of the root 0 (the number of low zero
// coefficients), 0 for the polynomial 0.
func (p Poly) Valuation() int {
	for i := range p.terms() {
		if !isZero(p.at(i)) {
			return i
		}
	}
	return 0
}

// QuoPower returns p/x^k, where k ≤ p.Valuation().
func (p Poly) QuoPower(k int) Poly {
	if k <= 0 || p.IsZero() {
		return p
	}
	return Poly{w: p.w[min(k*p.n, len(p.w)):], n: p.n}
}

// EvenOdd returns E and O with p(x) = E(x²) + x·O(x²).
func (p Poly) EvenOdd() (even, odd Poly) {
	w := make([]uint64, len(p.w))
	split := (p.terms() + 1) / 2 * p.n
	for i := range p.terms() {
		k := i / 2 * p.n
		if i%2 == 1 {
			k += split
		}
		copy(w[k:], p.at(i))
	}
	return trim(w[:split:split], p.n), trim(w[split:], p.n)
}

// Reverse returns x^k·p(1/x) for k = deg p.
func (p Poly) Reverse() Poly {
	w := make([]uint64, len(p.w))
	for i := range p.terms() {
		copy(w[len(w)-(i+1)*p.n:], p.at(i))
	}
	return trim(w, p.n)
}
