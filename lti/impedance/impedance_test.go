package impedance

import (
	"errors"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func TestElements(t *testing.T) {
	for _, c := range []struct{ text, impedance string }{
		{"10 kohm", "10000 [A -> V]"}, {"100 nF", "1/(1e-7 s) [A -> V]"}, {"2 mH", "0.002 s [A -> V]"},
		{"640 N*s/m", "1/640 [N -> m/s]"}, {"50 kN/m", "s/50000 [N -> m/s]"}, {"50 N/mm", "s/50000 [N -> m/s]"}, {"0.2 t", "1/(200 s) [N -> m/s]"},
		{"10 lb", "1/(4.5359237 s) [N -> m/s]"},
		{"0.2 bar*s/L", "2e7 [m^3/s -> Pa]"}, {"(0.2 bar/(L/s))", "2e7 [m^3/s -> Pa]"}, {"0.3 L/bar", "1/(3e-9 s) [m^3/s -> Pa]"}, {"4e6 kg/m^4", "4e6 s [m^3/s -> Pa]"},
		{"4e6 Pa*s^2/m^3", "4e6 s [m^3/s -> Pa]"},
		{"0.12 degC/W", "0.12 [W -> K]"}, {"18 kJ/K", "1/(18000 s) [W -> K]"}, {"5 Wh/K", "1/(18000 s) [W -> K]"},
		{"0", "0"},
	} {
		z, err := Parse(c.text)
		if err != nil {
			t.Errorf("%s: %v", c.text, err)
			continue
		}
		if want := tf.MustParse(c.impedance); !z.Impedance().Equal(want) {
			t.Errorf("%s: impedance %v, want %v", c.text, z.Impedance(), want)
		}
		y, err := z.Admittance()
		if c.text == "0" {
			if !errors.Is(err, ErrDivisionByZero) {
				t.Errorf("admittance of 0: %v", err)
			}
			continue
		}
		if want := tf.Must(tf.Inverse(tf.MustParse(c.impedance))); err != nil || !y.Equal(want) {
			t.Errorf("%s: admittance %v, %v, want %v", c.text, y, err, want)
		}
	}
}

// The constructors and the dimension name the same elements, and each refuses
// all the others' units.
func TestConstructors(t *testing.T) {
	constructors := []func(units.Quantity) (OnePort, error){Resistor, Capacitor, Inductor, Damper, Mass, Spring,
		Restriction, Accumulator, FluidColumn, ThermalResistance, HeatCapacity}
	texts := []string{"3 ohm", "3 F", "3 H", "3 N*s/m", "3 kg", "3 N/m", "3 Pa*s/m^3", "3 m^3/Pa", "3 kg/m^4", "3 K/W", "3 J/K"}
	for i, make := range constructors {
		for j, text := range texts {
			q := units.MustParseQuantity(text)
			z, err := make(q)
			var mismatch *units.MismatchError
			if i != j {
				if !errors.As(err, &mismatch) || !mismatch.Found.Equal(q.Unit()) || mismatch.What != kinds[i].name {
					t.Errorf("constructor %d of %s: %v", i, text, err)
				}
				continue
			}
			if err != nil || !z.Impedance().Equal(MustParse(text).Impedance()) {
				t.Errorf("constructor %d of %s: %v, %v", i, text, z, err)
			}
			for _, bad := range []units.Quantity{q.Neg(), units.NewQuantity(nil, q.Unit())} {
				var value *ValueError
				if _, err := make(bad); !errors.As(err, &value) {
					t.Errorf("%v: %v, want a *ValueError", bad, err)
				}
			}
		}
	}
}

func TestOneDegreeForEachStore(t *testing.T) {
	for _, c := range []struct {
		text         string
		above, below int
		like         string // an equal impedance
	}{
		{"3 ohm + 5 ohm", 0, 0, "8 ohm"},
		{"3 ohm || 6 ohm", 0, 0, "2 ohm"},
		{"3 F || 5 F", 0, 1, "8 F"},
		{"3 F + 6 F", 0, 1, "2 F"}, // as one, not with a factor s
		{"3 H || 6 H", 1, 0, "2 H"},
		{"10 kN/m || 15 kN/m || 10 kN/m || 15 kN/m", 1, 0, "50 kN/m"},
		{"10 N/m + 15 N/m", 1, 0, "6 N/m"},
		{"3 N*s/m + 6 N*s/m", 0, 0, "2 N*s/m"}, // dampers in a row: softer
		{"3 kg || 5 kg", 0, 1, "8 kg"},
		{"(2 ohm || 3 F) + (5 ohm || 7 F)", 1, 2, "(5 ohm || 7 F) + (3 F || 2 ohm)"},
		{"2 ohm || (3 H + (4 F || 5 ohm))", 2, 2, "((5 ohm || 4 F) + 3 H) || 2 ohm"},
		{"0 + 3 ohm", 0, 0, "3 ohm"},
		{"0 || 3 ohm", -1, 0, "0 || 4 F"},
	} {
		z := MustParse(c.text)
		g := z.Impedance()
		if g.Numerator().Degree() != c.above || g.Denominator().Degree() != c.below {
			t.Errorf("%s: %v, want degrees %d and %d", c.text, g, c.above, c.below)
		}
		if like := MustParse(c.like).Impedance(); !g.Equal(like) {
			t.Errorf("%s: %v, want that of %s, %v", c.text, g, c.like, like)
		}
		if again := MustParse(z.String()); !again.Impedance().Equal(g) || again.String() != z.String() {
			t.Errorf("%s: comes back from %q as %q", c.text, z.String(), again.String())
		}
	}
}

func TestRefusals(t *testing.T) {
	must := MustParse
	for _, c := range []struct {
		name string
		call func() error
		want string
	}{
		{"domains", func() error { _, err := Series(must("3 ohm"), OnePort{}, must("3 kg")); return err },
			"impedance: Series: argument 2 is mechanical (translation) (across in m/s, through in N), want electrical (across in V, through in A)"},
		{"domains of a ladder", func() error { _, err := NewLadder(SeriesArm(must("3 K/W")), ShuntArm(must("3 F"))); return err },
			"impedance: NewLadder: argument 1 is electrical (across in V, through in A), want thermal (across in K, through in W)"},
		{"domain of a mount", func() error { _, err := Transmissibility(must("3 ohm"), must("3 F")); return err },
			"impedance: Transmissibility: argument 0 is electrical (across in V, through in A), want mechanical (translation) (across in m/s, through in N)"},
		{"two masses in a row", func() error { _, err := Series(must("3 kg"), must("2 N/m"), must("4 kg || 2 N/m")); return err },
			`impedance: Series: argument 2, 4 kg || 2 N/m, has an end at the ground, as one before it has; want one such element at most in series`},
		{"mass in the line", func() error { _, err := Divider(must("3 kg"), must("2 N/m")); return err },
			`impedance: Divider: argument 0, 3 kg, has an end at the ground, so that nothing passes through it to the next; want it as the shunt element`},
		{"body in the line", func() error { _, err := Divider(must("3 J/K"), must("2 K/W")); return err },
			`impedance: Divider: argument 0, 3 J/K, has an end at the reference temperature, so that nothing passes through it to the next; want it as the shunt element`},
		{"nothing", func() error { _, err := Parallel(); return err }, "impedance: Parallel: no elements found, want one at least"},
		{"no element", func() error { _, err := Element(units.MustParseQuantity("3 m")); return err },
			"impedance: m is the unit of no element: want ohm for a resistor, F for a capacitor, H for an inductor, N*s/m for a damper, kg for a mass, N/m for a spring, " +
				"Pa*s/m^3 for a restriction, m^3/Pa for an accumulator, kg/m^4 for a fluid column, K/W for a thermal resistance, J/K for a heat capacity"},
		{"shorted", func() error { _, err := Divider(OnePort{}, OnePort{}); return err },
			"impedance: AcrossRatio: the input is shorted, or nothing can flow into it: division by zero"},
	} {
		if err := c.call(); err == nil || err.Error() != c.want {
			t.Errorf("%s:\n got %v\nwant %s", c.name, err, c.want)
		}
	}
	for _, c := range []struct {
		text   string
		offset int
	}{
		{"", 0}, {"3", 0}, {"3 m", 0}, {"3 ohm + 4 kg", 0}, {"3 ohm + 4 F || 5 F", 12}, {"(3 ohm", 6}, {"3 ohm)", 5}, {"3 ohm +", 7},
		{"3 ohm + -4 ohm", 8}, {"3 ohm + 2 wat", 10}, {"3 ohm | 4 ohm", 6}, {"0 ohm", 0}, {strings.Repeat("(", 101) + "3 ohm", 100},
		{strings.Repeat("1", MaxText+1), MaxText},
	} {
		_, err := Parse(c.text)
		var syntax *SyntaxError
		if !errors.As(err, &syntax) || syntax.Offset != c.offset {
			t.Errorf("Parse(%.20q): %v, want a *SyntaxError at %d", c.text, err, c.offset)
		}
	}
}

func TestLimits(t *testing.T) {
	z, wire := MustParse("3 ohm"), OnePort{}
	var err, wireErr error
	for range 40 { // doubles every time
		if err == nil {
			z, err = Series(z, z)
		}
		if wireErr == nil {
			wire, wireErr = Parallel(wire, wire)
		}
	}
	if !errors.Is(err, ErrLimit) || !errors.Is(wireErr, ErrLimit) {
		t.Errorf("doubling: %v, %v, want ErrLimit", err, wireErr)
	}
	// The bound itself passes, one more does not, alone and in two halves.
	parts := make([]OnePort, MaxElements)
	for i := range parts {
		parts[i] = MustParse("3 ohm")
	}
	half := tf.Must(Series(parts[:MaxElements/2]...))
	for _, c := range []struct {
		parts []OnePort
		fine  bool
	}{{parts, true}, {append(parts, parts[0]), false}, {[]OnePort{half, half}, true}, {[]OnePort{half, half, parts[0]}, false}} {
		if _, err := Parallel(c.parts...); (err == nil) != c.fine || err != nil && !errors.Is(err, ErrLimit) {
			t.Errorf("%d parts: %v, want fine %v", len(c.parts), err, c.fine)
		}
	}
	big, arms := MustParse("3e4000 F"), []Arm{}
	for range MaxElements {
		arms = append(arms, ShuntArm(big))
	}
	if _, err := NewLadder(arms...); !errors.Is(err, ErrLimit) {
		t.Errorf("long values: %v, want ErrLimit", err)
	}
	if _, err := NewLadder(append(arms, arms...)...); !errors.Is(err, ErrLimit) {
		t.Errorf("long ladder: %v, want ErrLimit", err)
	}
}

func TestEmptyLadder(t *testing.T) {
	var l Ladder
	one := tf.MustParse("1")
	if g, err := l.AcrossRatio(); err != nil || !g.Equal(one) {
		t.Errorf("AcrossRatio %v, %v", g, err)
	}
	if g, err := l.ThroughRatio(); err != nil || !g.Equal(one) {
		t.Errorf("ThroughRatio %v, %v", g, err)
	}
	if _, err := l.TransferImpedance(); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("TransferImpedance: %v", err)
	}
	if _, err := l.InputImpedance(); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("InputImpedance: %v", err)
	}
}

