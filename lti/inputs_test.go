package lti_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func record(signals, constants map[string]string, equations ...string) *lti.Equations {
	e := lti.NewEquations()
	for name, unit := range signals {
		e.Signal(name, unit)
	}
	for name, quantity := range constants {
		e.Constant(name, quantity)
	}
	for _, text := range equations {
		e.Equation(text)
	}
	return e
}

// Further inputs are named; where they are not, the error proposes the call.
func TestFurtherInputsAreNamed(t *testing.T) {
	s := build(t, pool())
	want(t, s, "offtake", "level", "-1/(5600 s + 3.75) [m^3/s -> m]", "opening")
	want(t, s, "offtake", "inflow", "2.5/(5600 s + 3.75) [m^3/s -> m^3/s]", "opening")
	want(t, s, "inflow", "level", "1/(5600 s + 1.25) [m^3/s -> m]", "offtake")

	// Two forces on two bodies; each stands alone on a right side.
	bench := build(t, record(map[string]string{"x1": "mm", "x2": "mm", "f1": "N", "f2": "N"},
		map[string]string{"m1": "2 kg", "m2": "3 kg", "k": "5 N/mm"},
		"m1 x1'' + k (x1 - x2) = f1", "m2 x2'' + k (x2 - x1) = f2"))
	want(t, bench, "f1", "x2", "5000000/(s^2 (6 s^2 + 25000)) [N -> mm]", "f2")

	// The ground moves a mounted body on which a force acts.
	mount := build(t, record(map[string]string{"x": "mm", "z": "mm", "f": "N"},
		map[string]string{"m": "2 kg", "c": "3 N*s/m", "k": "5 N/m"}, "m x'' = c (z' - x') + k (z - x) + f"))
	want(t, mount, "z", "x", "(3 s + 5)/(2 s^2 + 3 s + 5) [mm -> mm]", "f")

	for _, c := range []struct {
		s        *lti.System
		in, out  string
		held     []string
		proposal string
	}{
		{s, "opening", "level", nil, `TransferFunction("opening", "level", "offtake")`},
		{bench, "f1", "x2", nil, `TransferFunction("f1", "x2", "f2")`},
		{mount, "z", "x", nil, `TransferFunction("z", "x", "f")`},
	} {
		var open *lti.DeterminacyError
		if g, err := c.s.TransferFunction(c.in, c.out, c.held...); !errors.As(err, &open) || !strings.Contains(err.Error(), c.proposal) {
			t.Errorf("%s to %s: %v, %v, want a proposal of %s", c.in, c.out, g, err, c.proposal)
		}
	}
}

func TestSignalsInNoEquation(t *testing.T) {
	s := build(t, record(map[string]string{"u": "1", "x": "1", "y": "1", "spare": "V"}, map[string]string{"T": "2 s", "none": "0"},
		"T x' + x = u + none y"))
	want(t, s, "u", "x", "1/(2 s + 1)")
	for _, pair := range [][2]string{{"u", "spare"}, {"spare", "x"}, {"u", "y"}} {
		var open *lti.DeterminacyError
		if g, err := s.TransferFunction(pair[0], pair[1]); !errors.As(err, &open) || !strings.Contains(err.Error(), "stands in no equation") {
			t.Errorf("%v: %v, %v", pair, g, err)
		}
	}
}

