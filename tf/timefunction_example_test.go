package tf_test

import (
	"fmt"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The level of a canal pool after its gate has been raised by 50 mm: 50/s is
// the transform of the step.
func ExampleContinuous_Response() {
	pool := tf.MustParse("exp(-180 s) 1.12/(1493 s + 1) [mm -> mm]")
	gate := tf.Must(tf.NewTimeFunction(poly.FromInts(50), poly.FromInts(0, 1), pool.Input()))
	level := tf.Must(pool.Response(gate))
	fmt.Println(level)
	fmt.Printf("%.4g\n", level)
	fmt.Println(tf.Must(level.At(179)), tf.Must(level.At(1800)))
	fmt.Println(tf.Must(level.FinalValue()))
	// Output:
	// 56 − 56 e^(−(t − 180)/1493) for t ≥ 180 [mm]
	// 56 − 56 e^(−0.0006698 (t − 180)) for t ≥ 180 [mm]
	// 0 37.07870399546211
	// 56 mm
}

// A bench on soft springs answers a knock of 1 N·s.
func ExampleContinuous_InverseLaplace() {
	bench := tf.MustParse("1/(200 s^2 + 640 s + 50000) [N -> m]")
	f := tf.Must(bench.InverseLaplace())
	fmt.Println(f)
	y := tf.Must(f.Sample(0.1, 4))
	fmt.Println(y)
	// Output:
	// 0.000317859 e^(−1.6 t) sin(15.7302 t) [m/(N*s)]
	// [0 0.00027086123699964485 -1.0276888129958738e-06 -0.00019668172721990244]
}

func ExampleContinuous_PartialFractions() {
	g := tf.MustParse("(s + 7)/(s (s + 2) (s^2 + 2 s + 5))")
	p := tf.Must(g.PartialFractions())
	fmt.Println(p)
	fmt.Printf("%.3g\n", p)
	// Output:
	// -0.5/(s + 2) - (0.2 s + 1.4)/(s^2 + 2 s + 5) + 0.7/s
	// -0.5/(s + 2) + (-0.1 + 0.3j)/(s + 1 - 2j) + (-0.1 - 0.3j)/(s + 1 + 2j) + 0.7/s
}

// Numbers that are rational are known exactly.
func ExampleTimeTerm_Exact() {
	f := tf.Must(tf.NewTimeFunction(poly.FromInts(1), poly.FromInts(0, 3, 1), units.Signal{}))
	fmt.Println(f)
	for _, term := range tf.Must(f.Terms()) {
		decay, _, amplitude, _ := term.Exact()
		fmt.Println(term.Cosine, "is", amplitude.RatString(), "with the decay", decay.RatString())
	}
	// Output:
	// 1/3 − 1/3 e^(−3 t)
	// 0.3333333333333333 is 1/3 with the decay 0
	// -0.3333333333333333 is -1/3 with the decay -3
}
