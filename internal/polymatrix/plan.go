package polymatrix

import (
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/modp"
)

// maxOperations bounds the multiplications of one elimination, and with them the
// memory of a plan.
const maxOperations = 1 << 24

// plan is an elimination written out: which slot takes which multiple of which
// other one. It holds for every point where no pivot vanishes.
type plan struct {
	rank       int
	slots      int   // places that are not always 0
	start      []int // the slot of each entry of the system
	steps      []step
	rest       []int32 // slots of the columns of a that no pivot could clear
	operations int
	negative   bool // whether the order of the pivots is an odd permutation
}

// step is one pivot.
type step struct {
	row, column int
	pivot       int32
	sources     []int32 // the rest of the pivot's row
	columns     []int32 // and the columns of these
	rows        []rowStep
}

// rowStep subtracts a multiple of the pivot's row from another one.
type rowStep struct {
	factor  int32   // the slot below or above the pivot
	targets []int32 // those of the sources' columns
}

// planner is the state of a plan in the making, at one point modulo one prime.
// Places are structural: a value that happens to be 0 keeps its place.
type planner struct {
	f            *modp.Field
	n, width     int
	slot         []int32 // of place row·width + column, −1 where there is none
	value        []uint64
	inRow, inCol []int // places among the rows and columns of a without a pivot
	rowUsed      []bool
	colUsed      []bool
}

// plan finds an order of pivots at a point of f. The error is fault.ErrLimit for
// more than maxOperations.
func (s *system) plan(f *modp.Field) (*plan, error) {
	p := &plan{start: make([]int, len(s.entries))}
	w := s.newPlanner(f, p)
	for p.rank < s.n {
		row, column := w.choose()
		if row < 0 {
			break
		}
		p.steps = append(p.steps, w.eliminate(p, row, column))
		if p.operations > maxOperations {
			return nil, fault.ErrLimit
		}
		p.rank++
	}
	for i := range s.n {
		for j := range s.n {
			if k := w.slot[i*w.width+j]; k >= 0 && !w.rowUsed[i] && !w.colUsed[j] {
				p.rest = append(p.rest, k)
			}
		}
	}
	order := make([]int, s.n)
	for _, t := range p.steps {
		order[t.row] = t.column
	}
	p.negative = p.rank == s.n && isOdd(order)
	return p, nil
}

func (s *system) newPlanner(f *modp.Field, p *plan) *planner {
	n, width := s.n, s.n+s.rhs
	w := &planner{f: f, n: n, width: width, slot: make([]int32, n*width), inRow: make([]int, n), inCol: make([]int, n),
		rowUsed: make([]bool, n), colUsed: make([]bool, n)}
	for i := range w.slot {
		w.slot[i] = -1
	}
	x := node(f)
	for k, e := range s.entries {
		w.take(p, e.row, e.column)
		p.start[k] = p.slots - 1
		w.value[p.slots-1] = f.At(e.poly.Residues(f), x)
	}
	return w
}

// take gives a place a slot.
func (w *planner) take(p *plan, row, column int) int32 {
	k := int32(p.slots)
	w.slot[row*w.width+column] = k
	w.value = append(w.value, 0)
	p.slots++
	if column < w.n {
		w.inRow[row]++
		w.inCol[column]++
	}
	return k
}

// choose returns the place of the next pivot, the one that can make the fewest
// new places (Markowitz 1957), or −1.
func (w *planner) choose() (row, column int) {
	row = -1
	best := 0
	for i := range w.n {
		if w.rowUsed[i] {
			continue
		}
		for j := range w.n {
			k := w.slot[i*w.width+j]
			if k < 0 || w.colUsed[j] || w.value[k] == 0 {
				continue
			}
			if cost := (w.inRow[i] - 1) * (w.inCol[j] - 1); row < 0 || cost < best {
				if row, column, best = i, j, cost; cost == 0 {
					return row, column
				}
			}
		}
	}
	return row, column
}

// eliminate clears the column of a pivot in all rows without one.
func (w *planner) eliminate(p *plan, row, column int) step {
	t := step{row: row, column: column, pivot: w.slot[row*w.width+column]}
	w.rowUsed[row], w.colUsed[column] = true, true
	for j := range w.width {
		if k := w.slot[row*w.width+j]; k >= 0 && j != column && (j >= w.n || !w.colUsed[j]) {
			t.sources, t.columns = append(t.sources, k), append(t.columns, int32(j))
			if j < w.n {
				w.inCol[j]--
			}
		}
	}
	inverse := w.f.Inverse(w.value[t.pivot])
	p.operations += len(t.sources) + 1
	for i := range w.n {
		factor := w.slot[i*w.width+column]
		if factor < 0 || w.rowUsed[i] {
			continue
		}
		w.inRow[i]--
		r := rowStep{factor: factor, targets: make([]int32, len(t.sources))}
		m := w.f.Mul(w.value[factor], inverse)
		for l, j := range t.columns {
			k := w.slot[i*w.width+int(j)]
			if k < 0 {
				k = w.take(p, i, int(j))
			}
			r.targets[l] = k
			w.value[k] = w.f.Sub(w.value[k], w.f.Mul(m, w.value[t.sources[l]]))
		}
		t.rows = append(t.rows, r)
		p.operations += len(t.sources) + 1
	}
	return t
}

// isOdd reports whether a permutation has odd parity.
func isOdd(order []int) bool {
	odd := false
	seen := make([]bool, len(order))
	for i := range order {
		for j := order[i]; !seen[i] && j != i; j = order[j] {
			seen[j] = true
			odd = !odd
		}
		seen[i] = true
	}
	return odd
}

// open returns the columns of unknowns that are free, or depend on the choice of
// a free one, judged at one point.
func (s *system) open(f *modp.Field) []int {
	n := s.n
	x := node(f)
	rows := make([][]uint64, n)
	for i := range rows {
		rows[i] = make([]uint64, n)
	}
	for _, e := range s.entries {
		if e.column < n {
			rows[e.row][e.column] = f.At(e.poly.Residues(f), x)
		}
	}
	pivot := make([]int, n) // the row of a column's pivot, −1 where it is free
	rank := 0
	for j := range n {
		pivot[j] = -1
		for i := rank; i < n; i++ {
			if rows[i][j] != 0 {
				rows[i], rows[rank] = rows[rank], rows[i]
				clear := f.Inverse(rows[rank][j])
				for k := range rows {
					if k != rank && rows[k][j] != 0 {
						m := f.Mul(rows[k][j], clear)
						for l := j; l < n; l++ {
							rows[k][l] = f.Sub(rows[k][l], f.Mul(m, rows[rank][l]))
						}
					}
				}
				pivot[j] = rank
				rank++
				break
			}
		}
	}
	var out []int
	for j := range n {
		depends := pivot[j] < 0
		for k := range n {
			depends = depends || pivot[k] < 0 && rows[pivot[j]][k] != 0
		}
		if depends {
			out = append(out, j)
		}
	}
	return out
}