// Sources: Kirchhoff's laws on a ladder of two sections, solved by hand; the
// furnace zone of two thermal nodes, whose steady states follow from the losses
// alone.
func TestNetworks(t *testing.T) {
	ladder := build(t, record(map[string]string{"v": "V", "v1": "V", "v2": "V", "i1": "mA", "i2": "mA"},
		map[string]string{"R": "2 kohm", "C": "50 uF"},
		"v = R i1 + v1", "v1 = R i2 + v2", "i1 - i2 = C v1'", "i2 = C v2'"))
	// RC = 0.1 s: 1/((RC s)^2 + 3 RC s + 1), the impedance 1/(R (…)) for i1.
	want(t, ladder, "v", "v2", "1/(0.01 s^2 + 0.3 s + 1) [V -> V]")
	want(t, ladder, "v", "i1", "(0.005 s^2 + 0.1 s)/(0.01 s^2 + 0.3 s + 1) [V -> mA]")

	kiln := build(t, record(map[string]string{"power": "W", "element": "K", "load": "K", "leak": "W"},
		map[string]string{"Ce": "18 kJ/K", "Cl": "60 kJ/K", "coupling": "0.0075 K/W", "loss": "0.12 K/W"},
		"Ce element' = power - (element - load)/coupling", "Cl load' = (element - load)/coupling - leak", "leak = load/loss"))
	for output, gain := range map[string]string{"element": "0.1275 K/W", "load": "0.12 K/W"} {
		g, err := kiln.TransferFunction("power", output)
		if err != nil {
			t.Fatal(err)
		}
		if k, err := g.StaticGain(); err != nil || k.String() != gain {
			t.Errorf("%s: static gain %v, %v, want %s", output, k, err, gain)
		}
		poles, err := g.Poles()
		if err != nil || len(poles) != 2 {
			t.Fatal(poles, err)
		}
		// The scenario's time constants of 103.5 s and 9392 s.
		for i, want := range []float64{103.5, 9392} {
			if tau := -1 / real(poles[i].Value); !(tau > want*(1-5e-4) && tau < want*(1+5e-4)) {
				t.Errorf("%s: time constant %g s, want %g s", output, tau, want)
			}
		}
	}
}

func TestHostileEquations(t *testing.T) {
	power := "a"
	for range 8 {
		power = "(" + power + ")^64"
	}
	var long strings.Builder
	long.WriteString("x = y")
	digits := strings.Repeat("7", 4000)
	for i := range 200 {
		long.WriteString(" + y/" + digits + string(rune('0'+i%10)) + string(rune('0'+i/10%10)) + "1")
	}
	for name, text := range map[string]string{
		"exponents of units": power + " x = y", "digits": long.String(),
		"constant": "x' = " + strings.Repeat("7", 3000) + " b y",
		"factors":  "x = " + strings.Repeat("a ", 4500) + "y",
	} {
		_, err := record(map[string]string{"x": "m", "y": "m"}, map[string]string{"a": "1 s", "b": "3 1/s"}, text).Build()
		var q *lti.EquationError
		if !errors.As(err, &q) || !errors.Is(err, lti.ErrLimit) {
			t.Errorf("%s: %.200v, want an EquationError that wraps ErrLimit", name, err)
		}
	}
}

// The number of faults is bounded, so that a text cannot make a report that
// fills the memory.
func TestManyFaults(t *testing.T) {
	e := lti.NewEquations()
	for range 20 {
		e.Equation(strings.Repeat("q + ", 30) + "q = 0")
	}
	_, err := e.Build()
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok || len(joined.Unwrap()) != 101 || !errors.Is(err, lti.ErrLimit) {
		t.Errorf("%.200v", err)
	}
}

func TestTextForms(t *testing.T) {
	s := build(t, pool())
	text, err := s.MarshalText()
	if err != nil {
		t.Fatal(err)
	}
	var back lti.System
	if err := back.UnmarshalText(text); err != nil || back.String() != s.String() {
		t.Errorf("%s reads back as %v, %v", text, &back, err)
	}
	if len(back.Signals()) != 4 || back.Constants()[3].Value.String() != "5600 m^2" || back.Equations()[0] != "inflow = kq opening - backwater level" {
		t.Errorf("%v", &back)
	}
	// A value in a struct is the same JSON.
	outer, err := json.Marshal(struct{ Plant *lti.System }{s})
	if err != nil || string(outer) != `{"Plant":`+string(text)+`}` {
		t.Errorf("%s, %v", outer, err)
	}
}

// Every fault of an equation is reported, and the odd term out is the one that
// is blamed, wherever it stands.
func TestEveryTermIsJudged(t *testing.T) {
	_, err := record(map[string]string{"x": "m", "y": "m", "z": "kg"}, map[string]string{"T": "2 s", "k": "3 1/s"},
		"x' = k y - z + q + sin(y) - T k x + y'").Build()
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok {
		t.Fatal(err)
	}
	found := map[string]bool{}
	for _, e := range joined.Unwrap() {
		var q *lti.EquationError
		if errors.As(e, &q) {
			found[q.Term] = true
		}
	}
	for _, term := range []string{"z", "q", "sin(y)", "T k x"} {
		if !found[term] {
			t.Errorf("no fault at %q in %v", term, err)
		}
	}
	if len(found) != 4 {
		t.Errorf("%d faults, want 4: %v", len(found), err)
	}
	_, err = record(map[string]string{"x": "m", "f": "N"}, map[string]string{"m": "2 kg*s", "c": "3 N*s/m", "k": "5 N/m"}, "m x'' + c x' + k x = f").Build()
	var q *lti.EquationError
	var mismatch *units.MismatchError
	if !errors.As(err, &q) || q.Term != "m x''" || !errors.As(err, &mismatch) ||
		!mismatch.Found.Equal(units.MustParse("N*s")) || !mismatch.Want.Equal(units.MustParse("N")) {
		t.Errorf("%v, want a fault at the first term", err)
	}
}

