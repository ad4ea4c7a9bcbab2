package tf_test

import (
	"encoding/json"
	"errors"
	"fmt"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The level loop of a canal pool, without its dead time.
func Example() {
	control := tf.MustParse("400 + 400/(1500 s) [mA -> mm]")
	pool := tf.MustParse("0.00112/(1493 s + 1) [opening: mm -> level: m]")
	sensor := tf.MustParse("8/(15 s + 1) [m -> mA]")
	loop := tf.Must(tf.Feedback(tf.Must(tf.Series(control, pool)), sensor))
	fmt.Printf("%.4g\n", loop)
	fmt.Println(tf.Must(loop.StaticGain()))
	for _, pole := range tf.Must(loop.Poles()) {
		fmt.Printf("%.4g\n", pole.Value)
	}
	// Output:
	// (2812 s^2 + 189.4 s + 0.125)/(9373000 s^3 + 631100 s^2 + 1919 s + 1) [mA -> level: m]
	// 0.125 m/mA
	// (-0.06417+0i)
	// (-0.002498+0i)
	// (-0.0006655+0i)
}

func ExampleSeries() {
	valve := tf.MustParse("2/(0.4 s + 1) [mA -> mm/s]")
	gate := tf.MustParse("1/s [m/s -> m]")
	_, err := tf.Series(valve, gate)
	var junction *tf.JunctionError
	fmt.Println(errors.As(err, &junction))
	fmt.Println(err)

	gate = tf.Must(gate.ConvertUnits(units.MustParse("mm/s"), units.MustParse("mm")))
	fmt.Println(tf.Must(tf.Series(valve, gate)))
	// Output:
	// true
	// Series: the input of block 1 [m/s] does not fit the output of block 0 [mm/s]: 1 mm/s is 0.001 m/s; ConvertUnits on one of the blocks mends it
	// 5/(s^2 + 2.5 s) [mA -> mm]
}

func ExampleGain() {
	gain := tf.Gain(units.MustParseQuantity("8 mA/m"))
	fmt.Println(gain)
	fmt.Println(tf.Must(gain.WithUnits(units.MustParse("m"), units.MustParse("mA"))))
	// Output:
	// 8 [1 -> mA/m]
	// 8 [m -> mA]
}

func ExampleContinuous_LowestTerms() {
	g := tf.Must(tf.New(poly.MustParse("s - 1"), poly.MustParse("(s - 1) (s + 2)")))
	reduced, cancelled := g.LowestTerms()
	fmt.Println(g)
	fmt.Println(reduced)
	fmt.Println("cancelled:", cancelled.Text("s"))
	// Output:
	// (s - 1)/(s^2 + s - 2)
	// 1/(s + 2)
	// cancelled: s - 1
}

func ExampleContinuous_PadeApproximant() {
	wave := tf.MustParse("exp(-180 s) [m -> m]")
	_, err := tf.UnityFeedback(wave)
	var dead *tf.DeadTimeError
	fmt.Println(errors.As(err, &dead))
	fmt.Println(tf.Must(wave.PadeApproximant(2)))
	// Output:
	// true
	// (2700 s^2 - 90 s + 1)/(2700 s^2 + 90 s + 1) [m -> m]
}

func ExampleContinuous_FinalValue() {
	g := tf.MustParse("0.125/(600 s + 1) [mA -> m]")
	step := tf.Must(tf.Series(tf.MustParse("1/s [mA -> mA]"), g))
	fmt.Println(tf.Must(step.FinalValue()))
	_, err := tf.MustParse("1/(s^2 + 4)").FinalValue()
	fmt.Println(err)
	// Output:
	// 0.125 m/(mA*s)
	// FinalValue: 2 poles of s g(s) on the imaginary axis, so that the time function does not settle
}

func ExampleContinuous_FrequencyFunction() {
	loop := tf.MustParse("exp(-180 s) 0.00896/(1500 s)")
	f := loop.FrequencyFunction()
	omega := 0.001
	fmt.Printf("%.2f dB, %.3f rad, %.1f s\n",
		tf.Must(f.Decibels(omega)), tf.Must(f.Phase(omega)), tf.Must(f.GroupDelay(omega)))
	// Output: -44.48 dB, -1.751 rad, 180.0 s
}

func ExampleContinuous_Format() {
	g := tf.MustParse("(2 s + 1)/(3 s^2 + 0.4 s + 7) [V -> mm]")
	fmt.Printf("%v\n%.3g\n", g, g)
	// Output:
	// (10 s + 5)/(15 s^2 + 2 s + 35) [V -> mm]
	// (0.667 s + 0.333)/(s^2 + 0.133 s + 2.33) [V -> mm]
}

func ExampleContinuous_MarshalText() {
	text, err := json.Marshal(map[string]tf.Continuous{"sensor": tf.MustParse("8/(15 s + 1) [m -> mA]")})
	fmt.Println(string(text), err)
	// Output: {"sensor":"8/(15 s + 1) [m -\u003e mA]"} <nil>
}

func ExampleParseDiscrete() {
	filter := tf.MustParseDiscrete("0.1/(z - 0.9) [V -> V] every 10 ms")
	fmt.Println(filter)
	fmt.Println(tf.Must(filter.StaticGain()), filter.Period())
	// Output:
	// 0.1/(z - 0.9) [V -> V] every 0.01 s
	// 1 0.01 s
}
