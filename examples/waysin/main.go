// Waysin is the second tour of the README: every way in which a plant arrives. Its
// main function and its output are printed there.
package main

import (
	"fmt"
	"math/big"
	"strings"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/identify"
	"github.com/qofs/qofs/lti/impedance"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func main() {
	// Equations, with an integral. A constant can be replaced later, and values at
	// the beginning are a choice.
	e := lti.NewEquations()
	e.Signal("error", "mA")
	e.Signal("opening", "mm")
	e.Constant("gain", "400 mm/mA")
	e.Constant("reset", "1500 s")
	e.Equation("opening = gain (error + integral(error)/reset)")
	controller := tf.Must(tf.Must(e.Build()).TransferFunction("error", "opening"))
	fmt.Println(controller)

	e = lti.NewEquations()
	e.Signal("inflow", "m^3/s")
	e.Signal("level", "mm")
	e.Constant("area", "5600 m^2")
	e.Constant("outflow", "1.25 m^2/s")
	e.Equation("area level' + outflow level = inflow")
	pool := tf.Must(tf.Must(e.Build()).WithConstant("outflow", "3.75 m^2/s"))
	state := tf.Must(pool.InitialState([]string{"inflow"}, lti.Initially("level", "50 mm")))
	fmt.Println(tf.Must(state.FreeResponse("level")))

	// Component values: voltages, forces, pressures and temperatures alike.
	mount := impedance.MustParse("50 kN/m || 640 N*s/m")
	fmt.Println(tf.Must(impedance.Transmissibility(mount, impedance.MustParse("200 kg"))))

	// Matrices, with a signal for every row and column; what hides is named.
	one := big.NewRat(1, 1)
	tanks := tf.Must(statespace.New(
		[]units.Signal{{Name: "left", Unit: units.MustParse("m")}, {Name: "right", Unit: units.MustParse("m")}},
		[]units.Signal{{Name: "inflow", Unit: units.MustParse("m^3/s")}}, nil,
		statespace.Matrices{State: [][]*big.Rat{{big.NewRat(-1, 50), nil}, {nil, big.NewRat(-1, 50)}}, Input: [][]*big.Rat{{one}, {one}}}))
	fmt.Println(tanks)
	fmt.Println(tf.Must(tanks.ControllabilityRank()), "of 2 states can be reached by the common inflow")

	// A diagram on a whiteboard: any topology, cut at any signal.
	d := lti.NewBlockDiagram()
	d.Input("setpoint", "mA")
	d.Signal("error", "mA")
	d.Signal("opening", "mm")
	d.Signal("level", "m")
	d.Signal("reading", "mA")
	d.Sum("error", lti.Plus("setpoint"), lti.Minus("reading"))
	d.Block("controller", controller, "error", "opening")
	d.Block("pool", tf.MustParse("exp(-180 s) 0.00112/(1493 s + 1) [mm -> m]"), "opening", "level")
	d.Block("transmitter", tf.MustParse("8/(15 s + 1) [m -> mA]"), "level", "reading")
	diagram := tf.Must(d.Build())
	cut := tf.Must(diagram.Cut("reading"))
	fmt.Printf("%.4g\n", tf.Must(cut.LoopTransferFunction()))
	closed := tf.Must(diagram.PadeApproximant(4))
	fmt.Printf("%+v\n", tf.Must(tf.Must(closed.CharacteristicPolynomial()).HalfPlane()))

	// A nonlinear model, linearised where it stands.
	weir := lti.Nonlinear{
		States: []units.Signal{{Name: "level", Unit: units.MustParse("m")}},
		Inputs: []units.Signal{{Name: "inflow", Unit: units.MustParse("m^3/s")}},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			over := dual.Scale(3, dual.PowReal(x[0], 1.5)) // m³/s
			return []dual.Number{dual.Scale(1/5600.0, dual.Sub(u[0], over))}, nil
		}}
	_, err := lti.Linearize(weir, lti.At("level", "0.9 m"), lti.At("inflow", "2.5 m^3/s"))
	fmt.Println(err)
	point := tf.Must(lti.Equilibrium(weir, lti.At("inflow", "2.5 m^3/s"), lti.Near("level", "0.9 m")))
	fmt.Println(point)
	fmt.Printf("%.4g\n", tf.Must(tf.Must(lti.Linearize(weir, point.Values()...)).TransferFunction("inflow", "level")))

	// An instrument's range: the slope for the algebra, the offset for the runtime.
	span := units.MustParseSpan("0 m … 2 m -> 4 mA … 20 mA")
	fmt.Println(span.Slope(), "and 0.9 m reads", tf.Must(span.Convert(units.MustParseQuantity("0.9 m"))))

	// A recorded test, with an uncertainty for every parameter.
	var file strings.Builder
	fmt.Fprintln(&file, "time: s, heater: W, zone: degC")
	for i := range 60 {
		heater, zone := 0.0, 20.0
		if i >= 5 {
			heater = 100
			zone += []float64{0, 0, 4.5, 8.1, 10.9, 13.2, 15, 16.4, 17.6, 18.5, 19.2, 19.8}[min(i-5, 11)]
		}
		fmt.Fprintf(&file, "%d, %g, %g\n", i*10, heater, zone)
	}
	record := tf.Must(identify.ReadRecord(strings.NewReader(file.String()), "heater", "zone"))
	fmt.Println(tf.Must(identify.FirstOrder(record.Between(0, 160), identify.Drift())))
}
