package algebraic

import (
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
