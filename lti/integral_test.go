package lti_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

var heldPool = map[string]string{"setpoint": "m", "error": "m", "opening": "mm", "level": "m", "offtake": "m^3/s"}

// The canal pool under a PI controller, written as one set of equations. The
// functions are those of the loop by hand: with P = kq/(A s + w) and
// C = kp + ki/s, level/setpoint = kq (kp s + ki)/(A s² + (w + kq kp) s + kq ki).
func TestControllerInEquations(t *testing.T) {
	s := build(t, record(heldPool,
		map[string]string{"kp": "400 mm/m", "ki": "4/15 mm/(s*m)", "kq": "0.0042 m^3/(s*mm)", "area": "5600 m^2", "weir": "3.75 m^2/s"},
		"error = setpoint - level", "opening = kp error + ki integral(error)", "area level' + weir level = kq opening - offtake"))
	want(t, s, "setpoint", "level", "0.0042 (400 s + 4/15)/(5600 s^2 + (3.75 + 1.68) s + 0.0042*4/15) [m -> m]", "offtake")
	want(t, s, "offtake", "level", "-s/(5600 s^2 + 5.43 s + 0.00112) [m^3/s -> m]", "setpoint")
	g, err := s.TransferFunction("setpoint", "level", "offtake")
	if err != nil || g.Denominator().Degree() != 2 {
		t.Errorf("%v, %v: want a denominator of degree 2, that of the integrator and the pool", g, err)
	}
	// Without its integral part the controller has no mode at 0.
	s, err = s.WithConstant("ki", "0 mm/(s*m)")
	if err != nil {
		t.Fatal(err)
	}
	g, err = s.TransferFunction("setpoint", "level", "offtake")
	if err != nil || g.Denominator().Degree() != 1 {
		t.Errorf("%v, %v: want a denominator of degree 1", g, err)
	}
}

// Numerator and denominator, common factors included, by hand.
func TestModesOfIntegrals(t *testing.T) {
	for _, c := range []struct{ equation, num, den string }{
		{"y = integral(x)", "1", "s"},
		{"y = x + k integral(x)", "s + 3", "s"},
		{"y + k integral(y) = x", "s", "s + 3"},
		{"y = integral(integral(x))", "1", "s^2"},
		{"y = integral(x + integral(x))", "s + 1", "s^2"},
		{"y = integral(x) + integral(integral(x))", "s + 1", "s^2"},
		{"y = integral(x) + integral(y)", "1", "s - 1"},
		{"y = integral(x)'", "1", "1"}, // the derivative undoes the integral
		{"y = integral(x')", "s", "s"}, // x but for a constant: the integrator is there
		{"y = integral(x'')'", "s^2", "1"},
		{"y = integral((x + y')')", "s", "-s^2 + s"},
		{"y = integral(integral(x))'", "1", "s"},
		{"k (integral(x) + y) = k x'", "s^2 - 1", "s"},
		{"y = k x + x'", "s + 3", "1"},
		{"y = -2*integral (x)/k", "-2", "3 s"},
		{"0 y = integral(x) - 2 integral(x)/2 - x + y/k", "3", "1"}, // the integrals cancel
	} {
		// Numbers carry the seconds, so that every term is a pure number.
		text := strings.NewReplacer("integral", "w integral", "'", "' T").Replace(c.equation)
		text = strings.ReplaceAll(text, "' T' T", "'' T T")
		s := build(t, record(map[string]string{"x": "1", "y": "1"}, map[string]string{"k": "3", "T": "1 s", "w": "1 1/s"}, text))
		g, err := s.TransferFunction("x", "y")
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		num, den := poly.MustParse(c.num), poly.MustParse(c.den)
		// The same up to one number.
		if k := den.Coefficient(den.Degree()); !g.Denominator().Monic().Equal(den.Monic()) ||
			!g.Numerator().Mul(den).Equal(num.Mul(g.Denominator())) || k.Sign() == 0 {
			t.Errorf("%s: %v, want %s over %s", text, g, c.num, c.den)
		}
	}
}

// A derivative of an input needs nothing special; nor does an integral of it.
func TestDerivativesOfInputs(t *testing.T) {
	s := build(t, record(map[string]string{"u": "mA", "y": "mm"}, map[string]string{"k": "3 mm/mA", "td": "40 ms*mm/mA", "ki": "2 m/(A*h)"},
		"y = k u + td u' + ki integral(u)"))
	// 0.04 s² + 3 s + 2/3600 over s, in mm/mA.
	want(t, s, "u", "y", "(0.04 s^2 + 3 s + 1/1800)/s [u: mA -> y: mm]")
	want(t, s, "y", "u", "s/(0.04 s^2 + 3 s + 1/1800) [y: mm -> u: mA]")
	want(t, s, "u", "y'", "0.04 s^2 + 3 s + 1/1800 [u: mA -> y': mm/s]")
	if text, err := json.Marshal(s); err != nil || !strings.Contains(string(text), "integral(u)") {
		t.Errorf("%s, %v", text, err)
	}
}

