package lti_test

import (
	"fmt"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The load of a kiln zone that radiates to its walls, about 900 °C: the operating
// point is absolute, the model is one of small deviations.
func ExampleLinearize() {
	const radiating = 0.8 * 0.45 * 5.670374419e-8 // emissivity, area and constant: W/K⁴
	load := lti.Nonlinear{
		States:  []units.Signal{{Name: "load", Unit: units.MustParse("degC")}},
		Inputs:  []units.Signal{{Name: "heater", Unit: units.MustParse("W")}},
		Outputs: []units.Signal{{Name: "load", Unit: units.MustParse("degC")}},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			lost := dual.Scale(radiating, dual.PowReal(x[0], 4)) // x[0] is in kelvin
			return []dual.Number{dual.Scale(1/60e3, dual.Sub(u[0], lost))}, []dual.Number{x[0]}
		},
	}
	_, err := lti.Linearize(load, lti.At("load", "900 degC"), lti.At("heater", "40 kW"))
	fmt.Println(err)
	point := tf.Must(lti.Equilibrium(load, lti.At("load", "900 degC"), lti.Near("heater", "40 kW")))
	fmt.Println(point)
	plant := tf.Must(tf.Must(lti.Linearize(load, point.Values()...)).TransferFunction("heater", "load"))
	fmt.Printf("gain %.4g\n", tf.Must(plant.StaticGain()))
	// Output:
	// not an equilibrium: load drifts 0.022 degC/s; Equilibrium finds a point at rest
	// load = 1173.15 K
	// heater = 38665.9 W
	// gain 0.007585 degC/W
}
