package statespace

import (
	"math/big"
	"testing"

	"github.com/qofs/qofs/tf"
)

// TestHandbook takes worked examples whose data are from memory; the results were
// recomputed by hand.
func TestHandbook(t *testing.T) {
	// Ogata, Modern Control Engineering, step response of a model with two inputs
	// and two outputs: the four transfer functions over s² + s + 6.5.
	c := tf.Must(New(signals("1", "x", "y"), signals("1", "first", "second"), signals("1", "x", "y"), Matrices{
		State:  [][]*big.Rat{{big.NewRat(-1, 1), big.NewRat(-1, 1)}, {big.NewRat(13, 2), nil}},
		Input:  rats([]int64{1, 1}, []int64{1, 0}),
		Output: rats([]int64{1, 0}, []int64{0, 1}),
	}))
	all := tf.Must(c.TransferFunctions([]string{"first", "second"}, []string{"x", "y"}))
	for o, row := range [][]string{{"s - 1", "s"}, {"s + 7.5", "6.5"}} {
		for i, num := range row {
			if want := tf.MustParse("(" + num + ")/(s^2 + s + 6.5)"); !all[o][i].Equivalent(want) {
				t.Errorf("from %d to %d: %v, want %v", i, o, all[o][i], want)
			}
		}
	}
	// Chen, Linear System Theory and Design: of the companion form of
	// (s + 1)/((s + 1)(s + 2)) every state is controllable and one is not observable.
	g := tf.MustParse("(s + 1)/((s + 1) (s + 2)) [u: V -> y: V]")
	form := tf.Must(ControllableForm(g, "x"))
	if reach, see := tf.Must(form.ControllabilityRank()), tf.Must(form.ObservabilityRank()); reach != 2 || see != 1 {
		t.Errorf("ranks %d and %d, want 2 and 1", reach, see)
	}
	form = tf.Must(ObservableForm(g, "x"))
	if reach, see := tf.Must(form.ControllabilityRank()), tf.Must(form.ObservabilityRank()); reach != 1 || see != 2 {
		t.Errorf("ranks %d and %d, want 1 and 2", reach, see)
	}
}
