package poly_test

import (
	"fmt"
	"testing"

	"github.com/qofs/qofs/internal/peerinput"
	"github.com/qofs/qofs/poly"
	"gonum.org/v1/gonum/mat"
)

// degrees of the benchmarks of roots.
var rootDegrees = []int{4, 8, 16, 32, 64}

// randomPolynomials returns the 32 polynomials of a degree, with 32-bit
// coefficients.
func randomPolynomials(degree int) [][]int64 {
	out := make([][]int64, 32)
	for j := range out {
		for _, c := range peerinput.Coefficients(degree, 32, j) {
			out[j] = append(out[j], c.Int64())
		}
	}
	return out
}

func BenchmarkRoots(b *testing.B) {
	for _, n := range rootDegrees {
		b.Run(fmt.Sprintf("degree=%d", n), func(b *testing.B) {
			var inputs []poly.Poly
			for _, c := range randomPolynomials(n) {
				inputs = append(inputs, poly.FromInts(c...))
			}
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if _, err := inputs[i%len(inputs)].Roots(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkRootsEigen finds the same roots, uncertified, as the eigenvalues of
// the companion matrix.
func BenchmarkRootsEigen(b *testing.B) {
	for _, n := range rootDegrees {
		b.Run(fmt.Sprintf("degree=%d", n), func(b *testing.B) {
			inputs := randomPolynomials(n)
			for i := 0; b.Loop(); i++ {
				if eigenRoots(inputs[i%len(inputs)]) == nil {
					b.Fatal("no eigenvalues")
				}
			}
		})
	}
}

func eigenRoots(ascending []int64) []complex128 {
	n := len(ascending) - 1
	companion := mat.NewDense(n, n, nil)
	for i := range n {
		f := -float64(ascending[i]) / float64(ascending[n])
		companion.Set(i, n-1, f)
		if i > 0 {
			companion.Set(i, i-1, 1)
		}
	}
	var eigen mat.Eigen
	if !eigen.Factorize(companion, mat.EigenNone) {
		return nil
	}
	return eigen.Values(nil)
}
