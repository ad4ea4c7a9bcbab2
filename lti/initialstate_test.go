package lti_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"math/big"
	"slices"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Each mistake with initial values gets a sentence that helps.
func TestInitialStateRefusals(t *testing.T) {
	s := build(t, record(map[string]string{"x": "mm", "z": "mm", "f": "N", "spare": "V"},
		map[string]string{"m": "200 kg", "c": "640 N*s/m", "k": "50 kN/m"}, "m x'' = f - c (x' - z') - k (x - z)"))
	both := []string{"z", "f"}
	for _, c := range []struct {
		inputs []string
		values []lti.InitialValue
		says   []string
	}{
		{both, nil, []string{"the equations are of order 2 and need as many initial values; none is given; it suffices to give x, x'"}},
		{both, []lti.InitialValue{lti.Initially("x", "3 mm")}, []string{"1 given; it suffices to give x' too"}},
		{both, []lti.InitialValue{lti.Initially("x'", "3 mm/s")}, []string{"1 given; it suffices to give x too"}},
		{both, []lti.InitialValue{lti.Initially("x", "3 mm"), lti.Initially("x", "0.3 cm")}, []string{"2 given, of which only 1 do not follow from the others; it suffices to give x' too"}},
		{both, []lti.InitialValue{lti.Initially("x", "3 mm"), lti.Initially("x", "3 cm")}, []string{"initial value x = 3 cm: the equations make it 3 mm, as x = 3 mm"}},
		{both, []lti.InitialValue{lti.Initially("x", "3 mm"), lti.Initially("x'", "1 mm/s"), lti.Initially("x''", "1 mm/s^2")},
			[]string{"initial value x'' = 1 mm/s^2: the equations make it -753.2 mm/s^2, as x = 3 mm, x' = 1 mm/s"}},
		{both, []lti.InitialValue{lti.Initially("x", "3 kg"), lti.Initially("x'", "3 mm"), lti.Initially("y", "1 mm"), lti.Initially("x", "900 degC"), lti.Initially("x", "5 Nm")},
			[]string{"x = 3 kg: unit kg found where mm is needed", "x' = 3 mm: unit mm found where mm/s is needed", "y = 1 mm: no signal \"y\"", "900 degC", "N*m"}},
		{both, []lti.InitialValue{lti.Initially("z", "1 mm"), lti.Initially("spare", "1 V"), lti.Initially("x'''''''''''''''''", "1 mm")},
			[]string{"z is an input, which is 0 before t = 0", "spare stands in no equation", "limit"}},
		{[]string{"z"}, nil, []string{"1 equation for 2 unknown signals (", `): add 1 equation, perhaps for f, or, where what is missing comes from outside, name 1 further input to hold at 0, perhaps InitialState([]string{"z", "f"}, …)`}},
		{[]string{"z", "z"}, nil, []string{"z is named twice as an input"}},
		{[]string{"q"}, nil, []string{`no signal "q"`}},
		{[]string{"z", "f", "x"}, nil, []string{"1 equation for 0 unknown signals"}},
	} {
		state, err := s.InitialState(c.inputs, c.values...)
		if err == nil || state != nil {
			t.Errorf("%v: %v", c.values, state)
			continue
		}
		for _, says := range c.says {
			if !strings.Contains(err.Error(), says) {
				t.Errorf("%v: %v, want one that says %q", c.values, err, says)
			}
		}
	}
	// A value that is 0 whatever the others are.
	s = build(t, record(map[string]string{"u": "1", "x": "1", "y": "1"}, map[string]string{"T": "3 s"}, "x = 2 u", "T y' = y + x"))
	_, err := s.InitialState([]string{"u"}, lti.Initially("y", "1"), lti.Initially("x", "1"))
	var bad *lti.InitialValueError
	if !errors.As(err, &bad) || !strings.Contains(err.Error(), "x = 1: the equations make it 0, whatever the other values are") {
		t.Errorf("%v", err)
	}
	_, err = s.InitialState([]string{"u"}, lti.Initially("y", "two"))
	if !errors.As(err, &bad) || bad.Err == nil {
		t.Errorf("%v", err)
	}
	if _, err := s.InitialState([]string{"u"}, slices.Repeat([]lti.InitialValue{lti.Initially("y", "1")}, 5000)...); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("%v", err)
	}
}

