package statespace

import (
	"fmt"
	"math"
	"math/big"
	"strconv"

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
// fraction that it is. The error is an *EntryError that wraps ErrNotFinite.
func (f Floats) Exact() (Matrices, error) {
	return f.matrices(nil, nil, nil, exact)
}

// Decimals returns the numbers that a reader would take the matrices for: every
// float64 is the shortest decimal that identifies it, so that 0.1 is 1/10. The
// error is that of Exact.
func (f Floats) Decimals() (Matrices, error) {
	return f.matrices(nil, nil, nil, shortest)
}

func exact(x float64) *big.Rat { return new(big.Rat).SetFloat64(x) }

func shortest(x float64) *big.Rat {
	r, _ := new(big.Rat).SetString(strconv.FormatFloat(x, 'g', -1, 64))
	return r
}

func (f Floats) matrices(states, inputs, outputs []units.Signal, read func(float64) *big.Rat) (Matrices, error) {
	var m Matrices
	from := [...]mat.Matrix{f.State, f.Input, f.Output, f.Feedthrough}
	into := [...]*[][]*big.Rat{&m.State, &m.Input, &m.Output, &m.Feedthrough}
	for k, p := range parts(states, inputs, outputs) {
		if from[k] == nil {
			continue
		}
		rows, columns := from[k].Dims()
		for i := range rows {
			row := make([]*big.Rat, columns)
			for j := range row {
				v := from[k].At(i, j)
				if math.IsNaN(v) || math.IsInf(v, 0) {
					return Matrices{}, p.fault(i, j, fmt.Errorf("found %v: %w", v, ErrNotFinite))
				}
				row[j] = read(v)
			}
			*into[k] = append(*into[k], row)
		}
	}
	return m, nil
}

// FromFloats is New for gonum's matrices, whose entries are taken for the exact
// binary fractions that they are. The errors are those of New and of Floats.Exact.
func FromFloats(states, inputs, outputs []units.Signal, f Floats) (Continuous, error) {
	m, err := f.matrices(states, inputs, outputs, exact)
	if err != nil {
		return Continuous{}, err
	}
	return New(states, inputs, outputs, m)
}

// FromFloatsDiscrete is FromFloats for a model in discrete time.
func FromFloatsDiscrete(states, inputs, outputs []units.Signal, f Floats, period units.Quantity) (Discrete, error) {
	m, err := f.matrices(states, inputs, outputs, exact)
	if err != nil {
		return Discrete{}, err
	}
	return NewDiscrete(states, inputs, outputs, m, period)
}

// FromDecimals is New for gonum's matrices of which every entry is taken for the
// shortest decimal that identifies it: for numbers that were typed, measured or
// printed, where FromFloats gives the bits of a computed result. The model prints as
// the matrices do. The errors are those of FromFloats.
func FromDecimals(states, inputs, outputs []units.Signal, f Floats) (Continuous, error) {
	m, err := f.matrices(states, inputs, outputs, shortest)
	if err != nil {
		return Continuous{}, err
	}
	return New(states, inputs, outputs, m)
}

// FromDecimalsDiscrete is FromDecimals for a model in discrete time.
func FromDecimalsDiscrete(states, inputs, outputs []units.Signal, f Floats, period units.Quantity) (Discrete, error) {
	m, err := f.matrices(states, inputs, outputs, shortest)
	if err != nil {
		return Discrete{}, err
	}
	return NewDiscrete(states, inputs, outputs, m, period)
}

// Floats returns the coefficients for gonum, each entry rounded once to the
// nearest float64. The error is an *EntryError that wraps ErrRange where one is
// too large.
func (c model) Floats() (Floats, error) {
	var f Floats
	from := [...]matrix{c.state, c.input, c.output, c.feedthrough}
	into := [...]*mat.Matrix{&f.State, &f.Input, &f.Output, &f.Feedthrough}
	for k, p := range parts(c.states, c.inputs, c.outputs) {
		if len(p.rows) == 0 || len(p.columns) == 0 {
			continue
		}
		d := mat.NewDense(len(p.rows), len(p.columns), nil)
		for i, row := range from[k] {
			for j, v := range row {
				x, _ := v.Float64()
				if math.IsInf(x, 0) {
					return Floats{}, p.fault(i, j, ErrRange)
				}
				d.Set(i, j, x)
			}
		}
		*into[k] = d
	}
	return f, nil
}
