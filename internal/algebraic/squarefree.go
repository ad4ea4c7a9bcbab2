package algebraic

import (
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/intpoly"
)

// prime is 2^61 − 1.
const prime = 1<<61 - 1

// reduce returns x mod 2^61 − 1 for x = hi·2^64 + lo below 2^122.
func reduce(hi, lo uint64) uint64 {
	v := (lo & prime) + (hi<<3 | lo>>61)
	if v >= prime {
		v -= prime
	}
	return v
}

func mulMod(a, b uint64) uint64 { return reduce(bits.Mul64(a, b)) }

func inverseMod(a uint64) uint64 { // a^(prime−2)
	v := uint64(1)
	for k := uint64(prime - 2); k > 0; k >>= 1 {
		if k&1 == 1 {
			v = mulMod(v, a)
		}
		a = mulMod(a, a)
	}
	return v
}

// provedSquareFree reports whether p and p' are coprime modulo 2^61 − 1, which
// proves that p has no multiple root. False proves nothing.
func provedSquareFree(p intpoly.Poly) bool {
	n := p.Degree()
	a := make([]uint64, n+1)
	var m, t big.Int
	m.SetUint64(prime)
	for i := range a {
		a[i] = t.Mod(p.Coefficient(i), &m).Uint64()
	}
	if a[n] == 0 {
		return false
	}
	b := make([]uint64, n)
	for i := range b {
		b[i] = mulMod(a[i+1], uint64(i+1))
	}
	for len(b) > 0 {
		if b[len(b)-1] == 0 {
			b = b[:len(b)-1]
			continue
		}
		inverse := inverseMod(b[len(b)-1])
		for len(a) >= len(b) { // a −= q·x^k·b
			q := prime - mulMod(a[len(a)-1], inverse)
			k := len(a) - len(b)
			for i, c := range b {
				if v := a[k+i] + mulMod(q%prime, c); v >= prime {
					a[k+i] = v - prime
				} else {
					a[k+i] = v
				}
			}
			a = a[:len(a)-1]
		}
		a, b = b, a
	}
	return len(a) == 1
}
