package lti_test

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The pool of a canal 0.2 m too high, and the gate moved by 50 mm as well.
func ExampleSystem_InitialState() {
	pool := lti.NewEquations()
	pool.Signal("opening", "mm")
	pool.Signal("inflow", "m^3/s")
	pool.Signal("level", "m")
	pool.Constant("kq", "0.0042 m^3/(s*mm)")
	pool.Constant("backwater", "2.5 m^2/s")
	pool.Constant("outflow", "1.25 m^2/s")
	pool.Constant("area", "5600 m^2")
	pool.Equation("inflow = kq opening - backwater level")
	pool.Equation("area level' + outflow level = inflow")
	system := tf.Must(pool.Build())
	gate := []string{"opening"}

	_, err := system.InitialState(gate)
	fmt.Println(err)
	_, err = system.InitialState(gate, lti.Initially("level", "0.2 m"), lti.Initially("inflow", "1 m^3/s"))
	fmt.Println(err)
	state := tf.Must(system.InitialState(gate, lti.Initially("level", "0.2 m")))
	fmt.Println(tf.Must(state.Value("inflow")), tf.Must(state.Value("level'")))
	fmt.Println(tf.Must(state.FreeResponse("level")))
	fmt.Println(tf.Must(state.Response("level", tf.Must(system.Step("opening", "50 mm")))))
	fmt.Println(tf.Must(state.Response("level'", tf.Must(system.Step("opening", "50 mm")))))
	// Output:
	// initial values: the equations are of order 1 and need as many initial values; none is given; it suffices to give level
	// initial value inflow = 1 m^3/s: the equations make it -0.5 m^3/s, as level = 0.2 m
	// -0.5 m^3/s -3/22400 m/s
	// 0.2 e^(−3 t/4480) [m]
	// 0.056 + 0.144 e^(−3 t/4480) [m]
	// −9.64286e−5 e^(−3 t/4480) [m/s]
}

func random(seed uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, 7)) }

// Worked examples from books, quoted from memory and proved here by the exact
// transform of the printed answer:
//   - Boyce & DiPrima, Elementary Differential Equations, section 6.2, examples
//     1, 2 and 3;
//   - Kreyszig, Advanced Engineering Mathematics, section 6.2, examples 4 and 5;
//   - Abramowitz & Stegun 1964, rules 29.2.4 and 29.2.5 with the pairs 29.3.8,
//     29.3.15 to 29.3.18.
func TestWorkedExamples(t *testing.T) {
	for _, c := range []struct {
		name, equation string
		values         []string // y, y', …
		input          string   // transform of u
		answer         string   // transform of y
	}{
		{"Boyce & DiPrima 1: (e^2t + 2 e^−t)/3", "y'' - y' - 2 y = u", []string{"1", "0"}, "", "1/(3 (s - 2)) + 2/(3 (s + 1))"},
		{"Boyce & DiPrima 2: 2 cos t + 5/3 sin t − 1/3 sin 2t", "y'' + y = u", []string{"2", "1"}, "2/(s^2 + 4)", "(2 s + 5/3)/(s^2 + 1) - 2/(3 (s^2 + 4))"},
		{"Boyce & DiPrima 3: (sinh t + sin t)/2", "y'''' - y = u", []string{"0", "1", "0", "0"}, "", "1/(2 (s^2 - 1)) + 1/(2 (s^2 + 1))"},
		{"Kreyszig 4: e^t + sinh t − t", "y'' - y = u", []string{"1", "1"}, "1/s^2", "1/(s - 1) + 1/(s^2 - 1) - 1/s^2"},
		{"Kreyszig 5: damped, 0.16 (s + 1)/(s² + s + 9)", "y'' + y' + 9 y = u", []string{"0.16", "0"}, "", "0.16 (s + 1)/(s^2 + s + 9)"},
		{"29.3.8: 5 e^−3t", "y' + 3 y = u", []string{"5"}, "", "5/(s + 3)"},
		{"29.3.15 and 16: 5 cos 3t + 7/3 sin 3t", "y'' + 9 y = u", []string{"5", "7"}, "", "(5 s + 7)/(s^2 + 9)"},
		{"29.3.17 and 18: 5 cosh 3t + 7/3 sinh 3t", "y'' - 9 y = u", []string{"5", "7"}, "", "(5 s + 7)/(s^2 - 9)"},
		{"29.2.6: y = 5 + ∫u", "y = integral(u)", []string{"5"}, "1/(s + 1)", "5/s + 1/(s (s + 1))"},
		{"an integral in a loop: y' + 2 y + 5 ∫y = u", "y' + 2 y + 5 integral(y) = u", []string{"1", "-2"}, "", "s/(s^2 + 2 s + 5)"},
		{"an input's derivative: a step of 1 makes y jump by 1/2", "2 y' + y = u' + u", []string{"3"}, "1/s", "3/(s + 1/2) + (s + 1)/(s (2 s + 1))"},
	} {
		text := strings.NewReplacer("integral", "w integral", "''''", "'''' T^4", "''", "'' T^2", "'", "' T").Replace(c.equation)
		s := build(t, record(map[string]string{"u": "1", "y": "1"}, map[string]string{"T": "1 s", "w": "1 1/s"}, text))
		var values []lti.InitialValue
		for k, v := range c.values {
			if k > 0 {
				v += fmt.Sprintf(" s^-%d", k)
			}
			values = append(values, lti.Initially("y"+strings.Repeat("'", k), v))
		}
		state, err := s.InitialState([]string{"u"}, values...)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		var inputs []tf.TimeFunction
		if c.input != "" {
			u := tf.MustParse(c.input)
			inputs = append(inputs, tf.Must(tf.NewTimeFunction(u.Numerator(), u.Denominator(), units.Signal{Name: "u"})))
		}
		y, err := state.Response("y", inputs...)
		if err != nil || !sameRational(y.Laplace(), tf.MustParse(c.answer)) {
			t.Errorf("%s: %v, %v, want the transform %s", c.name, y, err, c.answer)
		}
	}
}

