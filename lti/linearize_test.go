package lti

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func signalOf(name, unit string) units.Signal {
	return units.Signal{Name: name, Unit: units.MustParse(unit)}
}

func floatOf(t *testing.T, q units.Quantity, err error) float64 {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
	return tf.Must(q.Float64())
}

// bench is a mass of 206 kg on a mount of 36 kN/m and 1.9 MN/m³ under its weight,
// with a damper, as a bench on its floor.
var bench = Nonlinear{
	States:  []units.Signal{signalOf("sag", "m"), signalOf("speed", "m/s")},
	Inputs:  []units.Signal{signalOf("push", "N")},
	Outputs: []units.Signal{signalOf("force", "N")},
	Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
		cube := dual.Mul(x[0], dual.Mul(x[0], x[0]))
		spring := dual.Add(dual.Scale(36e3, x[0]), dual.Scale(1.9e6, cube))
		total := dual.Sub(dual.Add(u[0], dual.Number{Real: 206 * 9.80665}), dual.Add(spring, dual.Scale(640, x[1])))
		return []dual.Number{x[1], dual.Scale(1/206.0, total)}, []dual.Number{spring}
	},
}

// The figures of the mount, computed from its data beforehand: a sag of 49.65 mm
// and a tangent stiffness of 50.05 kN/m.
func TestMount(t *testing.T) {
	point, err := Equilibrium(bench, At("push", "0 N"), Near("sag", "30 mm"), Near("speed", "0 m/s"))
	if err != nil {
		t.Fatal(err)
	}
	q, err := point.Value("sag")
	if sag := floatOf(t, q, err); math.Abs(sag-0.04965) > 5e-6 {
		t.Errorf("sag %v", sag)
	}
	model, err := Linearize(bench, point.Values()...)
	if err != nil {
		t.Fatal(err)
	}
	g := tf.Must(model.TransferFunction("push", "force"))
	// k/(m s² + c s + k)
	monic := g.Denominator().Monic()
	k, _ := monic.Coefficient(0).Float64()
	c, _ := monic.Coefficient(1).Float64()
	if k *= 206; math.Abs(k-50050) > 5 || math.Abs(c*206-640) > 1e-9 {
		t.Errorf("stiffness %v, damping %v", k, c*206)
	}
	if gain := floatOf(t, tf.Must(g.StaticGain()), nil); math.Abs(gain-1) > 1e-12 {
		t.Errorf("the mount carries %v of a push", gain)
	}
	// The force of the weight comes out at the mount.
	q, err = point.Value("force")
	if force := floatOf(t, q, err); math.Abs(force-206*9.80665) > 1e-6 {
		t.Errorf("force %v", force)
	}
	if text := point.String(); !strings.HasPrefix(text, "sag = 0.0496") || !strings.Contains(text, "\npush = 0 N\nforce = ") {
		t.Error(text)
	}
}

// furnace loses heat by radiation alone: emissivity 0.8, 0.45 m².
var furnace = Nonlinear{
	States:  []units.Signal{signalOf("zone", "degC")},
	Inputs:  []units.Signal{signalOf("heater", "W")},
	Outputs: []units.Signal{signalOf("zone", "degC"), signalOf("losses", "W")},
	Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
		radiated := dual.Scale(0.8*0.45*5.670374419e-8, dual.Sub(dual.PowReal(x[0], 4), dual.Number{Real: math.Pow(293.15, 4)}))
		return []dual.Number{dual.Scale(1/60e3, dual.Sub(u[0], radiated))}, []dual.Number{x[0], radiated}
	},
}

// The slope of radiation at 900 °C is 4·0.8·0.45 m²·σ·T³ = 132 W/K, with the
// constant of Stefan and Boltzmann of CODATA 2018; taking 900 °C for 900 K would
// make it 60 W/K.
func TestRadiation(t *testing.T) {
	for temperature, want := range map[string]float64{"900 degC": 131.836, "900 K": 59.525} {
		point, err := Equilibrium(furnace, At("zone", temperature), Near("heater", "1 kW"))
		if err != nil {
			t.Fatal(err)
		}
		model, err := Linearize(furnace, point.Values()...)
		if err != nil {
			t.Fatal(err)
		}
		g := tf.Must(model.TransferFunction("heater", "zone"))
		gain := tf.Must(g.StaticGain())
		if v := tf.Must(gain.Float64()); math.Abs(1/v-want) > 0.005 {
			t.Errorf("%s: slope %v W/K, want %v", temperature, 1/v, want)
		}
	}
}

