package polymatrix

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// plainSolve is Solve by evaluation at small integers, fraction-free elimination
// of integers (Bareiss 1968) and interpolation.
func plainSolve(a [][]intpoly.Poly, b []intpoly.Poly, column int) (num, den intpoly.Poly, ok bool) {
	degree := 0
	for i, row := range a {
		d := max(0, b[i].Degree())
		for _, p := range row {
			d = max(d, p.Degree())
		}
		degree += d
	}
	order := unknownLast(len(a), column)
	var xs []int64
	var nums, dens []*big.Int
	singular := 0
	for k := int64(0); len(xs) <= degree; k++ {
		x := k / 2 // 0, −1, 1, −2, 2, …
		if k%2 == 1 {
			x = -(k + 1) / 2
		}
		d, r, ok := eliminate(evaluate(a, b, order, x))
		if !ok {
			if singular++; singular > degree {
				return num, den, false
			}
			continue
		}
		xs, nums, dens = append(xs, x), append(nums, r), append(dens, d)
	}
	num, den = interpolate(xs, nums), interpolate(xs, dens)
	if (len(a)-1-column)%2 != 0 { // the order of the columns
		num, den = num.Neg(), den.Neg()
	}
	return num, den, true
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