func TestIntegralRefusals(t *testing.T) {
	deep := strings.Repeat("integral(", 17) + "x" + strings.Repeat(")", 17)
	for _, c := range []struct{ equation, says string }{
		{"y = integral(x)", `"integral(x)" (offset 4): the term is in m*s, where "y" is in m`},
		{"y = a integral(x", "a closing parenthesis"},
		{"y = a integral", "integral(x) is the integral of x by time"},
		{"y = a integral x", "integral(x) is the integral of x by time"},
		{"y = integral(a)", "the integral of a constant"},
		{"y = integral(0)", "the integral of a constant"},
		{"x = a integral(x' + b)", "leave it away"},
		{"y = a integral(x y)", "product of signals"},
		{"y = a integral(x + x')", "the terms before it in m"},
		{"y = integral(x)^2", "a power of a signal is not linear"},
		{"y = x/integral(x)", "a division by a signal"},
		{"y = a " + deep, "nested 17 deep"},
		{"x = c integral(x')", "says nothing about any signal"},
		{"y = a integral(z)", "declared are"},
	} {
		_, err := record(map[string]string{"x": "m", "y": "m"}, map[string]string{"a": "3 1/s", "b": "2 m/s", "c": "1"}, c.equation).Build()
		var e *lti.EquationError
		if !errors.As(err, &e) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%.40q: %v, want an EquationError that says %q", c.equation, err, c.says)
		}
	}
	_, err := record(map[string]string{"integral": "m"}, nil).Build()
	var d *lti.DeclarationError
	if !errors.As(err, &d) || !strings.Contains(err.Error(), "stands for the integral by time") {
		t.Errorf("%v", err)
	}
}

// A whole loop in equations: the controller's integral adds one pole, its own.
func ExampleEquations_Equation() {
	loop := lti.NewEquations()
	loop.Signal("setpoint", "m")
	loop.Signal("error", "m")
	loop.Signal("opening", "mm")
	loop.Signal("level", "m")
	loop.Constant("kp", "400 mm/m")
	loop.Constant("ki", "0.25 mm/(m*s)")
	loop.Constant("kq", "0.0042 m^3/(s*mm)")
	loop.Constant("area", "5600 m^2")
	loop.Constant("weir", "3.75 m^2/s")
	loop.Equation("error = setpoint - level")
	loop.Equation("opening = kp error + ki integral(error)")
	loop.Equation("area level' + weir level = kq opening")
	system, err := loop.Build()
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(system.TransferFunction("setpoint", "level"))
	// Output:
	// (33600 s + 21)/(1.12e8 s^2 + 108600 s + 21) [setpoint: m -> level: m] <nil>
}

// A loop that is let go with the level 0.1 m too high and the gate where it was:
// where the controller's integral stands follows from both.
func ExampleInitialState_FreeResponse() {
	loop := lti.NewEquations()
	loop.Signal("setpoint", "m")
	loop.Signal("error", "m")
	loop.Signal("opening", "mm")
	loop.Signal("level", "m")
	loop.Constant("kp", "400 mm/m")
	loop.Constant("ki", "0.25 mm/(m*s)")
	loop.Constant("kq", "0.0042 m^3/(s*mm)")
	loop.Constant("area", "5600 m^2")
	loop.Constant("weir", "3.75 m^2/s")
	loop.Equation("error = setpoint - level")
	loop.Equation("opening = kp error + ki integral(error)")
	loop.Equation("area level' + weir level = kq opening")
	system := tf.Must(loop.Build())
	_, err := system.InitialState([]string{"setpoint"})
	fmt.Println(err)
	state := tf.Must(system.InitialState([]string{"setpoint"}, lti.Initially("level", "0.1 m"), lti.Initially("opening", "0 mm")))
	level := tf.Must(state.FreeResponse("level"))
	fmt.Printf("%.4g\n", level)
	fmt.Printf("after ten minutes %.2g m\n", tf.Must(level.At(600)))
	// Output:
	// initial values: the equations are of order 2 and need as many initial values; none is given; it suffices to give level, opening
	// 0.007622 e^(−0.0002668 t) + 0.09238 e^(−0.0007029 t) [m]
	// after ten minutes 0.067 m
}
