package lti_test

import (
	"math/big"
	"os"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// Random sets of equations with units against Cramer's rule by SymPy
// (testdata/generate.py): the same numerator and denominator up to a number,
// common factors included.
func TestAgainstCramersRule(t *testing.T) {
	data, err := os.ReadFile("testdata/systems.txt")
	if err != nil {
		t.Fatal(err)
	}
	cases := strings.Split(strings.TrimSpace(string(data)), "\n\n")
	if len(cases) != 120 {
		t.Fatalf("%d cases, want 120", len(cases))
	}
	for i, c := range cases {
		lines := strings.Split(c, "\n")
		s, err := lti.ParseSystem(lines[0])
		if err != nil {
			t.Errorf("case %d: %v", i, err)
			continue
		}
		g, err := s.TransferFunction(lines[1], lines[2])
		if err != nil {
			t.Errorf("case %d: %v", i, err)
			continue
		}
		w, err := tf.New(polynomial(t, lines[3]), polynomial(t, lines[4]))
		if err == nil {
			w, err = w.WithSignals(g.Input(), g.Output())
		}
		if err != nil || !g.Equal(w) {
			t.Errorf("case %d: %s\n%v, want %v (%v)", i, lines[0], g, w, err)
		}
	}
}

func polynomial(t *testing.T, text string) poly.Poly {
	t.Helper()
	var c []*big.Rat
	for _, f := range strings.Fields(text) {
		r, ok := new(big.Rat).SetString(f)
		if !ok {
			t.Fatalf("%q is not a fraction", f)
		}
		c = append(c, r)
	}
	return poly.FromRats(c...)
}
