package lti_test

import (
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
)

// kiln is the model that the mistakes below are made in.
const kiln = `{
	"signals":   {"heating": "W", "element": "K", "load": "K", "leak": "W"},
	"constants": {"ce": "18 kJ/K", "cl": "60 kJ/K", "coupling": "0.0075 K/W", "loss": "0.12 K/W"},
	"equations": ["ce element' = heating - (element - load)/coupling",
	              "cl load' = (element - load)/coupling - leak",
	              "leak = load/loss"]
}`

// Every mistake that a person makes gets a sentence that helps.
func TestMistakes(t *testing.T) {
	for _, c := range []struct {
		mistake, from, to string // one change of the model
		says              string
	}{
		{"a constant in hertz", `"60 kJ/K"`, `"60 kJ*Hz*s/K"`, "the constant is in Hz, which counts cycles or degrees; an equation needs radians: write 376991.1 J*rad/K"},
		{"a cut-off in hertz", `"0.0075 K/W"`, `"0.0075 K*s*Hz/W"`, "which counts cycles or degrees; an equation needs radians: write 0.04712389"},
		{"a temperature as a constant", `"0.12 K/W"`, `"900 degC"`, "constant loss = \"900 degC\": signals and constants of a linear model are deviations from an operating point: write a difference of 900 degC as \"900 K\"; an absolute temperature is read by units.ParseAbsolute and belongs into the operating point (Linearize, Equilibrium)"},
		{"a temperature in Fahrenheit", `"0.12 K/W"`, `"-18 degF"`, "write a difference of -18 degF as \"-10 K\""},
		{"an unknown unit", `"0.12 K/W"`, `"0.12 kelvin/W"`, "found the unknown unit \"kelvin\", want its symbol, \"K\""},
		{"a product of signals", `"leak = load/loss"`, `"leak = load load/loss"`, "at \"load load\" (offset 7): a product of signals is not linear"},
		{"radiation", `"leak = load/loss"`, `"leak = load^4/loss"`, "replace the term by its slope at an operating point"},
		{"a limit", `"leak = load/loss"`, `"leak = max(load, element)/loss"`, "at \"max(load, element)\" (offset 7): max of a signal is not linear"},
		{"a function", `"leak = load/loss"`, `"leak = sqrt(load)/loss"`, "sqrt of a signal is not linear"},
		{"a missing prime", `cl load'`, `cl load`, "at \"cl load\" (offset 0): the term is in J, where \"(element - load)/coupling\" is in W"},
		{"a prime too many", `cl load'`, `cl load''`, "at \"cl load''\" (offset 0): the term is in W/s, where"},
		{"division for multiplication", `load/loss`, `load loss`, "the term is in K^2/W, where \"leak\" is in W"},
		{"a differential quotient", `cl load'`, `cl dload/dt`, "the derivative of x by time is x'"},
		{"a dot", `cl load'`, `cl load_dot`, "the derivative of load by time is load', the second one load''"},
		{"the Laplace variable", `cl load'`, `cl s load`, "x' stands for s x, integral(x) for x/s"},
		{"an integral by another name", `"leak = load/loss"`, `"leak = k Integral(load)"`, "the integral of x by time is integral(x)"},
		{"upper case", `cl load'`, `cl Load'`, "perhaps load: upper and lower case differ"},
		{"a unit in an equation", `load/loss`, `load/(0.12 K/W)`, "a unit, which belongs into the declaration of a constant"},
		{"a comma for a decimal point", `load/loss`, `0,5 load/loss`, "found \",\", want a point in decimal numbers, as in 0.5"},
		{"a number in a bracket before a name", `load/loss`, `1/loss load`, "what follows a division is read in two ways"},
		{"two equals signs", `leak = load/loss`, `leak = load/loss = 3`, "want an operator or the end of the equation"},
		{"an inequality", `leak = load/loss`, `leak > load/loss`, "limits and inequalities are not linear and have no place here"},
		{"a constant term", `leak = load/loss`, `leak = load/loss + 5`, "the term is a pure number, where \"leak\" is in W"},
		{"ambient as a constant", `leak = load/loss`, `leak = (load - ambient)/loss`, "no signal or constant has this name; declared are ce, cl, coupling"},
		{"an absolute temperature", `leak = load/loss`, `leak = (load + coupling)/loss`, "the terms before it in K"},
		{"a name declared twice", `"leak": "W"}`, `"leak": "W", "loss": "W"}`, "the name is declared already"},
		{"a name with a blank", `"leak": "W"}`, `"leak": "W", "leak out": "W"}`, "must be of letters, digits and underscores"},
		{"time-varying", `load/loss`, `t load/loss`, "coefficients must not vary in time"},
		{"a signal that is never determined", `"leak = load/loss"`, `"leak = leak"`, "says nothing about any signal"},
		{"two definitions", `"leak = load/loss"`, `"leak = load/loss", "leak = 0.5 load/loss"`, "4 equations for 3 unknown signals (element, load, leak): too many; leave 1 out, or hold fewer signals at 0; leak has two definitions, equations 3 and 4"},
		{"two definitions that leave another open", `"cl load' = (element - load)/coupling - leak"`, `"leak = load/loss"`, "equations 2 and 3 repeat or contradict each other and leave element, load, leak open; leak has two definitions, equations 2 and 3"},
		{"the same twice", `"cl load' = (element - load)/coupling - leak"`, `"2 leak = load/loss + leak"`, "equations 2 and 3 repeat or contradict each other and leave element, load, leak open"},
		{"an equation that is missing", `,
	              "leak = load/loss"`, ``, "2 equations for 3 unknown signals (element, load, leak): add 1 equation, perhaps for leak, or, where what is missing comes from outside, name 1 further input to hold at 0, perhaps TransferFunction(\"heating\", \"load\", \"leak\")"},
		{"a signal that is never declared", `, "leak": "W"`, ``, "no signal or constant has this name"},
	} {
		text := strings.Replace(kiln, c.from, c.to, 1)
		if text == kiln {
			t.Errorf("%s: %q is not in the model", c.mistake, c.from)
		}
		s, err := lti.ParseSystem(text)
		if err == nil {
			_, err = s.TransferFunction("heating", "load")
		}
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v\nwant an error that says %q", c.mistake, err, c.says)
		}
	}
}

// Every door for a quantity of a linear model says that it holds deviations.
func TestAbsoluteTemperatures(t *testing.T) {
	s, err := lti.ParseSystem(kiln)
	if err != nil {
		t.Fatal(err)
	}
	_, constant := s.WithConstant("loss", "60 degC")
	_, step := s.Step("load", "60 degC")
	_, initial := s.InitialState([]string{"heating"}, lti.Initially("load", "60 degC"), lti.Initially("element", "60 K"))
	for door, err := range map[string]error{"WithConstant": constant, "Step": step, "InitialState": initial} {
		if err == nil || !strings.Contains(err.Error(), `deviations from an operating point: write a difference of 60 degC as "60 K"`) {
			t.Errorf("%s: %v", door, err)
		}
	}
}
