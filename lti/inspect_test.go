package lti_test

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func TestInspectHidden(t *testing.T) {
	for _, c := range []struct {
		text   string
		hidden string
		counts poly.Counts
		says   string
	}{
		{"(s - 1)/((s - 1) (s + 2)) [V -> mm]", "s - 1", poly.Counts{Outside: 1}, "hidden: s - 1 cancels; unstable, 1 of 1"},
		{"(s + 3)^2 (s - 1)/((s + 3)^2 (s + 2))", "(s + 3)^2", poly.Counts{Inside: 2}, "cancels; stable, all 2"},
		{"s (s^2 + 4)/(s (s^2 + 4) (s - 2))", "s^3 + 4 s", poly.Counts{On: 3}, "3 of 3 on the imaginary axis"},
		{"1/(s + 2) [V -> mm]", "1", poly.Counts{}, "from V to mm, in mm/V\norder 1, with 0 zeros in lowest terms\npoles: stable, all 1 to the left of the imaginary axis\nmode at -2 rad/s: decays with a time constant of 0.5 s\nhidden: nothing cancels"},
		{"0/(s - 2)", "s - 2", poly.Counts{Outside: 1}, "poles: none"},
		{"(s^2 + 1)/(2 s + 3)", "1", poly.Counts{}, "higher by 1"},
		{"exp(-180 s) 1/(s - 3)", "1", poly.Counts{}, "dead time 180 s\npoles: unstable, 1 of 1"},
	} {
		x, err := lti.Inspect(tf.MustParse(c.text), nil)
		if err != nil || !x.Hidden.Monic().Equal(poly.MustParse(c.hidden).Monic()) || x.HiddenModes != c.counts || !strings.Contains(x.String(), c.says) {
			t.Errorf("%s: %v, %v, want %q and %q", c.text, x, err, c.hidden, c.says)
		}
		back, err := tf.New(x.Reduced.Numerator().Mul(x.Hidden), x.Reduced.Denominator().Mul(x.Hidden))
		if err == nil {
			back, err = back.WithSignals(x.Function.Input(), x.Function.Output())
		}
		if err == nil {
			back, err = back.WithDeadTime(x.Function.DeadTime())
		}
		if err != nil || !back.Equal(x.Function) {
			t.Errorf("%s: the reduced function times the factor is %v, %v", c.text, back, err)
		}
	}
}

// Beyond the limit of the exact count the signs of the roots decide: a chain of
// 100 pools is stable, and its first level sees all of it.
func TestInspectLongChain(t *testing.T) {
	g, err := build(t, chain(100)).TransferFunction("u", "x0")
	if err != nil {
		t.Fatal(err)
	}
	if _, err := g.Denominator().HalfPlane(); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("the count has an answer: %v", err)
	}
	if x, err := lti.Inspect(g, nil); err != nil || x.Poles != (poly.Counts{Inside: 100}) || x.Hidden.Degree() != 0 {
		t.Errorf("%v, %v", x, err)
	}
}