// Element values for 1 ohm and 1 rad/s: L. Weinberg, Network Analysis and
// Synthesis, 1962, and A. I. Zverev, Handbook of Filter Synthesis, 1967, tables
// of maximally flat filters (values and denominators from memory; the sines from
// which the doubly terminated ones come are recomputed here).
func TestButterworthLadders(t *testing.T) {
	ladder := func(texts ...string) tf.Continuous {
		var arms []Arm
		for i, text := range texts {
			if z := MustParse(text); i%2 == 0 {
				arms = append(arms, SeriesArm(z))
			} else {
				arms = append(arms, ShuntArm(z))
			}
		}
		return tf.Must(tf.Must(NewLadder(arms...)).AcrossRatio())
	}
	// Doubly terminated, order 3: 1, 2, 1 between 1 ohm and 1 ohm; half of the
	// voltage is lost in the source.
	if g, want := ladder("1 ohm", "1 F", "2 H", "1 F || 1 ohm"), tf.MustParse("0.5/(s^3 + 2 s^2 + 2 s + 1) [V -> V]"); !g.Equal(want) {
		t.Errorf("doubly terminated: %v, want %v", g, want)
	}
	// The dual, from an inductor on.
	if g, want := ladder("1 ohm + 1 H", "2 F", "1 H", "1 ohm"), tf.MustParse("0.5/(s^3 + 2 s^2 + 2 s + 1) [V -> V]"); !g.Equal(want) {
		t.Errorf("dual: %v, want %v", g, want)
	}
	// Singly terminated, order 3: 3/2, 4/3, 1/2 from a source of voltage into 1 ohm.
	if g, want := ladder("3/2 H", "4/3 F", "1/2 H", "1 ohm"), tf.MustParse("1/(s^3 + 2 s^2 + 2 s + 1) [V -> V]"); !g.Equal(want) {
		t.Errorf("singly terminated: %v, want %v", g, want)
	}
	// Order 5: 0.6180, 1.6180, 2, 1.6180, 0.6180; s^5 + 3.2361 s^4 + 5.2361 s^3 + …
	g := ladder("1 ohm", "0.6180 F", "1.6180 H", "2.0000 F", "1.6180 H", "0.6180 F || 1 ohm")
	monic := g.Denominator().Monic()
	for i, want := range []float64{1, 3.2361, 5.2361, 5.2361, 3.2361, 1} {
		if got, _ := monic.Coefficient(i).Float64(); math.Abs(got-want) > 1e-3 { // four digits in the values
			t.Errorf("order 5: coefficient %d is %v, want %v", i, got, want)
		}
	}
	for k := 1; k <= 5; k++ {
		if got, want := 2*math.Sin(float64(2*k-1)*math.Pi/10), []float64{0.6180, 1.6180, 2, 1.6180, 0.6180}[k-1]; math.Abs(got-want) > 5e-5 {
			t.Errorf("element %d of the table: %v, by the formula %v", k, want, got)
		}
	}
}

