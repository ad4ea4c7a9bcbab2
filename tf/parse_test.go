package tf

import (
	"encoding/json"
	"errors"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

func TestParse(t *testing.T) {
	rats := func(text string) poly.Poly { return rationalPoly(t, text) }
	sec := func(text string) units.Quantity { return units.MustParseQuantity(text + " s") }
	pair := func(g Continuous, in, out string) Continuous {
		return Must(g.WithUnits(units.MustParse(in), units.MustParse(out)))
	}
	for _, c := range []struct {
		text string
		want Continuous
	}{
		{"(2 s + 1)/(s^2 + 0.4 s + 9) [V -> mm]", pair(Must(New(ints(1, 2), rats("9 2/5 1"))), "V", "mm")},
		{"exp(-180 s) 8/(15 s + 1) [m -> mA]", Must(pair(Must(New(ints(8), ints(1, 15))), "m", "mA").WithDeadTime(sec("180")))},
		{"400 + 400/(1500 s) [mA -> mm]", pair(Must(New(ints(400, 600000), ints(0, 1500))), "mA", "mm")},
		{"(s + 1)/(s + 1)", Must(New(ints(1, 1), ints(1, 1)))},
		{"s² → 1", Continuous{}},
		{"exp(-1/3 s)", Must(MustParse("1").WithDeadTime(sec("1/3")))},
		{"exp(-0.5 s)/(s + 1)", Must(MustParse("1/(s + 1)").WithDeadTime(sec("1/2")))},
		{"exp(-0.5*s)*(-s)", Must(MustParse("-s").WithDeadTime(sec("1/2")))},
		{"1/s^2 [1→rad]", pair(MustParse("s^-2"), "1", "rad")},
		{"  5e-3  ", Must(New(ints(1), ints(200)))},
		{"2 [opening: mm -> level: m]", Must(MustParse("2").WithSignals(
			units.Signal{Name: "opening", Unit: units.MustParse("mm")}, units.Signal{Name: "level", Unit: units.MustParse("m")}))},
	} {
		got, err := Parse(c.text)
		if strings.Contains(c.text, "² →") {
			if err == nil {
				t.Errorf("%q is read as %v", c.text, got)
			}
			continue
		}
		if err != nil || !got.Equal(c.want) {
			t.Errorf("%q is read as %v, %v, want %v", c.text, got, err, c.want)
		}
	}
	d := MustParseDiscrete("0.1/(z - 0.9) [V -> mm] every 10 ms")
	if d.Period().Value().Cmp(big.NewRat(1, 100)) != 0 || d.String() != "0.1/(z - 0.9) [V -> mm] every 0.01 s" {
		t.Errorf("read as %v", d)
	}
}

func TestParseFaults(t *testing.T) {
	deep := strings.Repeat("(", 10<<20)
	for _, c := range []struct {
		text   string
		offset int   // -1: not checked
		is     error // nil: not checked
		said   string
	}{
		{"", 0, nil, "the end"},
		{"   ", 3, nil, "the end"},
		{"1/0", 2, ErrDivisionByZero, "zero denominator"},
		{"0/0", 2, ErrDivisionByZero, "zero denominator"},
		{"1/(s - s)", 2, ErrDivisionByZero, ""},
		{"1/(s + 1) [Vv -> mm]", 11, nil, "Vv"},
		{"1/(s + 1) [V -> mmm]", 16, nil, "mmm"},
		{"1/(s + 1) [V mm]", 10, nil, "arrow"},
		{"1/(s + 1) [V -> mm", 18, nil, "]"},
		{"1/(s + 1) [V -> mm] 2", 20, nil, `"2"`},
		{"1/(s + 1) [V -> mm] [V -> mm]", 20, nil, ""},
		{"[V -> mm]", 0, nil, ""},
		{"1/(z + 1)", 3, nil, "z"},
		{"1/(s + 1) every 1 s", 10, nil, "ParseDiscrete"},
		{"s^1000000", 2, ErrLimit, ""},
		{"1e999999999", -1, ErrLimit, ""},
		{deep, -1, ErrLimit, ""},
		{"NaN", 0, nil, "NaN"},
		{"exp(180 s)", 4, ErrNegativeDeadTime, ""},
		{"exp(-2)", 4, nil, "dead time"},
		{"exp 2", 4, nil, "dead time"},
		{"exp", 3, nil, "dead time"},
		{"8 exp(-2 s)", 2, nil, "at the beginning"},
		{"exp(-s) exp(-s)", 8, nil, "at the beginning"},
		{"1 [a:b: V -> V]", -1, nil, ""},
		{"1 [ : V -> ]", -1, nil, ""},
		{"1/(s + 1", -1, nil, ""},
		{"\xff", 0, nil, "UTF-8"},
	} {
		got, err := Parse(c.text)
		var s *SyntaxError
		if !errors.As(err, &s) {
			t.Errorf("%.40q: %v, %v, want a *SyntaxError", c.text, got, err)
			continue
		}
		if c.offset >= 0 && s.Offset != c.offset {
			t.Errorf("%.40q: %v, want offset %d", c.text, err, c.offset)
		}
		if c.is != nil && !errors.Is(err, c.is) {
			t.Errorf("%.40q: %v, want %v", c.text, err, c.is)
		}
		if !strings.Contains(err.Error(), c.said) {
			t.Errorf("%.40q: %v, want it to say %q", c.text, err, c.said)
		}
	}
	for _, text := range []string{"1/(z - 1)", "1/(z - 1) every 2 m", "1/(z - 1) every 0 s", "1/(z - 1) every -1 s", "exp(-2 z) every 1 s", "1 every", "1 every 1 s 2"} {
		var s *SyntaxError
		if got, err := ParseDiscrete(text); !errors.As(err, &s) {
			t.Errorf("%q: %v, %v, want a *SyntaxError", text, got, err)
		}
	}
}

func TestJSON(t *testing.T) {
	type file struct {
		Plant   Continuous
		Sampled Discrete
	}
	in := file{MustParse("exp(-180 s) 8/(15 s + 1) [m -> mA]"), MustParseDiscrete("0.1/(z - 0.9) every 0.01 s")}
	text, err := json.Marshal(in)
	if err != nil {
		t.Fatal(err)
	}
	var out file
	if err := json.Unmarshal(text, &out); err != nil || !out.Plant.Equal(in.Plant) || !out.Sampled.Equal(in.Sampled) {
		t.Errorf("%s is read as %v, %v", text, out, err)
	}
	if err := json.Unmarshal([]byte(`{"Plant": "1/0"}`), &out); !errors.Is(err, ErrDivisionByZero) || !out.Plant.Equal(in.Plant) {
		t.Errorf("1/0: %v, left %v", err, out.Plant)
	}
}

// TestRoundTrip writes random functions and reads them back.
func TestRoundTrip(t *testing.T) {
	r := splitmix(4)
	names := []string{"", "u", "gate opening", "level'"}
	some := []string{"1", "V", "mm", "N*m/rad", "m^3/(s*mm)", "kg·m²/s²", "%"}
	signal := func() units.Signal {
		return units.Signal{Name: names[r.intn(len(names))], Unit: units.MustParse(some[r.intn(len(some))])}
	}
	for range 500 {
		g := Must(r.block().WithSignals(signal(), signal()))
		if r.intn(2) == 0 {
			g = Must(g.WithDeadTime(units.NewQuantity(big.NewRat(int64(r.intn(50)), int64(1+r.intn(12))), units.MustParse("s"))))
		}
		if r.intn(4) == 0 {
			g = Must(Scale(g, big.NewRat(int64(r.next()>>1), int64(1+r.next()>>1))))
		}
		for _, text := range []string{g.String(), spell("%d", g)} {
			if back, err := Parse(text); err != nil || !back.Equal(g) {
				t.Fatalf("%q is read as %v, %v", text, back, err)
			}
		}
		d := Must(NewDiscrete(g.Numerator(), g.Denominator(), units.NewQuantity(big.NewRat(int64(1+r.intn(50)), int64(1+r.intn(12))), units.MustParse("s"))))
		d = Must(d.WithSignals(signal(), signal()))
		if back, err := ParseDiscrete(d.String()); err != nil || !back.Equal(d) {
			t.Fatalf("%q is read as %v, %v", d, back, err)
		}
	}
}

func FuzzParse(f *testing.F) {
	for _, text := range []string{
		"(2 s + 1)/(s^2 + 0.4 s + 9) [V -> mm]", "exp(-180 s) 8/(15 s + 1) [m -> mA]",
		"400 + 400/(1500 s) [mA -> mm]", "exp(-1/3 s)", "1/0", "-s [u: V -> y: mm]", "[", "exp(", "every",
		"0.1/(z - 0.9) [V -> mm] every 0.01 s", "z^-3 every 1 h",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		if g, err := Parse(text); err == nil {
			if back, err := Parse(g.String()); err != nil && !errors.Is(err, ErrLimit) || err == nil && !back.Equal(g) {
				t.Errorf("%q gives %v and that %v, %v", text, g, back, err)
			}
		}
		if g, err := ParseDiscrete(text); err == nil {
			if back, err := ParseDiscrete(g.String()); err != nil && !errors.Is(err, ErrLimit) || err == nil && !back.Equal(g) {
				t.Errorf("%q gives %v and that %v, %v", text, g, back, err)
			}
		}
	})
}
