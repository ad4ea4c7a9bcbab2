package lti_test

import (
	"errors"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
)

// Every function is the one that a call for the pair gives.
func TestTransferFunctionsArePairs(t *testing.T) {
	s := build(t, pool())
	inputs, outputs := []string{"opening", "offtake"}, []string{"level", "inflow", "level'", "offtake", "opening'"}
	all, err := s.TransferFunctions(inputs, outputs)
	if err != nil || len(all) != len(outputs) {
		t.Fatal(all, err)
	}
	for i, out := range outputs {
		for j, in := range inputs {
			g := all[i][j]
			if slices.Contains(inputs, strings.TrimSuffix(out, "'")) {
				want := "0"
				if strings.TrimSuffix(out, "'") == in {
					want = "1"
				}
				if strings.HasSuffix(out, "'") {
					want = "(" + want + ") s"
				}
				if !g.Equivalent(tf.Must(tf.MustParse(want).WithUnits(g.Input().Unit, g.Output().Unit))) && want != "0" {
					t.Errorf("%s to %s is %v", in, out, g)
				}
				if want == "0" && !g.Numerator().IsZero() {
					t.Errorf("%s to %s is %v", in, out, g)
				}
				continue
			}
			one, err := s.TransferFunction(in, out, inputs[1-j])
			if err != nil || !one.Equal(g) {
				t.Errorf("%s to %s is %v, alone %v, %v", in, out, g, one, err)
			}
			if !g.Denominator().Monic().Equal(all[0][0].Denominator().Monic()) {
				t.Errorf("%s to %s has another denominator: %v", in, out, g)
			}
		}
	}
}

func TestTransferFunctionsRefusals(t *testing.T) {
	s := build(t, pool())
	for _, c := range []struct {
		inputs, outputs, held []string
		says                  string
	}{
		{[]string{"opening"}, []string{"level"}, nil, `perhaps TransferFunctions([]string{"opening"}, []string{"level"}, "offtake")`},
		{[]string{"opening", "opening"}, []string{"level"}, nil, "opening is named twice as an input"},
		{[]string{"opening"}, []string{"level'"}, []string{"level"}, "neither input nor output"},
		{[]string{"opening"}, []string{"level"}, []string{"opening"}, "neither input nor output"},
		{[]string{"opening", "offtake", "inflow"}, []string{"level"}, nil, "with opening, offtake, inflow as the inputs 2 equations for 1 unknown signal (level): too many"},
	} {
		var d *lti.DeterminacyError
		if g, err := s.TransferFunctions(c.inputs, c.outputs, c.held...); !errors.As(err, &d) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%v to %v: %v, %v, want an error that says %q", c.inputs, c.outputs, g, err, c.says)
		}
	}
	many := slices.Repeat([]string{"level"}, 4097)
	if _, err := s.TransferFunctions([]string{"opening"}, many, "offtake"); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("%v", err)
	}
	most := "level" + strings.Repeat("'", 16)
	if _, err := s.TransferFunction("opening", most, "offtake"); err != nil {
		t.Errorf("%v", err)
	}
	if _, err := s.TransferFunction("opening", most+"'", "offtake"); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("%v", err)
	}
	var unknown *lti.UnknownNameError
	if _, err := s.TransferFunctions([]string{"opening"}, []string{"levle"}, "offtake"); !errors.As(err, &unknown) {
		t.Errorf("%v", err)
	}
	if all, err := s.TransferFunctions(nil, []string{"level"}); err != nil || len(all) != 1 || len(all[0]) != 0 {
		t.Errorf("no inputs: %v, %v", all, err)
	}
}

// Random networks with several inputs: the functions, put into the equations,
// solve them at random points for random values of the inputs.
func TestTransferFunctionsSolveTheEquations(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	for range 30 {
		n, m := 1+random.IntN(5), 1+random.IntN(3)
		net := newNetwork(random, n, m)
		all, err := net.build(t).TransferFunctions(net.inputs, net.outputs)
		if err != nil {
			var d *lti.DeterminacyError
			if !errors.As(err, &d) {
				t.Fatal(err)
			}
			continue
		}
		net.check(t, all, random)
	}
}

func ExampleSystem_TransferFunctions() {
	kiln, err := lti.ParseSystem(`{
		"signals":   {"heating": "W", "draught": "W", "element": "K", "load": "K"},
		"constants": {"ce": "18 kJ/K", "cl": "60 kJ/K", "coupling": "400/3 W/K", "loss": "25/3 W/K"},
		"equations": ["ce element' = heating - coupling (element - load)",
		              "cl load' = coupling (element - load) - loss load - draught"]
	}`)
	if err != nil {
		fmt.Println(err)
		return
	}
	all, err := kiln.TransferFunctions([]string{"heating", "draught"}, []string{"element", "load"})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, row := range all {
		for _, g := range row {
			fmt.Println(g)
		}
	}
	// Output:
	// (54 s + 0.1275)/(972000 s^2 + 9495 s + 1) [heating: W -> element: K]
	// -0.12/(972000 s^2 + 9495 s + 1) [draught: W -> element: K]
	// 0.12/(972000 s^2 + 9495 s + 1) [heating: W -> load: K]
	// (-16.2 s - 0.12)/(972000 s^2 + 9495 s + 1) [draught: W -> load: K]
}
