package tf

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
)

func ints(c ...int64) []*big.Rat {
	out := make([]*big.Rat, len(c))
	for i, v := range c {
		out[i] = big.NewRat(v, 1)
	}
	return out
}

func TestTimeFunctionText(t *testing.T) {
	for _, c := range []struct {
		num, den []*big.Rat
		want     string
	}{
		{ints(0), ints(1), "0"},
		{ints(3), ints(1), "3 δ(t)"},
		{ints(1), ints(0, 1), "1"},
		{ints(1), ints(0, 0, 1), "t"},
		{ints(1), ints(0, 0, 0, 1), "0.5 t^2"},
		{ints(1), ints(1, 1), "e^(−t)"},
		{ints(1), ints(1, 2, 1), "t e^(−t)"},
		{ints(1, 1), ints(3, 1), "δ(t) − 2 e^(−3 t)"},
		{ints(1, 1), ints(5, 2, 1), "e^(−t) cos(2 t)"},
		{ints(7, 3), ints(5, 2, 1), "3 e^(−t) cos(2 t) + 2 e^(−t) sin(2 t)"},
		{ints(1), ints(1, 1, 1), "1.1547 e^(−0.5 t) sin(0.866025 t)"},
		{ints(1), ints(3, 0, 1), "0.57735 sin(1.73205 t)"},
		{ints(1), ints(0, 3, 1), "1/3 − 1/3 e^(−3 t)"},
		{ints(1), ints(-2, 0, 1), "0.353553 e^(1.41421 t) − 0.353553 e^(−1.41421 t)"},
		{ints(3, 4, 1), ints(-1, 0, 0, 1), "8/3 e^(t) − 5/3 e^(−0.5 t) cos(0.866025 t) + 0.57735 e^(−0.5 t) sin(0.866025 t)"},
	} {
		f := timeFunctionOf(t, c.num, c.den)
		if got := f.String(); got != c.want {
			t.Errorf("%v / %v is %q, want %q", c.num, c.den, got, c.want)
		}
	}
	f := timeFunctionOf(t, ints(1), ints(0, 3, 1))
	if got := fmt.Sprintf("%.3v|%30.2s|%-20.1v|%d", f, f, f, f); got != "0.333 − 0.333 e^(−3 t)|          0.33 − 0.33 e^(−3 t)|0.3 − 0.3 e^(−3 t)  |%!d(tf.TimeFunction=1/3 − 1/3 e^(−3 t))" {
		t.Errorf("formats: %q", got)
	}
}

func TestTimeFunctionRefusals(t *testing.T) {
	f := timeFunctionOf(t, ints(1), ints(1, 1))
	for _, x := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		if _, err := f.At(x); !errors.Is(err, fault.ErrNotFinite) {
			t.Errorf("At(%v): %v", x, err)
		}
	}
	if y, err := f.At(-1); y != 0 || err != nil {
		t.Errorf("At(-1) = %v, %v", y, err)
	}
	improper := Must(New(poly.FromInts(0, 0, 1), poly.FromInts(1, 1)))
	if _, err := improper.InverseLaplace(); !errors.Is(err, ErrImpulseDerivative) {
		t.Errorf("s²/(s+1): %v", err)
	}
	if _, err := timeFunctionOf(t, ints(1), ints(-1, 1)).At(1000); !errors.Is(err, fault.ErrRange) {
		t.Errorf("e^1000: %v", err)
	}
}

// TestTimeFunctionRational: values that are rational because the polynomials
// beside the exponentials vanish, or because there is none.
func TestTimeFunctionRational(t *testing.T) {
	for _, c := range []struct {
		num, den []*big.Rat
		t, want  float64
	}{
		{ints(0, 1), ints(1, 2, 1), 1, 0},                  // (1 − t) e^−t
		{ints(1), ints(0, 0, 0, 1), 3, 4.5},                // t²/2
		{ints(1), ints(0, 0, 0, 1), 0x1p-540, 0},           // below the subnormal numbers
		{ints(1), ints(0, 0, 1), 0.1, 0.1},                 // t
		{ints(1, 1), ints(2, 3, 1), 0, 1},                  // e^−2t after a cancellation
		{ints(1, 2, 2), ints(0, 1, 2, 1), 1, 1},            // 1 + (1 − t) e^−t
		{ints(0, 3, 2, 1), ints(9, 0, 6, 0, 1), 0, 1},      // initial value
		{ints(1<<53, 1<<53, 1), ints(0, 0, 1), 0, 1 << 53}, // impulse left out
	} {
		f := timeFunctionOf(t, c.num, c.den)
		if y, err := f.At(c.t); y != c.want || err != nil {
			t.Errorf("%v at %v is %v, %v, want %v", f, c.t, y, err, c.want)
		}
	}
}

func TestTimeFunctionLimits(t *testing.T) {
	for _, c := range []struct {
		num, den        []*big.Rat
		initial, final_ string
	}{
		{ints(1), ints(0, 3, 1), "0", "1/3"},
		{ints(2, 5), ints(4, 3, 1), "5", "0"},
		{ints(2, 5), ints(0, 0, 1), "5", ""},
		{ints(1), ints(4, 0, 1), "0", ""},
		{ints(3), ints(-1, 1), "3", ""},
		{ints(0), ints(1), "0", "0"},
	} {
		f := timeFunctionOf(t, c.num, c.den)
		if got := f.InitialValue().RatString(); got != c.initial {
			t.Errorf("%v: initial value %v, want %v", f, got, c.initial)
		}
		got, err := f.FinalValue()
		if c.final_ == "" {
			if !errors.Is(err, ErrNoFinalValue) {
				t.Errorf("%v: final value %v, %v", f, got, err)
			}
		} else if err != nil || got.RatString() != c.final_ {
			t.Errorf("%v: final value %v, %v, want %v", f, got, err, c.final_)
		}
	}
}

func TestTimeFunctionCalculus(t *testing.T) {
	f := timeFunctionOf(t, ints(7, 3), ints(5, 2, 1)) // 3 cos + 2 sin
	d := Must(f.Derivative())
	if got := d.String(); got != "3 δ(t) + e^(−t) cos(2 t) − 8 e^(−t) sin(2 t)" {
		t.Errorf("derivative %v", got)
	}
	if _, err := d.Derivative(); !errors.Is(err, ErrImpulseDerivative) {
		t.Errorf("second derivative: %v", err)
	}
	i := Must(d.Integral())
	if i.String() != f.String() {
		t.Errorf("the integral of the derivative is %v, want %v", i, f)
	}
	if got := Must(f.Integral()).String(); got != "1.4 − 1.4 e^(−t) cos(2 t) + 0.8 e^(−t) sin(2 t)" {
		t.Errorf("integral %v", got)
	}
}
