package poly

import (
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"
)

// The values are SymPy's; testdata/generate.py makes them.
func TestAlgebraAgainstSymPy(t *testing.T) {
	data, err := os.ReadFile("testdata/algebra.txt")
	if err != nil {
		t.Fatal(err)
	}
	read := func(text string) Poly {
		var c []*big.Rat
		for _, field := range strings.Fields(text) {
			r, ok := new(big.Rat).SetString(field)
			if !ok {
				t.Fatalf("bad number %q", field)
			}
			c = append(c, r)
		}
		return FromRats(c...)
	}
	lines := strings.Split(strings.TrimSpace(string(data)), "\n")
	for i, line := range lines {
		f := strings.Split(line, ";")
		p, q := read(f[0]), read(f[1])
		if g, err := p.GCD(q); err != nil || !g.Equal(read(f[2])) {
			t.Errorf("line %d: gcd %v, %v", i+1, g, err)
		}
		if r, err := p.Resultant(q); err != nil || r.Cmp(read(f[3]).Coefficient(0)) != 0 {
			t.Errorf("line %d: resultant %v, %v, want %s", i+1, r, err, f[3])
		}
		factors, err := p.SquareFree()
		want := strings.Split(f[4], ",")
		if err != nil || len(factors) != len(want) {
			t.Errorf("line %d: square-free factors %v, %v", i+1, factors, err)
			continue
		}
		for j, w := range want {
			text, multiplicity, _ := strings.Cut(w, "^")
			if !factors[j].Poly.Equal(read(text)) || strconv.Itoa(factors[j].Multiplicity) != multiplicity {
				t.Errorf("line %d: square-free factor %v, %d times, want %s", i+1, factors[j].Poly, factors[j].Multiplicity, w)
			}
		}
		if n, err := p.CountRealRoots(nil, nil); err != nil || strconv.Itoa(n) != f[5] {
			t.Errorf("line %d: %d real roots, %v, want %s", i+1, n, err, f[5])
		}
	}
	if len(lines) != 120 {
		t.Errorf("%d lines", len(lines))
	}
}
