package tf

import (
	"errors"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
)

// Compositions beyond all use are refused at once.
func TestHostileSizes(t *testing.T) {
	long := make([]*big.Rat, 2)
	many := make([]*big.Rat, 100001)
	for i := range long {
		long[i] = new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), 1<<21))
	}
	for i := range many {
		many[i] = big.NewRat(int64(i%7+1), 1)
	}
	g, h := Must(New(poly.FromRats(long...), poly.FromInts(1, 1))), Must(New(poly.FromInts(1), poly.FromRats(many...)))
	for name, compose := range map[string]func() (Continuous, error){
		"Series":   func() (Continuous, error) { return Series(g, h) },
		"Parallel": func() (Continuous, error) { return Parallel(g, h) },
		"Feedback": func() (Continuous, error) { return Feedback(g, h) },
	} {
		if _, err := compose(); !errors.Is(err, ErrLimit) || !strings.Contains(err.Error(), name) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