// J. P. Den Hartog, Mechanical Vibrations, 4th edition 1956, section 3.3: the
// amplitude of a main mass with a damped dynamic absorber, over its static
// deflection under the same force.
func TestDynamicAbsorber(t *testing.T) {
	z := MustParse("200 kg || 50 kN/m || (10 kg + (2 kN/m || 30 N*s/m))").Impedance()
	const bigM, bigK, m, k, c = 200.0, 50e3, 10.0, 2e3, 30.0
	omega := math.Sqrt(bigK / bigM)
	for _, g := range []float64{0.3, 0.8, 0.9, 1, 1.1, 2.5} { // forced over natural frequency
		w := g * omega
		v, err := z.At(complex(0, w))
		if err != nil {
			t.Fatal(err)
		}
		got := cmplx.Abs(v) / w * bigK
		mu, f, zeta := m/bigM, math.Sqrt(k/m)/omega, c/(2*m*omega)
		sq := func(x float64) float64 { return x * x }
		want := math.Sqrt((sq(2*zeta*g) + sq(g*g-f*f)) /
			(sq(2*zeta*g)*sq(g*g-1+mu*g*g) + sq(mu*f*f*g*g-(g*g-1)*(g*g-f*f))))
		if math.Abs(got/want-1) > 1e-12 {
			t.Errorf("at %v: %v, want %v", g, got, want)
		}
	}
}

