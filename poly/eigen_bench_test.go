package poly_test

import (
	"fmt"
	"testing"

	"github.com/qofs/qofs/poly"
	"gonum.org/v1/gonum/mat"
)

// degrees of the benchmarks of roots.
var rootDegrees = []int{4, 8, 16, 32, 64}

// randomPolynomials returns polynomials with 32-bit coefficients and random
// signs from the generator splitmix64 (Steele, Lea & Flood 2014).
func randomPolynomials(degree int) [][]int64 {
	out := make([][]int64, 32)
	for j := range out {
		state := uint64(1000003*degree + 101*32 + j)
		next := func() uint64 {
			state += 0x9e3779b97f4a7c15
			z := state
			z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
			z = (z ^ z>>27) * 0x94d049bb133111eb
			return z ^ z>>31
		}
		for k := range degree + 1 {
			v := int64(next() & (1<<32 - 1))
			if k == degree {
				v |= 1
			}
			if next()&1 == 1 {
				v = -v
			}
			out[j] = append(out[j], v)
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
