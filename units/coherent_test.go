package units

import (
	"strings"
	"testing"
)

// The SI Brochure (9th edition, 2019) spells these: table 4 the first line, table
// 6 the second. The rest is what the rule says, beside what it must not say.
func TestDimensionSpelling(t *testing.T) {
	for _, texts := range []string{
		"N|Pa|J|W|V|F|Ω|H|m/s^2|m^2|m^3",
		"Pa*s|N/m|W/m^2|J/K|W/(m*K)|V/m|F/m|H/m|J/mol|J/(K*mol)|kg/m^3",
		"K/W|W/K|Pa*s/m^3|m^3/Pa|W/(m^2*K)|N*s|N/s|m^3/s|kg/s|kg|m/N|A/s|V/s|V/K|K^2/W|m^2/s^2|1/s|rad/s|count/s|1|mol/m^3|Pa/m",
	} {
		for text := range strings.SplitSeq(texts, "|") {
			d := MustParse(text).Dimension()
			if got := d.String(); got != text || d.Unit().String() != text {
				t.Errorf("%s is spelled %s, as a unit %s", text, got, d.Unit())
			}
		}
	}
	for text, want := range map[string]string{
		"kJ*m/(K*s)": "W*m/K", "S": "1/Ω", "mbar": "Pa", "N*m": "J", "m^2*kg/s^3": "W", "kg/s^2": "N/m", "N*s/m": "kg/s", "T": "N/(m*A)", "Wb": "V*s", "C": "s*A", "lbf/ft": "N/m",
		"kg^-2 s^4": "m^2/N^2", "J^3": "J^3", "1/(W*s)": "1/J", "kg": "kg",
	} {
		if got := MustParse(text).Dimension().String(); got != want {
			t.Errorf("the dimension of %s is spelled %s, want %s", text, got, want)
		}
	}
}

// The spelling is that of the coherent unit, parses back, and is never longer
// than the one in base units, for all small exponents and some large ones.
func TestDimensionSpellingLaws(t *testing.T) {
	check := func(d Dimension) {
		t.Helper()
		u := d.Unit()
		back, err := Parse(d.String())
		if err != nil || !back.Equal(u) || u.Dimension() != d || u.Scale().Cmp(one) != 0 || u.String() != d.String() {
			t.Errorf("%v is spelled %s: %v, %v", d.exponents, d, back, err)
		}
		if n, base := symbolsIn(u.factors()), symbolsIn(d.factors()); n > base {
			t.Errorf("%s has %d symbols, %s in base units %d", d, n, spell(d.factors()), base)
		}
	}
	for _, power := range []int32{1, 16} {
		for i := range int32(5 * 5 * 9 * 5 * 5) {
			var d Dimension
			d.exponents[kilogram] = power * (i%5 - 2)
			d.exponents[metre] = power * (i/5%5 - 2)
			d.exponents[second] = power * (i/25%9 - 4)
			d.exponents[ampere] = power * (i/225%5 - 2)
			d.exponents[kelvin] = power * (i/1125%5 - 2)
			check(d)
		}
	}
}
