package tf

import (
	"errors"
	"math"
	"math/big"
	"sync"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

func TestSampleRefusals(t *testing.T) {
	f := timeFunctionOf(t, whole(1), whole(1, 1))
	for _, dt := range []float64{math.NaN(), math.Inf(1), -0.1} {
		if _, err := f.Sample(dt, 3); !errors.Is(err, fault.ErrNotFinite) {
			t.Errorf("Sample(%v, 3): %v", dt, err)
		}
	}
	for _, n := range []int{-1, MaxSamples + 1, math.MaxInt} {
		if _, err := f.Sample(0.1, n); !errors.Is(err, fault.ErrLimit) {
			t.Errorf("Sample(0.1, %d): %v", n, err)
		}
	}
	if y, err := f.Sample(0.1, 0); len(y) != 0 || err != nil {
		t.Errorf("Sample(0.1, 0): %v, %v", y, err)
	}
	if y, err := (TimeFunction{}).Sample(0.1, 2); len(y) != 2 || y[1] != 0 || err != nil {
		t.Errorf("the zero value: %v, %v", y, err)
	}
	if _, err := timeFunctionOf(t, whole(1), whole(-1, 1)).Sample(1, 1000); !errors.Is(err, fault.ErrRange) {
		t.Errorf("e^t to t = 999: %v", err)
	}
}

// TestSampleAtExactProducts: three times the float64 0.1 is not the float64 0.3,
// nor the rounded product.
func TestSampleAtExactProducts(t *testing.T) {
	f := timeFunctionOf(t, whole(1), whole(0, 0, 1)) // the function t
	y := Must(f.Sample(0.1, 8))
	for k, v := range y {
		product := new(big.Rat).SetFloat64(0.1)
		want, _ := product.Mul(product, big.NewRat(int64(k), 1)).Float64()
		if v != want {
			t.Errorf("sample %d of t is %v, want %v", k, v, want)
		}
	}
}

func TestResponseChecksTheJunction(t *testing.T) {
	g := MustParse("1/(s + 1) [valve: mA -> level: m]")
	for _, signal := range []units.Signal{
		{Name: "valve", Unit: units.MustParse("A")},
		{Name: "transmitter", Unit: units.MustParse("mA")},
	} {
		input := Must(NewTimeFunction(poly.FromInts(1), poly.FromInts(0, 1), signal))
		var junction *JunctionError
		if _, err := g.Response(input); !errors.As(err, &junction) {
			t.Errorf("input %v: %v", signal, err)
		}
	}
	input := Must(NewTimeFunction(poly.FromInts(1), poly.FromInts(0, 1), g.Input()))
	f := Must(g.Response(input))
	if got := f.Signal().String(); got != "level: m" {
		t.Errorf("the response is %s", got)
	}
	if got := f.String(); got != "1 − e^(−t) [m]" {
		t.Errorf("the response is %s", got)
	}
	if _, err := NewTimeFunction(poly.FromInts(1), poly.Poly{}, units.Signal{}); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("1/0: %v", err)
	}
}

func TestDeadTimeAndImpulseAsText(t *testing.T) {
	for _, c := range []struct{ g, want string }{
		{"exp(-180 s) (s + 1)/(s + 3) [m -> m]", "δ(t − 180) − 2 e^(−3 (t − 180)) for t ≥ 180 [1/s]"},
		{"exp(-0.5 s) 2/s^2 [m -> mm]", "2 (t − 0.5) for t ≥ 0.5 [mm/(m*s)]"},
		{"5 [m -> m]", "5 δ(t) [1/s]"},
	} {
		if got := Must(MustParse(c.g).InverseLaplace()).String(); got != c.want {
			t.Errorf("%s: %q, want %q", c.g, got, c.want)
		}
	}
}

func TestDiscretePartialFractions(t *testing.T) {
	g := Must(NewDiscrete(poly.FromInts(0, 0, 0, 4), poly.FromInts(1, -3, 2), units.MustParseQuantity("0.1 s")))
	p := Must(g.PartialFractions())
	if got := p.String(); got != "2 z + 3 - 0.5/(z - 0.5) + 4/(z - 1)" {
		t.Errorf("expansion %q", got)
	}
	if !total(p).Equivalent(g.c.f) {
		t.Error("the fractions do not add up")
	}
}

// TestTimeFunctionShared evaluates one function from several goroutines; the race
// detector watches what is computed on demand.
func TestTimeFunctionShared(t *testing.T) {
	f := timeFunctionOf(t, whole(1, 2), whole(5, 9, 7, 3, 1))
	want := Must(timeFunctionOf(t, whole(1, 2), whole(5, 9, 7, 3, 1)).Sample(0.01, 400))
	text := f.String()
	var group sync.WaitGroup
	for range 4 {
		group.Add(1)
		go func() {
			defer group.Done()
			y, err := f.Sample(0.01, 400)
			if err != nil {
				t.Error(err)
			}
			for k := range y {
				if y[k] != want[k] {
					t.Errorf("sample %d is %v, want %v", k, y[k], want[k])
				}
			}
			for k := range 40 {
				x := new(big.Rat).SetFrac64(int64(k), 64)
				v, err := f.e.at(x)
				quick, _ := x.Float64()
				if w, err2 := f.At(quick); err != nil || err2 != nil || v != w {
					t.Errorf("at %v: %v, %v", x, v, w)
				}
			}
			if f.String() != text {
				t.Error("the text changed")
			}
		}()
	}
	group.Wait()
}

// TestTimeFunctionLimit is the one kind of input that is known to need ErrLimit,
// and its neighbours that do not.
func TestTimeFunctionLimit(t *testing.T) {
	tie := big.NewRat(1<<53+1, 1<<53)
	// tie/s + 1/(s + 1)
	f := timeFunctionOf(t, []*big.Rat{tie, new(big.Rat).Add(tie, big.NewRat(1, 1))}, whole(0, 1, 1))
	for _, c := range []struct {
		t    float64
		want error
	}{{40, nil}, {1000, nil}, {20000, nil}, {1e6, fault.ErrLimit}} {
		y, err := f.At(c.t)
		if !errors.Is(err, c.want) || err == nil && c.t > 100 && y != 1+0x1p-52 {
			t.Errorf("at %v: %v, %v", c.t, y, err)
		}
	}
	g := timeFunctionOf(t, whole(1, 2), whole(0, 1, 1)) // 1 + e^−t
	if y, err := g.At(1e300); y != 1 || err != nil {
		t.Errorf("1 + e^−t at 1e300: %v, %v", y, err)
	}
}
