// Package peerinput makes the inputs of the benchmarks from a stream that any
// language can repeat, so that libraries outside the project can be timed on
// the same numbers. Only tests use it.
package peerinput

import "math/big"

// Stream is the generator splitmix64 (Steele, Lea and Flood 2014).
type Stream uint64

// Next returns the next 64 bits.
func (s *Stream) Next() uint64 {
	*s += 0x9e3779b97f4a7c15
	z := uint64(*s)
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return z ^ z>>31
}

// Coefficients returns the j-th polynomial of a degree and a coefficient size in
// bits, ascending. The stream is seeded with 1000003·degree + 101·bits + j;
// each coefficient takes as many words as it needs, least significant first,
// the top one masked, and one more whose lowest bit is the sign (1 is minus).
// The lowest bit of the leading coefficient is set.
func Coefficients(degree, bits, j int) []*big.Int {
	s := Stream(1000003*degree + 101*bits + j)
	words := (bits + 63) / 64
	rest := bits - 64*(words-1)
	out := make([]*big.Int, degree+1)
	for k := range out {
		v := new(big.Int)
		for i := range words {
			w := s.Next()
			if i == words-1 && rest < 64 {
				w &= 1<<uint(rest) - 1
			}
			if i == 0 && k == degree {
				w |= 1
			}
			v.Or(v, new(big.Int).Lsh(new(big.Int).SetUint64(w), uint(64*i)))
		}
		if s.Next()&1 == 1 {
			v.Neg(v)
		}
		out[k] = v
	}
	return out
}

// Rats is Coefficients as rational numbers.
func Rats(degree, bits, j int) []*big.Rat {
	c := Coefficients(degree, bits, j)
	out := make([]*big.Rat, len(c))
	for i, v := range c {
		out[i] = new(big.Rat).SetInt(v)
	}
	return out
}

// Degrees and Sizes are those of the tables.
var (
	Degrees = [...]int{2, 4, 8, 16, 32, 64, 128}
	Sizes   = [...]int{32, 256}
)
