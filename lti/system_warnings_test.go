package lti_test

import (
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
)

// A gate whose model was copied in part: what was declared and not used, and an
// equation that came twice.
func ExampleSystem_Warnings() {
	s := tf.Must(lti.ParseSystem(`{
		"signals":   {"opening": "mm", "inflow": "m^3/s", "level": "m", "offtake": "m^3/s"},
		"constants": {"kq": "0.0042 m^3/(s*mm)", "area": "5600 m^2", "outflow": "1.25 m^2/s", "backwater": "2.5 m^2/s"},
		"equations": ["inflow = kq opening", "area level' + outflow level = inflow", "kq opening = inflow"]}`))
	for _, w := range s.Warnings() {
		fmt.Println(w)
	}
	// Output:
	// signal offtake stands in no equation
	// constant backwater stands in no equation
	// equations 1 and 3 say the same, so that no choice of inputs is determined; leave all but one out
	// equations 1, 2 and 3 hold 3 signals only (opening, inflow, level): none of them can be an input, and no input reaches them
}

func TestSystemWarnings(t *testing.T) {
	for _, c := range []struct {
		signals, constants string
		equations          []string
		names, says        []string
	}{
		{"u x", "", []string{"x = u"}, nil, nil},
		{"u v x y", "T", []string{"T x' = u - y", "T y' = x + v"}, nil, nil},
		{"u x", "zero", []string{"x + zero u = 2 x + u"}, nil, nil},
		{"x", "T", []string{"T^2 x'' = -x"}, []string{"x"}, []string{"equation 1 holds 1 signal only (x): none of them can"}},
		{"u x y", "k", []string{"x = u", "y = k (u - u) + x"}, []string{"u"}, []string{`signal u drops out of equation 2, "y = k (u - u) + x"`}},
		{"u x y", "zero", []string{"x = zero u", "y = u"}, []string{"u", "x"}, []string{"u drops out of equation 1", "equation 1 holds 1 signal only (x)"}},
		{"u v x", "", []string{"2 x - u = v", "u' + v' = 2 x'"}, []string{"u v x"}, []string{"equations 1 and 2 say the same"}},
		{"u x y z", "T", []string{"x = u", "T y' = z", "T z' = -y"}, []string{"y z"},
			[]string{"equations 2 and 3 hold 2 signals only (y, z): none of them can be an input, and no input reaches them"}},
		{"u x", "T k", []string{"T x = T u"}, []string{""}, []string{"constant k stands in no equation"}},
		{"a b", "", nil, []string{"a", "b"}, []string{"signal a stands in no equation", "signal b"}},
	} {
		e := lti.NewEquations()
		for _, name := range strings.Fields(c.signals) {
			e.Signal(name, "1")
		}
		for _, name := range strings.Fields(c.constants) {
			e.Constant(name, map[string]string{"T": "2 s", "k": "3", "zero": "0"}[name])
		}
		for _, q := range c.equations {
			e.Equation(q)
		}
		s, err := e.Build()
		if err != nil {
			t.Errorf("%q: %v", c.equations, err)
			continue
		}
		got := s.Warnings()
		if len(got) != len(c.says) {
			t.Errorf("%q: %v, want %q", c.equations, got, c.says)
			continue
		}
		for i, w := range got {
			if !strings.Contains(w.String(), c.says[i]) || strings.Join(w.Signals, " ") != c.names[i] {
				t.Errorf("%q: %q %v, want %q %q", c.equations, w.Signals, w, c.names[i], c.says[i])
			}
		}
	}
}

// Build refuses what no choice of inputs can help, and nothing else.
func TestOverdetermined(t *testing.T) {
	for _, c := range []struct {
		equations []string
		unknowns  string
		dependent []int
		says      string
	}{
		{[]string{"x = 2 y", "y = z", "x = 3 y"}, "x y", []int{1, 3}, ""}, // two equations for two signals: all 0, but determined
		{[]string{"x = 2 y", "y = 5 z", "x = 3 y", "u = v", "y = x"}, "x y", []int{1, 3, 5},
			"equations 1, 3 and 5 hold 2 signals only (x, y): too many for any choice of inputs; leave 1 out, or write 1 signal that they lack; x has two definitions, equations 1 and 3"},
		{[]string{"zero x = u - u + y", "x = y", "y = 2 u", "u = 3 x", "u = 4 y"}, "u x y", []int{1, 2, 3, 4, 5}, "leave 2 out, or write 2 signals"},
		{[]string{"zero x = zero y", "x = zero z"}, "", nil, ""}, // WithConstant may set them
		{[]string{"x = 0 y", "x = 0"}, "x", []int{2}, ""},
	} {
		e := lti.NewEquations()
		for _, name := range []string{"u", "v", "x", "y", "z"} {
			e.Signal(name, "m")
		}
		e.Constant("zero", "0")
		for _, q := range c.equations {
			e.Equation(q)
		}
		_, err := e.Build()
		var d *lti.DeterminacyError
		switch {
		case c.says == "" && errors.As(err, &d):
			t.Errorf("%q: %v", c.equations, err)
		case c.says != "" && (!errors.As(err, &d) || !strings.Contains(err.Error(), c.says) || !slices.Equal(d.Dependent, c.dependent) || !slices.Equal(d.Unknowns, strings.Fields(c.unknowns))):
			t.Errorf("%q: %v, want %q", c.equations, err, c.says)
		}
	}
}
