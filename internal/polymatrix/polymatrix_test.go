package polymatrix

import (
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// determinant expands along the first row: the oracle.
func determinant(a [][]intpoly.Poly) intpoly.Poly {
	if len(a) == 0 {
		return intpoly.FromInt64s(1)
	}
	var sum intpoly.Poly
	for j, p := range a[0] {
		var minor [][]intpoly.Poly
		for _, row := range a[1:] {
			minor = append(minor, slices.Delete(slices.Clone(row), j, j+1))
		}
		t := p.Mul(determinant(minor))
		if j%2 == 1 {
			t = t.Neg()
		}
		sum = sum.Add(t)
	}
	return sum
}

func random(r *rand.Rand, degree int) intpoly.Poly {
	if r.IntN(3) == 0 {
		return intpoly.Poly{}
	}
	c := make([]int64, 1+r.IntN(degree+1))
	for i := range c {
		c[i] = r.Int64N(2001) - 1000
	}
	return intpoly.FromInt64s(c...)
}

func TestSolveAgainstExpansion(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	singular := 0
	for range 300 {
		if checkSolve(t, r) {
			singular++
		}
	}
	if singular < 20 {
		t.Errorf("only %d singular systems were met", singular)
	}
}

// checkSolve checks one random system and reports whether it was singular.
func checkSolve(t *testing.T, r *rand.Rand) (singular bool) {
	t.Helper()
	n := 1 + r.IntN(5)
	a, b := make([][]intpoly.Poly, n), make([]intpoly.Poly, n)
	for i := range a {
		b[i] = random(r, 2)
		for range n {
			a[i] = append(a[i], random(r, 3))
		}
	}
	if n > 2 && r.IntN(4) == 0 { // make a row depend on two others
		p, q := random(r, 1), random(r, 1)
		for j := range a[0] {
			a[0][j] = a[1][j].Mul(p).Add(a[2][j].Mul(q))
		}
	}
	column := r.IntN(n)
	num, den, err := Solve(a, b, column)
	want := determinant(a)
	if want.IsZero() {
		var s *SingularError
		if !errors.As(err, &s) || len(s.Undetermined) == 0 {
			t.Fatalf("a singular system: %v", err)
		}
		return true
	}
	replaced := make([][]intpoly.Poly, n)
	for i := range a {
		replaced[i] = slices.Clone(a[i])
		replaced[i][column] = b[i]
	}
	if err != nil || !den.Equal(want) || !num.Equal(determinant(replaced)) {
		t.Fatalf("size %d, column %d: %v", n, column, err)
	}
	return false
}

// Larger systems, sparse and dense, with long coefficients and several
// right-hand sides.
func TestSolveAllAgainstElimination(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 12 {
		n, bits := 6+r.IntN(14), uint(r.IntN(200))
		long := func(degree, zeros int) intpoly.Poly {
			p := random(r, degree)
			if r.IntN(zeros+1) > 0 {
				return intpoly.Poly{}
			}
			return p.MulInt(new(big.Int).Lsh(big.NewInt(2*r.Int64N(1000)+1), bits))
		}
		zeros := r.IntN(8)
		a, rhs := make([][]intpoly.Poly, n), make([][]intpoly.Poly, 3)
		for i := range a {
			for j := range n {
				if a[i] = append(a[i], long(2, zeros)); i == j {
					a[i][j] = intpoly.FromInt64s(r.Int64N(9)-4, 1+r.Int64N(9))
				}
			}
			for k := range rhs {
				rhs[k] = append(rhs[k], long(3, 1))
			}
		}
		columns := []int{r.IntN(n), 0, n - 1}
		nums, den, err := SolveAll(a, rhs, columns)
		for k, b := range rhs {
			for l, c := range columns {
				num, want, ok := plainSolve(a, b, c)
				if !ok {
					if s := (*SingularError)(nil); !errors.As(err, &s) {
						t.Fatalf("a singular system: %v", err)
					}
					continue
				}
				if err != nil || !den.Equal(want) || !nums[k][l].Equal(num) {
					t.Fatalf("size %d, right-hand side %d, column %d: %v", n, k, c, err)
				}
			}
		}
	}
}

func TestDeterminant(t *testing.T) {
	for n, want := range []int64{1, 3, 9 - 1, 27 - 6} { // tridiagonal with 3 and 1
		a := make([][]intpoly.Poly, n)
		for i := range a {
			a[i] = make([]intpoly.Poly, n)
			for j := range a[i] {
				switch {
				case i == j:
					a[i][j] = intpoly.FromInt64s(3)
				case i-j == 1 || j-i == 1:
					a[i][j] = intpoly.FromInt64s(1)
				}
			}
		}
		if nums, den, err := SolveAll(a, nil, nil); err != nil || len(nums) != 0 || !den.Equal(intpoly.FromInt64s(want)) {
			t.Errorf("size %d: %v, %v", n, den.Coefficient(0), err)
		}
	}
}

// A large singular system is proved singular, and its open unknowns are those
// of the dependent part.
func TestLargeSingular(t *testing.T) {
	a, b := chain(60)
	for j := range a {
		a[31][j] = a[30][j].Mul(intpoly.FromInt64s(2, 1)) // a multiple of the row above
	}
	_, _, err := Solve(a, b, 0)
	var s *SingularError
	if !errors.As(err, &s) || len(s.Undetermined) < 30 {
		t.Errorf("%v", err)
	}
}

func FuzzSolve(f *testing.F) {
	f.Add(uint64(1))
	f.Fuzz(func(t *testing.T, seed uint64) { checkSolve(t, rand.New(rand.NewPCG(seed, 1))) })
}

func TestUndetermined(t *testing.T) {
	p := func(c ...int64) intpoly.Poly { return intpoly.FromInt64s(c...) }
	// x0 = 1, and twice the same equation for x1 and x2
	a := [][]intpoly.Poly{{p(1), p(), p()}, {p(), p(0, 1), p(1)}, {p(), p(0, 2), p(2)}}
	_, _, err := Solve(a, []intpoly.Poly{p(1), p(), p()}, 0)
	var s *SingularError
	if !errors.As(err, &s) || !slices.Equal(s.Undetermined, []int{1, 2}) {
		t.Errorf("%v, %+v", err, s)
	}
}

func TestLimit(t *testing.T) {
	n := MaxSize + 1
	a, b := make([][]intpoly.Poly, n), make([]intpoly.Poly, n)
	for i := range a {
		a[i] = make([]intpoly.Poly, n)
	}
	if _, _, err := Solve(a, b, 0); !errors.Is(err, fault.ErrLimit) {
		t.Errorf("size %d: %v", n, err)
	}
}

// chain is a chain of n masses between springs and dampers.
func chain(n int) ([][]intpoly.Poly, []intpoly.Poly) {
	a, b := make([][]intpoly.Poly, n), make([]intpoly.Poly, n)
	for i := range a {
		a[i] = make([]intpoly.Poly, n)
		a[i][i] = intpoly.FromInt64s(2000+int64(i), 30, 7)
		if i > 0 {
			a[i][i-1] = intpoly.FromInt64s(-1000, -15)
		}
		if i+1 < n {
			a[i][i+1] = intpoly.FromInt64s(-1000, -15)
		}
	}
	b[0] = intpoly.FromInt64s(1)
	return a, b
}

func BenchmarkChain(b *testing.B) {
	for _, n := range []int{5, 10, 20, 40, 80, 160} {
		b.Run(fmt.Sprintf("masses=%d", n), func(b *testing.B) {
			m, r := chain(n)
			for b.Loop() {
				if _, _, err := Solve(m, r, n-1); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// firstOrder is a chain of n equations x_i' = −k_i x_i + x_(i−1) in which the
// coefficients have nine digits.
func firstOrder(n int) ([][]intpoly.Poly, []intpoly.Poly) {
	a, b := make([][]intpoly.Poly, n), make([]intpoly.Poly, n)
	for i := range a {
		a[i] = make([]intpoly.Poly, n)
		a[i][i] = intpoly.FromInt64s(123456789+int64(i)*7919, 100000000)
		if i > 0 {
			a[i][i-1] = intpoly.FromInt64s(-100000000)
		}
	}
	b[0] = intpoly.FromInt64s(100000000)
	return a, b
}

func BenchmarkFirstOrder(b *testing.B) {
	for _, n := range []int{50, 100, 200} {
		b.Run(fmt.Sprintf("equations=%d", n), func(b *testing.B) {
			m, r := firstOrder(n)
			for b.Loop() {
				if _, _, err := Solve(m, r, n-1); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkPlainChain is BenchmarkChain by the plain way.
func BenchmarkPlainChain(b *testing.B) {
	for _, n := range []int{5, 10, 20} {
		b.Run(fmt.Sprintf("masses=%d", n), func(b *testing.B) {
			m, r := chain(n)
			for b.Loop() {
				plainSolve(m, r, n-1)
			}
		})
	}
}