// The figures of the weighing bench: floor to pan.
func TestWeighingBench(t *testing.T) {
	l := tf.Must(NewLadder(SeriesArm(MustParse("50 kN/m || 640 N*s/m")), ShuntArm(MustParse("200 kg")),
		SeriesArm(MustParse("75 kN/m || 65 N*s/m")), ShuntArm(MustParse("6 kg"))))
	g := tf.Must(tf.Must(l.AcrossRatio()).WithUnits(metre, metre))
	if g.Denominator().Degree() != 4 || g.Numerator().Degree() != 2 {
		t.Fatalf("%v: want degrees 2 and 4", g)
	}
	// The same with the balance as a load of the bench: from the floor to the bench.
	bench := tf.Must(Transmissibility(MustParse("50 kN/m || 640 N*s/m"), MustParse("200 kg || (6 kg + (75 kN/m || 65 N*s/m))")))
	pan := tf.Must(Transmissibility(MustParse("75 kN/m || 65 N*s/m"), MustParse("6 kg")))
	if h := tf.Must(tf.Series(bench, pan)); !h.Equivalent(g) {
		t.Errorf("bench and pan one after the other: %v, want %v", h, g)
	}
	axis := g.FrequencyFunction()
	peak, at := 0.0, 0.0
	for hz := 2.2; hz < 2.7; hz += 0.001 {
		if v, err := axis.Magnitude(2 * math.Pi * hz); err != nil {
			t.Fatal(err)
		} else if v > peak {
			peak, at = v, hz
		}
	}
	if math.Abs(peak-5.24) > 0.005 || math.Abs(at-2.46) > 0.005 {
		t.Errorf("peak %v at %v Hz, want 5.24 at 2.46 Hz", peak, at)
	}
	for _, c := range []struct{ hz, decibels float64 }{{3.54, 0}, {10, -18.4}, {50, -56.0}} {
		if v, err := axis.Decibels(2 * math.Pi * c.hz); err != nil || math.Abs(v-c.decibels) > 0.05 {
			t.Errorf("at %v Hz: %v dB, %v, want %v", c.hz, v, err, c.decibels)
		}
	}
}