// Distances by hand, from rational roots and from the quadratic formula.
func TestInspectNear(t *testing.T) {
	for _, c := range []struct {
		text     string
		fraction *big.Rat
		want     []float64
	}{
		{"(s + 1.01)/((s + 1) (s + 5))", big.NewRat(1, 50), []float64{0.01 / 1.01}},
		{"(s + 1.01)/((s + 1) (s + 5))", big.NewRat(1, 101), nil}, // exactly at the fraction
		{"(s + 1.01)/((s + 1) (s + 5))", big.NewRat(1, 100), []float64{0.01 / 1.01}},
		{"(s + 1.01)/((s + 1) (s + 5))", big.NewRat(5, 6), []float64{3.99 / 5, 0.01 / 1.01}},
		{"s/(s + 1e-9)", big.NewRat(1, 1), nil},
		{"s/(s + 1e-9)", big.NewRat(11, 10), []float64{1}},
		{"(s + 1)/(s + 1 - 1e-100)", big.NewRat(1, 50), []float64{1e-100}},
		// −1 ± i and −1 ± 1.001 i: 0.001/√(1 + 1.001²), told once
		{"(s^2 + 2 s + 2.002001)/(s^2 + 2 s + 2)", big.NewRat(1, 50), []float64{0.001 / math.Sqrt(1+1.001*1.001)}},
		// −1 ± √2 against −1 ± √2.002
		{"(s^2 + 2 s - 1.002)/(s^2 + 2 s - 1)", big.NewRat(1, 100), []float64{(math.Sqrt(2.002) - math.Sqrt2) / (1 + math.Sqrt(2.002)), (math.Sqrt(2.002) - math.Sqrt2) / (math.Sqrt(2.002) - 1)}},
		{"1/(s + 1)", big.NewRat(1, 1), nil},
		{"0/(s + 1)", big.NewRat(1, 1), nil},
	} {
		x, err := lti.Inspect(tf.MustParse(c.text), c.fraction)
		if err != nil || len(x.Near) != len(c.want) {
			t.Errorf("%s: %v, %v, want %v", c.text, x.Near, err, c.want)
			continue
		}
		for i, n := range x.Near {
			if math.Abs(n.Distance-c.want[i]) > 1e-12*c.want[i] {
				t.Errorf("%s: %v, want %v", c.text, n.Distance, c.want[i])
			}
			if d := cmplx.Abs(n.Pole.Value - n.Zero.Value); d > 1.01*c.want[i]*max(cmplx.Abs(n.Pole.Value), cmplx.Abs(n.Zero.Value)) {
				t.Errorf("%s: %v and %v are %v apart", c.text, n.Pole, n.Zero, d)
			}
		}
	}
}

// A bench whose two weights are alike on equal mounts: moved together, they hide
// the mode in which they swing against each other. With one weight heavier by
// 1 kg the mode is there, and a zero is close to it.
func ExampleInspect() {
	bench := lti.NewEquations()
	for _, name := range []string{"floor", "left", "right"} {
		bench.Signal(name, "mm")
	}
	bench.Constant("m1", "100 kg")
	bench.Constant("m2", "100 kg")
	bench.Constant("c", "320 N*s/m")
	bench.Constant("k", "25 kN/m")
	bench.Constant("link", "4 kN/m")
	bench.Equation("m1 left'' = c (floor' - left') + k (floor - left) + link (right - left)")
	bench.Equation("m2 right'' = c (floor' - right') + k (floor - right) + link (left - right)")
	alike := tf.Must(bench.Build())
	for _, system := range []*lti.System{alike, tf.Must(alike.WithConstant("m2", "101 kg"))} {
		g := tf.Must(system.TransferFunction("floor", "left"))
		fmt.Println(tf.Must(lti.Inspect(g, big.NewRat(1, 50))))
	}
	// Output:
	// from floor: mm to left: mm, a pure number
	// order 2, with 1 zero in lowest terms
	// poles: stable, all 2 to the left of the imaginary axis
	// mode at -1.6 ± 15.73i rad/s: natural frequency 15.81 rad/s, damping ratio 0.1012, decays with a time constant of 0.625 s
	// hidden: 5 s^2 + 16 s + 1650 cancels; stable, all 2 to the left of the imaginary axis
	// from floor: mm to left: mm, a pure number
	// order 4, with 3 zeros in lowest terms
	// poles: stable, all 4 to the left of the imaginary axis
	// mode at -1.592 ± 18.05i rad/s: natural frequency 18.12 rad/s, damping ratio 0.08787, decays with a time constant of 0.628 s
	// mode at -1.592 ± 15.69i rad/s: natural frequency 15.77 rad/s, damping ratio 0.1009, decays with a time constant of 0.6282 s
	// hidden: nothing cancels
	// nearly cancelled: the pole at -1.592 ± 18.05i rad/s by the zero at -1.584 ± 18.01i rad/s, which is off by 0.25 %
}