func sameRational(f, g tf.Continuous) bool {
	return f.Numerator().Mul(g.Denominator()).Equal(g.Numerator().Mul(f.Denominator()))
}

// x' = F x with units against exp(F t) by gonum.
func TestAgainstTheMatrixExponential(t *testing.T) {
	r := random(1)
	for range 20 {
		n := 2 + r.IntN(5)
		f := mat.NewDense(n, n, nil)
		e := lti.NewEquations()
		start, values := mat.NewVecDense(n, nil), []lti.InitialValue{}
		e.Constant("T", "1 min")
		for i := range n {
			name := fmt.Sprintf("x%d", i)
			e.Signal(name, "mm")
			text := fmt.Sprintf("T %s' = 0 %s", name, name)
			for j := range n {
				k := r.Int64N(9) - 4
				f.Set(i, j, float64(k)/60)
				text += fmt.Sprintf(" + (%d) x%d", k, j)
			}
			e.Equation(text)
			v := r.Int64N(100) - 50
			start.SetVec(i, float64(v))
			values = append(values, lti.Initially(name, fmt.Sprintf("%d cm", v)))
		}
		state, err := build(t, e).InitialState(nil, values...)
		if err != nil {
			t.Fatal(err)
		}
		for _, at := range []float64{0, 1, 30, 90} {
			var scaled, exp mat.Dense
			scaled.Scale(at, f)
			exp.Exp(&scaled)
			var want mat.VecDense
			want.MulVec(&exp, start)
			for i := range n {
				x, err := state.FreeResponse(fmt.Sprintf("x%d", i))
				if err != nil {
					t.Fatal(err)
				}
				got, err := x.At(at)
				if scale := mat.Norm(&exp, 1) * mat.Norm(start, 1); err != nil || math.Abs(got/10-want.AtVec(i)) > 1e-12*scale {
					t.Errorf("x%d(%g) = %v mm, %v, want %v cm", i, at, got, err, want.AtVec(i))
				}
			}
		}
	}
}

