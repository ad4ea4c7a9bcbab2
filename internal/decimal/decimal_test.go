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