// tank empties through a hole by Torricelli's law: q = a·√(2 g h), whose slope is
// q/(2 h) (common practice).
func tank(x, u []dual.Number) (rates, outputs []dual.Number) {
	out := dual.Scale(0.002*math.Sqrt(2*9.80665), dual.Sqrt(x[0]))
	return []dual.Number{dual.Scale(1/1.5, dual.Sub(u[0], out))}, []dual.Number{out}
}

func TestTorricelli(t *testing.T) {
	m := Nonlinear{States: []units.Signal{signalOf("level", "m")}, Inputs: []units.Signal{signalOf("inflow", "m^3/s")},
		Outputs: []units.Signal{signalOf("outflow", "m^3/s")}, Equations: tank}
	// Held inflow, sought level; held level, sought inflow.
	level := floatOf(t, tf.Must(tf.Must(Equilibrium(m, At("inflow", "5 L/s"), Near("level", "1 mm"))).Value("level")), nil)
	if want := math.Pow(0.005/0.002, 2) / (2 * 9.80665); math.Abs(level-want) > 1e-12 {
		t.Errorf("level %v, want %v", level, want)
	}
	point := tf.Must(Equilibrium(m, At("level", "1.4 m")))
	inflow := floatOf(t, tf.Must(point.Value("inflow")), nil)
	if want := 0.002 * math.Sqrt(2*9.80665*1.4); math.Abs(inflow-want) > 1e-15 {
		t.Errorf("inflow %v, want %v", inflow, want)
	}
	g := tf.Must(tf.Must(Linearize(m, point.Values()...)).TransferFunction("inflow", "outflow"))
	tau, _ := g.Denominator().Monic().Coefficient(0).Float64()
	if want := inflow / (2 * 1.4) / 1.5; math.Abs(tau-want) > 1e-15 {
		t.Errorf("pole %v, want %v", -tau, -want)
	}
	// A level that is off by a few per cent drifts, and the error says how much.
	var drift *NotAtRestError
	_, err := Linearize(m, At("level", "1.4 m"), At("inflow", "15 L/s"))
	if !errors.As(err, &drift) || err.Error() != "not an equilibrium: level drifts 0.003 m/s; Equilibrium finds a point at rest" {
		t.Error(err)
	}
}

// Random smooth models: slopes against central differences, whose error is about
// the cube root of a rounding squared, and against the chain rule written out.
func TestSlopes(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 50 {
		a, b, c := r.NormFloat64(), r.NormFloat64(), r.NormFloat64()
		f := func(x, u float64) float64 { return a*math.Sin(x)*math.Exp(b*u) + c*x*u*u }
		m := Nonlinear{States: []units.Signal{signalOf("x", "1")}, Inputs: []units.Signal{signalOf("u", "1")}, Outputs: []units.Signal{signalOf("y", "1")},
			Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
				y := dual.Add(dual.Scale(a, dual.Mul(dual.Sin(x[0]), dual.Exp(dual.Scale(b, u[0])))), dual.Scale(c, dual.Mul(x[0], dual.Mul(u[0], u[0]))))
				return []dual.Number{dual.Sub(y, dual.Number{Real: y.Real})}, []dual.Number{y} // at rest everywhere
			}}
		x, u := r.NormFloat64(), r.NormFloat64()
		model, err := Linearize(m, At("x", fmt.Sprint(x)), At("u", fmt.Sprint(u)))
		if err != nil {
			t.Fatal(err)
		}
		s := tf.Must(model.Floats())
		const h = 1e-5
		for name, pair := range map[string][3]float64{
			"x": {s.Output.At(0, 0), (f(x+h, u) - f(x-h, u)) / (2 * h), a*math.Cos(x)*math.Exp(b*u) + c*u*u},
			"u": {s.Feedthrough.At(0, 0), (f(x, u+h) - f(x, u-h)) / (2 * h), a*b*math.Sin(x)*math.Exp(b*u) + 2*c*x*u},
		} {
			size := 1 + math.Abs(pair[2])
			if math.Abs(pair[0]-pair[1]) > 1e-8*size*math.Exp(2*math.Abs(b)) || math.Abs(pair[0]-pair[2]) > 1e-14*size*math.Exp(2*math.Abs(b)) {
				t.Errorf("by %s: %v, by differences %v, by hand %v", name, pair[0], pair[1], pair[2])
			}
		}
	}
}