func TestResponseRefusals(t *testing.T) {
	s := build(t, pool())
	state, err := s.InitialState([]string{"opening", "offtake"}, lti.Initially("level", "0.2 m"))
	if err != nil {
		t.Fatal(err)
	}
	step := func(name, unit string) tf.TimeFunction {
		return tf.Must(tf.NewTimeFunction(poly.FromInts(1), poly.FromInts(0, 1), units.Signal{Name: name, Unit: units.MustParse(unit)}))
	}
	late := tf.MustParse("exp(-3 s) 1/s [1/s -> opening: mm]")
	for _, c := range []struct {
		signal string
		inputs []tf.TimeFunction
		says   string
	}{
		{"levle", nil, `no signal "levle"`},
		{"opening", nil, "it is an input"},
		{"level", []tf.TimeFunction{step("", "mm")}, `"" is no input of this state; there are opening, offtake`},
		{"level", []tf.TimeFunction{step("inflow", "m^3/s")}, `"inflow" is no input of this state`},
		{"level", []tf.TimeFunction{step("opening", "V")}, "unit V found where mm is needed"},
		{"level", []tf.TimeFunction{step("opening", "mm"), step("opening", "mm")}, "given twice"},
		{"level", []tf.TimeFunction{tf.Must(late.InverseLaplace())}, "dead time"},
		{"inflow''", []tf.TimeFunction{step("opening", "mm")}, "derivative of an impulse"},
		{"level'''''''''''''''''", nil, "limit"},
	} {
		if x, err := state.Response(c.signal, c.inputs...); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v, %v, want an error that says %q", c.signal, x, err, c.says)
		}
	}
	for _, c := range [][3]string{{"levle", "1 m", "no signal"}, {"opening", "1", "where mm is needed"}, {"opening", "1 m/", "offset"}} {
		if _, err := s.Step(c[0], c[1]); err == nil || !strings.Contains(err.Error(), c[2]) {
			t.Errorf("%v: %v", c, err)
		}
	}
	if text := fmt.Sprint(state); text != "level = 0.2 m" {
		t.Errorf("%q", text)
	}
	if _, err := state.Value("x"); err == nil {
		t.Error("a value of no signal")
	}
}

// The order of the values and of the declarations does not matter.
func TestStatesDoNotDependOnOrder(t *testing.T) {
	r := random(4)
	for range 20 {
		net := newNetwork(r, 1+r.IntN(4), 1)
		s := net.build(t)
		if _, err := s.TransferFunctions(net.inputs, net.outputs); err != nil {
			continue
		}
		state, values := anyState(t, r, s, net.inputs)
		shuffled := slices.Clone(values)
		r.Shuffle(len(shuffled), func(i, j int) { shuffled[i], shuffled[j] = shuffled[j], shuffled[i] })
		r.Shuffle(len(net.equations), func(i, j int) { net.equations[i], net.equations[j] = net.equations[j], net.equations[i] })
		again, err := net.build(t).InitialState(net.inputs, shuffled...)
		if err != nil {
			t.Fatal(err)
		}
		for _, name := range net.outputs {
			for _, primes := range []string{"", "'", "''"} {
				v, w := tf.Must(state.Value(name+primes)), tf.Must(again.Value(name+primes))
				if !v.Equal(w) {
					t.Errorf("%s%s is %v and %v in %q from %v", name, primes, v, w, net.equations, values)
				}
			}
		}
	}
}

