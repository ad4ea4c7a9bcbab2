// Package polymatrix solves linear equations whose coefficients are integer
// polynomials.
//
// Everything is done by evaluation and interpolation: at small integers the
// matrix is one of integers, fraction-free elimination (Bareiss 1968) gives the
// determinant there, and as many points as the degree bound asks for determine
// the polynomial (Newton's divided differences, which stay integers).
package polymatrix

import (
	"fmt"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// Bounds on the size of a system.
const (
	MaxSize   = 256  // rows
	MaxDegree = 2048 // of the determinant, as the sum of the rows' degrees
	maxWork   = 1 << 33
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
// by b (Cramer's rule), so that nothing is cancelled. The errors are
// *SingularError, and fault.ErrLimit beyond the bounds.
func Solve(a [][]intpoly.Poly, b []intpoly.Poly, column int) (num, den intpoly.Poly, err error) {
	n := len(a)
	degree, bits := 0, 0
	for i, row := range a {
		d := max(0, b[i].Degree())
		bits = max(bits, b[i].MaxBitLen())
		for _, p := range row {
			d = max(d, p.Degree())
			bits = max(bits, p.MaxBitLen())
		}
		degree += d
	}
	words := n * (bits + 8*(degree/max(n, 1)+1) + 8) / 64
	if n > MaxSize || degree > MaxDegree || work(degree, n, words) > maxWork {
		return num, den, fault.ErrLimit
	}
	order := unknownLast(n, column)
	var xs []int64
	var nums, dens []*big.Int
	singular := 0
	for k := int64(0); len(xs) <= degree; k++ {
		x := k / 2 // 0, −1, 1, −2, 2, …
		if k%2 == 1 {
			x = -(k + 1) / 2
		}
		m := evaluate(a, b, order, x)
		d, r, ok := eliminate(m)
		if !ok {
			if singular++; singular > degree {
				return num, den, &SingularError{undetermined(a, b, order)}
			}
			continue
		}
		xs, nums, dens = append(xs, x), append(nums, r), append(dens, d)
	}
	return interpolate(xs, nums), interpolate(xs, dens), nil
}

// work estimates the word multiplications of a solution.
func work(degree, n, words int) int64 {
	return int64(degree+1) * int64(n) * int64(n) * int64(n) / 3 * int64(words+1) * int64(words+1)
}

// unknownLast returns the columns in order with one of them moved to the end.
func unknownLast(n, column int) []int {
	order := make([]int, 0, n)
	for j := range n {
		if j != column {
			order = append(order, j)
		}
	}
	return append(order, column)
}

// evaluate returns the rows of [a | b] at x, columns in the given order.
func evaluate(a [][]intpoly.Poly, b []intpoly.Poly, order []int, x int64) [][]*big.Int {
	at := big.NewInt(x)
	m := make([][]*big.Int, len(a))
	for i := range a {
		m[i] = make([]*big.Int, len(order)+1)
		for j, c := range order {
			m[i][j] = a[i][c].AtInt(at)
		}
		m[i][len(order)] = b[i].AtInt(at)
	}
	return m
}

// eliminate brings the first columns of m = [a | b] to triangular form and
// returns det a and the right-hand side of the last row, for which
// det a·x[last] = r holds; ok is false where the determinant is 0. The first n
// − 1 columns may be singular while a is not; row exchanges see to that.
func eliminate(m [][]*big.Int) (det, r *big.Int, ok bool) {
	n := len(m)
	if n == 0 {
		return big.NewInt(1), new(big.Int), true
	}
	previous, negative := big.NewInt(1), false
	var t big.Int
	for k := range n {
		p := pivotRow(m, k)
		if p < 0 {
			return nil, nil, false
		}
		if p != k {
			m[p], m[k] = m[k], m[p]
			negative = !negative
		}
		pivot := m[k][k]
		for i := k + 1; i < n; i++ {
			factor := m[i][k]
			for j := k + 1; j <= n; j++ {
				v := m[i][j]
				v.Mul(v, pivot)
				if factor.Sign() != 0 && m[k][j].Sign() != 0 {
					v.Sub(v, t.Mul(factor, m[k][j]))
				}
				if k > 0 && v.Sign() != 0 {
					v.Quo(v, previous) // exact (Bareiss)
				}
			}
		}
		previous = pivot
	}
	det, r = m[n-1][n-1], m[n-1][n]
	if negative {
		det, r = det.Neg(det), r.Neg(r)
	}
	return det, r, true
}

// pivotRow returns the row from k on whose entry in column k is the smallest
// that is not 0, or −1.
func pivotRow(m [][]*big.Int, k int) int {
	best := -1
	for i := k; i < len(m); i++ {
		if m[i][k].Sign() != 0 && (best < 0 || m[i][k].CmpAbs(m[best][k]) < 0) {
			best = i
		}
	}
	return best
}

// undetermined returns the columns whose unknowns take part in the null space
// of a, judged at the point, of a few, where the rank is the highest.
func undetermined(a [][]intpoly.Poly, b []intpoly.Poly, order []int) []int {
	var best []int
	rank := -1
	for _, x := range []int64{7919, 104729, 1299709} {
		m := evaluate(a, b, order, x)
		if r, open := nullSpace(m, len(order)); r > rank {
			rank, best = r, open
		}
	}
	out := make([]int, len(best))
	for i, j := range best {
		out[i] = order[j]
	}
	slices.Sort(out)
	return out
}

// nullSpace brings the first n columns of m to reduced form over ℚ and returns
// their rank and the columns that are free or depend on a free one.
func nullSpace(m [][]*big.Int, n int) (rank int, open []int) {
	rows := make([][]*big.Rat, len(m))
	for i := range m {
		rows[i] = make([]*big.Rat, n)
		for j := range n {
			rows[i][j] = new(big.Rat).SetInt(m[i][j])
		}
	}
	pivots := make([]int, 0, n)
	for j := range n {
		p := slices.IndexFunc(rows[rank:], func(r []*big.Rat) bool { return r[j].Sign() != 0 })
		if p < 0 {
			continue
		}
		rows[rank], rows[rank+p] = rows[rank+p], rows[rank]
		reduce(rows, rank, j)
		pivots = append(pivots, j)
		rank++
		if rank == len(rows) {
			break
		}
	}
	for j := range n {
		i := slices.Index(pivots, j)
		isOpen := i < 0
		for k := range n {
			isOpen = isOpen || k != j && !slices.Contains(pivots, k) && rows[i][k].Sign() != 0
		}
		if isOpen {
			open = append(open, j)
		}
	}
	return rank, open
}

// reduce makes the pivot (i, j) 1 and clears the rest of its column.
func reduce(rows [][]*big.Rat, i, j int) {
	inverse := new(big.Rat).Inv(rows[i][j])
	for k := range rows[i] {
		rows[i][k].Mul(rows[i][k], inverse)
	}
	var t big.Rat
	for l := range rows {
		if l == i || rows[l][j].Sign() == 0 {
			continue
		}
		factor := new(big.Rat).Set(rows[l][j])
		for k := range rows[l] {
			rows[l][k].Sub(rows[l][k], t.Mul(factor, rows[i][k]))
		}
	}
}

// interpolate returns the polynomial of degree below len(xs) with the values
// ys, which is known to have integer coefficients. It overwrites ys.
func interpolate(xs []int64, ys []*big.Int) intpoly.Poly {
	n := len(xs)
	var d big.Int
	for k := 1; k < n; k++ {
		for i := n - 1; i >= k; i-- {
			ys[i].Sub(ys[i], ys[i-1])
			ys[i].Quo(ys[i], d.SetInt64(xs[i]-xs[i-k]))
		}
	}
	c := make([]*big.Int, n)
	for i := range c {
		c[i] = new(big.Int)
	}
	// Horner's rule on the Newton form: c ← c·(x − x_k) + y_k.
	var t big.Int
	for k := n - 1; k >= 0; k-- {
		x := d.SetInt64(xs[k])
		for i := n - 1; i > 0; i-- {
			c[i].Sub(c[i-1], t.Mul(x, c[i]))
		}
		c[0].Sub(ys[k], t.Mul(x, c[0]))
	}
	return intpoly.FromBigs(c...)
}
