package lti

import (
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/intpoly"
)

// explicit is a set of equations solved for the highest derivative of every
// signal: x^(d) is a combination of derivatives below the order d that each
// signal has here, and of derivatives of inputs. The lower derivatives are the
// states: as many as the degree of the determinant, free and independent.
//
// It is the Popov form of the polynomial matrix A(s), found by operations on
// whole rows, which change no solution: leading terms are cancelled until every
// row has its own column in which its degree is the largest (Mulders and
// Storjohann 2003), and then all other entries of that column are brought below
// it.
type explicit struct {
	rows   []explicitRow
	degree []int   // by column: the order d
	states []state // by index
	index  map[state]int
	n      int // columns of unknowns; the columns after them belong to inputs
}

// budget is how many products of words are left.
type budget int

func (b *budget) spend(n int) error {
	if *b -= budget(n); *b < 0 {
		return ErrLimit
	}
	return nil
}

// state is a derivative of the unknown in a column.
type state struct{ column, order int }

// vector is a combination of states.
type vector map[int]*big.Rat

type explicitRow struct {
	entries []intpoly.Poly
	degree  int // of the largest entry among the unknowns
	pivot   int // the last of the columns with that degree, −1 where all are 0
}

// maxExplicitWork bounds the products of words that one call may take to make
// equations explicit, and to solve for states.
const maxExplicitWork = 1 << 30

// touch is what it costs to take up an entry, in products of words.
const touch = 128

// newExplicit solves a·x = b·u, where the columns of b follow those of a. Of two
// columns of one degree the later one is solved for, so that what should stay a
// state comes first. ok is false where the determinant is 0.
func newExplicit(rows [][]intpoly.Poly, n int, left *budget) (x *explicit, ok bool, err error) {
	x = &explicit{n: n, index: map[state]int{}, degree: make([]int, n), rows: make([]explicitRow, n)}
	owner := make([]int, n)
	for j := range owner {
		owner[j] = -1
	}
	for i := range rows {
		x.rows[i].entries = slices.Clone(rows[i])
		for k := i; k >= 0; {
			r := &x.rows[k]
			x.measure(r)
			if r.pivot < 0 {
				return nil, false, nil
			}
			held := owner[r.pivot]
			if held < 0 {
				owner[r.pivot] = k
				break
			}
			if x.rows[held].degree > r.degree {
				owner[r.pivot], held, k = k, k, held
			}
			if err := x.cancel(&x.rows[k], &x.rows[held], x.rows[k].degree, left); err != nil {
				return nil, false, err
			}
		}
	}
	sorted := make([]explicitRow, n)
	for j, i := range owner {
		sorted[j], x.degree[j] = x.rows[i], x.rows[i].degree
	}
	x.rows = sorted
	for j := range x.rows {
		if err := x.lower(j, left); err != nil {
			return nil, false, err
		}
		for order := range x.degree[j] {
			x.index[state{j, order}] = len(x.states)
			x.states = append(x.states, state{j, order})
		}
	}
	return x, true, nil
}

// measure sets degree and pivot of a row and divides it by the number that all
// its coefficients share.
func (x *explicit) measure(r *explicitRow) {
	r.degree, r.pivot = -1, -1
	var content big.Int
	for j, p := range r.entries {
		if p.IsZero() {
			continue
		}
		if !isOne(&content) {
			content.GCD(nil, nil, &content, p.Content())
		}
		if j < x.n && p.Degree() >= r.degree {
			r.degree, r.pivot = p.Degree(), j
		}
	}
	if content.Sign() > 0 && !isOne(&content) {
		for j, p := range r.entries {
			if !p.IsZero() {
				r.entries[j] = p.QuoInt(&content)
			}
		}
	}
}

func isOne(n *big.Int) bool { return n.IsInt64() && n.Int64() == 1 }

// cancel takes a multiple of the row by away from r, so that the term of the
// given order in the pivot column of by vanishes there.
func (x *explicit) cancel(r, by *explicitRow, order int, left *budget) error {
	c, lead := r.entries[by.pivot].Coefficient(order), by.entries[by.pivot].Leading()
	g := new(big.Int).GCD(nil, nil, new(big.Int).Abs(c), new(big.Int).Abs(lead))
	c.Quo(c, g)
	lead.Quo(lead, g)
	work := len(r.entries)
	for j, p := range by.entries {
		own := r.entries[j]
		if own.IsZero() && p.IsZero() {
			continue
		}
		work += touch + 4*(own.Degree()+2)*(own.MaxBitLen()/64+1)*(lead.BitLen()/64+1) + 4*(p.Degree()+2)*(p.MaxBitLen()/64+1)*(c.BitLen()/64+1)
		r.entries[j] = own.MulInt(lead).Sub(p.MulInt(c).MulPower(order - by.degree))
	}
	return left.spend(work)
}

// lower brings the entries of row j below the degrees of their columns, its own
// leading term apart, from the highest order down. What is taken away has only
// terms of lower order, or of the same order in earlier columns.
func (x *explicit) lower(j int, left *budget) error {
	r := &x.rows[j]
	for order := r.degree; order >= 0; order-- {
		for k := x.n - 1; k >= 0; k-- {
			if k == j || order < x.degree[k] || r.entries[k].Sign(order) == 0 {
				continue
			}
			if err := x.cancel(r, &x.rows[k], order, left); err != nil {
				return err
			}
			x.measure(r)
		}
	}
	return nil
}

// derivative returns a derivative of the unknown in a column as a combination
// of states, for inputs that are 0.
func (x *explicit) derivative(d state, left *budget) (vector, error) {
	if i, ok := x.index[d]; ok {
		return vector{i: big.NewRat(1, 1)}, nil
	}
	v := vector{}
	if d.order == x.degree[d.column] {
		r := x.rows[d.column]
		lead := new(big.Rat).SetInt(r.entries[d.column].Leading())
		for k, p := range r.entries[:x.n] {
			for order := range min(p.Degree()+1, x.degree[k]) {
				if c := p.Coefficient(order); c.Sign() != 0 {
					at := new(big.Rat).SetInt(c.Neg(c))
					v[x.index[state{k, order}]] = at.Quo(at, lead)
				}
			}
		}
	} else {
		below, err := x.derivative(state{d.column, d.order - 1}, left)
		if err != nil {
			return nil, err
		}
		for _, i := range below.indices() {
			up, err := x.derivative(state{x.states[i].column, x.states[i].order + 1}, left)
			if err != nil {
				return nil, err
			}
			if err := v.addMultiple(up, below[i], left); err != nil {
				return nil, err
			}
		}
	}
	return v, nil
}

// addMultiple adds k·w to v.
func (v vector) addMultiple(w vector, k *big.Rat, left *budget) error {
	work := 0
	for i, c := range w {
		sum := new(big.Rat).Mul(c, k)
		words := (sum.Num().BitLen()+sum.Denom().BitLen())/64 + 1
		work += touch/4 + 8*words*words // common factors are the most of it
		if old := v[i]; old != nil {
			sum.Add(sum, old)
		}
		if v[i] = sum; sum.Sign() == 0 {
			delete(v, i)
		}
	}
	return left.spend(work)
}

// indices returns the states in v, ascending.
func (v vector) indices() []int {
	out := make([]int, 0, len(v))
	for i := range v {
		out = append(out, i)
	}
	slices.Sort(out)
	return out
}