// Random sets of equations with derivatives, integrals and algebraic parts. The
// proposal of values that suffice has as many as the determinant has roots; from
// such values
//   - the responses satisfy the equations, derivatives by responses of their own,
//   - they have no impulse, and begin with the values that the state tells,
//   - any of these may be given too, and none of them changed.
func TestFreeResponsesSolveTheEquations(t *testing.T) {
	r := random(2)
	order := 0
	for range 60 {
		n, m := 1+r.IntN(5), 1+r.IntN(2)
		net := newNetwork(r, n, m)
		s := net.build(t)
		all, err := s.TransferFunctions(net.inputs, net.outputs)
		var singular *lti.DeterminacyError
		if errors.As(err, &singular) {
			if _, err2 := s.InitialState(net.inputs); !errors.As(err2, &singular) || err2.Error() == "" {
				t.Errorf("%v, but the state: %v", err, err2)
			}
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		state, values := anyState(t, r, s, net.inputs)
		if len(values) != all[0][0].Denominator().Degree() {
			t.Errorf("%d values for a denominator of degree %d in %q", len(values), all[0][0].Denominator().Degree(), net.equations)
		}
		order += len(values)
		for i, terms := range net.terms {
			shift := 0
			for _, x := range terms {
				shift = max(shift, -x.order)
			}
			sum := tf.MustParse("0")
			for _, x := range terms {
				if x.signal < m {
					continue
				}
				d := free(t, state, net.name(x.signal), x.order+shift)
				sum = tf.Must(tf.Parallel(sum, tf.Must(tf.Scale(rational(d.Laplace()), big.NewRat(x.factor, 1)))))
			}
			if !sum.Numerator().IsZero() {
				t.Errorf("equation %d of %q is off by %v", i+1, net.equations, sum)
			}
		}
		for _, name := range net.outputs {
			for k := range 4 {
				x := free(t, state, name, k)
				name := name + strings.Repeat("'", k)
				v, err := state.Value(name)
				if err != nil || !x.InitialValue().Equal(v) || x.Impulse().Sign() != 0 {
					t.Errorf("%s begins with %v, but is %v, %v", name, v, x, err)
				}
				if _, err := s.InitialState(net.inputs, append(values, lti.Initially(name, v.String()))...); err != nil {
					t.Errorf("%s = %v follows, but: %v", name, v, err)
				}
				more := units.NewQuantity(new(big.Rat).Add(v.Value(), big.NewRat(1, 1)), v.Unit())
				var bad *lti.InitialValueError
				if _, err := s.InitialState(net.inputs, append(values, lti.Initially(name, more.String()))...); !errors.As(err, &bad) || bad.Signal != name {
					t.Errorf("%s = %v contradicts, but: %v", name, more, err)
				}
			}
		}
	}
	if order < 60 {
		t.Errorf("all systems together have order %d only", order)
	}
}

// anyState gives random values to the signals that the error proposes.
func anyState(t *testing.T, r *rand.Rand, s *lti.System, inputs []string) (*lti.InitialState, []lti.InitialValue) {
	t.Helper()
	state, err := s.InitialState(inputs)
	if err == nil {
		return state, nil
	}
	var missing *lti.InitialValueError
	if !errors.As(err, &missing) || len(missing.Missing) == 0 {
		t.Fatal(err)
	}
	var values []lti.InitialValue
	for _, name := range missing.Missing {
		quantity := fmt.Sprintf("%d/7", r.IntN(100)-50)
		if k := strings.Count(name, "'"); k > 0 {
			quantity += fmt.Sprintf(" s^-%d", k)
		}
		values = append(values, lti.Initially(name, quantity))
	}
	if state, err = s.InitialState(inputs, values...); err != nil {
		t.Fatal(err)
	}
	return state, values
}

func free(t *testing.T, state *lti.InitialState, name string, order int) tf.TimeFunction {
	t.Helper()
	x, err := state.FreeResponse(name + strings.Repeat("'", order))
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// rational drops the signals.
func rational(g tf.Continuous) tf.Continuous {
	return tf.Must(tf.New(g.Numerator(), g.Denominator()))
}

// The response with inputs is the free one plus the transfer functions times the
// inputs, exactly, for signals and their derivatives; from rest it is the latter
// alone.
func TestSuperposition(t *testing.T) {
	r := random(3)
	for range 30 {
		n, m := 1+r.IntN(4), 1+r.IntN(3)
		net := newNetwork(r, n, m)
		s := net.build(t)
		all, err := s.TransferFunctions(net.inputs, net.outputs)
		if err != nil {
			continue
		}
		state, _ := anyState(t, r, s, net.inputs)
		var inputs []tf.TimeFunction
		for _, name := range net.inputs {
			u := tf.MustParse([]string{"3/s", "2/(s + 1)", "s/(s^2 + 4)", "5/s^4"}[r.IntN(4)])
			inputs = append(inputs, tf.Must(tf.NewTimeFunction(u.Numerator(), u.Denominator(), units.Signal{Name: name})))
		}
		for i, name := range net.outputs {
			for k := range 2 {
				want := rational(free(t, state, name, k).Laplace())
				for j, u := range inputs {
					g := tf.Must(tf.Series(rational(all[i][j]), rational(u.Laplace())))
					if k == 1 {
						g = tf.Must(tf.Series(g, tf.MustParse("s")))
					}
					want = tf.Must(tf.Parallel(want, g))
				}
				x, err := state.Response(name+strings.Repeat("'", k), inputs...)
				if errors.Is(err, tf.ErrImpulseDerivative) {
					if reduced, _ := want.LowestTerms(); reduced.IsProper() {
						t.Errorf("%s: %v, but the sum is %v", name, err, reduced)
					}
					continue
				}
				if err != nil || !sameRational(x.Laplace(), want) {
					t.Errorf("%s of %q is %v, %v, want %v", name, net.equations, x, err, want)
				}
			}
		}
	}
}

// The units of values, of inputs and of signals are converted.
func TestUnitsOfStates(t *testing.T) {
	s := build(t, pool())
	inputs := []string{"opening", "offtake"}
	state, err := s.InitialState(inputs, lti.Initially("level'", "-6.75 cm/h"))
	if err != nil {
		t.Fatal(err)
	}
	// level' = −3.75/5600 level, so that level = 5600/3.75·0.0675/3600 m
	if v, err := state.Value("level"); err != nil || v.String() != "0.028 m" {
		t.Errorf("%v, %v", v, err)
	}
	if v, err := state.Value("opening'"); err != nil || v.String() != "0 mm/s" {
		t.Errorf("%v, %v", v, err)
	}
	step, err := s.Step("opening", "5 cm")
	if err != nil {
		t.Fatal(err)
	}
	cm := tf.Must(tf.NewTimeFunction(poly.FromInts(5), poly.FromInts(0, 1), units.Signal{Name: "opening", Unit: units.MustParse("cm")}))
	for _, u := range []tf.TimeFunction{step, cm} {
		level, err := state.Response("level", u)
		if err != nil || !sameRational(level.Laplace(), tf.MustParse("0.056/s - 0.028/(s + 3.75/5600)")) {
			t.Errorf("%v, %v", level, err)
		}
	}
}
