package statespace_test

import (
	"fmt"
	"math/big"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The pool of a canal behind a gate: numbers belong to the units of the signals.
func ExampleNew() {
	level := []units.Signal{{Name: "level", Unit: units.MustParse("m")}}
	opening := []units.Signal{{Name: "opening", Unit: units.MustParse("mm")}}
	pool, err := statespace.New(level, opening, level, statespace.Matrices{
		State:  [][]*big.Rat{{big.NewRat(-375, 560000)}}, // 3.75 m²/s over 5600 m²
		Input:  [][]*big.Rat{{big.NewRat(42, 56000000)}}, // 0.0042 m³/(s·mm)
		Output: [][]*big.Rat{{big.NewRat(1, 1)}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.4g\n", pool)
	fmt.Println(tf.Must(pool.TransferFunction("opening", "level")))
	// Output:
	// level' = -0.0006696 level + 7.5e-7 opening [m/s]
	// level = level [m]
	// 21/(2.8e7 s + 18750) [opening: mm -> level: m]
}

// The gate and the pool of a canal in one model: each state is the derivative of
// the one before it, and the derivative of the last one is in the unit of the
// input, so that the states are in that unit times powers of the second.
func ExampleControllableForm() {
	g := tf.MustParse("(0.002 s + 0.001)/(1500 s^2 + 151 s + 0.1) [command: mm -> level: m]")
	canal := tf.Must(statespace.ControllableForm(g, "canal"))
	for _, state := range canal.States() {
		fmt.Println(state)
	}
	fmt.Printf("%.4g\n", canal)
	// Output:
	// canal_1: mm*s^2
	// canal_2: mm*s
	// canal_1' = canal_2 [mm*s]
	// canal_2' = -0.00006667 canal_1 - 0.1007 canal_2 + command [mm]
	// level = 6.667e-7 canal_1 + 1.333e-6 canal_2 [m]
}

// Matrices from measurements and tables are decimals that a float64 only comes
// near to: FromDecimals takes them for what was written.
func ExampleFromDecimals() {
	zone := []units.Signal{{Name: "zone", Unit: units.MustParse("K")}}
	power := []units.Signal{{Name: "power", Unit: units.MustParse("W")}}
	kiln := tf.Must(statespace.FromDecimals(zone, power, zone, statespace.Floats{
		State:  mat.NewDense(1, 1, []float64{-0.0012}),
		Input:  mat.NewDense(1, 1, []float64{0.0003}),
		Output: mat.NewDense(1, 1, []float64{1}),
	}))
	fmt.Println(kiln)
	fmt.Println(tf.Must(kiln.TransferFunction("power", "zone")))
	// Output:
	// zone' = -0.0012 zone + 0.0003 power [K/s]
	// zone = zone [K]
	// 3/(10000 s + 12) [power: W -> zone: K]
}

// The heater of a kiln zone and a thermocouple that has the same lag as the load:
// one mode is hidden.
func ExampleContinuous_MinimalRealization() {
	g := tf.MustParse("(40 s + 1)/((40 s + 1) (9392 s + 1)) [power: W -> reading: K]")
	zone := tf.Must(statespace.ControllableForm(g, "zone"))
	minimal, hidden, err := zone.MinimalRealization()
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(len(zone.States()), "states,", len(minimal.States()), "of them shown; hidden:", hidden.Unobservable.Text("s"))
	fmt.Println(minimal)
	// Output:
	// 2 states, 1 of them shown; hidden: s + 0.025
	// zone_1_observed' = -1/9392 zone_1_observed + 40 power [W*s]
	// reading = 1/375680 zone_1_observed [K]
}
