package main

import (
	"fmt"
	"io"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/impedance"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// bench is the model and what is read off it.
type bench struct {
	system   *lti.System
	toPan    tf.Continuous // from the floor to the pan of the balance
	toBench  tf.Continuous // and to the top of the bench
	chain    impedance.Ladder
	matrices statespace.Continuous
	released tf.TimeFunction // the pan, after the bench is let go 0.5 mm off
}

func newBench() (*bench, error) {
	e := lti.NewEquations()
	for _, s := range []string{"floor", "bench", "pan"} {
		e.Signal(s, "mm")
	}
	e.Constant("bench_mass", "200 kg")
	e.Constant("mount", "50 kN/m")
	e.Constant("mount_damping", "640 N*s/m")
	e.Constant("pan_mass", "6 kg")
	e.Constant("foot", "75 kN/m")
	e.Constant("foot_damping", "65 N*s/m")
	e.Equation("bench_mass bench'' = mount (floor - bench) + mount_damping (floor' - bench')" +
		" - foot (bench - pan) - foot_damping (bench' - pan')")
	e.Equation("pan_mass pan'' = foot (bench - pan) + foot_damping (bench' - pan')")
	b := &bench{}
	var err error
	if b.system, err = e.Build(); err != nil {
		return nil, err
	}
	if b.toPan, err = b.system.TransferFunction("floor", "pan"); err != nil {
		return nil, err
	}
	if b.toBench, err = b.system.TransferFunction("floor", "bench"); err != nil {
		return nil, err
	}
	if b.matrices, err = b.system.StateSpace([]string{"floor"}, []string{"pan"}); err != nil {
		return nil, err
	}
	b.chain, err = impedance.NewLadder(
		impedance.SeriesArm(impedance.MustParse("50 kN/m || 640 N*s/m")),
		impedance.ShuntArm(impedance.MustParse("200 kg")),
		impedance.SeriesArm(impedance.MustParse("75 kN/m || 65 N*s/m")),
		impedance.ShuntArm(impedance.MustParse("6 kg")))
	if err != nil {
		return nil, err
	}
	state, err := b.system.InitialState([]string{"floor"}, lti.Initially("bench", "0.5 mm"), lti.Initially("pan", "0.5 mm"),
		lti.Initially("bench'", "0 mm/s"), lti.Initially("pan'", "0 mm/s"))
	if err != nil {
		return nil, err
	}
	b.released, err = state.FreeResponse("pan")
	return b, err
}

func (b *bench) equations(w io.Writer) error {
	heading(w, "the equations")
	for _, q := range b.system.Equations() {
		fmt.Fprintf(w, "  %s\n", q)
	}
	for _, c := range b.system.Constants() {
		fmt.Fprintf(w, "  %-13s = %s\n", c.Name, c.Value)
	}
	fmt.Fprintf(w, "\n  %.4g\n", b.toPan)
	return nil
}

// waysIn compares the transfer functions of the other ways to enter the bench.
func (b *bench) waysIn(w io.Writer) error {
	heading(w, "the same bench, entered otherwise")
	chain, err := b.chain.AcrossRatio()
	if err != nil {
		return err
	}
	mm := units.MustParse("mm")
	if chain, err = chain.WithUnits(mm, mm); err != nil { // a ratio of velocities is one of positions
		return err
	}
	matrices, err := b.matrices.TransferFunction("floor", "pan")
	if err != nil {
		return err
	}
	for _, way := range []struct {
		name string
		g    tf.Continuous
	}{{"as a chain of mounts and masses", chain}, {"as matrices with four states", matrices}} {
		said := "the same transfer function, exactly"
		if !way.g.Equivalent(b.toPan) {
			said = "ANOTHER transfer function"
		}
		fmt.Fprintf(w, "  %-32s %s\n", way.name, said)
	}
	fmt.Fprintf(w, "\n%.4g\n", b.matrices)
	return nil
}

// mode is a pair of poles.
type mode struct{ hertz, damping float64 }

func modesOf(g tf.Continuous) ([]mode, error) {
	poles, err := g.Poles()
	if err != nil {
		return nil, err
	}
	var out []mode
	for i := len(poles) - 1; i >= 0; i-- {
		if p := poles[i].Value; imag(p) > 0 {
			out = append(out, mode{cmplx.Abs(p) / (2 * math.Pi), -real(p) / cmplx.Abs(p)})
		}
	}
	return out, nil
}

func (b *bench) modes(w io.Writer) error {
	heading(w, "modes")
	all, err := modesOf(b.toPan)
	if err != nil {
		return err
	}
	for _, m := range all {
		fmt.Fprintf(w, "  %.4g Hz, damped to %.4g of the critical value\n", m.hertz, m.damping)
	}
	return nil
}

// transmissibility is a curve over frequency.
type transmissibility struct {
	axis tf.FrequencyFunction
}

// decibels returns the values at frequencies in hertz.
func (t transmissibility) decibels(hertz []float64) ([]float64, error) {
	out := make([]float64, len(hertz))
	for i, f := range hertz {
		v, err := t.axis.Decibels(2 * math.Pi * f)
		if err != nil {
			return nil, err
		}
		out[i] = v
	}
	return out, nil
}

// sweep returns frequencies in hertz in equal steps of their logarithm.
func sweep(from, to float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = from * math.Pow(to/from, float64(i)/float64(n-1))
	}
	return out
}

