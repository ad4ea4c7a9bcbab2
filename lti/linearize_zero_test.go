package lti

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// A value of 0 makes no allowance: what is not at rest is refused, however small
// its unit makes the numbers.
func TestSmallDrifts(t *testing.T) {
	m := Nonlinear{States: []units.Signal{signalOf("volume", "m^3")}, Inputs: []units.Signal{signalOf("inflow", "m^3/s")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			return []dual.Number{dual.Sub(u[0], dual.Scale(0.01, x[0]))}, nil
		}}
	for _, c := range []struct{ inflow, want string }{
		{"1 nL/s", "not an equilibrium: volume drifts 1e-12 m^3/s; Equilibrium finds a point at rest"},
		{"0.5 L/s", "not an equilibrium: volume drifts 0.0005 m^3/s; Equilibrium finds a point at rest"},
		{"123 m^3/s", "not an equilibrium: volume drifts 120 m^3/s; Equilibrium finds a point at rest"},
		{"0 L/s", ""},
	} {
		_, err := Linearize(m, At("volume", "0 L"), At("inflow", c.inflow))
		var drift *NotAtRestError
		if c.want == "" && err != nil || c.want != "" && (!errors.As(err, &drift) || err.Error() != c.want) {
			t.Errorf("%s: %v, want %s", c.inflow, err, c.want)
		}
	}
}

// Points whose values are 0 are found, although the constants of the model
// balance there but for their rounding, and hold for Linearize.
func TestRestAtZero(t *testing.T) {
	for _, c := range []float64{0.1, 0.3, 0.7, 1000.0 / 3} {
		m := Nonlinear{States: []units.Signal{signalOf("p", "m"), signalOf("q", "m"), signalOf("r", "m")},
			Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
				k := func(v float64) dual.Number { return dual.Number{Real: v} }
				s := dual.Add(x[0], k(c))
				return []dual.Number{
					dual.Sub(dual.Sub(dual.Mul(s, s), k(c*c)), dual.Scale(0.5, x[1])),
					dual.Add(dual.Sub(dual.Scale(c*3, dual.Exp(x[1])), k(c+c+c)), dual.Scale(0.3, x[2])),
					dual.Add(dual.Sub(dual.Sin(dual.Add(x[2], k(c))), k(math.Sin(c))), x[0]),
				}, nil
			}}
		point, err := Equilibrium(m, Near("p", "10 cm"), Near("q", "10 cm"), Near("r", "10 cm"))
		if err != nil {
			t.Errorf("%v: %v", c, err)
			continue
		}
		for _, s := range m.States {
			if v := floatOf(t, tf.Must(point.Value(s.Name)), nil); math.Abs(v) > 1e-12 {
				t.Errorf("%v: %s is %v, want 0 but for rounding", c, s.Name, v)
			}
		}
		for _, at := range [][]OperatingValue{point.Values(), {At("p", "0 m"), At("q", "0 m"), At("r", "0 m")}} {
			if _, err := Linearize(m, at...); err != nil {
				t.Errorf("%v at %v: %v", c, at, err)
			}
		}
	}
	// A value far below where the search began has all its digits.
	m := Nonlinear{States: []units.Signal{signalOf("level", "m")}, Inputs: []units.Signal{signalOf("inflow", "m^3/s")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			return []dual.Number{dual.Sub(u[0], dual.Add(x[0], dual.Mul(x[0], x[0])))}, nil
		}}
	point := tf.Must(Equilibrium(m, At("inflow", "1e-12 m^3/s"), Near("level", "1 m")))
	level := floatOf(t, tf.Must(point.Value("level")), nil)
	if want := 1e-12 - 1e-24; math.Abs(level/want-1) > 1e-15 {
		t.Errorf("level %v, want %v", level, want)
	}
}

// The values of a point are texts that read as the very float64 that was found,
// temperatures too, and one that is replaced counts.
func TestValuesAsText(t *testing.T) {
	for _, unit := range []string{"degC", "K", "degF", "mK"} {
		size := floatOf(t, tf.Must(units.NewQuantity(units.MustParseQuantity("1").Value(), units.MustParse(unit)).ConvertTo(kelvin)), nil)
		m := Nonlinear{States: []units.Signal{signalOf("zone", unit)}, Inputs: []units.Signal{signalOf("heater", "W")},
			Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
				return []dual.Number{dual.Sub(u[0], dual.Scale(1e-8/3, dual.PowReal(dual.Scale(size, x[0]), 4)))}, nil
			}}
		point, err := Equilibrium(m, At("heater", "3 kW"), Near("zone", "700 degC"))
		if err != nil {
			t.Errorf("%s: %v", unit, err)
			continue
		}
		values := point.Values()
		o, err := newOperation(m, values)
		if err != nil {
			t.Errorf("%s: %v", unit, err)
			continue
		}
		for i, v := range o.values {
			if v != point.values[i] {
				t.Errorf("%s: %v reads as %v, want %v", unit, values[i], v, point.values[i])
			}
		}
		kelvins := tf.Must(units.MustParseAbsolute(values[0].Quantity).In(kelvin))
		if want := math.Pow(9e11, 0.25); math.Abs(kelvins/want-1) > 1e-14 {
			t.Errorf("%s: %v, want %v K", unit, values[0], want)
		}
		values[1].Quantity = "4 kW"
		if _, err := Linearize(m, values...); !errors.As(err, new(*NotAtRestError)) {
			t.Errorf("%s: with another heater power: %v, want a *NotAtRestError", unit, err)
		}
	}
}

