package tf

import (
	"errors"
	"strings"
	"testing"

	"github.com/qofs/qofs/units"
)

// TestLimits takes time functions whose ends are known: table 29.3 of
// Abramowitz & Stegun for s, and geometric sequences for z.
func TestLimits(t *testing.T) {
	for _, c := range []struct {
		text           string
		initial, final string // a quantity, or a word that the error says
	}{
		{"3/(s + 2)", "3 1/s", "0 1/s"},                                     // 29.3.8: 3 e^(−2t)
		{"5/s", "5 1/s", "5 1/s"},                                           // 29.3.1: 5
		{"1/(s (s + 4))", "0 1/s", "0.25 1/s"},                              // 29.3.12
		{"s/(s^2 + 4)", "1 1/s", "2 poles of s g(s) on the imaginary axis"}, // 29.3.16: cos 2t
		{"1/(s - 1)", "1 1/s", "1 pole of s g(s) in the right half-plane"},  // e^t
		{"1/s^2", "0 1/s", "1 pole of s g(s) on the imaginary axis"},        // 29.3.2: t
		{"(s - 1)/((s - 1) (s + 2))", "1 1/s", "0 1/s"},                     // a hidden mode that cancels
		{"(s + 1)/(s + 2)", "not strictly proper", "0 1/s"},                 // an impulse, then −e^(−2t)
		{"exp(-3 s) 2 (s + 1)/(s (s + 2)) [V -> mm]", "0 mm/(V*s)", "1 mm/(V*s)"},
		{"0/(s - 1)", "0 1/s", "0 1/s"},
		{"1/((s - 1) (s^2 + 1))", "0 1/s", "1 pole of s g(s) in the right half-plane and 2 poles"},
	} {
		g := MustParse(c.text)
		initial, err := g.InitialValue()
		checkLimit(t, c.text, c.initial, initial, err)
		final, err := g.FinalValue()
		checkLimit(t, c.text, c.final, final, err)
	}
	for _, c := range []struct{ text, initial, final string }{
		{"z/(z - 0.5)", "1", "0"},                                       // 0.5^k
		{"1/(z - 0.5)", "0", "0"},                                       // the same, one period later
		{"3 z/(z - 1)", "3", "3"},                                       // 3
		{"z^2/((z - 1) (z - 0.5))", "1", "2"},                           // sums of 0.5^k
		{"z/(z + 1)", "1", "1 pole of (z - 1) g(z) on the unit circle"}, // (−1)^k
		{"z/(z - 2)", "1", "outside of the unit circle"},
		{"z^2/(z - 0.5)", "improper", "0"},
	} {
		g := MustParseDiscrete(c.text + " every 1 s")
		initial, err := g.InitialValue()
		checkLimit(t, c.text, c.initial, initial, err)
		final, err := g.FinalValue()
		checkLimit(t, c.text, c.final, final, err)
	}
}

func checkLimit(t *testing.T, text, want string, got units.Quantity, err error) {
	t.Helper()
	if err == nil {
		if q, e := units.ParseQuantity(want); e != nil || !got.Equal(q) {
			t.Errorf("%s: %v, want %s", text, got, want)
		}
		return
	}
	var limit *NoLimitError
	if !errors.As(err, &limit) || !strings.Contains(err.Error(), want) {
		t.Errorf("%s: %v, want %s", text, err, want)
	}
}
