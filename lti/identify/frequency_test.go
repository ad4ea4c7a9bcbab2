package identify

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

var volt, metre = units.Signal{Name: "drive", Unit: units.MustParse("V")}, units.Signal{Name: "motion", Unit: units.MustParse("mm")}

// tableOf samples a transfer function, with noise relative to the value.
func tableOf(t *testing.T, g tf.Continuous, from, to float64, n int, noise float64, seed uint64) FrequencyTable {
	t.Helper()
	r := rand.New(rand.NewPCG(seed, 3))
	var omega []float64
	var value []complex128
	for i := range n {
		w := from * math.Pow(to/from, float64(i)/float64(n-1))
		v := tf.Must(g.FrequencyFunction().At(w))
		omega = append(omega, w)
		value = append(value, v*complex(1+noise*r.NormFloat64(), noise*r.NormFloat64()))
	}
	table, err := NewFrequencyTable(volt, metre, omega, value, nil)
	if err != nil {
		t.Fatal(err)
	}
	return table
}

func coefficient(p poly.Poly, i int) float64 {
	v, _ := p.Coefficient(i).Float64()
	return v
}

// Values of a ratio without noise give its coefficients back, over five decades
// too.
func TestExactTables(t *testing.T) {
	for _, text := range []string{
		"3/(0.2 s + 1)", "(0.5 s + 2)/(0.01 s^2 + 0.03 s + 1)",
		"(s^2 + 0.1 s + 40)/((s^2 + 0.05 s + 25) (s^2 + 0.2 s + 90))",
		"(1e-6 s^2 + 1)/((1e-8 s^2 + 1e-5 s + 1) (3 s + 1))",
	} {
		g := tf.MustParse(text)
		m, n := g.Numerator().Degree(), g.Denominator().Degree()
		table := tableOf(t, g, 0.05, 5000, 300, 0, 1)
		for name, fit := range map[string]func(FrequencyTable, int, int) (FrequencyFit, error){"Levy": Levy, "Sanathanan and Koerner": SanathananKoerner} {
			f, err := fit(table, m, n)
			if err != nil {
				t.Errorf("%s of %s: %v", name, text, err)
				continue
			}
			within := 1e-6
			if name == "Levy" {
				within = 1e-5 // its weights hide the low frequencies
			}
			num, den := f.Function().Numerator(), f.Function().Denominator()
			one, scale := coefficient(den, 0), coefficient(g.Denominator(), 0)
			for k := 0; k <= n; k++ {
				if got, want := coefficient(den, k)/one, coefficient(g.Denominator(), k)/scale; !near(got, want, within) {
					t.Errorf("%s of %s: denominator %d is %v, want %v", name, text, k, got, want)
				}
			}
			for k := 0; k <= m; k++ {
				got, want := coefficient(num, k)/one, coefficient(g.Numerator(), k)/scale
				if want != 0 && !near(got, want, within) {
					t.Errorf("%s of %s: numerator %d is %v, want %v", name, text, k, got, want)
				}
			}
			if f.RelativeError() > within {
				t.Errorf("%s of %s: %v", name, text, f)
			}
		}
	}
}

// With noise and over three decades Levy's weighting ruins the low frequencies,
// which is what Sanathanan and Koerner wrote their paper for.
func TestWeighting(t *testing.T) {
	g := tf.MustParse("2/((10 s + 1) (0.1 s + 1) (0.002 s^2 + 0.01 s + 1))")
	better := 0
	for seed := range uint64(20) {
		table := tableOf(t, g, 0.01, 60, 120, 0.02, seed)
		levy, err := Levy(table, 0, 4)
		if err != nil {
			t.Fatal(err)
		}
		f, err := SanathananKoerner(table, 0, 4)
		if err != nil {
			t.Fatal(err)
		}
		if f.RelativeError() > 0.035 {
			t.Errorf("seed %d: %v", seed, f)
		}
		if f.RelativeError() < levy.RelativeError()/2 {
			better++
		}
		gain := tf.Must(f.Function().StaticGain())
		if v := tf.Must(gain.Float64()); !near(v, 2, 0.03) {
			t.Errorf("seed %d: gain %v", seed, v)
		}
	}
	if better < 15 {
		t.Errorf("better than Levy in %d of 20", better)
	}
}

