package response

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// block returns numerator/denominator with the units of its signals.
func block(t testing.TB, numerator, denominator poly.Poly, in, out string) tf.Continuous {
	t.Helper()
	g, err := tf.Must(tf.New(numerator, denominator)).WithUnits(units.MustParse(in), units.MustParse(out))
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func TestStepConvertsTheHeight(t *testing.T) {
	g := block(t, poly.FromInts(12), poly.FromInts(1, 2), "V", "mm")
	for _, height := range []string{"0.25 V", "250 mV"} {
		f, err := Step(g, units.MustParseQuantity(height))
		if err != nil {
			t.Fatal(err)
		}
		if got := f.String(); got != "3 − 3 e^(−0.5 t) [mm]" {
			t.Errorf("step of %s: %s", height, got)
		}
	}
	f, err := Impulse(g, units.MustParseQuantity("2 V*s"))
	if err != nil {
		t.Fatal(err)
	}
	if got := f.String(); got != "12 e^(−0.5 t) [mm]" {
		t.Errorf("impulse: %s", got)
	}
	var mismatch *units.MismatchError
	if _, err := Step(g, units.MustParseQuantity("1 A")); !errors.As(err, &mismatch) {
		t.Errorf("step of an ampere into volts: %v", err)
	}
	if _, err := Impulse(g, units.MustParseQuantity("1 V")); !errors.As(err, &mismatch) {
		t.Errorf("impulse in volts: %v", err)
	}
	pd := block(t, poly.FromInts(0, 0, 1), poly.FromInts(1), "V", "mm")
	if _, err := Step(pd, units.MustParseQuantity("1 V")); !errors.Is(err, tf.ErrImpulseDerivative) {
		t.Errorf("step into s²: %v", err)
	}
}

// TestSecondOrderStep: overshoot exp(−πζ/√(1−ζ²)) at π/(ω√(1−ζ²)); common
// practice.
func TestSecondOrderStep(t *testing.T) {
	for _, zeta := range []float64{0.125, 0.25, 0.5, 0.75} {
		// 4/(s² + 4ζ s + 4), 4ζ an integer over 2
		g := block(t, poly.FromInts(8), poly.FromInts(8, int64(8*zeta), 2), "V", "V")
		f, err := Step(g, units.MustParseQuantity("1 V"))
		if err != nil {
			t.Fatal(err)
		}
		root := math.Sqrt(1 - zeta*zeta)
		peak, err := f.At(math.Pi / (2 * root))
		if want := 1 + math.Exp(-math.Pi*zeta/root); err != nil || math.Abs(peak-want) > 1e-14 {
			t.Errorf("ζ = %v: peak %v, %v, want %v", zeta, peak, err, want)
		}
		if final, err := f.FinalValue(); err != nil || final.Value().RatString() != "1" {
			t.Errorf("ζ = %v: final value %v, %v", zeta, final, err)
		}
	}
}

// ExampleStep opens the gate of a canal pool by 50 mm. The pool's level rises
// by 1.12 mm per millimetre, with a time constant of 1493 s.
func ExampleStep() {
	pool := tf.MustParse("1.12/(1493 s + 1) [mm -> mm]")
	rise := tf.Must(Step(pool, units.MustParseQuantity("50 mm")))
	fmt.Println(rise)
	fmt.Printf("after 30 min %.2f mm\n", tf.Must(rise.At(1800)))
	// Output:
	// 56 − 56 e^(−t/1493) [mm]
	// after 30 min 39.23 mm
}
