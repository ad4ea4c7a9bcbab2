// Tour is the README's tour: one thing after another that the library does,
// with what it prints.
package main

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/response"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func main() {
	// Units are checked where blocks meet, and the error names what mends it.
	sensor := tf.MustParse("8/(15 s + 1) [m -> mA]")
	card := tf.MustParse("0.5 [A -> V]")
	_, err := tf.Series(sensor, card)
	fmt.Println(err)
	card = tf.Must(card.ConvertUnits(units.MustParse("mA"), units.MustParse("V")))
	fmt.Println(tf.Must(tf.Series(sensor, card)))

	// Equations: every term is checked for its dimension.
	tank := lti.NewEquations()
	tank.Signal("inflow", "L/min")
	tank.Signal("level", "mm")
	tank.Constant("area", "1.5 m^2")
	tank.Equation("area level = inflow") // the prime is missing
	_, err = tank.Build()
	fmt.Println(err)

	// Nothing is rounded: multiplicities are exact, whatever the form.
	p := poly.MustParse("(s + 1)^5 (s^2 + 2 s + 5)^3")
	fmt.Println(p.Text("s"))
	for _, root := range tf.Must(p.Roots()) {
		fmt.Println(root)
	}

	// Nothing is cancelled behind your back.
	g := tf.MustParse("(s - 1)/((s - 1) (s + 2))")
	reduced, cancelled := g.LowestTerms()
	fmt.Println(g, "is", reduced, "and hides", cancelled.Text("s"))

	// Stability by exact counts, with dead time as a Padé approximant.
	pool := tf.MustParse("exp(-180 s) 1.12/(1493 s + 1)")
	loop := tf.Must(tf.UnityFeedback(tf.Must(pool.PadeApproximant(4))))
	fmt.Printf("%+v\n", tf.Must(loop.Denominator().HalfPlane()))

	// Closed forms: partial fractions and time functions, exact where they are.
	h := tf.MustParse("(3 s + 7)/((s + 1) (s^2 + 2 s + 5)) [V -> mm]")
	fmt.Println(tf.Must(h.PartialFractions()))
	step := tf.Must(response.Step(h, units.MustParseQuantity("2 V")))
	fmt.Println(step)
	fmt.Println(tf.Must(step.Sample(0.5, 4)))

	// Any point, correctly rounded; exact points exactly.
	fmt.Println(tf.Must(h.At(2i)))
	fmt.Println(tf.Must(h.AtRat(big.NewRat(1, 3))))

	// On the imaginary axis, dead time included: ω in rad/s, phase in rad.
	axis := pool.FrequencyFunction()
	fmt.Println(tf.Must(axis.Decibels(0.0024)), tf.Must(axis.Phase(0.0024)))

	// Discrete functions compose with the same words.
	filter := tf.MustParseDiscrete("0.1/(z - 0.9) [mm -> mm] every 0.01 s")
	fmt.Println(tf.Must(tf.Series(filter, filter)))
}
