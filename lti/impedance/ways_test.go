package impedance_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/lti/impedance"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// A filter of random length entered in four ways, as a chain of impedances, as
// differential equations, as matrices and as a block diagram, is one and the same
// transfer function.
func TestFourWaysIn(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	pick := func(unit string) string { return fmt.Sprintf("%d.%d %s", 1+r.IntN(99), r.IntN(10), unit) }
	for range 40 {
		n := 1 + r.IntN(5)
		var arms []impedance.Arm
		e := lti.NewEquations()
		d := lti.NewBlockDiagram()
		e.Signal("v0", "V")
		d.Input("v0", "V")
		for k := 1; k <= n; k++ {
			// A resistor and a coil carry i_k from v_(k−1) to v_k, where a capacitor
			// and perhaps a resistor lead to the ground.
			resistance, inductance, capacitance, leak := pick("ohm"), pick("mH"), pick("uF"), pick("kohm")
			coil := r.IntN(3) > 0
			leaks := r.IntN(2) == 0
			series, shunt := impedance.MustParse(resistance), impedance.MustParse(capacitance)
			if coil {
				series = tf.Must(impedance.Series(series, impedance.MustParse(inductance)))
			}
			if leaks {
				shunt = tf.Must(impedance.Parallel(shunt, impedance.MustParse(leak)))
			}
			arms = append(arms, impedance.SeriesArm(series), impedance.ShuntArm(shunt))

			v, i, below, next := fmt.Sprint("v", k), fmt.Sprint("i", k), fmt.Sprint("v", k-1), fmt.Sprint("i", k+1)
			e.Signal(v, "V")
			e.Signal(i, "mA")
			for name, value := range map[string]string{"r": resistance, "l": inductance, "c": capacitance, "g": leak} {
				e.Constant(fmt.Sprint(name, k), value)
			}
			drop := fmt.Sprintf("%s - %s = r%d %s", below, v, k, i)
			if coil {
				drop += fmt.Sprintf(" + l%d %s'", k, i)
			}
			e.Equation(drop)
			store := fmt.Sprintf("%s = c%d %s'", i, k, v)
			if leaks {
				store += fmt.Sprintf(" + %s/g%d", v, k)
			}
			if k < n {
				store += " + " + next
			}
			e.Equation(store)

			// The same as blocks: the difference of voltages drives the current, what
			// is left of it the voltage.
			d.Signal(fmt.Sprint("across", k), "V")
			d.Signal(i, "A")
			d.Signal(fmt.Sprint("left", k), "A")
			d.Signal(v, "V")
			d.Sum(fmt.Sprint("across", k), lti.Plus(below), lti.Minus(v))
			d.Block(fmt.Sprint("series", k), tf.Must(series.Admittance()), fmt.Sprint("across", k), i)
			if k < n {
				d.Sum(fmt.Sprint("left", k), lti.Plus(i), lti.Minus(next))
			} else {
				d.Sum(fmt.Sprint("left", k), lti.Plus(i))
			}
			d.Block(fmt.Sprint("shunt", k), shunt.Impedance(), fmt.Sprint("left", k), v)
		}
		last := fmt.Sprint("v", n)
		chain := tf.Must(tf.Must(impedance.NewLadder(arms...)).AcrossRatio())
		system, err := e.Build()
		if err != nil {
			t.Fatal(err)
		}
		equations := tf.Must(system.TransferFunction("v0", last))
		model := tf.Must(system.StateSpace([]string{"v0"}, []string{last}))
		matrices := tf.Must(model.TransferFunction("v0", last))
		diagram, err := d.Build()
		if err != nil {
			t.Fatal(err)
		}
		blocks := tf.Must(diagram.TransferFunction("v0", last))
		minimal, _, err := model.MinimalRealization()
		if err != nil {
			t.Fatal(err)
		}
		back := tf.Must(tf.Must(statespace.ControllableForm(equations, "x")).TransferFunction("v0", last))
		for name, g := range map[string]tf.Continuous{"equations": equations, "matrices": matrices, "blocks": blocks,
			"minimal": tf.Must(minimal.TransferFunction("v0", last)), "companion form": back} {
			if !g.Equivalent(chain) {
				t.Errorf("by %s: %v, by impedances %v", name, g, chain)
			}
			if !g.Output().Unit.Equal(units.MustParse("V")) {
				t.Errorf("by %s in %v", name, g.Output())
			}
		}
	}
}
