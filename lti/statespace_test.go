package lti_test

import (
	"errors"
	"fmt"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Random sets of equations: the form has the transfer functions that Cramer's
// rule gives, all modes of the determinant and no other, and a state that bears
// the name of a signal is that signal.
func TestStateSpaceAgainstCramersRule(t *testing.T) {
	r := random(8)
	good, improper, shifted := 0, 0, 0
	for range 400 {
		n, m := 1+r.IntN(4), 1+r.IntN(2)
		net := newNetwork(r, n, m)
		s := net.build(t)
		all, err := s.TransferFunctions(net.inputs, net.outputs)
		if err != nil {
			var d, d2 *lti.DeterminacyError
			if _, err2 := s.StateSpace(net.inputs, net.outputs); errors.As(err, &d) && (!errors.As(err2, &d2) || d.Error() != d2.Error()) {
				t.Errorf("%v, but %v", err, err2)
			}
			continue
		}
		anyImproper := false
		for _, row := range all {
			for _, g := range row {
				reduced, _ := g.LowestTerms()
				anyImproper = anyImproper || !reduced.IsProper()
			}
		}
		form, err := s.StateSpace(net.inputs, net.outputs)
		if bad := (*lti.ImproperError)(nil); anyImproper {
			if improper++; !errors.As(err, &bad) || !errors.Is(err, statespace.ErrImproper) {
				t.Errorf("%q has improper functions, but %v", net.equations, err)
			}
			continue
		}
		if err != nil {
			t.Errorf("%q: %v", net.equations, err)
			continue
		}
		good++
		if p, err := form.CharacteristicPolynomial(); err != nil || !p.Equal(all[0][0].Denominator().Monic()) {
			t.Errorf("%q has the modes %v, %v, want %v", net.equations, p, err, all[0][0].Denominator())
		}
		got, err := form.TransferFunctions(net.inputs, net.outputs)
		if err != nil {
			t.Fatal(err)
		}
		for i := range all {
			for j, g := range all[i] {
				if !got[i][j].Equal(g) {
					t.Errorf("%q: %v, want %v", net.equations, got[i][j], g)
				}
			}
		}
		if !natural(t, s, form, net.inputs) {
			shifted++
		}
	}
	if good < 50 || improper < 50 || shifted < 20 {
		t.Errorf("%d good, %d improper, %d with shifted states", good, improper, shifted)
	}
}

// natural checks the states that bear the names of signals, and reports whether
// all do.
func natural(t *testing.T, s *lti.System, form statespace.Continuous, inputs []string) bool {
	t.Helper()
	all := true
	for i, x := range form.States() {
		if strings.HasSuffix(x.Name, "_less_inputs") {
			all = false
			continue
		}
		one, err := s.StateSpace(inputs, []string{x.Name})
		if err != nil {
			t.Errorf("%s: %v", x.Name, err)
			continue
		}
		m := one.Matrices()
		for k, v := range m.Output[0] {
			if want := int64(0); k == i && v.Cmp(big.NewRat(1, 1)) != 0 || k != i && v.Cmp(big.NewRat(want, 1)) != 0 {
				t.Errorf("%s is not the state %d: %v", x.Name, i, m.Output)
			}
		}
		for _, v := range m.Feedthrough[0] {
			if v.Sign() != 0 {
				t.Errorf("%s is fed from inputs: %v", x.Name, m.Feedthrough)
			}
		}
	}
	return all
}

// Units by hand, and the ways in which inputs may be differentiated.
func TestStateSpaceByHand(t *testing.T) {
	bench := build(t, record(map[string]string{"x": "mm", "z": "cm", "f": "kN"},
		map[string]string{"m": "200 kg", "c": "640 N*s/m", "k": "50 kN/m"}, "m x'' = f - c (x' - z') - k (x - z)"))
	form, err := bench.StateSpace([]string{"f"}, []string{"x", "x''"}, "z")
	if err != nil {
		t.Fatal(err)
	}
	if text := form.String(); text != "x' = x' [mm/s]\nx'' = -250 x - 3.2 x' + 5000 f [mm/s^2]\nx = x [mm]\nx'' = -250 x - 3.2 x' + 5000 f [mm/s^2]" {
		t.Errorf("%s", text)
	}
	// The ground is differentiated: x' jumps with it by c/m = 3.2 1/s, in mm per cm.
	form, err = bench.StateSpace([]string{"z"}, []string{"x", "x'", "z"}, "f")
	if err != nil {
		t.Fatal(err)
	}
	var back statespace.Continuous
	if text, err := form.MarshalJSON(); err != nil || back.UnmarshalJSON(text) != nil || !back.Equal(form) {
		t.Errorf("%s reads back as %v, %v", text, back, err)
	}
	if names := form.States(); names[0].Name != "x" || names[1].Name != "x'_less_inputs" || !names[1].Unit.Equal(units.MustParse("mm/s")) {
		t.Errorf("%v", names)
	}
	if d := form.Matrices().Feedthrough; d[0][0].Sign() != 0 || d[1][0].Cmp(big.NewRat(32, 1)) != 0 || d[2][0].Cmp(big.NewRat(1, 1)) != 0 {
		t.Errorf("%v", d)
	}
	for output, order := range map[string]int{"x''": 1, "x'''": 2, "z'": 1} {
		var bad *lti.ImproperError
		if _, err := bench.StateSpace([]string{"z"}, []string{output}, "f"); !errors.As(err, &bad) || bad.Signal != output || bad.Input != "z" || bad.Order != order {
			t.Errorf("%s: %v", output, err)
		}
	}
	// A controller with a derivative part follows that of the setpoint; the level
	// behind it does not.
	loop := build(t, record(heldPool,
		map[string]string{"kp": "400 mm/m", "ki": "0.25 mm/(s*m)", "kd": "9000 mm*s/m", "kq": "0.0042 m^3/(s*mm)", "area": "5600 m^2", "weir": "3.75 m^2/s"},
		"error = setpoint - level", "opening = kp error + ki integral(error) + kd error'", "area level' + weir level = kq opening - offtake"))
	both := []string{"setpoint", "offtake"}
	form, err = loop.StateSpace(both, []string{"level"})
	if err != nil || len(form.States()) != 2 {
		t.Fatal(form, err)
	}
	want, err := loop.TransferFunctions(both, []string{"level"})
	if err != nil {
		t.Fatal(err)
	}
	for j, in := range both {
		if g, err := form.TransferFunction(in, "level"); err != nil || !g.Equal(want[0][j]) {
			t.Errorf("%v, %v, want %v", g, err, want[0][j])
		}
	}
	var bad *lti.ImproperError
	if _, err := loop.StateSpace(both, []string{"opening"}); !errors.As(err, &bad) || bad.Signal != "opening" || bad.Input != "setpoint" || bad.Order != 1 {
		t.Errorf("%v", err)
	}
	// A signal that follows u'' and is itself differentiated: x is improper, and so
	// is y behind it; what is behind a further lag is not.
	steep := build(t, record(map[string]string{"u": "1", "x": "1", "y": "1", "z": "1"}, map[string]string{"T": "1 s"},
		"T x' + x = T^3 u'''", "T y' + y = x + u", "T z' + z = y"))
	for output, order := range map[string]int{"x": 2, "y": 1, "z": 0} {
		form, err := steep.StateSpace([]string{"u"}, []string{output})
		if order == 0 {
			g, err2 := form.TransferFunction("u", "z")
			if want := tf.Must(steep.TransferFunction("u", "z")); err != nil || err2 != nil || !g.Equal(want) {
				t.Errorf("%v, %v, %v", g, err, err2)
			}
		} else if !errors.As(err, &bad) || bad.Order != order {
			t.Errorf("%s: %v", output, err)
		}
	}
}

// Equations without derivatives have no states.
func TestStateSpaceWithoutStates(t *testing.T) {
	s := build(t, record(map[string]string{"u": "mV", "x": "V", "y": "V"}, map[string]string{"k": "3"}, "y = k x", "x = y - u"))
	form, err := s.StateSpace([]string{"u"}, []string{"y"})
	if err != nil || len(form.States()) != 0 {
		t.Fatal(form, err)
	}
	if g, err := form.TransferFunction("u", "y"); err != nil || !g.Equivalent(tf.MustParse("0.0015 [mV -> V]")) {
		t.Errorf("%v, %v", g, err)
	}
	for _, c := range []struct {
		inputs, outputs, held []string
		says                  string
	}{
		{[]string{"u"}, []string{"z"}, nil, "no signal"},
		{[]string{"u"}, []string{"y"}, []string{"x"}, "too many"},
		{nil, []string{"y"}, nil, `perhaps StateSpace([]string{}, []string{"y"}, "u")`},
	} {
		if _, err := s.StateSpace(c.inputs, c.outputs, c.held...); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%v: %v, want an error that says %q", c, err, c.says)
		}
	}
	if form, err := build(t, chain(100)).StateSpace([]string{"u"}, []string{"x99"}); err != nil || len(form.States()) != 100 {
		t.Errorf("%d states, %v", len(form.States()), err)
	}
	var p poly.Poly
	if p, err = form.CharacteristicPolynomial(); err != nil || p.Degree() != 0 {
		t.Errorf("%v, %v", p, err)
	}
}

func ExampleSystem_StateSpace() {
	kiln := tf.Must(lti.ParseSystem(`{
		"signals":   {"heating": "W", "element": "K", "load": "K", "leak": "W"},
		"constants": {"ce": "18 kJ/K", "cl": "60 kJ/K", "coupling": "0.0075 K/W", "loss": "0.12 K/W"},
		"equations": ["ce element' = heating - (element - load)/coupling",
		              "cl load' = (element - load)/coupling - leak",
		              "leak = load/loss"]
	}`))
	form, err := kiln.StateSpace([]string{"heating"}, []string{"load", "leak"})
	fmt.Println(form, err)
	// Output:
	// element' = -1/135 element + 1/135 load + 1/18000 heating [K/s]
	// load' = 1/450 element - 17/7200 load [K/s]
	// load = load [K]
	// leak = 25/3 load [W] <nil>
}
