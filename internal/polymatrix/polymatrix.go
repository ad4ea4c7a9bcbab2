// Package polymatrix solves linear equations whose coefficients are integer
// polynomials.
//
// The matrix is taken modulo primes near 2^62 and at as many points as the
// degree of its determinant can ask for. There it is one of machine words, and
// sparse elimination is quick: one order of pivots, found by the rule of
// Markowitz (1957), serves all points and primes. Interpolation and the Chinese
// remainder theorem put the polynomials together; bounds on the degree and on
// the coefficients say when they are complete.
package polymatrix

import (
	"fmt"
	"math"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/modp"
)

// Bounds on the size of a system.
const (
	MaxSize   = 512     // rows
	MaxDegree = 2048    // of the determinant, by its bound
	maxWork   = 1 << 31 // multiplications modulo primes
)

// SingularError tells that the determinant is 0.
type SingularError struct {
	// Undetermined are the columns of unknowns that the equations leave open.
	Undetermined []int
}

// Error counts the open unknowns.
func (e *SingularError) Error() string {
	return fmt.Sprintf("singular set of equations: %d unknowns are not determined", len(e.Undetermined))
}

// Solve returns the unknown x[column] of the square system a·x = b as num/den,
// where den is the determinant of a and num that of a with the column replaced
// by b (Cramer's rule), so that nothing is cancelled. The errors are those of
// SolveAll.
func Solve(a [][]intpoly.Poly, b []intpoly.Poly, column int) (num, den intpoly.Poly, err error) {
	nums, den, err := SolveAll(a, [][]intpoly.Poly{b}, []int{column})
	if err != nil {
		return num, den, err
	}
	return nums[0][0], den, nil
}

// SolveAll solves a·x = b for several right-hand sides b at once: the unknown
// x[columns[k]] for the right-hand side r is nums[r][k]/den, where den is the
// determinant of a and nothing is cancelled. Without right-hand sides it
// returns the determinant. The errors are *SingularError, and fault.ErrLimit
// beyond the bounds.
func SolveAll(a [][]intpoly.Poly, rhs [][]intpoly.Poly, columns []int) (nums [][]intpoly.Poly, den intpoly.Poly, err error) {
	if len(a) > MaxSize || len(rhs) > MaxSize {
		return nil, den, fault.ErrLimit
	}
	s := newSystem(a, rhs)
	if s.degree > MaxDegree {
		return nil, den, fault.ErrLimit
	}
	var primes modp.Primes
	for range attempts {
		f := primes.Next()
		p, err := s.plan(&f)
		if err != nil {
			return nil, den, err
		}
		if s.work(p, 1+len(rhs)*len(columns)) > maxWork {
			return nil, den, fault.ErrLimit
		}
		if p.rank == s.n {
			return s.reconstruct(p, columns)
		}
		if s.vanishes(p) {
			return nil, den, &SingularError{s.open(&f)}
		}
	}
	return nil, den, fault.ErrLimit
}

// attempts is how many points are tried for a plan: a point is of no use where
// a minor that is not 0 vanishes there, with a chance below 2^−40.
const attempts = 4

// entry is a polynomial of the matrix [a | rhs] that is not 0.
type entry struct {
	row, column int
	poly        intpoly.Poly
}

// system is [a | rhs], sparse, with bounds on each minor of n rows that has at
// most one column of rhs.
type system struct {
	n, rhs  int
	entries []entry
	degree  int // of a minor, at most
	bits    int // of the absolute values of its coefficients, at most
}

func newSystem(a, rhs [][]intpoly.Poly) *system {
	s := &system{n: len(a), rhs: len(rhs)}
	for i, row := range a {
		for j, p := range row {
			s.add(i, j, p)
		}
		for r, b := range rhs {
			s.add(i, s.n+r, b[i])
		}
	}
	s.bound()
	return s
}

func (s *system) add(i, j int, p intpoly.Poly) {
	if !p.IsZero() {
		s.entries = append(s.entries, entry{i, j, p})
	}
}

