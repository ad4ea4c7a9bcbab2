package tf

import (
	"errors"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// TestPadeApproximant compares with the factorials of the closed form and with
// the Taylor series of exp(−T s), which a Padé approximant of degree n shares
// up to s^(2n) (Padé 1892).
func TestPadeApproximant(t *testing.T) {
	period := big.NewRat(7, 3)
	late := Must(MustParse("1").WithDeadTime(units.NewQuantity(period, units.MustParse("s"))))
	for n := range 13 {
		g := Must(late.PadeApproximant(n))
		if g.DeadTime().Sign() != 0 {
			t.Fatalf("degree %d keeps a dead time", n)
		}
		above, below := make([]*big.Rat, n+1), make([]*big.Rat, n+1)
		power := big.NewRat(1, 1)
		for k := range n + 1 {
			c := new(big.Rat).SetFrac(
				new(big.Int).Mul(factorial(2*n-k), factorial(n)),
				new(big.Int).Mul(factorial(2*n), new(big.Int).Mul(factorial(k), factorial(n-k))))
			below[k] = new(big.Rat).Mul(c, power)
			above[k] = new(big.Rat).Set(below[k])
			if k%2 == 1 {
				above[k].Neg(above[k])
			}
			power.Mul(power, period)
		}
		num, den := ratpoly.FromRats(above...), ratpoly.FromRats(below...)
		if want := Must(quotient(poly.Poly(num), poly.Poly(den))); !g.c.f.Equal(want) {
			t.Errorf("degree %d: %v", n, g)
		}
		// den·exp − num = O(s^(2n+1)), and no further.
		for k := 0; k <= 2*n+1; k++ {
			sum := new(big.Rat).Neg(num.Coefficient(k))
			term := big.NewRat(1, 1) // (−T)^j/j!
			for j := 0; j <= k; j++ {
				sum.Add(sum, new(big.Rat).Mul(term, den.Coefficient(k-j)))
				term.Mul(term, new(big.Rat).Quo(new(big.Rat).Neg(period), big.NewRat(int64(j+1), 1)))
			}
			if (sum.Sign() == 0) != (k <= 2*n) {
				t.Errorf("degree %d: coefficient %d of the error is %v", n, k, sum)
			}
		}
	}
	if g := Must(MustParse("exp(-2 s) 3/s").PadeApproximant(1)); !g.Equal(MustParse("3 (1 - s)/(s (1 + s))")) {
		t.Errorf("degree 1: %v", g)
	}
	for _, n := range []int{-1, MaxPadeDegree + 1} {
		if _, err := late.PadeApproximant(n); !errors.Is(err, ErrLimit) {
			t.Errorf("degree %d: %v", n, err)
		}
	}
	if g := MustParse("1/s"); !Must(g.PadeApproximant(5)).Equal(g) {
		t.Error("a function without dead time is changed")
	}
}

func factorial(n int) *big.Int { return new(big.Int).MulRange(1, int64(n)) }
