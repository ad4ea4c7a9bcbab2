package lti_test

import (
	"encoding/json"
	"math/big"
	"os"
	"strconv"
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

// Free responses of random sets of equations, some of them algebraic, some with
// integrals, against SymPy and mpmath (testdata/generate_free.py), which find
// consistent values by another way.
func TestFreeResponsesAgainstSymPy(t *testing.T) {
	data, err := os.ReadFile("testdata/free.txt")
	if err != nil {
		t.Fatal(err)
	}
	cases := strings.Split(strings.TrimSpace(string(data)), "\n\n")
	if len(cases) != 60 {
		t.Fatalf("%d cases, want 60", len(cases))
	}
	for i, c := range cases {
		lines := strings.Split(c, "\n")
		s, err := lti.ParseSystem(lines[0])
		if err != nil {
			t.Errorf("case %d: %v", i, err)
			continue
		}
		var pairs [][2]string
		if err := json.Unmarshal([]byte(lines[2]), &pairs); err != nil {
			t.Fatal(err)
		}
		var values []lti.InitialValue
		for _, p := range pairs {
			values = append(values, lti.Initially(p[0], p[1]))
		}
		state, err := s.InitialState(strings.Fields(lines[1]), values...)
		if err != nil {
			t.Errorf("case %d: %s\n%s\n%v", i, lines[0], lines[2], err)
			continue
		}
		for _, line := range lines[3:] {
			f := strings.Split(line, " | ")
			x, err := state.FreeResponse(f[0])
			if err != nil {
				t.Errorf("case %d: %s: %v", i, f[0], err)
				continue
			}
			want, err := tf.New(polynomial(t, f[1]), polynomial(t, f[2]))
			if err != nil || !sameRational(x.Laplace(), want) {
				t.Errorf("case %d: %s is %v, want the transform %v (%v)", i, f[0], x, want, err)
			}
			for k, at := range []float64{3, 20} {
				w, err := strconv.ParseFloat(f[3+k], 64)
				if v, err2 := x.At(at); err != nil || err2 != nil || v != w {
					t.Errorf("case %d: %s(%v) = %v, %v, want %v (%v)", i, f[0], at, v, err2, w, err)
				}
			}
		}
	}
}
