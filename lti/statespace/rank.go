package statespace

import (
	"cmp"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/modp"
)

// image is a closure modulo a prime: a subspace in reduced echelon form. The
// closure modulo a prime is spanned by residues of rows that span the true one, so
// that its rank is at most the true rank, and where it is the same, the pivots are
// the true ones or later. With the true rank and pivots it is the image of the true
// echelon form, in which no denominator is a multiple of the prime.
type image struct {
	field  modp.Field
	pivots []int
	free   []int      // the other columns
	rows   [][]uint64 // stored residues, in the columns that are free
}

// compare orders images by how much they show: by rank, then by pivots.
func (i *image) compare(o *image) int {
	if c := cmp.Compare(len(i.pivots), len(o.pivots)); c != 0 {
		return c
	}
	return slices.Compare(o.pivots, i.pivots)
}

// image returns the closure of the generators under m modulo the prime of f, nil
// where the prime divides a denominator.
func (w *work) image(f modp.Field, generators, m matrix) (*image, error) {
	n := len(m)
	a, err := w.residues(&f, m)
	if err != nil || a == nil {
		return nil, err
	}
	queue, err := w.residues(&f, generators)
	if err != nil || queue == nil {
		return nil, err
	}
	rows := make([][]uint64, n) // by pivot
	for rank := 0; len(queue) > 0 && rank < n; {
		row := queue[0]
		queue = queue[1:]
		if err := w.spend(2 * n * n); err != nil { // of which zeros are skipped
			return nil, err
		}
		if pivot := reduceRow(&f, rows, row); pivot >= 0 {
			rows[pivot] = row
			rank++
			queue = append(queue, rowTimes(&f, row, a))
		}
	}
	out := &image{field: f}
	for j, row := range rows {
		if row == nil {
			out.free = append(out.free, j)
		} else {
			out.pivots = append(out.pivots, j)
		}
	}
	if err := w.spend(len(out.pivots) * len(out.pivots) * n / 2); err != nil {
		return nil, err
	}
	for k, p := range slices.Backward(out.pivots) {
		for _, later := range out.pivots[k+1:] {
			subtractRow(&f, rows[p], rows[later], later)
		}
	}
	for _, p := range out.pivots {
		row := make([]uint64, len(out.free))
		for k, j := range out.free {
			row[k] = rows[p][j]
		}
		out.rows = append(out.rows, row)
	}
	return out, nil
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
		subtractRow(f, row, rows[j], j)
	}
	return -1
}

// subtractRow clears the column j of a row by another one whose pivot it is.
func subtractRow(f *modp.Field, row, other []uint64, j int) {
	factor := row[j]
	if factor == 0 {
		return
	}
	for k := j; k < len(row); k++ {
		row[k] = f.Sub(row[k], f.Mul(factor, other[k]))
	}
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

// residues returns the stored residues of a matrix, nil where the prime divides a
// denominator.
func (w *work) residues(f *modp.Field, m matrix) ([][]uint64, error) {
	p := new(big.Int).SetUint64(f.P)
	var t big.Int
	residue := func(x *big.Int) uint64 { return f.Stored(t.Mod(x, p).Uint64()) }
	out := make([][]uint64, len(m))
	for i, row := range m {
		out[i] = make([]uint64, len(row))
		for j, v := range row {
			if v.Sign() == 0 {
				continue
			}
			if err := w.spend(words(v.Num()) + 1); err != nil {
				return nil, err
			}
			out[i][j] = residue(v.Num())
			if v.IsInt() {
				continue
			}
			den := residue(v.Denom())
			if den == 0 {
				return nil, nil
			}
			if err := w.spend(words(v.Denom()) + inverseProducts); err != nil {
				return nil, err
			}
			out[i][j] = f.Mul(out[i][j], f.Inverse(den))
		}
	}
	return out, nil
}

// inverseProducts is what an inverse modulo a prime below 2^62 counts for: at most
// 88 divisions of Euclid's algorithm (Lamé 1844) and two reductions.
const inverseProducts = 90

// wholeSpace returns all of it.
func wholeSpace(n int) *subspace {
	s := &subspace{rows: zeros(n, n)}
	for i := range n {
		s.rows[i][i].SetInt64(1)
		s.pivots = append(s.pivots, i)
	}
	return s
}
