package modp

import "math/bits"

// Add returns x + y.
func (f *Field) Add(x, y uint64) uint64 {
	t := x + y
	if t >= f.P {
		t -= f.P
	}
	return t
}

// At returns the value at x of the polynomial with the coefficients c, which
// ascend, all of them stored.
func (f *Field) At(c []uint64, x uint64) uint64 {
	var v uint64
	for i := len(c) - 1; i >= 0; i-- {
		v = f.Add(f.Mul(v, x), c[i])
	}
	return v
}

// manyImages is Images by Remainder.
func (f *Field) manyImages(out, w []uint64, n int, scale uint64) {
	weights := make([]uint64, n)
	x, square := f.Stored(scale), f.Stored(f.one) // 2^(64 (1 − n)) and 2^128
	for k := range weights {
		weights[k] = x
		x = f.Mul(x, square)
	}
	for i := range out {
		c := w[i*n : (i+1)*n]
		out[i] = f.Remainder(c, weights)
		if int64(c[n-1]) < 0 { // less 2^(64 n)
			out[i] = f.Sub(out[i], 1)
		}
	}
}

// PlainImages writes the residues of numbers in two's complement, n limbs each.
func (f *Field) PlainImages(out, w []uint64, n int) {
	if n == 1 {
		f.Images(out, w, 1)
		return
	}
	// The products of the limbs by weights, the stored powers of 2^64, are below
	// 2^64·P: four of them fit 128 bits, and so do two more beside 2^64·2P.
	var store [16]uint64
	weights := store[:]
	if n+1 > len(weights) {
		weights = make([]uint64, n+1)
	}
	weights = weights[:n+1]
	f.Weights(weights)
	negative := f.Plain(weights[n]) // 2^(64 n), which a sign bit takes off
	weights = weights[:n]
	p2 := 2 * f.P
	for i := range out {
		c := w[i*n : i*n+n]
		var hi, lo, carry uint64
		for k, x := range c {
			h, l := bits.Mul64(x, weights[k])
			if k&1 == 0 && k >= 4 && hi >= p2 {
				hi -= p2
			}
			lo, carry = bits.Add64(lo, l, 0)
			hi += h + carry
		}
		if hi >= p2 {
			hi -= p2
		}
		h, _ := bits.Mul64(lo*f.inverse, f.P)
		if lo != 0 {
			h++
		}
		r := f.Below(hi + h)
		if int64(c[n-1]) < 0 {
			r = f.Sub(r, negative)
		}
		out[i] = r
	}
}

// Weights writes what Remainder needs for numbers of up to len(out) limbs.
func (f *Field) Weights(out []uint64) {
	square := f.Stored(f.one) // 2^128
	x := f.one
	for k := range out {
		out[k] = x // stored 2^(64 k)
		x = f.Mul(x, square)
	}
}

// Remainder returns the plain residue of an unsigned number. Its products do not
// wait for each other, so that it is several times faster than a division for
// numbers of many limbs.
func (f *Field) Remainder(c, weights []uint64) uint64 {
	var s0, s1, s2 uint64
	weights = weights[:len(c)]
	for k, x := range c {
		h, l := bits.Mul64(x, weights[k])
		var carry uint64
		s0, carry = bits.Add64(s0, l, 0)
		s1, carry = bits.Add64(s1, h, carry)
		s2 += carry
	}
	// (s0 + 2^64·s1 + 2^128·s2)·2^−64
	_, r := bits.Div64(s2, s1, f.P)
	return f.Add(r, f.reduce(0, s0))
}
