package statespace

import (
	"math/big"

	"github.com/qofs/qofs/internal/modp"
)

// fullRank reports whether the closure of the generators under m is the whole
// space, judged modulo a prime: there the rank is at most the true one, so that a
// full one is proved. It is false where the rank is not full or the prime does not
// show it.
func fullRank(generators, m matrix) bool {
	n := len(m)
	var primes modp.Primes
	for range 4 {
		f := primes.Next()
		a, ok1 := residues(&f, m)
		queue, ok2 := residues(&f, generators)
		if !ok1 || !ok2 {
			continue // the prime divides a denominator
		}
		rows := make([][]uint64, n) // by pivot
		rank := 0
		for len(queue) > 0 && rank < n {
			row := queue[0]
			queue = queue[1:]
			pivot := reduceRow(&f, rows, row)
			if pivot < 0 {
				continue
			}
			rows[pivot] = row
			rank++
			queue = append(queue, rowTimes(&f, row, a))
		}
		return rank == n
	}
	return false
}

// reduceRow clears the pivots of other rows in a row, makes its own pivot 1, and
// returns it, −1 where nothing is left.
func reduceRow(f *modp.Field, rows [][]uint64, row []uint64) int {
	for j := range row {
		if row[j] == 0 {
			continue
		}
		if rows[j] == nil {
			inverse := f.Inverse(row[j])
			for k := j; k < len(row); k++ {
				row[k] = f.Mul(row[k], inverse)
			}
			return j
		}
		factor := row[j]
		for k := j; k < len(row); k++ {
			row[k] = f.Sub(row[k], f.Mul(factor, rows[j][k]))
		}
	}
	return -1
}

func rowTimes(f *modp.Field, row []uint64, a [][]uint64) []uint64 {
	out := make([]uint64, len(row))
	for k, x := range row {
		if x == 0 {
			continue
		}
		for j, y := range a[k] {
			out[j] = f.Add(out[j], f.Mul(x, y))
		}
	}
	return out
}

// residues returns the stored residues of a matrix; false where the prime divides
// a denominator.
func residues(f *modp.Field, m matrix) ([][]uint64, bool) {
	p := new(big.Int).SetUint64(f.P)
	var t big.Int
	out := make([][]uint64, len(m))
	for i, row := range m {
		out[i] = make([]uint64, len(row))
		for j, v := range row {
			den := t.Mod(v.Denom(), p).Uint64()
			if den == 0 {
				return nil, false
			}
			num := f.Stored(t.Mod(v.Num(), p).Uint64())
			out[i][j] = f.Mul(num, f.Inverse(f.Stored(den)))
		}
	}
	return out, true
}

// wholeSpace returns all of it.
func wholeSpace(n int) *subspace {
	s := &subspace{rows: zeros(n, n)}
	for i := range n {
		s.rows[i][i].SetInt64(1)
		s.pivots = append(s.pivots, i)
	}
	return s
}
