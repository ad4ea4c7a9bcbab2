package lti_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func pool() *lti.Equations {
	pool := lti.NewEquations()
	pool.Signal("opening", "mm")
	pool.Signal("inflow", "m^3/s")
	pool.Signal("offtake", "m^3/s")
	pool.Signal("level", "m")
	pool.Constant("kq", "0.0042 m^3/(s*mm)")
	pool.Constant("backwater", "2.5 m^2/s")
	pool.Constant("outflow", "1.25 m^2/s")
	pool.Constant("area", "5600 m^2")
	pool.Equation("inflow = kq opening - backwater level")
	pool.Equation("area level' + outflow level = inflow - offtake")
	return pool
}

func build(t *testing.T, e *lti.Equations) *lti.System {
	t.Helper()
	s, err := e.Build()
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func want(t *testing.T, s *lti.System, in, out, text string, held ...string) {
	t.Helper()
	g, err := s.TransferFunction(in, out, held...)
	if err != nil {
		t.Errorf("%s to %s: %v", in, out, err)
		return
	}
	if w := tf.MustParse(text); !g.Equivalent(w) {
		t.Errorf("%s to %s is %v, want %v", in, out, g, w)
	}
}

func TestPool(t *testing.T) {
	s := build(t, pool())
	// 0.0042/(5600 s + 3.75), by hand
	want(t, s, "opening", "level", "0.0042/(5600 s + 3.75) [opening: mm -> level: m]", "offtake")
	want(t, s, "offtake", "level", "-1/(5600 s + 3.75) [offtake: m^3/s -> level: m]", "opening")
	want(t, s, "opening", "level'", "0.0042 s/(5600 s + 3.75) [opening: mm -> level': m/s]", "offtake")
	want(t, s, "level", "opening", "(5600 s + 3.75)/0.0042 [level: m -> opening: mm]", "offtake")
	want(t, s, "level", "level", "1 [level: m -> level: m]")
	var few *lti.DeterminacyError
	if _, err := s.TransferFunction("opening", "level"); !errors.As(err, &few) || !strings.Contains(err.Error(), "hold at 0") {
		t.Errorf("an input too many: %v", err)
	}
	if _, err := s.TransferFunction("opening", "level", "offtake", "inflow"); !errors.As(err, &few) || !strings.Contains(err.Error(), "too many") {
		t.Errorf("an unknown too few: %v", err)
	}
	t2, err := s.WithConstant("area", "7000 m^2")
	if err != nil {
		t.Fatal(err)
	}
	want(t, t2, "opening", "level", "0.0042/(7000 s + 3.75) [opening: mm -> level: m]", "offtake")
	want(t, s, "opening", "level", "0.0042/(5600 s + 3.75) [opening: mm -> level: m]", "offtake")
	if _, err := s.WithConstant("area", "7000 m"); err == nil {
		t.Error("a constant of another dimension was taken")
	}
}

// Common practice: the transfer function is that for zero initial conditions,
// its unit is that of the output over the input, s^k stands for the k-th
// derivative, and scales within an equation are converted.
func TestTradeFacts(t *testing.T) {
	e := lti.NewEquations()
	e.Signal("x", "mm")
	e.Signal("f", "kN")
	e.Constant("m", "200 kg")
	e.Constant("c", "640 N*s/m")
	e.Constant("k", "50 N/mm")
	e.Equation("m x'' + c x' + k x = f")
	s := build(t, e)
	want(t, s, "f", "x", "1e6/(200 s^2 + 640 s + 50000) [f: kN -> x: mm]")
	want(t, s, "f", "x''", "1e6 s^2/(200 s^2 + 640 s + 50000) [f: kN -> x'': mm/s^2]")
	// The radian is weightless in an equation.
	r := lti.NewEquations()
	r.Signal("angle", "rad")
	r.Signal("torque", "N*m")
	r.Constant("inertia", "3 kg*m^2")
	r.Constant("stiffness", "12 N*m/rad")
	r.Equation("inertia angle'' + stiffness angle = torque")
	want(t, build(t, r), "torque", "angle", "1/(3 s^2 + 12) [torque: N*m -> angle: rad]")
}

// A hidden mode stays in the denominator: x2 is not seen in x1.
func TestHiddenMode(t *testing.T) {
	e := lti.NewEquations()
	for _, name := range []string{"u", "x1", "x2"} {
		e.Signal(name, "m")
	}
	e.Constant("T", "2 s")
	e.Equation("T x1' + x1 = u")
	e.Equation("T x2' - x2 = u")
	g, err := build(t, e).TransferFunction("u", "x1")
	if err != nil {
		t.Fatal(err)
	}
	reduced, cancelled := g.LowestTerms()
	if !cancelled.Monic().Equal(poly.MustParse("s - 1/2")) || reduced.Denominator().Degree() != 1 {
		t.Errorf("%v cancels %v", g, cancelled)
	}
}

func TestRefusals(t *testing.T) {
	base := func(equations ...string) *lti.Equations {
		e := lti.NewEquations()
		e.Signal("x", "m")
		e.Signal("y", "m")
		e.Constant("a", "3 s")
		e.Constant("w", "2 Hz")
		for _, q := range equations {
			e.Equation(q)
		}
		return e
	}
	for _, c := range []struct{ equation, says string }{
		{"x'^2 = y", "not linear"}, {"sin(x) = y", "linearise"}, {"x y = y", "product of signals"}, {"1/x = y", "division by a signal"},
		{"x' = y", `"y" (offset 5): the term is in m, where "x'" is in m/s`}, {"a (x + x') = y", "the terms before it in m"}, {"a x' = y + a", `"a" (offset 11): the term is in s, where "a x'" is in m`}, {"x = z", "declared are"}, {"x = y + 5", "\"5\" (offset 8): the term is a pure number, where \"x\" is in m"}, {"w x = y'", "12.56637 rad/s"},
		{"x", "= or an operator"}, {"x = ", "a name, a number"}, {"x'' = \"y", "second derivative"}, {"x = x", "nothing about any signal"}, {"a' x = y", "derivative of a constant"},
		{"y = x/0", "zero"}, {"", "a name"}, {"x = y'''''''''''''''''", "derivative of order"}, {"a^99 x = y", "exponent"}, {"x = 1/a y", "read in two ways"},
		{"NaN x = y", "declared are"}, {strings.Repeat("(", 2000), "nesting"}, {"x = 1e999999999 y", "exponent"}, {"x" + strings.Repeat("+x", 9000) + "=y", "parts"},
	} {
		_, err := base(c.equation).Build()
		var e *lti.EquationError
		if !errors.As(err, &e) || !strings.Contains(err.Error(), c.says) || e.Number != 1 {
			t.Errorf("%.40q: %v, want an EquationError that says %q", c.equation, err, c.says)
		}
	}
	_, err := base("x' = y", "x y = y", "x = y", "sin(y) = x").Build()
	if joined, ok := err.(interface{ Unwrap() []error }); !ok || len(joined.Unwrap()) != 3 {
		t.Errorf("three faults give %v", err)
	}
	e := base("a x' = y")
	e.Signal("x", "m")
	e.Signal("q", "metre")
	e.Signal("2q", "m")
	e.Constant("T", "900 degC")
	_, err = e.Build()
	if joined, ok := err.(interface{ Unwrap() []error }); !ok || len(joined.Unwrap()) != 4 {
		t.Errorf("four faulty declarations give %v", err)
	}
	var mismatch *units.MismatchError
	if _, err := base("x' = y").Build(); !errors.As(err, &mismatch) {
		t.Errorf("the mismatch behind an EquationError: %v", err)
	}
}

func TestSingular(t *testing.T) {
	e := lti.NewEquations()
	for _, name := range []string{"u", "v", "x", "y"} {
		e.Signal(name, "m")
	}
	e.Equation("v = u")
	e.Equation("x + y = u")
	e.Equation("2 x + 2 y = u")
	s := build(t, e)
	var d *lti.DeterminacyError
	if _, err := s.TransferFunction("u", "x"); !errors.As(err, &d) || strings.Join(d.Open, " ") != "x y" || !slices.Equal(d.Dependent, []int{2, 3}) ||
		err.Error() != "with u as the input equations 2 and 3 repeat or contradict each other and leave x, y open" {
		t.Errorf("%v", err)
	}
	message := "equations 2 and 3 repeat or contradict each other and leave x, y open"
	if _, err := s.InitialState([]string{"u"}); !errors.As(err, &d) || err.Error() != message {
		t.Errorf("%v", err)
	}
	if _, err := s.StateSpace([]string{"u"}, []string{"x"}); !errors.As(err, &d) || err.Error() != "with u as the input "+message {
		t.Errorf("%v", err)
	}
	if _, err := s.TransferFunctions([]string{"u", "v"}, []string{"x", "y"}); !errors.As(err, &d) || !strings.Contains(err.Error(), "too many") {
		t.Errorf("%v", err)
	}
	one := build(t, record(map[string]string{"u": "m", "v": "m", "x": "m", "y": "m"}, nil, "v = u", "x + y = u"))
	if _, err := one.TransferFunction("u", "x", "v"); !errors.As(err, &d) || !slices.Equal(d.Dependent, []int{1}) ||
		!strings.Contains(err.Error(), "equation 1 holds none of the unknown signals") {
		t.Errorf("%v", err)
	}
	var unknown *lti.UnknownNameError
	if _, err := s.TransferFunction("u", "z"); !errors.As(err, &unknown) {
		t.Errorf("%v", err)
	}
}

// The value at random points solves the equations there: an independent path
// by elimination over the rationals, for random networks of first-order lags.
func TestAgainstElimination(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for range 40 {
		n := 2 + random.IntN(5)
		e := lti.NewEquations()
		e.Signal("u", "1")
		type row struct{ lag, self, in int64 }
		rows, couple := make([]row, n), make([][]int64, n)
		for i := range n {
			e.Signal(fmt.Sprintf("x%d", i), "1")
			e.Constant(fmt.Sprintf("T%d", i), fmt.Sprintf("%d s", i+1))
			rows[i] = row{int64(i + 1), 1 + random.Int64N(9), random.Int64N(5)}
			text := fmt.Sprintf("T%d x%d' + %d x%d = %d u", i, i, rows[i].self, i, rows[i].in)
			couple[i] = make([]int64, n)
			for j := range n {
				if j != i && random.IntN(2) == 0 {
					couple[i][j] = random.Int64N(7) - 3
					text += fmt.Sprintf(" + %d x%d", couple[i][j], j)
					text = strings.ReplaceAll(text, "+ -", "- ")
				}
			}
			e.Equation(text)
		}
		out := random.IntN(n)
		g, err := build(t, e).TransferFunction("u", fmt.Sprintf("x%d", out))
		if err != nil {
			t.Fatal(err)
		}
		s := big.NewRat(random.Int64N(50)+1, 7)
		m := make([][]*big.Rat, n)
		for i := range m {
			m[i] = make([]*big.Rat, n+1)
			for j := range n {
				m[i][j] = big.NewRat(-couple[i][j], 1)
			}
			m[i][i] = new(big.Rat).Mul(s, big.NewRat(rows[i].lag, 1))
			m[i][i].Add(m[i][i], big.NewRat(rows[i].self, 1))
			m[i][n] = big.NewRat(rows[i].in, 1)
		}
		x, ok := gauss(m)
		if !ok {
			continue
		}
		v, err := g.AtRat(s)
		if err != nil || v.Cmp(x[out]) != 0 {
			t.Fatalf("at %v: %v, %v, want %v", s, v, err, x[out])
		}
	}
}

func gauss(m [][]*big.Rat) ([]*big.Rat, bool) {
	n := len(m)
	for k := range n {
		p := k
		for p < n && m[p][k].Sign() == 0 {
			p++
		}
		if p == n {
			return nil, false
		}
		m[p], m[k] = m[k], m[p]
		for i := range n {
			if i == k {
				continue
			}
			f := new(big.Rat).Quo(m[i][k], m[k][k])
			for j := range m[i] {
				m[i][j] = new(big.Rat).Sub(m[i][j], new(big.Rat).Mul(f, m[k][j]))
			}
		}
	}
	x := make([]*big.Rat, n)
	for i := range x {
		x[i] = new(big.Rat).Quo(m[i][n], m[i][i])
	}
	return x, true
}

func TestJSON(t *testing.T) {
	s := build(t, pool())
	text, err := json.Marshal(s)
	if err != nil {
		t.Fatal(err)
	}
	var back lti.System
	if err := json.Unmarshal(text, &back); err != nil {
		t.Fatal(err)
	}
	if back.String() != s.String() {
		t.Errorf("read back as\n%v\nwant\n%v", &back, s)
	}
	for _, c := range []struct{ text, says string }{
		{"", "the end"}, {"{", "the rest"}, {"[]", "{"}, {`{"signal": {}}`, "equations"}, {`{"signals": {"x": 3}}`, "a string"}, {`{"signals": {}} x`, "the end"},
		{`{"signals": {}, "signals": {}}`, "once"}, {`{"signals": {"x": "m", "x": "m"}}`, "already"}, {strings.Repeat("{", 2<<20), "at most"}, {`{"equations": "x = y"}`, "["},
	} {
		if _, err := lti.ParseSystem(c.text); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%.30q: %v, want a fault that says %q", c.text, err, c.says)
		}
	}
}