// Dense algebraic sets stay within their bound, and those of a usual size are
// solved.
func TestWorkOfStates(t *testing.T) {
	r := random(5)
	for _, n := range []int{30, 200} {
		if n > 100 && testing.Short() {
			continue
		}
		e := lti.NewEquations()
		e.Signal("u", "1")
		e.Constant("T", "1 s")
		for i := range n {
			e.Signal(fmt.Sprintf("x%d", i), "1")
			text := fmt.Sprintf("%d T x0' = u", i)
			for j := range n {
				text += fmt.Sprintf(" + %d x%d", 1+r.IntN(1<<20), j)
			}
			e.Equation(text)
		}
		s := build(t, e)
		state, err := s.InitialState([]string{"u"}, lti.Initially("x0", "1"))
		switch {
		case n > 100 && !errors.Is(err, lti.ErrLimit):
			t.Errorf("%d equations: %v, %v, want ErrLimit", n, state, err)
		case n < 100 && err != nil:
			t.Errorf("%d equations: %v", n, err)
		}
	}
}

func TestTextOfInitialValues(t *testing.T) {
	values := []lti.InitialValue{lti.Initially("level", "0.2 m"), lti.Initially("level'", "1 mm/s")}
	text, err := json.Marshal(values)
	if err != nil || string(text) != `["level = 0.2 m","level' = 1 mm/s"]` {
		t.Errorf("%s, %v", text, err)
	}
	var back []lti.InitialValue
	if err := json.Unmarshal(text, &back); err != nil || !slices.Equal(back, values) {
		t.Errorf("%v, %v", back, err)
	}
	var syntax *lti.SyntaxError
	if err := json.Unmarshal([]byte(`["level 0.2 m"]`), &back); !errors.As(err, &syntax) {
		t.Errorf("%v", err)
	}
}

func FuzzInitialValue(f *testing.F) {
	s, err := pool().Build()
	if err != nil {
		f.Fatal(err)
	}
	for _, text := range []string{"level = 0.2 m", "level'' = 1 mm/s^2", "inflow′ = -3/4 L/h^2", "opening = 1 mm", "level = ="} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		var v lti.InitialValue
		if err := v.UnmarshalText([]byte(text)); err != nil {
			return
		}
		state, err := s.InitialState([]string{"opening", "offtake"}, v)
		var bad *lti.InitialValueError
		if err != nil {
			if !errors.As(err, &bad) && !errors.Is(err, lti.ErrLimit) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		level, err := state.FreeResponse("level")
		if err != nil {
			return
		}
		if w, err := state.Value("level"); err != nil || !level.InitialValue().Equal(w) {
			t.Errorf("%v begins with %v, %v", level, w, err)
		}
	})
}

// A chain of 100 pools in equilibrium passes on what flows in, so that each
// level stands above the next one by the flow over the width between them.
func TestLongChain(t *testing.T) {
	const n = 100
	s := build(t, chain(n))
	g, err := s.TransferFunction("u", "x0")
	if err != nil || g.Denominator().Degree() != n {
		t.Fatalf("degree %d, %v", g.Denominator().Degree(), err)
	}
	want := new(big.Rat)
	for i := range n {
		k, _ := new(big.Rat).SetString(fmt.Sprintf("2.%02d", i))
		want.Add(want, new(big.Rat).Quo(big.NewRat(1000, 1), k)) // mm
	}
	if gain, err := g.StaticGain(); err != nil || gain.Value().Cmp(want) != 0 {
		t.Errorf("static gain %v, %v, want %v", gain, err, want)
	}
	var values []lti.InitialValue
	for i := range n {
		values = append(values, lti.Initially(fmt.Sprintf("x%d", i), fmt.Sprintf("%d mm", 1+i%7)))
	}
	state, err := s.InitialState([]string{"u"}, values...)
	if err != nil {
		t.Fatal(err)
	}
	// a0 x0' = −k0 (x0 − x1), with 1 and 2 mm
	if v, err := state.Value("x0'"); err != nil || !v.Equal(units.MustParseQuantity("2/5600 mm/s")) {
		t.Errorf("%v, %v", v, err)
	}
	x, err := state.FreeResponse("x50")
	if err != nil || !x.InitialValue().Equal(units.MustParseQuantity("2 mm")) {
		t.Errorf("%v, %v", x.InitialValue(), err)
	}
}
