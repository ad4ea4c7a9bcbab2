package impedance

import (
	"math/big"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

var one = big.NewRat(1, 1)

// All functions of two short ladders, by hand: a divider of currents and of
// voltages (common practice), and a pipe into a tank.
func TestLadderFunctions(t *testing.T) {
	type call = func(Ladder) (tf.Continuous, error)
	for _, c := range []struct {
		name string
		arms []Arm
		call call
		want string
	}{
		// 6 ohm to ground, then 3 ohm in the line: current divides as 6/(6 + 3).
		{"through", []Arm{ShuntArm(MustParse("6 ohm")), SeriesArm(MustParse("3 ohm"))}, Ladder.ThroughRatio, "2/3 [A -> A]"},
		{"across, open", []Arm{ShuntArm(MustParse("6 ohm")), SeriesArm(MustParse("3 ohm"))}, Ladder.AcrossRatio, "1 [V -> V]"},
		{"admittance", []Arm{ShuntArm(MustParse("6 ohm")), SeriesArm(MustParse("3 ohm"))}, Ladder.TransferAdmittance, "1/3 [V -> A]"},
		{"impedance", []Arm{ShuntArm(MustParse("6 ohm")), SeriesArm(MustParse("3 ohm"))}, Ladder.TransferImpedance, "6 [A -> V]"},
		{"input", []Arm{SeriesArm(MustParse("3 ohm")), ShuntArm(MustParse("6 ohm"))}, Ladder.InputImpedance, "9 [A -> V]"},
		{"across", []Arm{SeriesArm(MustParse("3 ohm")), ShuntArm(MustParse("6 ohm"))}, Ladder.AcrossRatio, "2/3 [V -> V]"},
		// Fluid column 2 and resistance 3 into a tank of 1/4: 1/(1/4 (2 s + 3) s + 1).
		{"pipe", []Arm{SeriesArm(MustParse("3 Pa*s/m^3 + 2 kg/m^4")), ShuntArm(MustParse("0.25 m^3/Pa"))}, Ladder.AcrossRatio,
			"1/(0.5 s^2 + 0.75 s + 1) [Pa -> Pa]"},
		{"flow into the pipe", []Arm{SeriesArm(MustParse("3 Pa*s/m^3 + 2 kg/m^4"))}, Ladder.TransferAdmittance, "1/(2 s + 3) [Pa -> m^3/s]"},
		// A force at the top of 2 kg on a spring of 8 N/m that stands on a held floor.
		{"force on the floor", []Arm{ShuntArm(MustParse("2 kg")), SeriesArm(MustParse("8 N/m"))}, Ladder.ThroughRatio, "8/(2 s^2 + 8) [N -> N]"},
		{"motion of the top", []Arm{SeriesArm(MustParse("8 N/m")), ShuntArm(MustParse("2 kg"))}, Ladder.AcrossRatio, "8/(2 s^2 + 8) [m/s -> m/s]"},
	} {
		g, err := c.call(tf.Must(NewLadder(c.arms...)))
		if want := tf.MustParse(c.want); err != nil || !g.Equivalent(want) {
			t.Errorf("%s: %v, %v, want %v", c.name, g, err, want)
		}
	}
}

// Reciprocity (Rayleigh 1873): voltages forth divide as currents back.
func TestReciprocity(t *testing.T) {
	r := &random{state: 9}
	for i := range 40 {
		arms := append(r.arms(Domain(1+i%4), 1+int(r.next()%6)), SeriesArm(r.element(Domain(1+i%4), false)))
		back := make([]Arm, len(arms))
		for k, a := range arms {
			back[len(arms)-1-k] = a
		}
		l, m := tf.Must(NewLadder(arms...)), tf.Must(NewLadder(back...))
		g, h := tf.Must(l.AcrossRatio()), tf.Must(m.ThroughRatio())
		if !g.Numerator().Equal(h.Numerator()) || !g.Denominator().Equal(h.Denominator()) {
			t.Fatalf("%v: %v forth, %v back", l, g, h)
		}
		y, z := tf.Must(l.TransferAdmittance()), tf.Must(m.TransferAdmittance())
		if !y.Equal(z) {
			t.Fatalf("%v: %v forth, %v back", l, y, z)
		}
	}
}

// The longest ladder of ordinary values that the limits let pass.
func TestLongLadder(t *testing.T) {
	if testing.Short() {
		t.Skip("seconds")
	}
	r := &random{state: 4}
	var arms []Arm
	for range MaxElements / 4 {
		arms = append(arms, SeriesArm(r.element(Electrical, false)), ShuntArm(r.element(Electrical, false)))
	}
	l := tf.Must(NewLadder(arms...))
	g := tf.Must(l.AcrossRatio())
	stores := 0
	for _, a := range arms {
		stores += a.z.port().size.order
	}
	if d := g.Denominator().Degree(); d > stores || d < stores/2 {
		t.Errorf("degree %d with %d stores", d, stores)
	}
	// At s = 1 the functions are numbers, which the recurrence gives arm by arm.
	v, i := onePoly, onePoly.Sub(onePoly)
	for k := len(arms) - 1; k >= 0; k-- {
		p := arms[k].z.port()
		num, den := tf.Must(p.num.AtRat(one)), tf.Must(p.den.AtRat(one))
		if arms[k].shunt {
			v, i = v.Scale(num), i.Scale(num).Add(v.Scale(den))
		} else {
			v, i = v.Scale(den).Add(i.Scale(num)), i.Scale(den)
		}
	}
	if got, want := tf.Must(l.a.AtRat(one)), v.Coefficient(0); got.Cmp(want) != 0 {
		t.Error("the recurrence gives another number")
	}
}

// a·d − b·c = over² (common practice: reciprocity), the transfer functions turn
// round with the ladder, and a ladder as a load is its input impedance.
func TestLadderLaws(t *testing.T) {
	r := &random{state: 5}
	for range 60 {
		arms := r.arms(Electrical, 1+int(r.next()%8))
		l := tf.Must(NewLadder(arms...))
		if !l.a.Mul(l.d).Sub(l.b.Mul(l.c)).Equal(l.over.Mul(l.over)) {
			t.Fatalf("%v: a d - b c is not over^2", l)
		}
		backwards := make([]Arm, len(arms))
		for i, a := range arms {
			backwards[len(arms)-1-i] = a
		}
		m := tf.Must(NewLadder(backwards...))
		if !l.a.Equal(m.d) || !l.b.Equal(m.b) || !l.c.Equal(m.c) {
			t.Fatalf("%v: does not turn round", l)
		}
		// From the far end on by Series and Parallel.
		load, some := OnePort{}, false
		for _, a := range m.arms {
			switch {
			case a.shunt && some:
				load = tf.Must(Parallel(load, a.z))
			case a.shunt:
				load, some = a.z, true
			case some:
				load = tf.Must(Series(load, a.z))
			}
		}
		in, err := l.InputImpedance()
		if some != (err == nil) || some && !in.Equivalent(load.Impedance()) {
			t.Fatalf("%v: input impedance %v, %v, want %v", l, in, err, load.Impedance())
		}
	}
}

// random is a splitmix64 stream.
type random struct{ state uint64 }

func (r *random) next() uint64 {
	r.state += 0x9e3779b97f4a7c15
	z := r.state
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return z ^ z>>31
}

func (r *random) element(d Domain, shunt bool) OnePort {
	for {
		k := kinds[r.next()%uint64(len(kinds))]
		if k.domain == d && (shunt || !k.grounded) {
			return tf.Must(k.of(units.NewQuantity(big.NewRat(1+int64(r.next()%99), 1+int64(r.next()%9)), k.unit)))
		}
	}
}

func (r *random) arms(d Domain, n int) []Arm {
	arms := make([]Arm, n)
	for i := range arms {
		shunt := r.next()%2 == 0
		z := r.element(d, shunt)
		for r.next()%3 == 0 {
			other := r.element(d, false)
			if r.next()%2 == 0 {
				z = tf.Must(Series(z, other))
			} else {
				z = tf.Must(Parallel(z, other))
			}
		}
		if arms[i] = SeriesArm(z); shunt {
			arms[i] = ShuntArm(z)
		}
	}
	return arms
}