// Rows of low coherence, which hold noise alone, hardly move the fit.
func TestCoherence(t *testing.T) {
	g := tf.MustParse("3/(0.05 s^2 + 0.1 s + 1)")
	clean := tableOf(t, g, 0.3, 30, 100, 0.01, 4)
	value, coherence := make([]complex128, 100), make([]float64, 100)
	r := rand.New(rand.NewPCG(8, 9))
	for i, v := range clean.value {
		value[i], coherence[i] = v, 0.999
		if i%10 == 3 {
			value[i], coherence[i] = v*complex(1+r.NormFloat64(), r.NormFloat64()), 0.05
		}
	}
	table, err := NewFrequencyTable(volt, metre, clean.omega, value, coherence)
	if err != nil {
		t.Fatal(err)
	}
	f, err := SanathananKoerner(table, 0, 2)
	if err != nil || !near(tf.Must(tf.Must(f.Function().StaticGain()).Float64()), 3, 0.02) {
		t.Error(f, err)
	}
	if all := strings.Join(f.Warnings(), "\n"); !strings.Contains(all, "coherence is below 0.8 at 10 of 100") {
		t.Error(all)
	}
}

func TestIntegrators(t *testing.T) {
	g := tf.MustParse("0.3/(s (0.2 s + 1))")
	f, err := SanathananKoerner(tableOf(t, g, 0.1, 50, 50, 0, 1).WithoutIntegrators(1), 0, 1)
	if err != nil {
		t.Fatal(err)
	}
	if v := coefficient(f.Function().Denominator(), 1) / coefficient(f.Function().Denominator(), 0); !near(v, 0.2, 1e-9) {
		t.Error(f)
	}
}

func TestFrequencyWarnings(t *testing.T) {
	table := tableOf(t, tf.MustParse("3/(0.2 s + 1)"), 0.1, 100, 60, 0.001, 2)
	f, err := SanathananKoerner(table, 3, 4)
	if err == nil && !strings.Contains(f.String(), "nearly cancelled") && !strings.Contains(f.String(), "right half-plane") {
		t.Error(f)
	}
	delayed := tf.Must(tf.MustParse("3/(0.2 s + 1)").WithDeadTime(units.MustParseQuantity("0.5 s")))
	f, err = SanathananKoerner(tableOf(t, delayed, 0.1, 100, 20, 0, 2), 0, 1)
	if err != nil || !strings.Contains(f.String(), "dead time") || !strings.Contains(f.String(), "the phase turns") {
		t.Error(f, err)
	}
	for _, c := range [][2]int{{30, 30}, {-1, 2}, {41, 2}} {
		if _, err := Levy(table, c[0], c[1]); err == nil {
			t.Errorf("degrees %v were fitted", c)
		}
	}
	if _, err := Levy(FrequencyTable{}, 0, 0); !errors.Is(err, ErrNoTest) {
		t.Error(err)
	}
}

func TestReadFrequencyTable(t *testing.T) {
	text := "# hammer test\nfrequency: Hz, magnitude: dB re um/V, phase: deg, coherence: 1, temperature: degC\n" +
		"2, 40, -90, 0.9, 21\n1, 46.02059991, -45, 1, 21\n\n3, , -100, 1, 22\n"
	table, err := ReadFrequencyTable(strings.NewReader(text), volt, metre)
	if err != nil {
		t.Fatal(err)
	}
	w, v, c := table.Row(0)
	if table.Len() != 2 || !near(w, 2*math.Pi, 1e-15) || cmplx.Abs(v-cmplx.Rect(0.2, -math.Pi/4)) > 1e-9 || c != 1 {
		t.Error(w, v, c)
	}
	if w, v, c := table.Row(1); !near(w, 4*math.Pi, 1e-15) || cmplx.Abs(v-complex(0, -0.1)) > 1e-15 || c != 0.9 {
		t.Error(w, v, c)
	}
	if got := table.Warnings(); len(got) != 1 || got[0] != "1 row is left out because a value is missing" {
		t.Errorf("%q", got)
	}
	var row *RowError
	var mismatch *units.MismatchError
	for text, want := range map[string]string{
		"frequency: Hz, magnitude: mm/V":                          `row 1: found the columns frequency, magnitude, want one of the name "phase"`,
		"frequency: m, magnitude: mm/V, phase: deg":               `row 1, column "frequency": found m, want rad/s`,
		"frequency: Hz, magnitude: K, phase: deg":                 `row 1, column "magnitude": found K, want mm/V`,
		"frequency: Hz, magnitude: mm/V, phase: deg\n0, 1, 2":     "row 2: found a frequency of 0 rad/s, want one above 0",
		"frequency: Hz, magnitude: mm/V, phase: deg\n1, 1":        "row 2: found 2 fields, want 3, as in the header",
		"frequency: Hz, magnitude: mm/V, phase: deg\n1, 1e999, 2": `row 2, column "magnitude": found "1e999", want a decimal number`,
		"frequency: Hz, magnitude: parsec/V, phase: deg\n1, 1, 2": `row 1: found " magnitude: parsec/V"`,
		"frequency: Hz, magnitude: mm/V, phase: deg\n1, 0, 2":     "row 2: found the value (0+0i)",
		"": "row 1: found the end of the table",
	} {
		_, err := ReadFrequencyTable(strings.NewReader(text), volt, metre)
		if !errors.As(err, &row) || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("%q: %v", text, err)
		}
		if strings.Contains(text, "magnitude: K") && !errors.As(err, &mismatch) {
			t.Error(err)
		}
	}
}

