package tf

import (
	"errors"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/units"
)

func TestJunctions(t *testing.T) {
	control := MustParse("400 + 400/(1500 s) [mA -> mm]")
	plant := MustParse("1.12/(1493 s + 1) [opening: mm -> level: m]")
	sensor := MustParse("8/(15 s + 1) [m -> mA]")
	loop, err := Feedback(Must(Series(control, plant)), sensor)
	if err != nil || loop.Input().String() != "mA" || loop.Output().String() != "level: m" {
		t.Fatalf("%v, %v", loop, err)
	}
	for _, c := range []struct {
		name  string
		err   error
		index int
		said  []string
	}{
		{"scale", errorOf(Series(control, MustParse("1/s [m -> m]"))), 1, []string{"output of block 0", "input of block 1", "[mm]", "[m]", "1 mm is 0.001 m", "ConvertUnits"}},
		{"dimension", errorOf(Series(control, plant, MustParse("1/s [V -> m]"))), 2, []string{"level: m", "[V]", "output of block 1"}},
		{"radian", errorOf(Series(MustParse("1/s [V -> rad/s]"), MustParse("1/s [1/s -> 1]"))), 1, []string{"rad/s"}},
		{"name", errorOf(Series(MustParse("1 [V -> valve: mA]"), MustParse("1 [reading: mA -> V]"))), 1, []string{"valve", "reading", "WithSignals"}},
		{"parallel input", errorOf(Parallel(control, MustParse("1 [V -> mm]"))), 1, []string{"Parallel", "[V]", "[mA]"}},
		{"parallel output", errorOf(Parallel(control, control, MustParse("1 [mA -> m]"))), 2, []string{"Parallel", "[m]", "[mm]", "1 mm is 0.001 m"}},
		{"back", errorOf(Feedback(control, sensor)), 1, []string{"forward", "back"}},
		{"back out", errorOf(Feedback(plant, MustParse("1 [m -> m]"))), 1, []string{"forward", "back"}},
		{"positive", errorOf(PositiveFeedback(control, sensor)), 1, []string{"PositiveFeedback"}},
		{"unity", errorOf(UnityFeedback(plant)), 0, []string{"UnityFeedback"}},
	} {
		var j *JunctionError
		if !errors.As(c.err, &j) || j.Index != c.index {
			t.Errorf("%s: %v, want a *JunctionError at %d", c.name, c.err, c.index)
			continue
		}
		for _, word := range c.said {
			if !strings.Contains(c.err.Error(), word) {
				t.Errorf("%s: %q does not say %q", c.name, c.err, word)
			}
		}
	}
	// The conversion that the message names mends the junction.
	mended := Must(MustParse("1/s [m -> m]").ConvertUnits(units.MustParse("mm"), units.MustParse("m")))
	if !mended.Equal(MustParse("1/(1000 s) [mm -> m]")) {
		t.Errorf("converted: %v", mended)
	}
	if _, err := Series(control, mended); err != nil {
		t.Error(err)
	}
}

func errorOf[T any](_ T, err error) error { return err }

func TestDeadTimeInComposition(t *testing.T) {
	late, later, plain := MustParse("exp(-2 s) 1/(s + 1)"), MustParse("exp(-3 s) 1/s"), MustParse("1/s")
	if g := Must(Series(late, plain, later)); !g.Equal(MustParse("exp(-5 s) 1/((s + 1) s^2)")) {
		t.Errorf("series: %v", g)
	}
	if g := Must(Parallel(late, late)); !g.Equivalent(MustParse("exp(-2 s) 2/(s + 1)")) {
		t.Errorf("parallel: %v", g)
	}
	for _, c := range []struct {
		name string
		err  error
		said string
	}{
		{"Parallel", errorOf(Parallel(late, later)), "PadeApproximant"},
		{"Parallel", errorOf(Parallel(plain, late)), "dead time of 2 s"},
		{"Feedback", errorOf(Feedback(late, plain)), "PadeApproximant"},
		{"PositiveFeedback", errorOf(PositiveFeedback(plain, late)), "back 2 s"},
		{"UnityFeedback", errorOf(UnityFeedback(late)), "PadeApproximant"},
		{"Inverse", errorOf(Inverse(late)), "WithoutDeadTime"},
		{"AtRat", errorOf(late.AtRat(big.NewRat(1, 1))), "irrational"},
	} {
		var d *DeadTimeError
		if !errors.As(c.err, &d) || d.Operation != c.name || !strings.Contains(c.err.Error(), c.said) {
			t.Errorf("%s: %v", c.name, c.err)
		}
	}
	if v, err := late.AtRat(nil); err != nil || v.Cmp(big.NewRat(1, 1)) != 0 {
		t.Errorf("at 0: %v, %v", v, err)
	}
	if _, err := plain.WithDeadTime(units.MustParseQuantity("-1 s")); !errors.Is(err, ErrNegativeDeadTime) {
		t.Errorf("negative dead time: %v", err)
	}
	var mismatch *units.MismatchError
	if _, err := plain.WithDeadTime(units.MustParseQuantity("1 m")); !errors.As(err, &mismatch) {
		t.Errorf("a length for a dead time: %v", err)
	}
	if g := Must(late.WithDeadTime(units.MustParseQuantity("0 s"))); !g.Equal(late.WithoutDeadTime()) {
		t.Errorf("dead time taken away: %v", g)
	}
}

