package units

import (
	"errors"
	"math/big"
	"strings"
	"testing"
)

func TestParseSpellings(t *testing.T) {
	for _, c := range []struct{ text, same string }{
		{"mm", "m"}, {"N*m/rad", "kg·m²/(s²·rad)"}, {"kg·m²/s²", "J"}, {"mA", "A"}, {"1/s", "s^-1"},
		{"m^3/(s*mm)", "m³/(s mm)"}, {"°C", "K"}, {"µm", "um"}, {"rad s^-1", "rad/s"}, {"kWh", "kW*h"}, {"Ω", "V/A"}, {"m^(-2)", "1/m^2"},
	} {
		u, err := Parse(c.text)
		if err != nil {
			t.Errorf("Parse(%q): %v", c.text, err)
			continue
		}
		if u.String() != c.text {
			t.Errorf("Parse(%q) is spelled %q", c.text, u)
		}
		if v := MustParse(c.same); u.Dimension() != v.Dimension() {
			t.Errorf("%s and %s differ in dimension", u, v)
		}
	}
}

func TestRefusals(t *testing.T) {
	for _, c := range []struct{ text, says string }{
		{"", "1 for a pure number"}, {"a/b c", "unknown unit"}, {"m/s kg", "parentheses"}, {"m/s/s", "parentheses"}, {"m/s*kg", "parentheses"},
		{"dB", "decibels"}, {"meter", "its symbol, \"m\""}, {"m3", "m^3"}, {"Pascals", "\"Pa\""}, {"kPA", "\"kPa\""}, {"xyzzy", "SI symbols"}, {"pt", "gal"}, {"kw", "kW"}, {"m^1000000", "at most"}, {"m^65", "at most"},
		{strings.Repeat("(", 10<<20), "at most"}, {"1e999999999 m", "exponent"}, {"mkg", ""}, {"m^", "whole number"}, {"(m", "closing"}, {"ksm", ""}, {"secs", "want s"}, {"seconds", "\"s\""}, {strings.Repeat("km^64 ", 40), "power 64"}, {strings.Repeat("m ", 9000), "16384"},
	} {
		_, err := Parse(c.text)
		var syntax *SyntaxError
		if !errors.As(err, &syntax) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("Parse(%.20q) = %v, want a SyntaxError that says %q", c.text, err, c.says)
		}
	}
}

func TestComposition(t *testing.T) {
	for _, c := range []struct{ a, op, b, want string }{
		{"mA/m", "*", "m", "mA"}, {"mm", "/", "mA", "mm/mA"}, {"m/mA", "*", "mA/mm", "m/mm"}, {"1/s", "*", "s", "1"}, {"N*m/rad", "/", "N", "m/rad"},
	} {
		a, b := MustParse(c.a), MustParse(c.b)
		got := a.Mul(b)
		if c.op == "/" {
			got = a.Div(b)
		}
		if got.String() != c.want || !MustParse(got.String()).Equal(got) {
			t.Errorf("%s %s %s = %s, want %s", a, c.op, b, got, c.want)
		}
	}
}

func TestQuantities(t *testing.T) {
	q := MustParseQuantity("12.5 mN*m/A")
	v, err := q.ConvertTo(MustParse("N*m/A"))
	if err != nil || v.Value().Cmp(big.NewRat(1, 80)) != 0 {
		t.Errorf("%v in N*m/A is %v, %v", q, v, err)
	}
	if _, err := ParseQuantity("900 degC"); err == nil || !strings.Contains(err.Error(), "ParseAbsolute") {
		t.Errorf("a bare temperature: %v", err)
	}
	for text, difference := range map[string]string{"900 degC": "900 K", "-18 °F": "-10 K", "9/5 degF": "1 K"} {
		var bare *TemperatureError
		if _, err := ParseQuantity(text); !errors.As(err, &bare) || bare.Text != text || bare.Difference.String() != difference ||
			!strings.HasSuffix(err.Error(), " is "+difference) {
			t.Errorf("%s: %v, want the difference %s", text, err, difference)
		}
	}
	if a, err := ParseAbsolute("900 degC"); err != nil || a.String() != "1173.15 K" {
		t.Errorf("900 degC is %v, %v", a, err)
	}
	if a, err := ParseAbsolute("32 degF"); err != nil || a.String() != "273.15 K" {
		t.Errorf("32 degF is %v, %v", a, err)
	}
	hertz := MustParseQuantity("1 Hz")
	w, err := hertz.ConvertTo(MustParse("rad/s"))
	if f, _ := w.Float64(); err != nil || f != 6.283185307179586 {
		t.Errorf("1 Hz is %v, %v", w, err)
	}
	if _, err := hertz.ConvertTo(MustParse("1/s")); err == nil {
		t.Error("1 Hz was taken for 1/s")
	}
}

// Readings are the inverse of ParseAbsolute; the fixed points of the scales are
// those of NIST SP 811, appendix B.9.
func TestReading(t *testing.T) {
	for _, c := range []struct {
		text, unit string
		want       float64
	}{{"323.15 K", "degC", 50}, {"0 K", "degC", -273.15}, {"900 degC", "degC", 900}, {"32 degF", "degC", 0}, {"100 degC", "degF", 212},
		{"300 K", "K", 300}, {"2 m", "mm", 2000}} {
		if got, err := MustParseAbsolute(c.text).Reading(MustParse(c.unit)); err != nil || got != c.want {
			t.Errorf("%s in %s: %v, %v, want %v", c.text, c.unit, got, err, c.want)
		}
	}
	var mismatch *MismatchError
	if _, err := MustParseQuantity("3 m").Reading(MustParse("degC")); !errors.As(err, &mismatch) {
		t.Error(err)
	}
	if _, err := Parse("KW/K"); err == nil || !strings.Contains(err.Error(), `"kW": kilo is a small k`) {
		t.Error(err)
	}
}
