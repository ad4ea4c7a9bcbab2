package lti_test

import (
	"fmt"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
)

// The level of a canal pool, held by a PI controller over a hoist with a
// position loop of its own. The pool is drawn as what it is, a storage with
// flows in and out, so that it is there once for all of them.
func canal() *lti.BlockDiagram[tf.Continuous] {
	d := lti.NewBlockDiagram()
	d.Input("setpoint", "m")
	d.Input("offtake", "m^3/s")
	d.Output("level", "m")
	d.Output("current", "mA")
	for _, name := range []string{"wanted", "error", "reading"} {
		d.Signal(name, "mA")
	}
	for _, name := range []string{"command", "deviation", "gate", "measured"} {
		d.Signal(name, "mm")
	}
	for _, name := range []string{"inflow", "backed", "surplus"} {
		d.Signal(name, "m^3/s")
	}
	d.Block("setpoint span", tf.MustParse("8 [m -> mA]"), "setpoint", "wanted")
	d.Sum("error", lti.Plus("wanted"), lti.Minus("reading"))
	d.Block("controller", tf.MustParse("400 + 400/(1500 s) [mA -> mm]"), "error", "command")
	d.Sum("deviation", lti.Plus("command"), lti.Minus("measured"))
	d.Block("drive", tf.MustParse("0.8 [mm -> mA]"), "deviation", "current")
	d.Block("hoist", tf.MustParse("0.5/(s (0.4 s + 1)) [mA -> mm]"), "current", "gate")
	d.Block("position sensor", tf.MustParse("1/(0.1 s + 1) [mm -> mm]"), "gate", "measured")
	d.Block("gate opening", tf.MustParse("exp(-180 s) 0.0042 [mm -> m^3/s]"), "gate", "inflow")
	d.Sum("surplus", lti.Plus("inflow"), lti.Minus("backed"), lti.Minus("offtake"))
	d.Block("pool", tf.MustParse("1/(5600 s) [m^3/s -> m]"), "surplus", "level")
	d.Block("backwater and weir", tf.MustParse("3.75 [m -> m^3/s]"), "level", "backed")
	d.Block("transmitter", tf.MustParse("8/(15 s + 1) [m -> mA]"), "level", "reading")
	return d
}

func ExampleBlockDiagram() {
	diagram := tf.Must(canal().Build())

	// Cut at the reading, the loop is exact with its dead time.
	cut := tf.Must(diagram.Cut("reading"))
	loop, _ := tf.Must(cut.LoopTransferFunction()).LowestTerms()
	fmt.Printf("%.4g\n", loop)

	// Closed, it needs a Padé approximant.
	_, err := diagram.TransferFunction("setpoint", "level")
	fmt.Println(err)
	closed := tf.Must(diagram.PadeApproximant(3))
	response := tf.Must(closed.TransferFunction("setpoint", "level"))
	fmt.Println(tf.Must(response.StaticGain()))
	fmt.Printf("%+v\n", tf.Must(tf.Must(closed.CharacteristicPolynomial()).HalfPlane()))
	// Output:
	// exp(-180 s) (0.3584 s^2 + 3.584 s + 0.002389)/(2240 s^6 + 28150 s^5 + 57890 s^4 + 26170 s^3 + 1511 s^2 + s) [reading: mA -> reading: mA]
	// from setpoint to level: the dead time of block gate opening lies on a loop, which no rational function can hold: replace it by its approximant (PadeApproximant, of the block or of the Diagram), or Cut the loop, which is exact with dead time
	// 1
	// {Inside:9 On:0 Outside:0}
}

func ExampleBlockDiagram_Build() {
	d := lti.NewBlockDiagram()
	d.Input("setpoint", "mA")
	d.Signal("error", "mA")
	d.Signal("reading", "mA")
	d.Output("level", "m")
	d.Sum("error", lti.Plus("setpoint"), lti.Minus("level"))
	d.Block("controller", tf.MustParse("400 [mA -> mm]"), "error", "opening")
	d.Block("pool", tf.MustParse("1.12/(1493 s + 1) [gate: mm -> level: mm]"), "error", "level")
	_, err := d.Build()
	fmt.Println(err)
	// Output:
	// block controller: no signal "opening": there are setpoint, error, reading, level
	// block pool: its input [gate: mm] does not fit the signal [error: mA]: unit mm found where mA is needed: the dimensions differ (m against A)
	// block pool: its output [level: mm] does not fit the signal [level: m]: 1 m is 1000 mm; ConvertUnits on the block mends it
	// sum error: its term −level [m] does not fit the sum [mA]: unit m found where mA is needed: the dimensions differ (m against A)
}

func ExampleDiagram_Warnings() {
	d := lti.NewBlockDiagram()
	d.Input("setpoint", "mm")
	d.Signal("error", "mm")
	d.Signal("opening", "mm")
	d.Output("level", "mm")
	d.Sum("error", lti.Plus("setpoint"), lti.Minus("level"))
	d.Block("controller", tf.MustParse("-0.5 - 0.5/(1500 s) [mm -> mm]"), "error", "opening")
	d.Block("pool", tf.MustParse("1.12/(1493 s + 1) [mm -> mm]"), "opening", "level")
	fmt.Println(tf.Must(d.Build()).Warnings())
	// Output:
	// [positive feedback at zero frequency in the loop error, opening, level: it integrates with a positive gain; check whether the action is direct or reverse, and the signs of the sums]
}

// A PI controller whose integral time is the time constant of a furnace cancels
// the slow pole for the setpoint. It is still there: a disturbance of the heat
// sees it.
func ExampleDiagram_HiddenModes() {
	d := lti.NewBlockDiagram()
	d.Input("setpoint", "K")
	d.Input("disturbance", "W")
	d.Signal("error", "K")
	d.Signal("power", "W")
	d.Signal("heat", "W")
	d.Output("temperature", "K")
	d.Sum("error", lti.Plus("setpoint"), lti.Minus("temperature"))
	d.Block("controller", tf.MustParse("80 (9400 s + 1)/(9400 s) [K -> W]"), "error", "power")
	d.Sum("heat", lti.Plus("power"), lti.Plus("disturbance"))
	d.Block("furnace", tf.MustParse("0.12/(9400 s + 1) [W -> K]"), "heat", "temperature")
	diagram := tf.Must(d.Build())

	fmt.Println("modes ", tf.Must(tf.Must(diagram.CharacteristicPolynomial()).Roots()))
	fmt.Println("hidden", tf.Must(diagram.HiddenModes("setpoint", "temperature")))
	fmt.Println("hidden", tf.Must(diagram.HiddenModes("disturbance", "temperature")))
	// Output:
	// modes  [-0.0010212765957446808 -0.00010638297872340425]
	// hidden s = -0.0001064 rad/s
	// hidden none
}
