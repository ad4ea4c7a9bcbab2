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
func TestAgainstCramersRule(t *testing.T) { againstCramersRule(t, "testdata/systems.txt", 120) }

// The same with integrals (testdata/generate_integrals.py), each of which is an
// unknown of its own there: the modes at 0 are those of the integrators.
func TestIntegralsAgainstCramersRule(t *testing.T) {
	againstCramersRule(t, "testdata/integrals.txt", 80)
}

func againstCramersRule(t *testing.T, file string, count int) {
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	cases := strings.Split(strings.TrimSpace(string(data)), "\n\n")
	if len(cases) != count {
		t.Fatalf("%d cases, want %d", len(cases), count)
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
