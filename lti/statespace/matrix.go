package statespace

import (
	"fmt"
	"math/big"
	"slices"

	"github.com/qofs/qofs/units"
)

// matrix is a rectangle of rational numbers without nil entries. Its rows are
// never changed.
type matrix [][]*big.Rat

// zeros returns a matrix of zeros.
func zeros(rows, columns int) matrix {
	m := make(matrix, rows)
	for i := range m {
		m[i] = make([]*big.Rat, columns)
		for j := range m[i] {
			m[i][j] = new(big.Rat)
		}
	}
	return m
}

// part is the place of a matrix in a model: its name and the signals of its rows
// and columns.
type part struct {
	name          string
	rows, columns []units.Signal
}

// parts returns the places of State, Input, Output and Feedthrough.
func parts(states, inputs, outputs []units.Signal) [4]part {
	return [4]part{{"state matrix", states, states}, {"input matrix", states, inputs},
		{"output matrix", outputs, states}, {"feedthrough matrix", outputs, inputs}}
}

// fault returns the error for the entry with indices i and j.
func (p part) fault(i, j int, err error) *EntryError {
	name := func(signals []units.Signal, k int) string {
		if k >= len(signals) {
			return ""
		}
		return signals[k].Name
	}
	return &EntryError{p.name, i + 1, j + 1, name(p.rows, i), name(p.columns, j), err}
}

// newMatrix copies and checks a matrix.
func newMatrix(p part, from [][]*big.Rat) (matrix, error) {
	rows, columns := len(p.rows), len(p.columns)
	m := zeros(rows, columns)
	if from == nil {
		return m, nil
	}
	if len(from) != rows {
		e := &SizeError{Matrix: p.name, Rows: len(from), WantRows: rows, WantColumns: columns}
		if len(from) > 0 {
			e.Columns = len(from[0])
		}
		return nil, e
	}
	for i, row := range from {
		if len(row) != columns {
			return nil, &SizeError{Matrix: p.name, Rows: len(from), Columns: len(row), WantRows: rows, WantColumns: columns}
		}
		for j, v := range row {
			if v == nil {
				continue
			}
			if bits := max(v.Num().BitLen(), v.Denom().BitLen()); bits > maxBits {
				return nil, p.fault(i, j, fmt.Errorf("found a number of %d bits, want at most %d: %w", bits, maxBits, ErrLimit))
			}
			m[i][j].Set(v)
		}
	}
	return m, nil
}

func (m matrix) clone() matrix {
	out := make(matrix, len(m))
	for i, row := range m {
		out[i] = make([]*big.Rat, len(row))
		for j, v := range row {
			out[i][j] = new(big.Rat).Set(v)
		}
	}
	return out
}

func (m matrix) equal(o matrix) bool {
	return slices.EqualFunc(m, o, func(r, s []*big.Rat) bool {
		return slices.EqualFunc(r, s, func(x, y *big.Rat) bool { return x.Cmp(y) == 0 })
	})
}

// transpose returns the matrix with rows and columns exchanged; columns is the
// number of columns, which a matrix without rows does not know.
func (m matrix) transpose(columns int) matrix {
	out := make(matrix, columns)
	for j := range out {
		out[j] = make([]*big.Rat, len(m))
		for i := range m {
			out[j][i] = m[i][j]
		}
	}
	return out
}

// rows returns the rows with the given indices.
func (m matrix) rows(indices []int) matrix {
	out := make(matrix, len(indices))
	for k, i := range indices {
		out[k] = m[i]
	}
	return out
}

// columns returns the columns with the given indices.
func (m matrix) columns(indices []int) matrix {
	out := make(matrix, len(m))
	for i, row := range m {
		out[i] = make([]*big.Rat, len(indices))
		for k, j := range indices {
			out[i][k] = row[j]
		}
	}
	return out
}

// times returns m·o; columns is the number of columns of o.
func (m matrix) times(o matrix, columns int) matrix {
	out := zeros(len(m), columns)
	for i, row := range m {
		for k, x := range row {
			if x.Sign() == 0 {
				continue
			}
			for j, y := range o[k] {
				if y.Sign() != 0 {
					out[i][j].Add(out[i][j], new(big.Rat).Mul(x, y))
				}
			}
		}
	}
	return out
}

// minus returns m − o.
func (m matrix) minus(o matrix) matrix {
	out := m.clone()
	for i, row := range o {
		for j, v := range row {
			out[i][j].Sub(out[i][j], v)
		}
	}
	return out
}