func TestLoopsAndPeriods(t *testing.T) {
	if _, err := Feedback(MustParse("s/(s + 1)"), MustParse("-(s + 1)/s")); !errors.Is(err, ErrAlgebraicLoop) {
		t.Errorf("1 + gh = 0: %v", err)
	}
	if _, err := UnityFeedback(MustParse("-1")); !errors.Is(err, ErrAlgebraicLoop) {
		t.Errorf("1 + g = 0: %v", err)
	}
	if _, err := Inverse(Continuous{}); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("inverse of 0: %v", err)
	}
	if _, err := New(ints(1), ints()); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("1/0: %v", err)
	}
	fast, slow := MustParseDiscrete("1/(z - 1) every 1 ms"), MustParseDiscrete("1/(z - 1) every 0.002 s")
	var period *PeriodError
	for _, err := range []error{errorOf(Series(fast, slow)), errorOf(Parallel(fast, slow)), errorOf(Feedback(fast, slow)), errorOf(Series(fast, Discrete{}))} {
		if !errors.As(err, &period) || period.Index != 1 || !strings.Contains(err.Error(), "0.001 s") {
			t.Errorf("different periods: %v", err)
		}
	}
	if g := Must(Feedback(fast, fast)); !g.Equal(MustParseDiscrete("(z - 1)/(z^2 - 2 z + 2) every 0.001 s")) {
		t.Errorf("sampled loop: %v", g)
	}
	if _, err := NewDiscrete(ints(1), ints(1), units.Quantity{}); err == nil {
		t.Error("a period of 0 is taken")
	}
}

func TestUnits(t *testing.T) {
	u := units.MustParse
	g := Must(Gain(units.MustParseQuantity("8 mA/m")).WithUnits(u("m"), u("mA")))
	if !g.Equal(MustParse("8 [m -> mA]")) {
		t.Errorf("gain: %v", g)
	}
	var mismatch *units.MismatchError
	if _, err := Gain(units.MustParseQuantity("8 mA/m")).WithUnits(u("mm"), u("mA")); !errors.As(err, &mismatch) {
		t.Errorf("gain in another scale: %v", err)
	}
	if c := Must(g.ConvertUnits(u("mm"), u("A"))); !c.Equal(MustParse("8e-6 [mm -> A]")) {
		t.Errorf("converted: %v", c)
	}
	if _, err := g.ConvertUnits(u("s"), u("mA")); !errors.As(err, &mismatch) {
		t.Errorf("metres into seconds: %v", err)
	}
	if q, err := Must(Series(g, MustParse("3/(s + 2) [mA -> V]"))).StaticGain(); err != nil || !q.Equal(units.MustParseQuantity("12 V/m")) {
		t.Errorf("static gain: %v, %v", q, err)
	}
	if q, err := MustParseDiscrete("0.1/(z - 0.9) [V -> mm] every 0.01 s").StaticGain(); err != nil || q.String() != "1 mm/V" {
		t.Errorf("static gain: %v, %v", q, err)
	}
	for _, name := range []string{"a:b", "a->b", " a", "a]", "a\n", "\xff", strings.Repeat("a", 300)} {
		if _, err := g.WithSignals(units.Signal{Name: name, Unit: u("m")}, units.Signal{Unit: u("mA")}); !errors.Is(err, ErrName) {
			t.Errorf("name %q: %v", name, err)
		}
	}
}

func TestDegrees(t *testing.T) {
	for _, c := range []struct {
		text                string
		systemType, degrees int
		proper              bool
	}{
		{"1/(s + 1)", 0, 1, true}, {"(s + 1)/s^2", 2, 1, true}, {"s^2/(s (s + 1))", -1, 0, true},
		{"s^3/(s + 1)", -3, -2, false}, {"0/(s + 1)", 0, 2, true}, {"s/s^3", 2, 2, true},
	} {
		g := MustParse(c.text)
		if g.SystemType() != c.systemType || g.RelativeDegree() != c.degrees || g.IsProper() != c.proper {
			t.Errorf("%s: type %d, relative degree %d, proper %v", c.text, g.SystemType(), g.RelativeDegree(), g.IsProper())
		}
	}
	d := MustParseDiscrete("(z - 1)/((z - 1)^3 (z + 0.5)) every 1 s")
	if d.SystemType() != 2 || d.RelativeDegree() != 3 || !d.IsProper() {
		t.Errorf("%v: type %d, relative degree %d", d, d.SystemType(), d.RelativeDegree())
	}
}

func TestJunctionCheckIsFree(t *testing.T) {
	a := units.Signal{Name: "level", Unit: units.MustParse("m^3/(s*mm)")}
	b := units.Signal{Unit: units.MustParse("m³·s⁻¹·mm⁻¹")}
	if n := testing.AllocsPerRun(100, func() {
		if !fits(&a, &b) {
			t.Fatal("equal signals do not fit")
		}
	}); n != 0 {
		t.Errorf("%v allocations for a check of signals", n)
	}
}

// TestCompositionAllocatesNothing beyond what the rational function does.
func TestCompositionAllocatesNothing(t *testing.T) {
	forward, back := MustParse("(2 s + 1)/(s^2 + 4 s + 9) [V -> level: mm]"), MustParse("8/(15 s + 1) [mm -> V]")
	bare := testing.AllocsPerRun(200, func() { forward.c.f.Feedback(back.c.f, 1) })
	whole := testing.AllocsPerRun(200, func() {
		if _, err := Feedback(forward, back); err != nil {
			t.Fatal(err)
		}
	})
	if whole > bare {
		t.Errorf("%v allocations, %v in the rational function", whole, bare)
	}
}