// peak looks for the largest value on a fine sweep.
func (t transmissibility) peak(from, to float64) (hertz, decibels float64, err error) {
	grid := sweep(from, to, 4000)
	values, err := t.decibels(grid)
	if err != nil {
		return 0, 0, err
	}
	best := 0
	for i, v := range values {
		if v > values[best] {
			best = i
		}
	}
	return grid[best], values[best], nil
}

// crossing bisects for the frequency between two at which the motion comes through
// as it is.
func (t transmissibility) crossing(low, high float64) (float64, error) {
	for high-low > 1e-9*high {
		f := (low + high) / 2
		v, err := t.axis.Decibels(2 * math.Pi * f)
		if err != nil {
			return 0, err
		}
		if v > 0 {
			low = f
		} else {
			high = f
		}
	}
	return low, nil
}

func (b *bench) isolation(w io.Writer) error {
	heading(w, "from the floor to the pan")
	t := transmissibility{b.toPan.FrequencyFunction()}
	hertz, top, err := t.peak(1, 10)
	if err != nil {
		return err
	}
	one, err := t.crossing(hertz, 10)
	if err != nil {
		return err
	}
	values, err := t.decibels([]float64{10, 50})
	if err != nil {
		return err
	}
	fmt.Fprintf(w, "  amplifies by %.3g near %.3g Hz and up to %.3g Hz; isolates above:\n", math.Pow(10, top/20), hertz, one)
	fmt.Fprintf(w, "  %.1f dB at 10 Hz, %.1f dB at 50 Hz\n", values[0], values[1])
	return nil
}

func (b *bench) settling(w io.Writer) error {
	heading(w, "let go 0.5 mm off")
	for _, t := range []float64{0.1, 0.5, 1, 2, 5} {
		v, err := b.released.At(t)
		if err != nil {
			return err
		}
		fmt.Fprintf(w, "  the pan is at %8.3g mm after %g s\n", v, t)
	}
	return nil
}

// mount linearises a mount whose spring stiffens, under the weight of bench and
// balance.
func mount(w io.Writer) error {
	m := lti.Nonlinear{
		States:  []units.Signal{{Name: "sag", Unit: units.MustParse("m")}, {Name: "speed", Unit: units.MustParse("m/s")}},
		Inputs:  []units.Signal{{Name: "push", Unit: units.MustParse("N")}},
		Outputs: []units.Signal{{Name: "sag", Unit: units.MustParse("m")}},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			spring := dual.Add(dual.Scale(36e3, x[0]), dual.Scale(1.9e6, dual.PowReal(x[0], 3)))
			force := dual.Sub(dual.Add(u[0], dual.Number{Real: 206 * 9.80665}), dual.Add(spring, dual.Scale(640, x[1])))
			return []dual.Number{x[1], dual.Scale(1/206.0, force)}, []dual.Number{x[0]}
		},
	}
	heading(w, "a mount that stiffens: 36 kN/m and 1.9 MN/m³")
	_, err := lti.Linearize(m, lti.At("sag", "45 mm"), lti.At("speed", "0 m/s"), lti.At("push", "0 N"))
	fmt.Fprintf(w, "  at 45 mm: %v\n", err)
	point, err := lti.Equilibrium(m, lti.At("push", "0 N"), lti.Near("sag", "45 mm"), lti.Near("speed", "0 m/s"))
	if err != nil {
		return err
	}
	sag, err := point.Value("sag")
	if err != nil {
		return err
	}
	model, err := lti.Linearize(m, point.Values()...)
	if err != nil {
		return err
	}
	g, err := model.TransferFunction("push", "sag")
	if err != nil {
		return err
	}
	gain, err := g.StaticGain()
	if err != nil {
		return err
	}
	stiffness, err := gain.Float64()
	if err != nil {
		return err
	}
	fmt.Fprintf(w, "  under 206 kg it sags by %.4g, where a small push meets %.4g N/m\n", sag, 1/stiffness)
	return nil
}
