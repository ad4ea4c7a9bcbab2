package main

import (
	"fmt"
	"io"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
)

// zone is the model from the equations.
type zone struct {
	system *lti.System
	// from the heater to the temperatures
	element, load, reading tf.Continuous
	neighbour              tf.Continuous // from the heater of the next zone to the reading
}

// newZone writes down the heat balances of two zones side by side, each with the
// element that is heated, the load behind it and a thermocouple in the load.
func newZone() (*zone, error) {
	e := lti.NewEquations()
	for _, side := range []string{"", "2"} {
		e.Signal("heater"+side, "W")
		e.Signal("element"+side, "K")
		e.Signal("load"+side, "K")
		e.Signal("zone"+side, "K")
		e.Equation(fmt.Sprintf("element_capacity element%[1]s' = heater%[1]s - (element%[1]s - load%[1]s)/coupling", side))
		e.Equation(fmt.Sprintf("lag zone%[1]s' + zone%[1]s = load%[1]s", side))
	}
	e.Constant("element_capacity", "18 kJ/K")
	e.Constant("load_capacity", "60 kJ/K")
	e.Constant("coupling", "0.0075 K/W")
	e.Constant("losses", "0.12 K/W")
	e.Constant("between", "0.05 K/W")
	e.Constant("lag", "40 s")
	e.Constant("open", "1") // 0 for a wall between the zones
	e.Equation("load_capacity load' = (element - load)/coupling - load/losses - open (load - load2)/between")
	e.Equation("load_capacity load2' = (element2 - load2)/coupling - load2/losses - open (load2 - load)/between")
	both, err := e.Build()
	if err != nil {
		return nil, err
	}
	// A zone alone is the same set with the wall closed.
	alone, err := both.WithConstant("open", "0")
	if err != nil {
		return nil, err
	}
	z := &zone{system: alone}
	all, err := alone.TransferFunctions([]string{"heater"}, []string{"element", "load", "zone"}, "heater2")
	if err != nil {
		return nil, err
	}
	for i, g := range []*tf.Continuous{&z.element, &z.load, &z.reading} {
		*g, _ = all[i][0].LowestTerms() // the other zone is no part of it
	}
	g, err := both.TransferFunction("heater2", "zone", "heater")
	z.neighbour, _ = g.LowestTerms()
	return z, err
}

func (z *zone) report(w io.Writer) error {
	heading(w, "the equations of a zone")
	for _, q := range z.system.Equations() {
		fmt.Fprintf(w, "  %s\n", q)
	}
	for _, c := range z.system.Constants() {
		fmt.Fprintf(w, "  %-17s = %s\n", c.Name, c.Value)
	}
	heading(w, "from the heater, the zone alone")
	for _, g := range []tf.Continuous{z.element, z.load, z.reading} {
		gain, err := g.StaticGain()
		if err != nil {
			return err
		}
		fmt.Fprintf(w, "  %.4g\n    gain %.4g\n", g, gain)
	}
	times, err := timeConstants(z.reading)
	if err != nil {
		return err
	}
	fmt.Fprintf(w, "  time constants of the reading: %s\n", times)
	heading(w, "from the heater of the next zone, without the wall")
	gain, err := z.neighbour.StaticGain()
	if err != nil {
		return err
	}
	if times, err = timeConstants(z.neighbour); err != nil {
		return err
	}
	fmt.Fprintf(w, "  gain %.4g, time constants %s\n", gain, times)
	return nil
}

// timeConstants lists those of real poles, the slowest first.
func timeConstants(g tf.Continuous) (string, error) {
	poles, err := g.Poles()
	if err != nil {
		return "", err
	}
	text := ""
	for i := len(poles) - 1; i >= 0; i-- { // ascending: the last is the slowest
		p := poles[i].Value
		if imag(p) != 0 || real(p) >= 0 {
			return "", fmt.Errorf("a pole at %v has no time constant", p)
		}
		for range poles[i].Multiplicity {
			if text != "" {
				text += ", "
			}
			text += fmt.Sprintf("%.4g s", -1/real(p))
		}
	}
	return text, nil
}
