package identify_test

import (
	"fmt"
	"math"
	"strings"

	"github.com/qofs/qofs/lti/identify"
	"github.com/qofs/qofs/units"
)

// The test of a transmitter in a canal, read from a file and fitted: the level
// rises by 50 mm in one go, and the current is noted every four seconds.
func ExampleFirstOrder() {
	file := strings.NewReader(`# level transmitter, span 0 m to 2 m
time: s, level: m, current: mA
0,  0.90, 11.20
4,  0.90, 11.20
8,  0.95, 11.20
12, 0.95, 11.29
16, 0.95, 11.37
20, 0.95, 11.42
24, 0.95, 11.46
28, 0.95, 11.49
32, 0.95, 11.52
36, 0.95, 11.53
40, 0.95, 11.55
44, 0.95, 11.56
48, 0.95, 11.57
52, 0.95, 11.58
56, 0.95, 11.58
60, 0.95, 11.59
`)
	record, err := identify.ReadRecord(file, "level", "current")
	if err != nil {
		fmt.Println(err)
		return
	}
	fit, err := identify.FirstOrder(record)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(fit)
	fmt.Printf("%.3g\n", fit.Function())
	// Output:
	// gain 7.968 ± 0.71 mA/m
	// time constant 15.12 ± 1.6 s
	// dead time 0 ± 0.32 s
	// residual 0.00289 mA
	// look: current moves in steps of 0.01 mA, 3 % of its range
	// look: a drift could hide here: with one of 2.1 mA an hour the gain is 7.263 instead of 7.968 (Drift fits it)
	// 7.97/(15.1 s + 1) [level: m -> current: mA]
}

// A measured frequency response, in hertz, decibels and degrees, becomes a transfer
// function of second order.
func ExampleSanathananKoerner() {
	var file strings.Builder
	fmt.Fprintln(&file, "frequency: Hz, magnitude: dB re 1, phase: deg")
	for _, f := range []float64{0.5, 1, 1.5, 2, 2.3, 2.5, 2.7, 3, 4, 6, 10} {
		// a bench on a mount: 2.48 Hz, damping ratio 0.1
		x := f / 2.48
		re, im := 1-x*x, 0.2*x
		fmt.Fprintf(&file, "%g, %.2f, %.1f\n", f, -10*math.Log10(re*re+im*im), -math.Atan2(im, re)*180/math.Pi)
	}
	force := units.Signal{Name: "base", Unit: units.MustParse("mm")}
	motion := units.Signal{Name: "bench", Unit: units.MustParse("mm")}
	table, err := identify.ReadFrequencyTable(strings.NewReader(file.String()), force, motion)
	if err != nil {
		fmt.Println(err)
		return
	}
	fit, err := identify.SanathananKoerner(table, 0, 2)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.3g\n", fit.Function())
	// Output:
	// 243/(s^2 + 3.12 s + 243) [base: mm -> bench: mm]
}