func TestReadRecord(t *testing.T) {
	text := "# zone 3\ntime: min, heater: kW, spare: V, zone: degC # readings\n0, 2, 1, 640\n0.5, 2.3, 1, 640.5\n0.5, 2.3, 1, 640.6\n1, 2.3, 1, nan\n2, 2.3, 1, 641\n"
	r, err := ReadRecord(strings.NewReader(text), "heater", "zone")
	if err != nil {
		t.Fatal(err)
	}
	if x, u, y := r.Row(3); r.Len() != 4 || x != 120 || u != 2.3 || y != 641 || r.Input().Name != "heater" || !r.Output().Unit.Equal(units.MustParse("K")) {
		t.Error(x, u, y, r.Input(), r.Output())
	}
	got := fmt.Sprint(r.Warnings())
	if !strings.Contains(got, "1 row is left out because a value is missing, the first at row 6") || !strings.Contains(got, "time stamps repeat at row 5") {
		t.Error(got)
	}
	// Rows are lines of the file, also after a part has been cut out.
	late := "# a comment\n\ntime: s, a: V, b: V\n0, 1, 2\n1, 1, -\n2, 2, 2\n3, 2, 3\n# another\n40, 2, 4\n40, 2, 4\n"
	r, err = ReadRecord(strings.NewReader(late), "a", "b")
	if err != nil {
		t.Fatal(err)
	}
	if got := fmt.Sprint(r.Between(2, 50).Warnings()); !strings.Contains(got, "a gap of 37 s before row 9") || !strings.Contains(got, "time stamps repeat at row 10") {
		t.Error(got)
	}
	var row *RowError
	for text, want := range map[string]string{
		"time: m, a: V, b: V\n": `row 1, column "time": found m, want a unit of time`,
		"time: s, a: V\n":       `row 1: found the columns time, a, want one of the name "b"`,
		"time: s, a: V, b: V\n0, 1, 2\n2, 1, 2\n1, 1, 2\n": `row 4, column "time": found 1 s after 2 s, want instants that ascend`,
		"time: s, a: V, b: V\n0, one, 2\n":                 `row 2, column "a": found "one", want a decimal number`,
		"time: s, a: V, b: V\n0, 1\n":                      "row 2: found 2 fields, want 3, as in the header",
		"time: s, a: furlong, b: V\n":                      `row 1: found " a: furlong", want a column such as`,
	} {
		if _, err := ReadRecord(strings.NewReader(text), "a", "b"); !errors.As(err, &row) || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("%q: %v", text, err)
		}
	}
	if _, err := ReadRecord(strings.NewReader("time: s, a: V, b: V\n"+strings.Repeat("1", maxLine+1)), "a", "b"); !errors.Is(err, ErrLimit) {
		t.Error(err)
	}
	if _, err := ReadRecord(strings.NewReader(strings.Repeat("a: V,", maxColumns)+"b: V"), "a", "b"); !errors.Is(err, ErrLimit) {
		t.Error(err)
	}
}

func FuzzReadRecord(f *testing.F) {
	f.Add("time: min, a: kW, b: degC\n0, 2, 640\n0.5, 2.3, 640.5\n")
	f.Add("frequency: Hz, magnitude: dB re 1, phase: deg\n1,2,3\n")
	f.Fuzz(func(t *testing.T, text string) {
		if r, err := ReadRecord(strings.NewReader(text), "a", "b"); err == nil {
			r.Warnings()
			for _, fit := range []func(Record) (Fit, error){TwoPoint, Area} {
				if f, err := fit(r); err == nil && f.Function().Denominator().IsZero() {
					t.Fatal("no function")
				}
			}
		}
		if table, err := ReadFrequencyTable(strings.NewReader(text), units.Signal{}, units.Signal{}); err == nil {
			table.Warnings()
			if f, err := Levy(table, 0, 1); err == nil {
				_ = f.String()
			}
		}
	})
}