// The figures of the kiln.
func TestKiln(t *testing.T) {
	l := tf.Must(NewLadder(ShuntArm(MustParse("18 kJ/K")), SeriesArm(MustParse("0.0075 K/W")), ShuntArm(MustParse("60 kJ/K || 0.12 K/W"))))
	zone := tf.Must(l.InputImpedance())
	poles := tf.Must(zone.Poles())
	for i, want := range []float64{103.5, 9392} {
		if got := -1 / real(poles[i].Value); len(poles) != 2 || math.Abs(got/want-1) > 5e-4 {
			t.Errorf("time constant %v, want %v", got, want)
		}
	}
	for _, c := range []struct {
		g    tf.Continuous
		want string
	}{{zone, "0.1275 K/W"}, {tf.Must(l.TransferImpedance()), "0.12 K/W"}} {
		if gain := tf.Must(c.g.StaticGain()); !gain.Equal(units.MustParseQuantity(c.want)) {
			t.Errorf("gain %v, want %s", gain, c.want)
		}
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"10 kohm", "50 kN/m || 640 N*s/m", "2 ohm + (3 mH || 10 uF)", "0", "(((3 m^3/(Pa))))", "1e+3 ohm+2 ohm", "0 || 0"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		z, err := Parse(text)
		var syntax *SyntaxError
		if err != nil {
			if !errors.As(err, &syntax) {
				t.Fatalf("%q: %v is no *SyntaxError", text, err)
			}
			return
		}
		again, err := Parse(z.String())
		if errors.Is(err, ErrLimit) {
			return // numbers written out are longer
		}
		if err != nil || !again.Impedance().Equal(z.Impedance()) {
			t.Fatalf("%q: %q comes back as %v, %v", text, z.String(), again, err)
		}
	})
}

func BenchmarkLadder(b *testing.B) {
	r := &random{state: 1}
	var arms []Arm
	for range 300 {
		arms = append(arms, SeriesArm(r.element(Electrical, false)), ShuntArm(r.element(Electrical, false)))
	}
	for b.Loop() {
		if _, err := tf.Must(NewLadder(arms...)).AcrossRatio(); err != nil {
			b.Fatal(err)
		}
	}
}
