package lti_test

import (
	"errors"
	"math/big"
	"math/cmplx"
	"slices"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/response"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// The canal loop of the examples, composed block by block.
func TestCanalAgainstComposition(t *testing.T) {
	diagram := tf.Must(tf.Must(canal().Build()).PadeApproximant(4))
	block := func(name string) tf.Continuous { return tf.Must(diagram.Block(name)) }
	position := tf.Must(tf.Feedback(tf.Must(tf.Series(block("drive"), block("hoist"))), block("position sensor")))
	storage := tf.Must(tf.Feedback(block("pool"), block("backwater and weir")))
	pool := tf.Must(tf.Series(block("gate opening"), storage))
	forward := tf.Must(tf.Series(block("controller"), position, pool))
	want := tf.Must(tf.Series(block("setpoint span"), tf.Must(tf.Feedback(forward, block("transmitter")))))
	got := tf.Must(diagram.TransferFunction("setpoint", "level"))
	if !got.Equivalent(want) {
		t.Errorf("setpoint to level: %v, want %v", got, want)
	}
	if got.Input().String() != "setpoint: m" || got.Output().String() != "level: m" {
		t.Errorf("signals %v to %v", got.Input(), got.Output())
	}
	back := tf.Must(tf.Series(block("transmitter"), block("controller"), position, pool))
	unity := tf.MustParse("1 [m -> m]")
	want = tf.Must(tf.Series(tf.Must(tf.Scale(storage, big.NewRat(-1, 1))), tf.Must(tf.Feedback(unity, back))))
	if got = tf.Must(diagram.TransferFunction("offtake", "level")); !got.Equivalent(want) {
		t.Errorf("offtake to level: %v, want %v", got, want)
	}

	// The reading is that of the setpoint's span once all has settled, and the
	// integral action takes the offtake out.
	for _, c := range []struct{ from, to, want string }{
		{"setpoint", "level", "1"}, {"setpoint", "reading", "8 mA/m"}, {"offtake", "level", "0 s/m^2"},
		{"setpoint", "current", "0 mA/m"},
	} {
		reduced, _ := tf.Must(diagram.TransferFunction(c.from, c.to)).LowestTerms()
		if k, err := reduced.StaticGain(); err != nil || !k.Equal(units.MustParseQuantity(c.want)) {
			t.Errorf("static gain from %s to %s is %v, %v, want %s", c.from, c.to, k, err, c.want)
		}
	}
	p := tf.Must(diagram.CharacteristicPolynomial())
	counts := tf.Must(p.HalfPlane())
	if counts != (poly.Counts{Inside: 10}) { // controller 1, hoist 2, sensor 1, approximant 4, pool 1, transmitter 1
		t.Errorf("roots of %v: %+v", p, counts)
	}
	if w := diagram.Warnings(); len(w) > 0 {
		t.Errorf("warnings: %v", w)
	}
	// The gain margin of the scenario is 10.5 dB, a factor of 3.35.
	for _, c := range []struct{ factor, unstable int64 }{{320, 0}, {350, 2}} {
		louder := tf.Must(diagram.WithBlock("controller", tf.Must(tf.Scale(block("controller"), big.NewRat(c.factor, 100)))))
		counts := tf.Must(tf.Must(louder.CharacteristicPolynomial()).HalfPlane())
		if counts.Outside != int(c.unstable) {
			t.Errorf("with %d %% of the gain: %+v", c.factor, counts)
		}
	}
}

// With its dead time the loop is exact where it is cut.
func TestCanalCut(t *testing.T) {
	diagram := tf.Must(canal().Build())
	block := func(name string) tf.Continuous { return tf.Must(diagram.Block(name)) }
	position := tf.Must(tf.Feedback(tf.Must(tf.Series(block("drive"), block("hoist"))), block("position sensor")))
	storage := tf.Must(tf.Feedback(block("pool"), block("backwater and weir")))
	want := tf.Must(tf.Series(block("transmitter"), block("controller"), position, block("gate opening"), storage))
	// Two loops pass here: one way round has the dead time, the other has none.
	joins := map[string]string{"gate": "deviation", "level": "surplus"}
	for _, name := range []string{"level", "error", "reading", "command", "inflow", "gate"} {
		cut, err := diagram.Cut(name)
		if join := joins[name]; join != "" {
			var delay *lti.DeadTimeError
			if !errors.As(err, &delay) || delay.Join != join || len(delay.Times) != 2 || !slices.Equal(delay.Blocks, []string{"gate opening"}) {
				t.Errorf("cut at gate: %v", err)
			}
			continue
		}
		l := tf.Must(cut.LoopTransferFunction())
		same := tf.Must(tf.New(l.Numerator(), l.Denominator())).Equivalent(tf.Must(tf.New(want.Numerator(), want.Denominator())))
		if !same || !l.DeadTime().Equal(units.MustParseQuantity("180 s")) || l.Input().Name != name || l.Output().Name != name {
			t.Errorf("cut at %s: %v, want %v", name, l, want)
		}
		_, err = cut.Sensitivity()
		var delay *lti.DeadTimeError
		if !errors.As(err, &delay) || !slices.Equal(delay.Blocks, []string{"gate opening"}) {
			t.Errorf("sensitivity at %s: %v", name, err)
		}
		if _, err = cut.ComplementarySensitivity(); !errors.As(err, &delay) || !strings.Contains(err.Error(), "PadeApproximant") {
			t.Errorf("complementary sensitivity at %s: %v", name, err)
		}
	}
	// The phase margin of the scenario: 63° at 2.40 mrad/s.
	l := tf.Must(tf.Must(diagram.Cut("reading")).LoopTransferFunction()).FrequencyFunction()
	if m := tf.Must(l.Magnitude(0.0024)); m < 0.99 || m > 1.01 {
		t.Errorf("|L| at the crossover is %v", m)
	}
	if margin := tf.Must(l.Phase(0.0024))*180/3.14159265 + 180; margin < 62 || margin > 64 {
		t.Errorf("phase margin %v°", margin)
	}
}

// The figures of the scenario, which were computed numerically from its data:
// overshoot and dip in time, maximum sensitivity with the true dead time.
func TestCanalFigures(t *testing.T) {
	diagram := tf.Must(canal().Build())
	closed := tf.Must(diagram.PadeApproximant(6))
	extreme := func(from, step string, sign float64) (value float64, at int) {
		f := tf.Must(response.Step(tf.Must(closed.TransferFunction(from, "level")), units.MustParseQuantity(step)))
		for i, v := range tf.Must(f.Sample(1, 5401)) {
			if sign*v > sign*value {
				value, at = v, i
			}
		}
		return value, at
	}
	if peak, _ := extreme("setpoint", "50 mm", 1); peak/0.05 < 1.0235 || peak/0.05 > 1.0255 {
		t.Errorf("overshoot to %v m, want 2.4 %% above 0.05", peak)
	}
	if dip, at := extreme("offtake", "0.25 m^3/s", -1); dip < -0.0146 || dip > -0.0144 || at < 550 || at > 560 {
		t.Errorf("dip of %v m after %d s, want 14.5 mm after 555 s", dip, at)
	}
	l := tf.Must(tf.Must(diagram.Cut("reading")).LoopTransferFunction()).FrequencyFunction()
	peak := 0.0
	for omega := 1e-4; omega < 0.1; omega *= 1.01 {
		peak = max(peak, 1/cmplx.Abs(1+tf.Must(l.At(omega))))
	}
	if peak < 1.53 || peak > 1.55 {
		t.Errorf("maximum sensitivity %v, want 1.54", peak)
	}
}

// The weighing bench as a diagram with improper blocks, for springs beside
// dampers, and as equations.
func TestBenchAgainstEquations(t *testing.T) {
	d := lti.NewBlockDiagram()
	d.Input("floor", "m")
	d.Output("pan", "m")
	for name, unit := range map[string]string{"bench": "m", "mount": "m", "stem": "m", "below": "N", "above": "N", "net": "N"} {
		d.Signal(name, unit)
	}
	d.Sum("mount", lti.Plus("floor"), lti.Minus("bench"))
	d.Block("isolators", tf.MustParse("50000 + 640 s [m -> N]"), "mount", "below")
	d.Sum("net", lti.Plus("below"), lti.Minus("above"))
	d.Block("mass of the bench", tf.MustParse("1/(200 s^2) [N -> m]"), "net", "bench")
	d.Sum("stem", lti.Plus("bench"), lti.Minus("pan"))
	d.Block("load cell", tf.MustParse("75000 + 65 s [m -> N]"), "stem", "above")
	d.Block("mass of the pan", tf.MustParse("1/(6 s^2) [N -> m]"), "above", "pan")
	diagram := tf.Must(d.Build())
	got := tf.Must(diagram.TransferFunction("floor", "pan"))

	e := lti.NewEquations()
	for _, name := range []string{"floor", "bench", "pan"} {
		e.Signal(name, "m")
	}
	for name, value := range map[string]string{"M": "200 kg", "K": "50 kN/m", "C": "640 N*s/m", "m": "6 kg", "k": "75 kN/m", "c": "65 N*s/m"} {
		e.Constant(name, value)
	}
	e.Equation("M bench'' = K (floor - bench) + C (floor' - bench') - k (bench - pan) - c (bench' - pan')")
	e.Equation("m pan'' = k (bench - pan) + c (bench' - pan')")
	want := tf.Must(tf.Must(e.Build()).TransferFunction("floor", "pan"))
	if !got.Equal(want) {
		t.Errorf("diagram %v, equations %v", got, want)
	}
	if p := tf.Must(diagram.CharacteristicPolynomial()); p.Degree() != 4 || tf.Must(p.HalfPlane()).Inside != 4 {
		t.Errorf("characteristic polynomial %v", p)
	}
	// The scenario: −18.4 dB at 10 Hz.
	if db := tf.Must(got.FrequencyFunction().Decibels(62.83185307)); db < -18.45 || db > -18.35 {
		t.Errorf("transmissibility at 10 Hz is %v dB", db)
	}
	if w := diagram.Warnings(); len(w) > 0 {
		t.Errorf("warnings: %v", w)
	}
}
