package decimal

import (
	"math/big"
	"math/rand/v2"
	"strconv"
	"testing"
)

func TestText(t *testing.T) {
	for _, c := range []struct{ in, want string }{
		{"0", "0"}, {"-1/8", "-0.125"}, {"1/3", "1/3"}, {"1200000", "1200000"}, {"12000000", "1.2e7"}, {"1/1000000", "1e-6"}, {"-5/2", "-2.5"},
	} {
		r, _ := new(big.Rat).SetString(c.in)
		if got := Text(r); got != c.want {
			t.Errorf("Text(%s) = %s, want %s", c.in, got, c.want)
		}
	}
}

// The standard library rounds a float64 to the same digits.
func TestSignificantAgainstStrconv(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for range 20000 {
		x := (random.Float64() - 0.5) * float64(uint64(1)<<random.IntN(60)) / float64(uint64(1)<<random.IntN(60))
		digits := 1 + random.IntN(17)
		got, err := strconv.ParseFloat(Significant(new(big.Rat).SetFloat64(x), digits), 64)
		want, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', digits-1, 64), 64)
		if err != nil || got != want {
			t.Fatalf("%v to %d digits is %v, want %v", x, digits, got, want)
		}
	}
}

// Nothing with as many digits is nearer.
func TestSignificantIsNearest(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 3000 {
		x := new(big.Rat).SetFrac64(int64(r.Uint64()>>(1+r.IntN(60))), 1+int64(r.Uint64()>>(2+r.IntN(62))))
		if x.Sign() == 0 {
			continue
		}
		digits := 1 + r.IntN(20)
		text := Significant(x, digits)
		got, ok := new(big.Rat).SetString(text)
		if !ok {
			t.Fatalf("%q is no number", text)
		}
		unit := big.NewRat(1, 1) // one in the last of the digits of x
		ten := big.NewRat(10, 1)
		for scale := new(big.Rat).Set(x); scale.Cmp(ten) >= 0; scale.Quo(scale, ten) {
			unit.Mul(unit, ten)
		}
		for scale := new(big.Rat).Set(x); scale.Cmp(big.NewRat(1, 1)) < 0; scale.Mul(scale, ten) {
			unit.Quo(unit, ten)
		}
		for range digits - 1 {
			unit.Quo(unit, ten)
		}
		off := new(big.Rat).Sub(got, x)
		if off.Abs(off).Mul(off, big.NewRat(2, 1)).Cmp(unit) > 0 || !new(big.Rat).Quo(got, unit).IsInt() {
			t.Fatalf("%v to %d digits: %s", x, digits, text)
		}
	}
	for _, c := range []struct {
		x      *big.Rat
		digits int
		want   string
	}{
		{big.NewRat(9999, 1), 3, "10000"},
		{big.NewRat(99999, 100000), 4, "1"},
		{big.NewRat(25, 10), 1, "2"},
		{big.NewRat(35, 10), 1, "4"},
		{big.NewRat(1, 1000000), 4, "1e-6"},
		{big.NewRat(-1, 8), 2, "-0.12"},
	} {
		if got := Significant(c.x, c.digits); got != c.want {
			t.Errorf("%v to %d digits: %q, want %q", c.x, c.digits, got, c.want)
		}
	}
}
