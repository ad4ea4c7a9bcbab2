package intpoly

import (
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/modp"
)

// transformWords is from how many limbs of the shorter factor on a product of
// integers goes through transforms.
const transformWords = 2500

// product returns x·y. Long ones are taken as polynomials in 2^64, whose
// coefficients three primes hold (Pollard 1971), which is faster than
// Karatsuba's method of math/big.
func product(x, y *big.Int) *big.Int {
	if min(x.BitLen(), y.BitLen()) < 64*transformWords {
		return new(big.Int).Mul(x, y)
	}
	a, b := limbsOf(x), limbsOf(y)
	if len(a) > len(b) {
		a, b = b, a
	}
	z := fromLimbs(multiplyLimbs(a, b))
	if x.Sign() != y.Sign() {
		z.Neg(z)
	}
	return z
}

// limbsOf returns the magnitude of v.
func limbsOf(v *big.Int) []uint64 {
	w := make([]uint64, (v.BitLen()+63)/64)
	toLimbs(w, v)
	return w
}

// multiplyLimbs returns a·b, unsigned, where a is not the longer one. b is cut into
// pieces for which the transform of a is used again. One prime goes after the
// other, so that the roots of unity of one only are in memory.
func multiplyLimbs(a, b []uint64) []uint64 {
	out := make([]uint64, len(a)+len(b)+3)
	order := 1 << bits.Len(uint(min(len(a)+len(b), 4*len(a))-1))
	piece := order - len(a) + 1
	pieces := (len(b) + piece - 1) / piece
	var fields [3]*modp.Field
	var residues [3][]uint64
	once := make([]uint64, order)
	for k := range residues {
		t := modp.NewTransform(k, order)
		fields[k], residues[k] = &modp.Field{}, make([]uint64, pieces*order)
		*fields[k] = t.Field
		load4(t, once, a)
		t.Forward(once)
		for i := range pieces {
			part := residues[k][i*order : (i+1)*order]
			load4(t, part, b[i*piece:min((i+1)*piece, len(b))])
			t.Forward(part)
			for i, v := range part {
				part[i] = t.Mul(t.Below(v), t.Below(once[i]))
			}
			t.Backward(part)
			t.Scale(part)
		}
	}
	join := newThree(fields[0], fields[1], fields[2])
	for i := range pieces {
		n := len(a) + min(piece, len(b)-i*piece) - 1
		from := i * order
		join.addTo(out[i*piece:], residues[0][from:], residues[1][from:], residues[2][from:], n)
	}
	return out[:len(a)+len(b)]
}

// load4 writes limbs, each less a multiple of P so that it is below 4 P, and zeros
// behind them.
func load4(t *modp.Transform, out, limbs []uint64) {
	for i, v := range limbs {
		if v >= 4*t.P { // P is a little below 2^62
			v -= 4 * t.P
		}
		out[i] = v
	}
	clear(out[len(limbs):])
}

// three puts residues modulo three primes together.
type three struct {
	p, q, r          *modp.Field
	pInQ, pInR, qInR uint64 // stored inverses
	pqHigh, pqLow    uint64 // p·q
}

func newThree(p, q, r *modp.Field) *three {
	j := &three{p: p, q: q, r: r, pInQ: q.Inverse(q.Stored(p.P % q.P)), pInR: r.Inverse(r.Stored(p.P % r.P)), qInR: r.Inverse(r.Stored(q.P % r.P))}
	j.pqHigh, j.pqLow = bits.Mul64(p.P, q.P)
	return j
}

// addTo adds the numbers below p·q·r with the given residues, each 64 bits above
// the one before.
func (j *three) addTo(out, x, y, z []uint64, n int) {
	var c0, c1, c2 uint64 // what has not been written yet
	for i := range n {
		// v = x + p·(d + q·e)
		d := j.q.Mul(j.q.Sub(y[i], below(x[i], j.q.P)), j.pInQ)
		e := j.r.Mul(j.r.Sub(j.r.Mul(j.r.Sub(z[i], below(x[i], j.r.P)), j.pInR), below(d, j.r.P)), j.qInR)
		h1, l1 := bits.Mul64(j.p.P, d)
		h2, l2 := bits.Mul64(j.pqLow, e)
		h3, l3 := bits.Mul64(j.pqHigh, e)
		var carry uint64
		c0, carry = bits.Add64(c0, x[i], 0)
		c1, carry = bits.Add64(c1, 0, carry)
		c2 += carry
		c0, carry = bits.Add64(c0, l1, 0)
		c1, carry = bits.Add64(c1, h1, carry)
		c2 += carry
		c0, carry = bits.Add64(c0, l2, 0)
		c1, carry = bits.Add64(c1, h2, carry)
		c2 += carry
		c1, carry = bits.Add64(c1, l3, 0)
		c2 += h3 + carry
		out[i], carry = bits.Add64(out[i], c0, 0)
		c0, carry = bits.Add64(c1, 0, carry)
		c1, c2 = c2+carry, 0
	}
	var carry uint64
	for i, v := range []uint64{c0, c1} {
		out[n+i], carry = bits.Add64(out[n+i], v, carry)
	}
	for i := n + 2; carry != 0 && i < len(out); i++ {
		out[i], carry = bits.Add64(out[i], 0, carry)
	}
}

// below returns x modulo p for x < 2 p.
func below(x, p uint64) uint64 {
	if x >= p {
		x -= p
	}
	return x
}
