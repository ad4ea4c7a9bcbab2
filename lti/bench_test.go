package lti_test

import (
	"fmt"
	"testing"

	"github.com/qofs/qofs/lti"
)

// chain is a row of n pools that flow into each other, each seen by the one
// before it: n first-order equations that are coupled both ways.
func chain(n int) *lti.Equations {
	e := lti.NewEquations()
	e.Signal("u", "m^3/s")
	for i := range n {
		e.Signal(fmt.Sprintf("x%d", i), "mm")
		e.Constant(fmt.Sprintf("a%d", i), fmt.Sprintf("%d m^2", 5600+37*i))
		e.Constant(fmt.Sprintf("k%d", i), fmt.Sprintf("2.%02d m^2/s", i))
	}
	for i := range n {
		text := fmt.Sprintf("a%d x%d' = ", i, i)
		if i == 0 {
			text += "u"
		} else {
			text += fmt.Sprintf("k%d (x%d - x%d)", i-1, i-1, i)
		}
		if i == n-1 {
			text += fmt.Sprintf(" - k%d x%d", i, i)
		} else {
			text += fmt.Sprintf(" - k%d (x%d - x%d)", i, i, i+1)
		}
		e.Equation(text)
	}
	return e
}

func BenchmarkChain(b *testing.B) {
	for _, n := range []int{10, 40, 100} {
		s, err := chain(n).Build()
		if err != nil {
			b.Fatal(err)
		}
		last := fmt.Sprintf("x%d", n-1)
		var values []lti.InitialValue
		for i := range n {
			values = append(values, lti.Initially(fmt.Sprintf("x%d", i), fmt.Sprintf("%d mm", 1+i%7)))
		}
		b.Run(fmt.Sprintf("Build/%d", n), func(b *testing.B) {
			for b.Loop() {
				if _, err := chain(n).Build(); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("TransferFunction/%d", n), func(b *testing.B) {
			for b.Loop() {
				if _, err := s.TransferFunction("u", last); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("InitialState/%d", n), func(b *testing.B) {
			for b.Loop() {
				if _, err := s.InitialState([]string{"u"}, values...); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("StateSpace/%d", n), func(b *testing.B) {
			for b.Loop() {
				if _, err := s.StateSpace([]string{"u"}, []string{last}); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("FreeResponse/%d", n), func(b *testing.B) {
			state, err := s.InitialState([]string{"u"}, values...)
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if _, err := state.FreeResponse("x0"); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
