package tf_test

import (
	"fmt"
	"testing"

	"github.com/qofs/qofs/internal/peerinput"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// BenchmarkFeedback closes p0/p1 around p2/p3.
func BenchmarkFeedback(b *testing.B) {
	for _, degree := range peerinput.Degrees {
		for _, bits := range peerinput.Sizes {
			b.Run(fmt.Sprintf("degree=%d/bits=%d", degree, bits), func(b *testing.B) {
				b.ReportAllocs()
				p := func(j int) poly.Poly { return poly.FromRats(peerinput.Rats(degree, bits, j)...) }
				forward, back := tf.Must(tf.New(p(0), p(1))), tf.Must(tf.New(p(2), p(3)))
				for b.Loop() {
					if _, err := tf.Feedback(forward, back); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// BenchmarkChain composes many blocks of order 2 one after another.
func BenchmarkChain(b *testing.B) {
	for _, n := range []int{10, 100, 1000} {
		b.Run(fmt.Sprintf("blocks=%d", n), func(b *testing.B) {
			blocks := make([]tf.Continuous, n)
			for i := range blocks {
				p := func(j int) poly.Poly { return poly.FromRats(peerinput.Rats(2, 8, 2*i+j)...) }
				blocks[i] = tf.Must(tf.New(p(0), p(1)))
			}
			for b.Loop() {
				if _, err := tf.Series(blocks[0], blocks[1:]...); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