// The quadratic formula: s² + b s + c has the natural frequency √c, the time
// constant 2/b and, for a square c, the damping ratio b/(2√c), each an operation
// of float64 that IEEE 754 rounds correctly. Products of such factors show the
// modes of all, whatever their degree.
func TestModes(t *testing.T) {
	var factors []string
	type mode struct{ constant, frequency, ratio float64 }
	var want []mode
	for k := 1; k <= 12; k++ {
		b, root := float64(2*k+1), float64(5*k+7)
		c := root * root
		factors = append(factors, fmt.Sprintf("(s^2 + %v s + %v)", b, c))
		want = append(want, mode{2 / b, root, b / (2 * root)})
		factors = append(factors, fmt.Sprintf("(%v s + 1)", 3*k))
		want = append(want, mode{float64(3 * k), 1 / float64(3*k), 1})
	}
	for _, c := range []float64{2, 3, 5, 7} { // irrational magnitudes
		factors = append(factors, fmt.Sprintf("(s^2 - s + %v)", c))
		want = append(want, mode{2, math.Sqrt(c), math.NaN()})
	}
	factors = append(factors, "(s^2 + 11)", "s^2", "(s - 0.25)")
	want = append(want, mode{0, math.Sqrt(11), 0}, mode{0, 0, 0}, mode{4, 0.25, -1})
	x, err := lti.Inspect(tf.MustParse("1/("+strings.Join(factors, " ")+")"), nil)
	if err != nil || len(x.Modes) != len(want) {
		t.Fatalf("%d modes, %v, want %d", len(x.Modes), err, len(want))
	}
	for _, w := range want {
		found := false
		for _, m := range x.Modes {
			ratio := m.DampingRatio == w.ratio
			if math.IsNaN(w.ratio) { // −1/(2√c), known to an ulp or two
				r := -0.5 / w.frequency
				ratio = math.Abs(m.DampingRatio-r) < 4e-16*math.Abs(r)
			}
			found = found || m.TimeConstant == w.constant && m.NaturalFrequency == w.frequency && ratio
		}
		if !found {
			t.Errorf("no mode %+v in %v", w, x.Modes)
		}
	}
	if text := x.String(); strings.Count(text, "mode at") != 12 || !strings.Contains(text, "\nand 19 modes more\n") {
		t.Errorf("%s", text)
	}
}

func TestModeText(t *testing.T) {
	for denominator, want := range map[string]string{
		"1500 s + 1":          "mode at -0.0006667 rad/s: decays with a time constant of 1500 s",
		"(1500 s + 1)^2":      "mode at -0.0006667 rad/s, 2 times: decays with a time constant of 1500 s",
		"3 s - 1":             "mode at 0.3333 rad/s: grows with a time constant of 3 s",
		"s^2 + 0.4 s + 9":     "mode at -0.2 ± 2.993i rad/s: natural frequency 3 rad/s, damping ratio 0.06667, decays with a time constant of 5 s",
		"s^2 - 2 s + 2":       "mode at 1 ± 1i rad/s: natural frequency 1.414 rad/s, damping ratio -0.7071, grows with a time constant of 1 s",
		"(s^2 + 9)^3":         "mode at 0 ± 3i rad/s, 3 times: natural frequency 3 rad/s, undamped",
		"s":                   "mode at 0 rad/s: integrates",
		"s^2 - 3 s + 2.25":    "mode at 1.5 rad/s, 2 times: grows with a time constant of 0.6667 s",
		"(s^2 + 2 s - 1) + 0": "mode at -2.414 rad/s: decays with a time constant of 0.4142 s",
	} {
		x, err := lti.Inspect(tf.MustParse("1/("+denominator+")"), nil)
		if err != nil || !strings.Contains(x.String()+"\n", "\n"+want+"\n") {
			t.Errorf("%s: %v, %v\nwant %s", denominator, x, err, want)
		}
	}
	// Halfway between two float64: 1 + 2^-53 is √c for the square of it.
	x, err := lti.Inspect(tf.MustParse("1/(s^2 + s + 81129638414606699710187514626049/81129638414606681695789005144064)"), nil)
	if err != nil || x.Modes[0].NaturalFrequency != 1 {
		t.Errorf("half way: %v, %v", x.Modes, err)
	}
	if _, err := lti.Inspect(tf.MustParse("1/(s + 1e-309)"), nil); !errors.Is(err, units.ErrRange) {
		t.Errorf("a time constant beyond all float64: %v", err)
	}
}
