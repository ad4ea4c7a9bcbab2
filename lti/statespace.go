package lti

import (
	"fmt"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/units"
)

// StateSpace returns the equations in first-order form, exactly, from some inputs
// to some outputs, in declared units. Outputs may be derivatives, as in "level'",
// and inputs; further inputs are named in held and are 0, as in TransferFunction.
//
// The states are signals and derivatives of signals, under their names: as many
// as the determinant has roots, so that nothing is cancelled and no mode is
// added. Signals that stand differentiated in the equations come first. Where an
// equation holds derivatives of inputs, a state may be a signal less what the
// inputs add to it at once; its name then ends in "_less_inputs".
//
// The errors are those of TransferFunction; *ImproperError where an output follows
// a derivative of an input; and ErrLimit beyond the limits of statespace.New, or
// where making the equations explicit takes more than 2^30 products of words.
//
// The states are those of the Popov form of InitialState. The input matrix holds
// the Markov parameters of the signals, as in the observable realisation of B. L.
// Ho and R. E. Kalman, 1966.
func (s *System) StateSpace(inputs, outputs []string, held ...string) (statespace.Continuous, error) {
	none := statespace.Continuous{}
	in, out, zero, err := s.parts(inputs, outputs, held)
	if err != nil {
		return none, err
	}
	var signals []int
	for _, d := range out {
		if !slices.Contains(in, d.signal) {
			signals = append(signals, d.signal)
		}
	}
	call := fmt.Sprintf("StateSpace([]string{%s}, []string{%s}, %%s)", quoted(inputs), quoted(outputs))
	unknowns, err := s.unknowns(in, signals, zero, call)
	if err != nil {
		return none, err
	}
	b := &spaceBuilder{system: s, inputs: in, left: maxExplicitWork}
	b.unknowns, _ = s.bySignificance(unknowns)
	if err := b.solve(out); err != nil {
		return none, err
	}
	if err := b.addStates(); err != nil {
		return none, err
	}
	for _, d := range out {
		if err := b.addOutput(d); err != nil {
			return none, err
		}
	}
	from := make([]units.Signal, len(in))
	for l, i := range in {
		from[l] = s.signals[i]
	}
	return statespace.New(b.states, from, b.outputs, b.m)
}

// spaceBuilder turns z' = F z + G u, x = C z + D u in coherent units, for the
// states z of explicit equations, into matrices in declared units. An unknown x
// with the expansion … + D + h_1/s + h_2/s² + … has h_1 in the row of G for the
// state that is x, h_2 in that for x', and so on, because the rows of C F^k for x
// are those of the unit matrix.
type spaceBuilder struct {
	system           *System
	inputs, unknowns []int
	form             *explicit
	expansion        *expansion
	left             budget
	m                statespace.Matrices
	states, outputs  []units.Signal
	scales           []*big.Rat // of the states
}

// solve makes the equations explicit and expands the unknowns at infinity.
func (b *spaceBuilder) solve(outputs []derivative) error {
	e := b.system.elimination(b.inputs, b.unknowns)
	rows := make([][]intpoly.Poly, len(e.a))
	for i, r := range b.system.rows {
		rows[i] = slices.Clone(e.a[i])
		for _, input := range b.inputs {
			rows[i] = append(rows[i], r.coefficient(input, e.scales[i]))
		}
	}
	var ok bool
	var err error
	b.form, ok, err = newExplicit(rows, len(b.unknowns), &b.left)
	switch {
	case err != nil:
		return err
	case !ok: // asked again for the sake of the explanation
		if _, _, err := e.solve(nil, nil); err != nil {
			return err
		}
		return ErrLimit
	case len(b.form.states) > statespace.MaxSignals:
		return ErrLimit
	}
	order := 0
	for _, d := range outputs {
		order = max(order, d.order)
	}
	b.expansion, err = b.form.expand(len(b.inputs), order, &b.left)
	return err
}

// addStates adds the rows of F and G. A state x^(k) is the derivative itself
// where the inputs add nothing to it at once, that is, where the expansion of x
// begins below s^−k.
func (b *spaceBuilder) addStates() error {
	for _, at := range b.form.states {
		signal, err := b.system.signalOf(derivative{b.unknowns[at.column], at.order})
		if err != nil {
			return err
		}
		if _, _, added := b.expansion.above(at.column, -at.order-1); added {
			signal.Name += "_less_inputs"
		}
		b.states = append(b.states, signal)
		b.scales = append(b.scales, signal.Unit.Scale())
	}
	for i, at := range b.form.states {
		v, err := b.form.derivative(state{at.column, at.order + 1}, &b.left)
		if err != nil {
			return err
		}
		f, g := b.declared(v, b.expansion.at(at.column, -at.order-1), b.scales[i])
		b.m.State, b.m.Input = append(b.m.State, f), append(b.m.Input, g)
	}
	return nil
}

// addOutput adds a row of C and D.
func (b *spaceBuilder) addOutput(d derivative) error {
	signal, err := b.system.signalOf(d)
	if err != nil {
		return err
	}
	var c vector
	direct := make([]*big.Rat, len(b.inputs))
	column := slices.Index(b.unknowns, d.signal)
	switch input := slices.Index(b.inputs, d.signal); {
	case column >= 0:
		if l, power, ok := b.expansion.above(column, -d.order); ok {
			return &ImproperError{Signal: signal.Name, Input: b.system.signals[b.inputs[l]].Name, Order: power + d.order}
		}
		if c, err = b.form.derivative(state{column, d.order}, &b.left); err != nil {
			return err
		}
		direct = b.expansion.at(column, -d.order)
	case d.order > 0:
		return &ImproperError{Signal: signal.Name, Input: b.system.signals[d.signal].Name, Order: d.order}
	default:
		direct[input] = big.NewRat(1, 1)
	}
	row, fed := b.declared(c, direct, signal.Unit.Scale())
	b.outputs = append(b.outputs, signal)
	b.m.Output, b.m.Feedthrough = append(b.m.Output, row), append(b.m.Feedthrough, fed)
	return nil
}

// declared converts a row by states and by inputs, of something with a scale,
// from coherent units.
func (b *spaceBuilder) declared(byState vector, byInput []*big.Rat, scale *big.Rat) (f, g []*big.Rat) {
	f, g = make([]*big.Rat, len(b.scales)), make([]*big.Rat, len(b.inputs))
	for k, v := range byState {
		f[k] = new(big.Rat).Mul(v, b.scales[k])
		f[k].Quo(f[k], scale)
	}
	for l, v := range byInput {
		if v != nil {
			g[l] = new(big.Rat).Mul(v, b.system.signals[b.inputs[l]].Unit.Scale())
			g[l].Quo(g[l], scale)
		}
	}
	return f, g
}
