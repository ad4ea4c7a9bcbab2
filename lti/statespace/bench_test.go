package statespace

import (
	"fmt"
	"math/big"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// chain is a chain of n/2 masses between springs and dampers, as first-order
// equations: a force on the first moves the last.
func chain(n int) Continuous {
	half := n / 2
	states := make([]units.Signal, 0, n)
	for _, unit := range []string{"m", "m/s"} {
		for i := range half {
			states = append(states, units.Signal{Name: fmt.Sprintf("mass%d in %s", i+1, unit), Unit: units.MustParse(unit)})
		}
	}
	m := Matrices{State: zeros(n, n), Input: zeros(n, 1), Output: zeros(1, n)}
	for i := range half {
		m.State[i][half+i].SetInt64(1)
		mass := big.NewRat(7, 1)
		couple := func(j int, k, c int64) { // to another mass or the ground
			m.State[half+i][i].Sub(m.State[half+i][i], new(big.Rat).Quo(big.NewRat(k, 1), mass))
			m.State[half+i][half+i].Sub(m.State[half+i][half+i], new(big.Rat).Quo(big.NewRat(c, 1), mass))
			if j >= 0 {
				m.State[half+i][j].Quo(big.NewRat(k, 1), mass)
				m.State[half+i][half+j].Quo(big.NewRat(c, 1), mass)
			}
		}
		couple(i-1, 1000+int64(i), 15)
		if i+1 < half {
			couple(i+1, 1001+int64(i), 15)
		}
	}
	m.Input[half][0].SetFrac64(1, 7)
	m.Output[0][half-1].SetInt64(1)
	return tf.Must(New(states, signals("N", "force"), signals("m", "last"), m))
}

func BenchmarkTransferFunction(b *testing.B) {
	for _, n := range []int{4, 10, 20, 40, 80} {
		b.Run(fmt.Sprintf("states=%d", n), func(b *testing.B) {
			c := chain(n)
			for b.Loop() {
				tf.Must(c.TransferFunction("force", "last"))
			}
		})
	}
}

// BenchmarkLeverrier is the same by the recurrence of Faddeev and Leverrier.
func BenchmarkLeverrier(b *testing.B) {
	for _, n := range []int{4, 10, 20} {
		b.Run(fmt.Sprintf("states=%d", n), func(b *testing.B) {
			c := chain(n)
			for b.Loop() {
				leverrier(c.model, 0, 0)
			}
		})
	}
}

func BenchmarkMinimalRealizationFull(b *testing.B) {
	for _, n := range []int{10, 20, 40} {
		b.Run(fmt.Sprintf("states=%d", n), func(b *testing.B) {
			c := full(n, 0)
			for b.Loop() {
				if _, _, err := c.MinimalRealization(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkMinimalRealization(b *testing.B) {
	for _, n := range []int{4, 10, 20, 40} {
		b.Run(fmt.Sprintf("states=%d", n), func(b *testing.B) {
			c := chain(n)
			for b.Loop() {
				if _, _, err := c.MinimalRealization(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
