package impedance_test

import (
	"fmt"

	"github.com/qofs/qofs/lti/impedance"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The bench of a laboratory balance on its mount: how much of the motion of the
// floor comes up.
func ExampleTransmissibility() {
	mount := impedance.MustParse("50 kN/m || 640 N*s/m")
	bench := impedance.MustParse("200 kg")
	g := tf.Must(impedance.Transmissibility(mount, bench))
	fmt.Println(g)
	// At 10 Hz, in decibels:
	fmt.Printf("%.1f\n", tf.Must(g.FrequencyFunction().Decibels(62.83)))
	// Output:
	// (3.2 s + 250)/(s^2 + 3.2 s + 250) [m -> m]
	// -21.2
}

// The zone of a kiln: heat into the element, which passes some on to the load,
// from which it is lost.
func ExampleNewLadder() {
	zone := tf.Must(impedance.NewLadder(
		impedance.ShuntArm(impedance.MustParse("18 kJ/K")),
		impedance.SeriesArm(impedance.MustParse("0.0075 K/W")),
		impedance.ShuntArm(impedance.MustParse("60 kJ/K || 0.12 K/W")),
	))
	load := tf.Must(zone.TransferImpedance())
	fmt.Println(load)
	fmt.Println(tf.Must(load.StaticGain()))
	fmt.Println(tf.Must(tf.Must(zone.InputImpedance()).StaticGain()))
	// Output:
	// 0.12/(972000 s^2 + 9495 s + 1) [W -> K]
	// 0.12 K/W
	// 0.1275 K/W
}

// Elements take any unit of their dimension; what cannot be says why.
func ExampleSeries() {
	r := tf.Must(impedance.Resistor(units.MustParseQuantity("10 kohm")))
	c := tf.Must(impedance.Capacitor(units.MustParseQuantity("100 nF")))
	z := tf.Must(impedance.Series(r, c))
	fmt.Println(z, "has the impedance", z.Impedance())

	_, err := impedance.Resistor(units.MustParseQuantity("100 nF"))
	fmt.Println(err)
	_, err = impedance.Series(r, impedance.MustParse("200 kg"))
	fmt.Println(err)
	_, err = impedance.Divider(impedance.MustParse("200 kg"), impedance.MustParse("50 kN/m"))
	fmt.Println(err)
	// Output:
	// 10 kohm + 100 nF has the impedance (10000 s + 1e7)/s [A -> V]
	// impedance: a resistor: unit nF found where ohm is needed: the dimensions differ (F against Ω)
	// impedance: Series: argument 1 is mechanical (translation) (across in m/s, through in N), want electrical (across in V, through in A)
	// impedance: Divider: argument 0, 200 kg, has an end at the ground, so that nothing passes through it to the next; want it as the shunt element
}

// A bench and the balance on it, from a line of a configuration: how far a force
// on the bench moves the pan, and how much of the floor's motion reaches it.
func ExampleParseLadder() {
	chain := tf.Must(impedance.ParseLadder("200 kg || 50 kN/m || 640 N*s/m to ground, 75 kN/m || 65 N*s/m in series, 6 kg to ground"))
	pushed := tf.Must(chain.TransferReceptance())
	fmt.Println(tf.Must(pushed.StaticGain()))

	shaken := impedance.MustParseLadder("50 kN/m || 640 N*s/m in series, 200 kg to ground, 75 kN/m || 65 N*s/m in series, 6 kg to ground")
	g := tf.Must(shaken.AcrossRatio())
	fmt.Printf("%.1f dB at 10 Hz\n", tf.Must(g.FrequencyFunction().Decibels(62.83)))

	_, err := impedance.ParseLadder("50 kN/m in series, 200 kg")
	fmt.Println(err)
	// Output:
	// 0.00002 m/N
	// -18.4 dB at 10 Hz
	// at offset 25 of "50 kN/m in series, 200 kg": found the end of an arm, want "in series" or "to ground" after its one-port
}
