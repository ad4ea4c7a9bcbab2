package algebraic

import (
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

// TestEnclosure compares enclosures with correctly rounded components of many
// more digits.
func TestEnclosure(t *testing.T) {
	s := stream(6)
	polys := []intpoly.Poly{intpoly.FromInt64s(2, 0, 1), intpoly.FromInt64s(0, 0, 3, 1), intpoly.FromInt64s(5, 2, 1).Pow(3)}
	for range 40 {
		polys = append(polys, s.poly(1+s.below(8), 40))
	}
	for _, p := range polys {
		roots, err := Roots(p)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range roots {
			re, im, err := r.Number.Rounded(900)
			if err != nil {
				t.Fatal(err)
			}
			size := new(big.Float).Add(new(big.Float).Abs(re), new(big.Float).Abs(im))
			for _, prec := range []uint{1, 53, 100, 128, 500} {
				z, err := r.Number.Enclosure(prec)
				if err != nil {
					t.Fatal(err)
				}
				a, _ := re.Rat(nil)
				b, _ := im.Rat(nil)
				if !z.Re.ContainsRat(a) || !z.Im.ContainsRat(b) {
					t.Fatalf("%v, %d bits: %v + %vi not in %v", r.Number.Value(), prec, re, im, z)
				}
				limit := new(big.Float).SetMantExp(size, -int(prec))
				if z.Re.Radius().Cmp(limit) > 0 || z.Im.Radius().Cmp(limit) > 0 {
					t.Fatalf("%v, %d bits: radius above %g", r.Number.Value(), prec, limit)
				}
				if r.Number.IsReal() && !z.Im.IsZero() || r.Number.IsImaginary() && !z.Re.IsZero() {
					t.Fatalf("%v: exact zero lost in %v", r.Number.Value(), z)
				}
			}
		}
	}
}
