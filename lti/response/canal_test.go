package response

import (
	"math"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// TestCanalFigures compares with the figures of the canal pool that were
// computed numerically from its data: overshoot about 2.4 %, rise (10 to 90 %)
// about 413 s, 2 % settling about 1131 s after a setpoint of +50 mm, and a dip of
// about 14.5 mm near 555 s after an offtake of 0.25 m³/s. Here the dead time is a
// Padé approximant of order 8.
func TestCanalFigures(t *testing.T) {
	delay := tf.Must(tf.MustParse("exp(-180 s) 1/1").PadeApproximant(8))
	hoist := tf.Must(tf.Feedback(tf.MustParse("0.4/(s (0.4 s + 1))"), tf.MustParse("1/(0.1 s + 1)")))
	control := tf.MustParse("400 (1500 s + 1)/(1500 s)")
	sensor := tf.MustParse("8/(15 s + 1)")
	basin := tf.MustParse("1/(5600 s + 3.75)") // m per m³/s
	actuate := tf.Must(tf.Series(control, hoist, tf.MustParse("0.0042")))

	forward := tf.Must(tf.Series(actuate, basin, delay))
	level := tf.Must(tf.Feedback(forward, sensor))
	step := tf.Must(Step(tf.Must(tf.Series(tf.MustParse("8"), level)), units.MustParseQuantity("0.05")))

	const n = 3000
	y := tf.Must(step.Sample(1, n))
	peak, low, high, settled := 0.0, 0, 0, 0
	for k, v := range y {
		peak = max(peak, v)
		if v < 0.1*0.05 {
			low = k + 1
		}
		if high == 0 && v >= 0.9*0.05 {
			high = k
		}
		if math.Abs(v-0.05) > 0.02*0.05 {
			settled = k + 1
		}
	}
	near := func(what string, got, want, tolerance float64) {
		t.Helper()
		t.Logf("%s %.4g", what, got)
		if math.Abs(got-want) > tolerance {
			t.Errorf("%s %v, want about %v", what, got, want)
		}
	}
	near("overshoot %", (peak/0.05-1)*100, 2.4, 0.15)
	near("rise s", float64(high-low), 413, 3)
	near("settling s", float64(settled), 1131, 4)
	if final := tf.Must(step.FinalValue()); final.Value().RatString() != "1/20" {
		t.Errorf("final value %v, want exactly 0.05", final)
	}

	// The offtake draws from the pool at the transmitter's end: no dead time on
	// the way in, but in the loop.
	loop := tf.Must(tf.Series(actuate, delay, sensor))
	offtake := tf.Must(tf.Feedback(basin, loop))
	dip := tf.Must(Step(offtake, units.MustParseQuantity("-0.25")))
	worst, when := 0.0, 0
	for k, v := range tf.Must(dip.Sample(1, n)) {
		if v < worst {
			worst, when = v, k
		}
	}
	near("dip mm", worst*1000, -14.5, 0.2)
	near("at s", float64(when), 555, 5)
}
