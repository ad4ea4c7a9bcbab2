package lti_test

import (
	"fmt"
	"strconv"
	"testing"
	"time"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// lag is k/(T s + 1) with numbers that differ from loop to loop.
func lag(k, i int64) tf.Continuous {
	return tf.Must(tf.New(poly.FromInts(k), poly.FromInts(10, 7+3*i)))
}

func pi(i int64) tf.Continuous {
	return tf.Must(tf.New(poly.FromInts(4, 9+i), poly.FromInts(0, 9+i)))
}

// chainedLoops records n loops one after the other.
func chainedLoops(n int) *lti.BlockDiagram[tf.Continuous] {
	d := lti.NewBlockDiagram()
	d.Input("y0", "1")
	for i := 1; i <= n; i++ {
		k := strconv.Itoa(i)
		for _, name := range []string{"e", "u", "y", "m"} {
			d.Signal(name+k, "1")
		}
		d.Sum("e"+k, lti.Plus("y"+strconv.Itoa(i-1)), lti.Minus("m"+k))
		d.Block("controller"+k, pi(int64(i)), "e"+k, "u"+k)
		d.Block("plant"+k, lag(8, int64(i)), "u"+k, "y"+k)
		d.Block("sensor"+k, lag(10, 1), "y"+k, "m"+k)
	}
	return d
}

// nestedLoops records n loops, each inside the one before it, from x1 to y1.
func nestedLoops(n int) *lti.BlockDiagram[tf.Continuous] {
	d := lti.NewBlockDiagram()
	d.Input("u0", "1")
	for i := 1; i <= n; i++ {
		k := strconv.Itoa(i)
		for _, name := range []string{"e", "u", "y", "m"} {
			d.Signal(name+k, "1")
		}
		d.Sum("e"+k, lti.Plus("u"+strconv.Itoa(i-1)), lti.Minus("m"+k))
		d.Block("controller"+k, pi(int64(i)), "e"+k, "u"+k)
		inner := "y" + strconv.Itoa(i+1)
		if i == n {
			inner = "u" + k
		}
		d.Block("plant"+k, lag(8, int64(i)), inner, "y"+k)
		d.Block("sensor"+k, lag(10, 1), "y"+k, "m"+k)
	}
	return d
}

// All loops of the chain and of the nest resolve, and agree with Feedback loop
// by loop.
func TestManyLoops(t *testing.T) {
	const n = 30
	start := time.Now()
	chain := tf.Must(tf.Must(chainedLoops(n).Build()).TransferFunction("y0", "y"+strconv.Itoa(n)))
	nest := tf.Must(tf.Must(nestedLoops(n).Build()).TransferFunction("u0", "y1"))
	t.Logf("%d chained and %d nested loops in %v", n, n, time.Since(start))
	wantChain, wantNest := tf.MustParse("1"), tf.MustParse("1")
	for i := int64(1); i <= n; i++ {
		forward := tf.Must(tf.Series(pi(i), lag(8, i)))
		wantChain = tf.Must(tf.Series(wantChain, tf.Must(tf.Feedback(forward, lag(10, 1)))))
	}
	for i := int64(n); i >= 1; i-- {
		wantNest = tf.Must(tf.Feedback(tf.Must(tf.Series(pi(i), wantNest, lag(8, i))), lag(10, 1)))
	}
	for _, c := range []struct {
		name      string
		got, want tf.Continuous
	}{{"chain", chain, wantChain}, {"nest", nest, wantNest}} {
		// Neither cancels, so that the two are the same fraction.
		if !tf.Must(tf.New(c.got.Numerator(), c.got.Denominator())).Equal(c.want) || c.got.Denominator().Degree() != 3*n {
			t.Errorf("%s: the diagram and Feedback differ, degrees %d and %d", c.name, c.got.Denominator().Degree(), c.want.Denominator().Degree())
		}
	}
}

func BenchmarkDiagram(b *testing.B) {
	for _, topology := range []struct {
		name     string
		record   func(int) *lti.BlockDiagram[tf.Continuous]
		from, to func(n int) string
	}{
		{"chained", chainedLoops, func(int) string { return "y0" }, func(n int) string { return "y" + strconv.Itoa(n) }},
		{"nested", nestedLoops, func(int) string { return "u0" }, func(int) string { return "y1" }},
	} {
		for _, n := range []int{5, 10, 20, 30} {
			b.Run(fmt.Sprintf("%s/%d", topology.name, n), func(b *testing.B) {
				for b.Loop() {
					diagram, err := topology.record(n).Build()
					if err != nil {
						b.Fatal(err)
					}
					if _, err = diagram.TransferFunction(topology.from(n), topology.to(n)); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
