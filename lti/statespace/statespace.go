// Package statespace holds linear models as matrices whose entries are exact
// rational numbers, with a named signal and its unit for every state, input and
// output.
//
// A Continuous is
//
//	d/dt states = state matrix · states + input matrix · inputs
//	outputs     = output matrix · states + feedthrough matrix · inputs
//
// and a Discrete the same with the next sample in the place of the derivative. One
// convention holds throughout: an entry is the number that belongs to the units of
// its row and its column. In the row of level: mm and the column of inflow: L/min
// of the input matrix, 3 means that the level rises by 3 mm a second for 1 L/min.
// Time counts in seconds. Both types are immutable and safe to share.
//
//	level := []units.Signal{{Name: "level", Unit: units.MustParse("m")}}
//	inflow := []units.Signal{{Name: "inflow", Unit: units.MustParse("m^3/s")}}
//	tank, err := statespace.New(level, inflow, level, statespace.Matrices{
//		State:  [][]*big.Rat{{big.NewRat(-1, 1500)}},
//		Input:  [][]*big.Rat{{big.NewRat(1, 5600)}},
//		Output: [][]*big.Rat{{big.NewRat(1, 1)}},
//	})
//	g, err := tank.TransferFunction("inflow", "level")
package statespace

import (
	"fmt"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/units"
)

// ErrLimit: a documented bound on size or work was reached.
var ErrLimit = fault.ErrLimit

// MaxSignals bounds the number of states and of inputs and outputs.
const MaxSignals = 256

// maxBits bounds numerator and denominator of an entry.
const maxBits = 1 << 13

// Matrices are the coefficients of a model, row by row. A nil matrix is 0, and
// so is a nil entry. State has a row and a column for each state, Input a row
// for each state and a column for each input, Output a row for each output and a
// column for each state, and Feedthrough a row for each output and a column for
// each input.
type Matrices struct {
	State, Input, Output, Feedthrough [][]*big.Rat
}

// Continuous is a model in continuous time. The zero value has no signals.
type Continuous struct {
	_ [0]func()
	model
}

// Discrete is a model in discrete time with a sampling period. The zero value
// has no signals and a period of 1 s.
type Discrete struct {
	_ [0]func()
	model
	period *big.Rat // seconds; nil is 1
}

// model is what both have in common.
type model struct {
	states, inputs, outputs []units.Signal

	state, input, output, feedthrough matrix
}

// New returns the continuous model with the given signals and matrices. Every
// signal needs a name; the names within each of the three lists differ. A signal
// may be a state and an output.
//
// The errors are *SignalError, *SizeError, and ErrLimit for more than MaxSignals
// of a kind; an entry of more than 8192 bits in numerator or denominator is an
// *EntryError, which names its place and wraps ErrLimit.
func New(states, inputs, outputs []units.Signal, m Matrices) (Continuous, error) {
	c, err := newModel(states, inputs, outputs, m)
	return Continuous{model: c}, err
}

// NewDiscrete returns the discrete model with the given signals, matrices and
// sampling period. The errors are those of New, *units.MismatchError for a
// period that is no time, and ErrPeriod for one that is not above 0.
func NewDiscrete(states, inputs, outputs []units.Signal, m Matrices, period units.Quantity) (Discrete, error) {
	t, err := period.ConvertTo(second)
	if err != nil {
		return Discrete{}, err
	}
	if t.Value().Sign() <= 0 {
		return Discrete{}, ErrPeriod
	}
	c, err := newModel(states, inputs, outputs, m)
	if err != nil {
		return Discrete{}, err
	}
	return Discrete{model: c, period: t.Value()}, nil
}

var second = units.MustParse("s")

// Period is the sampling period, a number of seconds.
func (d Discrete) Period() units.Quantity {
	if d.period == nil {
		return units.NewQuantity(big.NewRat(1, 1), second)
	}
	return units.NewQuantity(d.period, second)
}

func newModel(states, inputs, outputs []units.Signal, m Matrices) (model, error) {
	c := model{states: slices.Clone(states), inputs: slices.Clone(inputs), outputs: slices.Clone(outputs)}
	for _, list := range []struct {
		kind    string
		signals []units.Signal
	}{{"state", states}, {"input", inputs}, {"output", outputs}} {
		if err := checkSignals(list.kind, list.signals); err != nil {
			return model{}, err
		}
	}
	into := [...]*matrix{&c.state, &c.input, &c.output, &c.feedthrough}
	from := [...][][]*big.Rat{m.State, m.Input, m.Output, m.Feedthrough}
	for k, p := range parts(states, inputs, outputs) {
		var err error
		if *into[k], err = newMatrix(p, from[k]); err != nil {
			return model{}, err
		}
	}
	return c, nil
}

func tooMany(kind string, n int) error {
	return fmt.Errorf("found %s, want at most %d: %w", count(n, kind), MaxSignals, ErrLimit)
}

func checkSignals(kind string, signals []units.Signal) error {
	if len(signals) > MaxSignals {
		return tooMany(kind, len(signals))
	}
	seen := map[string]bool{}
	for _, s := range signals {
		switch {
		case s.Name == "":
			return &SignalError{Kind: kind, Signal: s, Reason: "has no name"}
		case seen[s.Name]:
			return &SignalError{Kind: kind, Signal: s, Reason: "stands twice in the list"}
		}
		seen[s.Name] = true
	}
	return nil
}

// States returns the states.
func (c model) States() []units.Signal { return slices.Clone(c.states) }

// Inputs returns the inputs.
func (c model) Inputs() []units.Signal { return slices.Clone(c.inputs) }

// Outputs returns the outputs.
func (c model) Outputs() []units.Signal { return slices.Clone(c.outputs) }

// Matrices returns the coefficients, without nil entries.
func (c model) Matrices() Matrices {
	return Matrices{c.state.clone(), c.input.clone(), c.output.clone(), c.feedthrough.clone()}
}

// equal reports whether both have the same signals and the same entries.
func (c model) equal(d model) bool {
	same := func(s, t units.Signal) bool { return s.Equal(t) }
	return slices.EqualFunc(c.states, d.states, same) && slices.EqualFunc(c.inputs, d.inputs, same) &&
		slices.EqualFunc(c.outputs, d.outputs, same) && c.state.equal(d.state) && c.input.equal(d.input) &&
		c.output.equal(d.output) && c.feedthrough.equal(d.feedthrough)
}

// Equal reports whether both have the same signals, in the same order, and the
// same entries. Models with other states may still be Equivalent as transfer
// functions.
func (c Continuous) Equal(d Continuous) bool { return c.equal(d.model) }

// Equal is Continuous.Equal; the periods are the same, too.
func (d Discrete) Equal(e Discrete) bool {
	return d.equal(e.model) && d.Period().Equal(e.Period())
}
