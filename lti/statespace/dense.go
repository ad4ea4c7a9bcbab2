package statespace

import (
	"fmt"
	"math"
	"math/big"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/units"
)

// ErrNotFinite: an entry is not a number or infinite.
var ErrNotFinite = fault.ErrNotFinite

// ErrRange: an entry does not fit a float64.
var ErrRange = fault.ErrRange

// Floats are the coefficients of a model as float64; see Matrices. A nil matrix
// is 0, also where it would have no rows or columns, which mat.Dense does not
// allow.
type Floats struct {
	State, Input, Output, Feedthrough mat.Matrix
}

// Exact returns the same numbers as rational ones: every float64 is the binary
// fraction that it is. The error is ErrNotFinite.
func (f Floats) Exact() (Matrices, error) {
	var m Matrices
	for _, part := range []struct {
		name string
		from mat.Matrix
		into *[][]*big.Rat
	}{{"state matrix", f.State, &m.State}, {"input matrix", f.Input, &m.Input},
		{"output matrix", f.Output, &m.Output}, {"feedthrough matrix", f.Feedthrough, &m.Feedthrough}} {
		if part.from == nil {
			continue
		}
		rows, columns := part.from.Dims()
		for i := range rows {
			row := make([]*big.Rat, columns)
			for j := range row {
				v := part.from.At(i, j)
				if math.IsNaN(v) || math.IsInf(v, 0) {
					return Matrices{}, fmt.Errorf("statespace: %s, row %d, column %d: %v: %w", part.name, i+1, j+1, v, ErrNotFinite)
				}
				row[j] = new(big.Rat).SetFloat64(v)
			}
			*part.into = append(*part.into, row)
		}
	}
	return m, nil
}

// FromFloats is New for gonum's matrices, whose entries are taken for the exact
// binary fractions that they are. The errors are those of New and ErrNotFinite.
func FromFloats(states, inputs, outputs []units.Signal, f Floats) (Continuous, error) {
	m, err := f.Exact()
	if err != nil {
		return Continuous{}, err
	}
	return New(states, inputs, outputs, m)
}

// FromFloatsDiscrete is FromFloats for a model in discrete time.
func FromFloatsDiscrete(states, inputs, outputs []units.Signal, f Floats, period units.Quantity) (Discrete, error) {
	m, err := f.Exact()
	if err != nil {
		return Discrete{}, err
	}
	return NewDiscrete(states, inputs, outputs, m, period)
}

// Floats returns the coefficients for gonum, each entry rounded once to the
// nearest float64. The error is ErrRange where one is too large.
func (c model) Floats() (Floats, error) {
	var f Floats
	for _, part := range []struct {
		name string
		from matrix
		into *mat.Matrix
	}{{"state matrix", c.state, &f.State}, {"input matrix", c.input, &f.Input},
		{"output matrix", c.output, &f.Output}, {"feedthrough matrix", c.feedthrough, &f.Feedthrough}} {
		if len(part.from) == 0 || len(part.from[0]) == 0 {
			continue
		}
		d := mat.NewDense(len(part.from), len(part.from[0]), nil)
		for i, row := range part.from {
			for j, v := range row {
				x, _ := v.Float64()
				if math.IsInf(x, 0) {
					return Floats{}, fmt.Errorf("statespace: %s, row %d, column %d: %w", part.name, i+1, j+1, ErrRange)
				}
				d.Set(i, j, x)
			}
		}
		*part.into = d
	}
	return f, nil
}
