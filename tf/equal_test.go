package tf

import (
	"testing"

	"github.com/qofs/qofs/poly"
)

// TestPolesKeepTheirMultiplicity takes a polynomial that floating point cannot
// hold: (s + 1)^5 (s² + 2 s + 5)^3, expanded.
func TestPolesKeepTheirMultiplicity(t *testing.T) {
	denominator := poly.MustParse("(s + 1)^5 (s^2 + 2 s + 5)^3")
	g := Must(New(poly.MustParse("s (s + 2)"), denominator))
	roots, err := g.Poles()
	if err != nil || len(roots) != 3 {
		t.Fatalf("%v, %v", roots, err)
	}
	for i, want := range []struct {
		value complex128
		times int
	}{{-1, 5}, {-1 + 2i, 3}, {-1 - 2i, 3}} {
		if roots[i].Value != want.value || roots[i].Multiplicity != want.times {
			t.Errorf("pole %v, %d times, want %v, %d times", roots[i].Value, roots[i].Multiplicity, want.value, want.times)
		}
	}
	if zeros, err := g.Zeros(); err != nil || len(zeros) != 2 || zeros[0].Value != -2 || zeros[1].Value != 0 {
		t.Errorf("zeros %v, %v", zeros, err)
	}
	if _, err := (Continuous{}).Zeros(); err == nil {
		t.Error("the function 0 has zeros")
	}
}

func TestEqualAndEquivalent(t *testing.T) {
	for _, c := range []struct {
		a, b              string
		equal, equivalent bool
	}{
		{"1/(2 s + 2)", "0.5/(s + 1)", true, true},
		{"s/(s (s + 1))", "1/(s + 1)", false, true},
		{"1 [N*m -> V]", "1 [J -> V]", true, true},
		{"1 [u: V -> V]", "1 [V -> V]", false, true},
		{"1 [V -> V]", "1 [V -> mV]", false, false},
		{"1000 [V -> mV]", "1 [V -> V]", false, false},
		{"exp(-2 s)", "1", false, false},
		{"exp(-2 s) 0", "0", false, true},
		{"1/s", "1/s^2", false, false},
	} {
		a, b := MustParse(c.a), MustParse(c.b)
		if a.Equal(b) != c.equal || a.Equivalent(b) != c.equivalent || b.Equal(a) != c.equal || b.Equivalent(a) != c.equivalent {
			t.Errorf("%s and %s: Equal %v, Equivalent %v", c.a, c.b, a.Equal(b), a.Equivalent(b))
		}
	}
}
