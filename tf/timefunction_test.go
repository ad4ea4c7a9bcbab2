package tf

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

func whole(c ...int64) []*big.Rat {
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
		{whole(0), whole(1), "0"},
		{whole(3), whole(1), "3 δ(t)"},
		{whole(1), whole(0, 1), "1"},
		{whole(1), whole(0, 0, 1), "t"},
		{whole(1), whole(0, 0, 0, 1), "0.5 t^2"},
		{whole(1), whole(1, 1), "e^(−t)"},
		{whole(1), whole(1, 2, 1), "t e^(−t)"},
		{whole(1, 1), whole(3, 1), "δ(t) − 2 e^(−3 t)"},
		{whole(1, 1), whole(5, 2, 1), "e^(−t) cos(2 t)"},
		{whole(7, 3), whole(5, 2, 1), "3 e^(−t) cos(2 t) + 2 e^(−t) sin(2 t)"},
		{whole(1), whole(1, 1, 1), "1.1547 e^(−0.5 t) sin(0.866025 t)"},
		{whole(1), whole(3, 0, 1), "0.57735 sin(1.73205 t)"},
		{whole(1), whole(0, 3, 1), "1/3 − 1/3 e^(−3 t)"},
		{whole(1), whole(-2, 0, 1), "0.353553 e^(1.41421 t) − 0.353553 e^(−1.41421 t)"},
		{whole(3, 4, 1), whole(-1, 0, 0, 1), "8/3 e^(t) − 5/3 e^(−0.5 t) cos(0.866025 t) + 0.57735 e^(−0.5 t) sin(0.866025 t)"},
	} {
		f := timeFunctionOf(t, c.num, c.den)
		f.signal.Unit = units.Unit{}
		if got := f.String(); got != c.want {
			t.Errorf("%v / %v is %q, want %q", c.num, c.den, got, c.want)
		}
	}
	f := timeFunctionOf(t, whole(1), whole(0, 3, 1))
	f.signal.Unit = units.Unit{}
	if got := fmt.Sprintf("%.3g|%g|%s|%d", f, f, f, f); got != "0.333 − 0.333 e^(−3 t)|0.333333 − 0.333333 e^(−3 t)|1/3 − 1/3 e^(−3 t)|%!d(tf.TimeFunction=1/3 − 1/3 e^(−3 t))" {
		t.Errorf("formats: %q", got)
	}
}

func TestTimeFunctionRefusals(t *testing.T) {
	f := timeFunctionOf(t, whole(1), whole(1, 1))
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
	if _, err := timeFunctionOf(t, whole(1), whole(-1, 1)).At(1000); !errors.Is(err, fault.ErrRange) {
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
		{whole(0, 1), whole(1, 2, 1), 1, 0},                  // (1 − t) e^−t
		{whole(1), whole(0, 0, 0, 1), 3, 4.5},                // t²/2
		{whole(1), whole(0, 0, 0, 1), 0x1p-540, 0},           // below the subnormal numbers
		{whole(1), whole(0, 0, 1), 0.1, 0.1},                 // t
		{whole(1, 1), whole(2, 3, 1), 0, 1},                  // e^−2t after a cancellation
		{whole(1, 2, 2), whole(0, 1, 2, 1), 1, 1},            // 1 + (1 − t) e^−t
		{whole(0, 3, 2, 1), whole(9, 0, 6, 0, 1), 0, 1},      // initial value
		{whole(1<<53, 1<<53, 1), whole(0, 0, 1), 0, 1 << 53}, // impulse left out
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
		{whole(1), whole(0, 3, 1), "0", "1/3"},
		{whole(2, 5), whole(4, 3, 1), "5", "0"},
		{whole(2, 5), whole(0, 0, 1), "5", ""},
		{whole(1), whole(4, 0, 1), "0", ""},
		{whole(3), whole(-1, 1), "3", ""},
		{whole(0), whole(1), "0", "0"},
	} {
		f := timeFunctionOf(t, c.num, c.den)
		if got := f.InitialValue().Value().RatString(); got != c.initial {
			t.Errorf("%v: initial value %v, want %v", f, got, c.initial)
		}
		got, err := f.FinalValue()
		if c.final_ == "" {
			var none *NoLimitError
			if !errors.As(err, &none) {
				t.Errorf("%v: final value %v, %v", f, got, err)
			}
		} else if err != nil || got.Value().RatString() != c.final_ {
			t.Errorf("%v: final value %v, %v, want %v", f, got, err, c.final_)
		}
	}
}

func TestTimeFunctionCalculus(t *testing.T) {
	f := timeFunctionOf(t, whole(7, 3), whole(5, 2, 1)) // 3 cos + 2 sin
	d := Must(f.Derivative())
	if got := d.String(); got != "3 δ(t) + e^(−t) cos(2 t) − 8 e^(−t) sin(2 t) [1/s^2]" {
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

// TestSample compares every sample with the certified stage at the exact
// product k·dt.
func TestSample(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	compared := 0
	for _, dt := range []float64{0, 1e-9, 0.01, 0.1, 1, 1e3} {
		for range 8 {
			g := Continuous{c: core{f: randomDifficult(r)}}
			if r.IntN(3) == 0 {
				g.c.setDelay(big.NewRat(int64(r.IntN(100)), 33))
			}
			f, err := g.InverseLaplace()
			if err != nil {
				t.Fatal(err)
			}
			n := 1 + r.IntN(150)
			y, err := f.Sample(dt, n)
			if err != nil && !errors.Is(err, fault.ErrRange) {
				t.Fatal(err)
			}
			for k, v := range y {
				x := new(big.Rat).SetFloat64(dt)
				x.Mul(x, big.NewRat(int64(k), 1)).Sub(x, f.DeadTime())
				want, errWant := f.e.at(x)
				if errors.Is(errWant, fault.ErrRange) && errors.Is(err, fault.ErrRange) {
					break
				}
				if errWant != nil || math.Float64bits(v) != math.Float64bits(want) {
					t.Fatalf("%v: sample %d of step %v is %x, want %x, %v", f, k, dt, v, want, errWant)
				}
				compared++
			}
		}
	}
	t.Logf("%d samples compared", compared)
}
