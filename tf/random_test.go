package tf

import (
	"math/big"

	"github.com/qofs/qofs/poly"
)

// splitmix is the splitmix64 generator (Steele, Lea and Flood 2014).
type splitmix uint64

func (s *splitmix) next() uint64 {
	*s += 0x9E3779B97F4A7C15
	z := uint64(*s)
	z = (z ^ z>>30) * 0xBF58476D1CE4E5B9
	z = (z ^ z>>27) * 0x94D049BB133111EB
	return z ^ z>>31
}

func (s *splitmix) intn(n int) int { return int(s.next() % uint64(n)) }

// rat is a small rational number, sometimes 0.
func (s *splitmix) rat() *big.Rat {
	return big.NewRat(int64(s.intn(41)-20), int64(1+s.intn(9)))
}

// poly is a polynomial of the given degree.
func (s *splitmix) poly(degree int) poly.Poly {
	c := make([]*big.Rat, degree+1)
	for i := range c {
		c[i] = s.rat()
	}
	c[degree] = big.NewRat(int64(1+s.intn(20)), int64(1+s.intn(9)))
	return poly.FromRats(c...)
}

// block is a transfer function between dimensionless signals.
func (s *splitmix) block() Continuous {
	return Must(New(s.poly(s.intn(4)), s.poly(s.intn(4))))
}

func ints(c ...int64) poly.Poly { return poly.FromInts(c...) }
