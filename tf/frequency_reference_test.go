package tf

import (
	"bufio"
	"errors"
	"math"
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"
)

// TestFrequencyReference compares magnitude, decibels, phase and group delay bit
// for bit with testdata/generate_frequency.py: mpmath at 400 bits from known
// factors.
func TestFrequencyReference(t *testing.T) {
	file, err := os.Open("testdata/frequency.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	count := 0
	for lines := bufio.NewScanner(file); lines.Scan(); count++ {
		part := strings.Split(lines.Text(), "; ")
		g := Must(New(rationalPoly(t, part[0]), rationalPoly(t, part[1])))
		delay, _ := new(big.Rat).SetString(part[2])
		g.c.setDelay(delay)
		omega := hexFloat(t, part[3])
		f := g.FrequencyFunction()
		for i, word := range strings.Fields(part[4]) {
			want := hexFloat(t, word)
			read := []func(float64) (float64, error){f.Magnitude, f.Decibels, f.Phase, f.GroupDelay}[i]
			if got, err := read(omega); err != nil || got != want {
				t.Errorf("%v at %v, %s: %v, %v, want %v", g, omega, []string{"magnitude", "decibels", "phase", "group delay"}[i], got, err, want)
			}
		}
	}
	if count < 300 {
		t.Errorf("%d cases, want 300", count)
	}
}

func hexFloat(t testing.TB, text string) float64 {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func TestFrequencySpecialValues(t *testing.T) {
	phase, delay := FrequencyFunction.Phase, FrequencyFunction.GroupDelay
	magnitude, decibels := FrequencyFunction.Magnitude, FrequencyFunction.Decibels
	for _, c := range []struct {
		name  string
		read  func(FrequencyFunction, float64) (float64, error)
		text  string
		omega float64
		want  float64
	}{
		{"gain 3/5", magnitude, "3/(3 s + 4)", 1, 0.6},
		{"decade per power", decibels, "100/s", 1, 40},
		{"tenth", decibels, "1/(10 s)", 1, -20},
		{"unity", decibels, "(1 - s)/(1 + s)", 3, 0},
		{"unity", magnitude, "exp(-3 s) (1 - s)/(1 + s)", 3, 1},
		{"integrator", phase, "1/s", 2, -math.Pi / 2},
		{"integrators", phase, "1/s^5", 2, -5 * math.Pi / 2},
		{"positive", phase, "3", 7, 0},
		{"negative", phase, "-3", 7, -math.Pi},
		{"negative at 0", phase, "-3/(s + 1)", 0, -math.Pi},
		{"dead time alone", phase, "exp(-0.5 s)", 3, -1.5},
		{"lag of 45 degrees", phase, "1/(s + 1)", 1, -math.Pi / 4},
		{"negative frequency", phase, "1/(s + 1)", -1, math.Pi / 4},
		{"below a pair of poles", phase, "1/(s^2 + 4)", 1, 0},
		{"above a pair of poles", phase, "1/(s^2 + 4)", 3, -math.Pi},
		{"above a pair of zeros", phase, "s^2 + 4", 3, math.Pi},
		{"seven lags", phase, "1/(s + 1)^8", 1, -2 * math.Pi},
		{"first lag", delay, "1/(s + 1)", 1, 0.5},
		{"dead time", delay, "exp(-0.1 s)/(s + 1)", 1, 0.6},
		{"undamped", delay, "1/(s^2 + 4)", 2, 0},
		{"zero function", delay, "0/(s + 1)", 2, 0},
	} {
		f := MustParse(c.text).FrequencyFunction()
		if got, err := c.read(f, c.omega); err != nil || got != c.want {
			t.Errorf("%s: %s at %v: %v, %v, want %v", c.name, c.text, c.omega, got, err, c.want)
		}
	}
	f := MustParse("(s^2 + 9)/(s^2 + 4)").FrequencyFunction()
	for _, read := range []func(FrequencyFunction, float64) (float64, error){phase, decibels} {
		if _, err := read(f, 3); !errors.Is(err, ErrZeroValue) {
			t.Errorf("at a zero: %v", err)
		}
	}
	var pole *PoleError
	for _, read := range []func(FrequencyFunction, float64) (float64, error){phase, decibels, magnitude} {
		if _, err := read(f, 2); !errors.As(err, &pole) {
			t.Errorf("at a pole: %v", err)
		}
		if _, err := read(f, math.Inf(1)); !errors.Is(err, ErrNotFinite) {
			t.Errorf("at infinity: %v", err)
		}
	}
	if v, err := f.At(3); err != nil || v != 0 {
		t.Errorf("at a zero: %v, %v", v, err)
	}
	if v, err := (FrequencyFunction{}).At(3); err != nil || v != 0 {
		t.Errorf("zero value: %v, %v", v, err)
	}
}

// TestMagnitudeStages compares the first stage with the exact one.
func TestMagnitudeStages(t *testing.T) {
	r := splitmix(8)
	undecided := 0
	for range 2000 {
		f := Must(New(r.poly(1+r.intn(12)), r.poly(1+r.intn(12)))).FrequencyFunction()
		omega := math.Ldexp(float64(r.next()>>11), r.intn(14)-60)
		want, err := f.p.exactMagnitude(omega)
		if err != nil {
			t.Fatal(err)
		}
		v, ok := f.p.fast.magnitude(omega)
		if !ok {
			undecided++
		} else if v != want {
			t.Fatalf("at %v: %v, exactly %v", omega, v, want)
		}
	}
	if undecided > 20 {
		t.Errorf("%d of 2000 magnitudes not decided by the first stage", undecided)
	}
}
