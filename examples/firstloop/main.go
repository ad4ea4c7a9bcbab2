// Firstloop is the README's first program: the level of a canal pool, from its
// equations to the step response of the closed loop.
package main

import (
	"fmt"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/response"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func main() {
	pool := lti.NewEquations() // records; Build reports every fault at once
	pool.Signal("opening", "mm")
	pool.Signal("inflow", "m^3/s")
	pool.Signal("level", "m")
	pool.Constant("kq", "0.0042 m^3/(s*mm)")
	pool.Constant("backwater", "2.5 m^2/s")
	pool.Constant("outflow", "1.25 m^2/s")
	pool.Constant("area", "5600 m^2")
	pool.Equation("inflow = kq opening - backwater level")
	pool.Equation("area level' + outflow level = inflow")
	plant := tf.Must(tf.Must(pool.Build()).TransferFunction("opening", "level"))

	sensor := tf.MustParse("8/(15 s + 1) [m -> mA]")
	control := tf.MustParse("400 + 400/(1500 s) [mA -> mm]")
	loop := tf.Must(tf.Feedback(tf.Must(tf.Series(control, plant)), sensor))

	fmt.Println("plant", plant)
	fmt.Printf("loop  %.4g\n", loop)
	for _, pole := range tf.Must(loop.Poles()) {
		fmt.Printf("pole  %.4g rad/s\n", pole.Value)
	}
	fmt.Println("gain ", tf.Must(loop.StaticGain()))

	step := tf.Must(response.Step(loop, units.MustParseQuantity("1 mA"))) // closed form, in metres
	fmt.Printf("step  %.4g\n", step)
	fmt.Printf("after ten minutes the level has moved by %.4g %s\n", tf.Must(step.At(600)), step.Unit())
}