// bound sets degree and bits. A minor is a sum over permutations of products
// with one entry from each row and each column: its degree is at most the sum of
// the largest degrees of the rows, and likewise of the columns; the sum of the
// absolute values of its coefficients is at most the product of the sums of
// those of the rows, and likewise of the columns.
func (s *system) bound() {
	rows, columns := make([]size, s.n), make([]size, s.n+s.rhs)
	for _, e := range s.entries {
		rows[e.row].add(e.poly)
		columns[e.column].add(e.poly)
	}
	byRows := total(rows)
	byColumns := total(columns[:s.n])
	if s.rhs > 0 && s.n > 0 { // a column of rhs in the place of any other one
		least, most := size{degree: math.MaxInt, log: math.Inf(1)}, size{}
		for _, c := range columns[:s.n] {
			least = size{min(least.degree, c.degree), min(least.log, c.log)}
		}
		for _, c := range columns[s.n:] {
			most = size{max(most.degree, c.degree), max(most.log, c.log)}
		}
		byColumns = size{byColumns.degree + max(0, most.degree-least.degree), byColumns.log + max(0, most.log-least.log)}
	}
	s.degree = min(byRows.degree, byColumns.degree)
	s.bits = int(min(byRows.log, byColumns.log)) + 2
}

// size is a degree, and an upper bound on log₂(1 + the sum of the absolute
// values of the coefficients).
type size struct {
	degree int
	log    float64
}

// add takes in an entry. Sums of exponents are rounded up by far more than
// float64 loses.
func (z *size) add(p intpoly.Poly) {
	z.degree = max(z.degree, p.Degree())
	l := float64(p.MaxBitLen()) + math.Log2(float64(p.Degree()+1))
	larger, smaller := max(z.log, l), min(z.log, l)
	z.log = larger + math.Log2(1+math.Exp2(smaller-larger)) + 1e-9
}

func total(sizes []size) (sum size) {
	for _, z := range sizes {
		sum.degree += z.degree
		sum.log += z.log
	}
	return sum
}

// primes is how many primes are needed for the sign and the bits of a minor.
func (s *system) primes() int { return (s.bits+1)/61 + 1 }

// work estimates the multiplications of a solution.
func (s *system) work(p *plan, results int) float64 {
	block := s.block()
	points, primes := float64((s.degree+block)/block*block), float64(s.primes())
	once := float64(p.operations)
	for _, e := range s.entries {
		once += float64(e.poly.Degree() + 1)
	}
	each := points*once + 2*points*points*float64(results)
	return primes*each + primes*primes*points*float64(results)
}

// reconstruct returns numerators and determinant.
func (s *system) reconstruct(p *plan, columns []int) (nums [][]intpoly.Poly, den intpoly.Poly, err error) {
	terms, results := s.degree+1, 1+s.rhs*len(columns)
	all := intpoly.NewImages(s.primes())
	var primes modp.Primes
	for used, tried := 0, 0; used < s.primes(); tried++ {
		if tried > 2*s.primes()+64 {
			return nil, den, fault.ErrLimit // each prime fails with a chance below 2^−40
		}
		f := primes.Next()
		e := s.evaluator(p, &f)
		values := make([]uint64, results*terms)
		if !e.solutions(values, columns) {
			continue // a pivot vanishes
		}
		newton := newInterpolation(&f, terms)
		for k := range results {
			newton.interpolate(values[k*terms : (k+1)*terms])
		}
		all.Add(&f, values)
		used++
	}
	nums = make([][]intpoly.Poly, s.rhs)
	for r := range nums {
		for k := range columns {
			at := (1 + r*len(columns) + k) * terms
			nums[r] = append(nums[r], all.Poly(at, at+terms))
		}
	}
	return nums, all.Poly(0, terms), nil
}

// vanishes reports whether all that a plan of a lower rank leaves is 0: it is at
// as many points modulo as many primes as its degree and its coefficients can
// ask for, which proves it.
func (s *system) vanishes(p *plan) bool {
	var primes modp.Primes
	for used, tried := 0, 0; used < s.primes(); tried++ {
		f := primes.Next()
		zero, ok := s.evaluator(p, &f).restIsZero()
		if ok && !zero || tried > 2*s.primes()+64 {
			return false
		}
		if ok {
			used++
		}
	}
	return true
}