// Common practice: the function is that of the plant alone, whatever the input.
// A step and a ramp through it give outputs whose transforms have it as their
// ratio to the transform of the input.
func TestIndependentOfTheInput(t *testing.T) {
	g, err := build(t, pool()).TransferFunction("opening", "level", "offtake")
	if err != nil {
		t.Fatal(err)
	}
	for _, shape := range []string{"1/s", "1/s^2", "s/(s^2 + 4)"} {
		laplace := tf.MustParse(shape)
		in, err := tf.NewTimeFunction(laplace.Numerator(), laplace.Denominator(), g.Input())
		if err != nil {
			t.Fatal(err)
		}
		out, err := g.Response(in)
		if err != nil {
			t.Fatal(err)
		}
		ratio, err := tf.Inverse(in.Laplace())
		if err == nil {
			ratio, err = tf.Series(ratio, out.Laplace())
		}
		if err != nil || !ratio.Equivalent(g) {
			t.Errorf("%s: output over input is %v, %v, want %v", shape, ratio, err, g)
		}
	}
}

// 1 rpm is 2π/60 rad/s, with the rational π of package units.
func TestSignalInTurns(t *testing.T) {
	s := build(t, record(map[string]string{"torque": "N*m", "speed": "rpm"}, map[string]string{"inertia": "3 kg*m^2", "drag": "2 N*m*s/rad"},
		"inertia speed' + drag speed = torque"))
	g, err := s.TransferFunction("torque", "speed")
	if err != nil {
		t.Fatal(err)
	}
	g, err = g.ConvertUnits(units.MustParse("N*m"), units.MustParse("rad/s"))
	if err != nil || !g.Equivalent(tf.MustParse("1/(3 s + 2) [N*m -> rad/s]")) {
		t.Errorf("%v, %v", g, err)
	}
}

func ExampleParseSystem() {
	tank, err := lti.ParseSystem(`{
		"signals":   {"heating": "kW", "temperature": "K"},
		"constants": {"capacity": "4.2 MJ/K", "loss": "0.35 kW/K"},
		"equations": ["capacity temperature' + loss temperature = heating"]
	}`)
	if err != nil {
		fmt.Println(err)
		return
	}
	g, err := tank.TransferFunction("heating", "temperature")
	fmt.Println(g, err)
	colder, err := tank.WithConstant("loss", "0.42 kW/K")
	if err != nil {
		fmt.Println(err)
		return
	}
	g, err = colder.TransferFunction("heating", "temperature'")
	fmt.Println(g, err)
	// Output:
	// 20/(84000 s + 7) [heating: kW -> temperature: K] <nil>
	// 50 s/(210000 s + 21) [heating: kW -> temperature': K/s] <nil>
}

// Build tells all that is wrong at once.
func ExampleEquations_Build() {
	pool := lti.NewEquations()
	pool.Signal("inflow", "m^3/s")
	pool.Signal("level", "m")
	pool.Constant("area", "5600 m^2")
	pool.Constant("crest", "1.7 m^(1/2)/s")
	pool.Equation("area level = inflow")
	pool.Equation("inflow = area level level'")
	_, err := pool.Build()
	fmt.Println(err)
	// Output:
	// constant crest = "1.7 m^(1/2)/s": at offset 8 of "1.7 m^(1/2)/s": found "/", want a closing parenthesis
	// equation 1, "area level = inflow", at "inflow" (offset 13): the term is in m^3/s, where "area level" is in m^3
	// equation 2, "inflow = area level level'", at "area level level'" (offset 9): a product of signals is not linear: a transfer function holds only for equations that are linear in the signals; replace the term by its slope at an operating point (linearise)
}