// Texts have the digits that a float64 needs and no more, and only states and inputs.
func TestDigitsOfValues(t *testing.T) {
	point := tf.Must(Equilibrium(bench, At("push", "0.1 N"), Near("sag", "50 mm")))
	values := point.Values()
	if len(values) != 3 || values[2] != At("push", "0.1 N") || values[1] != At("speed", "0 m/s") || len(values[0].Quantity) > len("0.04965686415187347 m")+1 {
		t.Errorf("got %v", values)
	}
	zone := tf.Must(Equilibrium(furnace, At("zone", "900.05 degC"))).Values()
	if len(zone) != 2 || zone[0] != At("zone", "1173.2 K") {
		t.Errorf("got %v", zone)
	}
}

// What the dual parts do not tell is an error, what has no slope is none.
func TestLostSlopes(t *testing.T) {
	real := func(v float64) dual.Number { return dual.Number{Real: v} }
	for _, c := range []struct {
		name string
		f    func(x dual.Number) dual.Number
		at   float64
		want string
	}{
		{"lost", func(x dual.Number) dual.Number { return real(x.Real * x.Real) }, 2, "is 4 at this point, by dual numbers it is 0"},
		{"lost in part", func(x dual.Number) dual.Number { return dual.Add(x, real(3*x.Real)) }, 2, "is 4 at this point, by dual numbers it is 1"},
		{"lost at 0", func(x dual.Number) dual.Number { return real(-5 * x.Real) }, 0, "is -5 at this point, by dual numbers it is 0"},
		{"kink", func(x dual.Number) dual.Number {
			if x.Real > 2 {
				return x
			}
			return real(2)
		}, 2, "is 0.5 at this point, by dual numbers it is 0"},
		{"square", func(x dual.Number) dual.Number { return dual.Mul(x, x) }, 2, ""},
		{"cube at 0", func(x dual.Number) dual.Number { return dual.Mul(x, dual.Mul(x, x)) }, 0, ""},
		{"constant", func(x dual.Number) dual.Number { return real(7) }, 2, ""},
		{"root at the edge", func(x dual.Number) dual.Number { return dual.Sqrt(dual.Add(x, real(1e-9))) }, 0, ""},
		{"root between two steps", func(x dual.Number) dual.Number { return dual.Sqrt(dual.Add(x, real(1e-4))) }, 0, ""},
		{"steep", func(x dual.Number) dual.Number { return dual.Exp(dual.Scale(1e4, x)) }, 0.01, ""},
		{"wave", func(x dual.Number) dual.Number { return dual.Sin(dual.Scale(1e9, x)) }, 1, ""},
		{"small beside a constant", func(x dual.Number) dual.Number {
			return dual.Sub(dual.Add(real(1e6), dual.Scale(1e-9, x)), real(1e6))
		}, 1, ""},
	} {
		m := Nonlinear{Inputs: []units.Signal{signalOf("opening", "mm")}, Outputs: []units.Signal{signalOf("flow", "L/s")},
			Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) { return nil, []dual.Number{c.f(u[0])} }}
		_, err := Linearize(m, At("opening", fmt.Sprint(c.at, " mm")))
		if c.want == "" {
			if err != nil {
				t.Errorf("%s: %v", c.name, err)
			}
			continue
		}
		want := "nonlinear model: by differences the slope of the output flow by opening " + c.want +
			": compute with dual numbers throughout, and look for a kink here"
		if !errors.As(err, new(*ModelError)) || err.Error() != want {
			t.Errorf("%s:\n got %v\nwant %s", c.name, err, want)
		}
	}
	// One lost slope among others is found, behind a variable at an edge too.
	mixed := Nonlinear{Inputs: []units.Signal{signalOf("opening", "mm"), signalOf("depth", "m")}, Outputs: []units.Signal{signalOf("head", "m"), signalOf("flow", "L/s")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			return nil, []dual.Number{dual.Add(u[1], dual.Sqrt(dual.Add(u[0], real(1e-9)))), real(3 * u[1].Real)}
		}}
	if _, err := Linearize(mixed, At("opening", "0 mm"), At("depth", "2 m")); !errors.As(err, new(*ModelError)) || !strings.Contains(err.Error(), "the slope of the output flow by depth is 3") {
		t.Errorf("among others: %v", err)
	}
	// A search that stands still for it says so too.
	m := Nonlinear{States: []units.Signal{signalOf("level", "m")}, Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
		return []dual.Number{real(3 - x[0].Real)}, nil
	}}
	if _, err := Equilibrium(m); !errors.As(err, new(*ModelError)) {
		t.Errorf("Equilibrium: %v, want a *ModelError", err)
	}
}
