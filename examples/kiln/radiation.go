package main

import (
	"fmt"
	"io"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/units"
)

// radiating is emissivity times area times the constant of Stefan and Boltzmann
// (CODATA 2018), in W/K⁴.
const radiating = 0.8 * 0.45 * 5.670374419e-8

// bare is a load that loses heat by radiation alone to walls at 20 °C.
var bare = lti.Nonlinear{
	States:  []units.Signal{{Name: "load", Unit: units.MustParse("K")}},
	Inputs:  []units.Signal{{Name: "heater", Unit: units.MustParse("W")}},
	Outputs: []units.Signal{{Name: "load", Unit: units.MustParse("K")}},
	Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
		walls := dual.PowReal(dual.Number{Real: 293.15}, 4)
		lost := dual.Scale(radiating, dual.Sub(dual.PowReal(x[0], 4), walls))
		return []dual.Number{dual.Scale(1/60e3, dual.Sub(u[0], lost))}, []dual.Number{x[0]}
	},
}

// slope returns the radiation at a temperature, and its slope in W/K.
func slope(temperature string) (heat units.Quantity, wattsPerKelvin float64, err error) {
	point, err := lti.Equilibrium(bare, lti.At("load", temperature))
	if err != nil {
		return heat, 0, err
	}
	model, err := lti.Linearize(bare, point.Values()...)
	if err != nil {
		return heat, 0, err
	}
	g, err := model.TransferFunction("heater", "load")
	if err != nil {
		return heat, 0, err
	}
	gain, err := g.StaticGain()
	if err != nil {
		return heat, 0, err
	}
	v, err := gain.Float64()
	if err != nil {
		return heat, 0, err
	}
	heat, err = point.Value("heater")
	return heat, 1 / v, err
}

// radiation linearises a bare load at 900 °C, and at the temperature that somebody
// gets who takes the number for kelvin.
func radiation(w io.Writer) error {
	heading(w, "a bare load that radiates, at its operating point")
	for _, temperature := range []string{"900 degC", "900 K"} {
		heat, watts, err := slope(temperature)
		if err != nil {
			return err
		}
		fmt.Fprintf(w, "  at %-8s it radiates %.4g, and %.3g W more for each kelvin\n", temperature, heat, watts)
	}
	fmt.Fprintln(w, "  An operating point is absolute: taking 900 °C for 900 K halves the slope.")
	return nil
}