func TestLinearizeRefusals(t *testing.T) {
	state, input := []units.Signal{signalOf("level", "m")}, []units.Signal{signalOf("inflow", "m^3/s")}
	with := func(f func(x, u []dual.Number) (rates, outputs []dual.Number)) Nonlinear {
		return Nonlinear{States: state, Inputs: input, Equations: f}
	}
	fine := with(func(x, u []dual.Number) ([]dual.Number, []dual.Number) { r, _ := tank(x, u); return r, nil })
	at := []OperatingValue{At("level", "1 m"), At("inflow", "1 L/s")}
	var model *ModelError
	var operating *OperatingError
	var unknown *UnknownNameError
	for name, c := range map[string]struct {
		err  error
		as   any
		text string
	}{
		"nil":        {faultOf(Linearize(Nonlinear{})), &model, "Equations is nil"},
		"lengths":    {faultOf(Linearize(with(tank), at...)), &model, "1 rates and 1 outputs for 1 states and 0 outputs"},
		"panic":      {faultOf(Linearize(with(func(x, u []dual.Number) ([]dual.Number, []dual.Number) { return x[2:], nil }), at...)), &model, "panicked"},
		"not finite": {faultOf(Linearize(fine, At("level", "-1 m"), At("inflow", "1 L/s"))), &model, "the rate of level is NaN"},
		"infinite": {faultOf(Linearize(with(func(x, u []dual.Number) ([]dual.Number, []dual.Number) {
			return []dual.Number{{Real: math.Inf(1)}}, nil
		}), at...)),
			&model, "the rate of level is +Inf at this point"},
		"output": {faultOf(Linearize(bench, At("push", "0 N"), At("sag", "50 mm"), At("speed", "0 m/s"), At("force", "2 kN"))),
			&operating, "force: is an output, which follows from states and inputs"},
		"endless":    {faultOf(Linearize(fine, At("level", "0 m"), At("inflow", "0 L/s"))), &model, "the slope of the rate of level by level is"},
		"missing":    {faultOf(Linearize(fine, at[0])), &operating, "inflow: has no value: give one with At, or let Equilibrium find it"},
		"near":       {faultOf(Linearize(fine, at[0], Near("inflow", "1 L/s"))), &operating, "inflow: has a value by Near, where a search begins; Equilibrium finds it"},
		"twice":      {faultOf(Linearize(fine, at[0], at[0])), &operating, "level: has two values"},
		"unit":       {faultOf(Linearize(fine, At("level", "1 s"), at[1])), &operating, "level:"},
		"text":       {faultOf(Linearize(fine, At("level", "high"), at[1])), &operating, "level:"},
		"unknown":    {faultOf(Linearize(fine, At("depth", "1 m"), at[1])), &unknown, "there are level, inflow"},
		"all given":  {faultOf(Equilibrium(fine, at...)), &operating, "1 states at rest determine as many values, and 0 are sought"},
		"none given": {faultOf(Equilibrium(fine)), &operating, "2 are sought (level, inflow)"},
		"no effect": {faultOf(Equilibrium(with(func(x, u []dual.Number) ([]dual.Number, []dual.Number) { return u[:1], nil }), At("inflow", "1 L/s"))),
			&operating, "level: has no effect on any rate here"},
		"no rest": {faultOf(Equilibrium(with(func(x, u []dual.Number) ([]dual.Number, []dual.Number) {
			return []dual.Number{dual.Add(dual.Mul(x[0], x[0]), dual.Number{Real: 1})}, nil
		}), At("inflow", "1 L/s"))), &operating, ""},
		"cold": {faultOf(Linearize(furnace, At("zone", "-300 degC"), At("heater", "1 W"))), &operating, "zone:"},
	} {
		if c.err == nil || !errors.As(c.err, c.as) || !strings.Contains(c.err.Error(), c.text) {
			t.Errorf("%s: %v", name, c.err)
		}
	}
}

func faultOf[T any](_ T, err error) error { return err }
