package polymatrix

import (
	"errors"
	"fmt"
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
	// The order of the columns may change both signs.
	if err != nil || !num.Mul(want).Equal(den.Mul(determinant(replaced))) || !den.Equal(want) && !den.Equal(want.Neg()) {
		t.Fatalf("size %d, column %d: %v", n, column, err)
	}
	return false
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
	for _, n := range []int{5, 10, 20, 40} {
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
