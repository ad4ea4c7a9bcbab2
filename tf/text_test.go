package tf

import (
	"fmt"
	"math/big"
	"testing"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

func TestString(t *testing.T) {
	rats := func(text string) poly.Poly { return rationalPoly(t, text) }
	volt, mm := units.MustParse("V"), units.MustParse("mm")
	for _, c := range []struct {
		g    fmt.Formatter
		verb string
		want string
	}{
		{Continuous{}, "%v", "0"},
		{Must(New(ints(1), ints(1))), "%v", "1"},
		{Must(New(ints(1), ints(0, 1))), "%v", "1/s"},
		{Must(New(rats("1 2"), rats("9 2/5 1"))), "%v", "(2 s + 1)/(s^2 + 0.4 s + 9)"},
		{Must(New(rats("1 2"), rats("9 2/5 1"))), "%d", "(10 s + 5)/(5 s^2 + 2 s + 45)"},
		{Must(New(ints(8), ints(1, 15))), "%v", "8/(15 s + 1)"},
		{Must(New(ints(400, 600000), ints(0, 1500))), "%v", "(6000 s + 4)/(15 s)"},
		{Must(New(ints(1), ints(3))), "%v", "1/3"},
		{Must(New(ints(1), ints(3))), "%g", "0.333333"},
		{Must(New(ints(0, -1), ints(1, 0, -7))), "%v", "s/(7 s^2 - 1)"},
		{Must(New(rats("1/3 -1"), rats("1/7 1"))), "%.3g", "(-7 s + 2.33)/(7 s + 1)"},
		{Must(Must(New(ints(8), ints(1, 15))).WithDeadTime(units.MustParseQuantity("3 min"))), "%v", "exp(-180 s) 8/(15 s + 1)"},
		{Must(Must(New(ints(1, 2), ints(1))).WithDeadTime(units.NewQuantity(big.NewRat(1, 3), units.MustParse("s")))), "%v", "exp(-(1/3) s) (2 s + 1)"},
		{Must(Must(New(ints(1), ints(1, 1))).WithUnits(volt, mm)), "%v", "1/(s + 1) [V -> mm]"},
		{Must(Must(New(ints(1), ints(1, 1))).WithSignals(units.Signal{Name: "valve", Unit: volt}, units.Signal{Name: "level", Unit: mm})),
			"%v", "1/(s + 1) [valve: V -> level: mm]"},
		{Must(NewDiscrete(rats("1/10"), rats("-9/10 1"), units.MustParseQuantity("10 ms"))), "%v", "0.1/(z - 0.9) every 0.01 s"},
		{Must(NewDiscrete(ints(1), ints(-1, 3), units.MustParseQuantity("1/3 s"))), "%v", "1/(3 z - 1) every 1/3 s"},
		{Discrete{}, "%v", "0 every 1 s"},
		{Must(New(ints(1), ints(1, 1))), "%12v|", "   1/(s + 1)|"},
		{Must(New(ints(1), ints(1, 1))), "%-12v|", "1/(s + 1)   |"},
		{Must(New(ints(1), ints(1, 1))), "%x", "%!x(tf.Continuous=1/(s + 1))"},
		{Must(New(rats("1/100000000 12345678"), ints(1))), "%v", "12345678 s + 1e-8"},
		{Must(New(rats("1/100000000 12345678"), ints(1))), "%.4g", "12350000 s + 1e-8"},
	} {
		if got := fmt.Sprintf(c.verb, c.g); got != c.want {
			t.Errorf("%s: %q, want %q", c.verb, got, c.want)
		}
	}
}

func spell(verb string, g fmt.Formatter) string { return fmt.Sprintf(verb, g) }
