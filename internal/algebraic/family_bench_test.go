package algebraic

import (
	"fmt"
	"strings"
	"testing"
)

// BenchmarkFamily times the polynomials of testdata by family; one op is one
// polynomial.
func BenchmarkFamily(b *testing.B) {
	families := map[string][]reference{}
	var names []string
	for _, r := range references(b) {
		if families[r.family] == nil {
			names = append(names, r.family)
		}
		families[r.family] = append(families[r.family], r)
	}
	for _, name := range names {
		b.Run("family="+strings.ReplaceAll(name, " ", "-"), func(b *testing.B) {
			inputs := families[name]
			for i := 0; b.Loop(); i++ {
				Roots(inputs[i%len(inputs)].poly)
			}
		})
	}
}

// BenchmarkEnclosure refines one root of a polynomial of degree 8.
func BenchmarkEnclosure(b *testing.B) {
	s := stream(1)
	roots, err := Roots(s.poly(8, 32))
	if err != nil {
		b.Fatal(err)
	}
	for _, bits := range []uint{64, 128, 256, 1024, 8192} {
		b.Run(fmt.Sprintf("bits=%d", bits), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				if _, err := roots[i%len(roots)].Number.Enclosure(bits); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
