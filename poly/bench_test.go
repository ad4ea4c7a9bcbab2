package poly_test

import (
	"fmt"
	"testing"

	"github.com/qofs/qofs/internal/peerinput"
	"github.com/qofs/qofs/poly"
)

// each runs a benchmark for every degree and size of the table.
func each(b *testing.B, run func(b *testing.B, degree, bits int)) {
	for _, degree := range peerinput.Degrees {
		for _, bits := range peerinput.Sizes {
			b.Run(fmt.Sprintf("degree=%d/bits=%d", degree, bits), func(b *testing.B) {
				b.ReportAllocs()
				run(b, degree, bits)
			})
		}
	}
}

func input(degree, bits, j int) poly.Poly {
	return poly.FromRats(peerinput.Rats(degree, bits, j)...)
}

func BenchmarkMul(b *testing.B) {
	each(b, func(b *testing.B, degree, bits int) {
		p, q := input(degree, bits, 0), input(degree, bits, 1)
		for b.Loop() {
			p.Mul(q)
		}
	})
}

func BenchmarkGCDCoprime(b *testing.B) {
	each(b, func(b *testing.B, degree, bits int) {
		p, q := input(degree, bits, 0), input(degree, bits, 1)
		for b.Loop() {
			if g, err := p.GCD(q); err != nil || g.Degree() != 0 {
				b.Fatal(g, err)
			}
		}
	})
}

func BenchmarkGCDCommon(b *testing.B) {
	each(b, func(b *testing.B, degree, bits int) {
		r := input(degree, bits, 2)
		p, q := input(degree, bits, 0).Mul(r), input(degree, bits, 1).Mul(r)
		for b.Loop() {
			if g, err := p.GCD(q); err != nil || g.Degree() != degree {
				b.Fatal(g, err)
			}
		}
	})
}

func BenchmarkMulGrowth(b *testing.B) {
	for _, degree := range []int{1024, 4096} {
		b.Run(fmt.Sprintf("degree=%d/bits=32", degree), func(b *testing.B) {
			p, q := input(degree, 32, 0), input(degree, 32, 1)
			for b.Loop() {
				p.Mul(q)
			}
		})
	}
}
