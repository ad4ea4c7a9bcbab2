package lti

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/units"
)

// Smooth models of all sizes and widths, most of whose digits are lost beside a
// constant, raise no false alarm.
func TestNoSlopeDoubtedWithoutReason(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 5000 {
		a, b, w, big := r.NormFloat64()*math.Pow(10, float64(r.IntN(12)-8)), r.NormFloat64(), math.Pow(10, float64(r.IntN(12)-4)), math.Pow(10, float64(r.IntN(16)-4))
		x0 := r.NormFloat64() * math.Pow(10, float64(r.IntN(10)-5))
		k := r.IntN(4)
		f := func(x dual.Number) dual.Number {
			var y dual.Number
			switch k {
			case 0:
				y = dual.Sin(dual.Scale(w, x))
			case 1:
				y = dual.Exp(dual.Scale(-w*w, dual.Mul(x, x)))
			case 2:
				y = dual.Sqrt(dual.Add(dual.Number{Real: 1}, dual.Mul(x, x)))
			default:
				y = dual.Log(dual.Add(dual.Number{Real: 1}, dual.Mul(dual.Scale(w, x), dual.Scale(w, x))))
			}
			return dual.Sub(dual.Add(dual.Number{Real: big * b}, dual.Scale(a, y)), dual.Number{Real: big * b})
		}
		m := Nonlinear{Inputs: []units.Signal{signalOf("u", "1")}, Outputs: []units.Signal{signalOf("y", "1")},
			Equations: func(x, u []dual.Number) ([]dual.Number, []dual.Number) { return nil, []dual.Number{f(u[0])} }}
		if _, err := Linearize(m, At("u", fmt.Sprint(x0))); err != nil {
			t.Fatalf("form %d, %v, %v, %v, %v at %v: %v", k, a, b, w, big, x0, err)
		}
	}
}
