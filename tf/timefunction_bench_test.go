package tf

import (
	"errors"
	"fmt"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
)

// responseOfOrder is a chain of n/2 damped oscillators: 1 over the product of
// s² + 0.4 k s + 9 k², k = 1 … n/2.
func responseOfOrder(b *testing.B, n int) TimeFunction {
	b.Helper()
	den := poly.FromInts(5)
	for k := int64(1); k <= int64(n/2); k++ {
		den = den.Mul(poly.FromInts(45*k*k, 2*k, 5))
	}
	f, err := Must(New(poly.FromInts(1), den)).InverseLaplace()
	if err != nil {
		b.Fatal(err)
	}
	return f
}

// BenchmarkTimeResponse: one op is one point of a Sample of 1000 points.
func BenchmarkTimeResponse(b *testing.B) {
	for _, n := range []int{2, 4, 8} {
		f := responseOfOrder(b, n)
		b.Run(fmt.Sprintf("order=%d", n), func(b *testing.B) {
			const points = 1000
			for i := 0; i < b.N; i += points {
				if _, err := f.Sample(0.01, points); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(n), "ns/pole")
		})
	}
}

// BenchmarkTimeResponseAt: one op is one value, at times that spread over the
// grid of BenchmarkTimeResponse.
func BenchmarkTimeResponseAt(b *testing.B) {
	for _, n := range []int{2, 4, 8} {
		f := responseOfOrder(b, n)
		b.Run(fmt.Sprintf("order=%d", n), func(b *testing.B) {
			i := 0
			for b.Loop() {
				if _, err := f.At(0.01 * float64(i%1000+1)); err != nil {
					b.Fatal(err)
				}
				i++
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(n), "ns/pole")
		})
	}
}

// BenchmarkTimeResponseCertified is the stage behind, in balls.
func BenchmarkTimeResponseCertified(b *testing.B) {
	for _, n := range []int{2, 4, 8} {
		f := responseOfOrder(b, n)
		b.Run(fmt.Sprintf("order=%d", n), func(b *testing.B) {
			i := 0
			for b.Loop() {
				if _, err := f.e.at(new(big.Rat).SetFloat64(0.01 * float64(i%1000+1))); err != nil {
					b.Fatal(err)
				}
				i++
			}
		})
	}
}

// BenchmarkTimeFunctionSetup is InverseLaplace with the first value.
func BenchmarkTimeFunctionSetup(b *testing.B) {
	for _, n := range []int{2, 4, 8} {
		g := responseOfOrder(b, n).Laplace()
		b.Run(fmt.Sprintf("order=%d", n), func(b *testing.B) {
			for b.Loop() {
				f, err := g.InverseLaplace()
				if err != nil {
					b.Fatal(err)
				}
				if _, err := f.At(1); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkTimeResponseFamilies: one op is one At at the points of a family of
// testdata/timefunction.txt, ugly inputs included.
func BenchmarkTimeResponseFamilies(b *testing.B) {
	families := map[string][]referenceFunction{}
	var order []string
	for _, c := range readReference(b) {
		if families[c.family] == nil {
			order = append(order, c.family)
		}
		families[c.family] = append(families[c.family], c)
	}
	for _, family := range order {
		var functions []TimeFunction
		var times []float64
		for _, c := range families[family] {
			f := timeFunctionOf(b, c.num, c.den)
			for _, t := range c.t {
				functions, times = append(functions, f), append(times, t)
				if _, err := f.At(t); err != nil && !errors.Is(err, ErrRange) {
					b.Fatal(err)
				}
			}
		}
		b.Run(strings.ReplaceAll(family, " ", "-"), func(b *testing.B) {
			i := 0
			for b.Loop() {
				_, _ = functions[i].At(times[i])
				if i++; i == len(times) {
					i = 0
				}
			}
		})
	}
}