func FuzzEquation(f *testing.F) {
	for _, s := range []string{"a x' + b y = 0", "x'' = (x + y)'/a^2", "sin(x) = y", "x = 1/3 y", "x = b integral(y + integral(x'/a))/a"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		e := lti.NewEquations()
		e.Signal("x", "m")
		e.Signal("y", "m")
		e.Constant("a", "3 s")
		e.Constant("b", "0.5")
		e.Equation(text)
		s, err := e.Build()
		if err != nil {
			var q *lti.EquationError
			if !errors.As(err, &q) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		for _, w := range s.Warnings() {
			if w.Text == "" {
				t.Error("a warning without words")
			}
		}
		if _, err := s.TransferFunction("x", "y"); err != nil {
			var d *lti.DeterminacyError
			if !errors.As(err, &d) && !errors.Is(err, lti.ErrLimit) {
				t.Fatalf("untyped error %v", err)
			}
		}
	})
}

func FuzzParseSystem(f *testing.F) {
	f.Add(`{"signals": {"x": "m", "y": "m"}, "constants": {"a": "1 s"}, "equations": ["a x' = y"]}`)
	f.Fuzz(func(t *testing.T, text string) {
		s, err := lti.ParseSystem(text)
		if err != nil {
			return
		}
		again, err := json.Marshal(s)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := lti.ParseSystem(string(again)); err != nil {
			t.Fatalf("%s does not read back: %v", again, err)
		}
	})
}

func ExampleSystem_TransferFunction() {
	tank := lti.NewEquations()
	tank.Signal("inflow", "L/min")
	tank.Signal("level", "mm")
	tank.Constant("area", "1.5 m^2")
	tank.Constant("outflow", "0.02 m^2/s")
	tank.Equation("area level' + outflow level = inflow")
	system, err := tank.Build()
	if err != nil {
		fmt.Println(err)
		return
	}
	plant, err := system.TransferFunction("inflow", "level")
	fmt.Println(plant, err)
	// Output:
	// 5/(450 s + 6) [inflow: L/min -> level: mm] <nil>
}
