package ball

import (
	"fmt"
	"testing"
)

func BenchmarkFunctions(b *testing.B) {
	x, y := FromFloat64(-3.7).Exp(4096), FromFloat64(12.3).Sqrt(4096)
	for _, prec := range []uint{64, 128, 256, 1024, 4096} {
		x, y := x.Round(prec), y.Round(prec)
		for _, f := range []struct {
			name string
			run  func()
		}{
			{"Add", func() { x.Add(y, prec) }},
			{"Mul", func() { x.Mul(y, prec) }},
			{"Div", func() { x.Div(y, prec) }},
			{"Sqrt", func() { x.Sqrt(prec) }},
			{"Exp", func() { y.Exp(prec) }},
			{"SinCos", func() { y.SinCos(prec) }},
			{"Log", func() { y.Log(prec) }},
			{"Atan", func() { y.Atan(prec) }},
			{"Float64", func() { y.Float64() }},
		} {
			b.Run(fmt.Sprintf("%s/bits=%d", f.name, prec), func(b *testing.B) {
				for b.Loop() {
					f.run()
				}
			})
		}
	}
}
