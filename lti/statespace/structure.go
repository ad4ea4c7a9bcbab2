package statespace

import (
	"math/big"
	"slices"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// subspace is spanned by rows in reduced echelon form: row k begins with a 1 in the
// column pivots[k], where the others have 0. It is closed under a matrix: rows ·
// matrix = action · rows.
type subspace struct {
	rows   matrix
	pivots []int
	action matrix
}

func (c model) controllable() (*subspace, error) {
	return new(work).closure(c.input.transpose(len(c.inputs)), c.state.transpose(len(c.states)))
}

func (c model) observable() (*subspace, error) { return new(work).closure(c.output, c.state) }

// ControllabilityRank returns the dimension of the space of states that the
// inputs can reach from 0 (Kalman 1960): the number of states where the model is
// controllable. The rank is exact: a full one is proved modulo a prime, and less
// than that by a subspace that is found modulo primes and checked with its
// fractions. The error is ErrLimit where that takes more than 2^30 products of
// words: full matrices of nine digits stay far below it up to MaxSignals states, unless
// the subspace that is reached has fractions of hundreds of digits.
func (c model) ControllabilityRank() (int, error) {
	s, err := c.controllable()
	if err != nil {
		return 0, err
	}
	return len(s.rows), nil
}

// ObservabilityRank returns the number of combinations of states that the outputs
// tell (Kalman 1960): the number of states where the model is observable. The
// rank is exact; the error is that of ControllabilityRank.
func (c model) ObservabilityRank() (int, error) {
	s, err := c.observable()
	if err != nil {
		return 0, err
	}
	return len(s.rows), nil
}

// HiddenModes are the modes of a model that its transfer functions do not show,
// as monic polynomials that are 1 where there are none. Their roots may be
// unstable.
type HiddenModes struct {
	_ [0]func()
	// Uncontrollable modes are reached by no input.
	Uncontrollable poly.Poly
	// Unobservable modes are reached, and shown by no output.
	Unobservable poly.Poly
}

// minimal returns the controllable and observable part.
func (c model) minimal() (reduced model, hidden HiddenModes, err error) {
	reached, err := c.controllable()
	if err != nil {
		return model{}, hidden, err
	}
	part, rest := c, model{}
	if len(reached.rows) < len(c.states) {
		part, rest = c.split(reached)
	}
	if hidden.Uncontrollable, err = rest.CharacteristicPolynomial(); err != nil {
		return model{}, hidden, err
	}
	seen, err := part.observable()
	if err != nil {
		return model{}, hidden, err
	}
	hidden.Unobservable = poly.FromInts(1)
	if len(seen.rows) == len(part.states) {
		return part, hidden, nil
	}
	reduced = part.project(seen)
	all, err := part.CharacteristicPolynomial()
	if err != nil {
		return model{}, hidden, err
	}
	shown, err := reduced.CharacteristicPolynomial()
	if err != nil {
		return model{}, hidden, err
	}
	hidden.Unobservable, _, err = all.QuoRem(shown)
	return reduced, hidden, err
}

// split returns the model on the states x = (rows of s)ᵀ·z, which is closed under
// the state matrix, and the state matrix of what is left. As the rows are in
// echelon form, z are the states at the pivots, with their names and units.
func (c model) split(s *subspace) (part, rest model) {
	v := s.rows.transpose(len(c.states)) // x = v·z
	others := others(len(c.states), s.pivots)
	part = model{states: at(c.states, s.pivots), inputs: c.inputs, outputs: c.outputs,
		state: s.action.transpose(len(s.pivots)), input: c.input.rows(s.pivots),
		output: c.output.times(v, len(s.pivots)), feedthrough: c.feedthrough}
	// w = x[others] − v[others]·x[pivots] follows its own equation.
	rest = model{states: at(c.states, others), input: zeros(len(others), 0),
		state: c.state.rows(others).columns(others).minus(v.rows(others).times(c.state.rows(s.pivots).columns(others), len(others)))}
	return part, rest
}

// project returns the model of z = (rows of s)·x, on which alone the outputs
// depend. A row with more than its pivot is a combination of states.
func (c model) project(s *subspace) model {
	w := s.rows
	out := model{inputs: c.inputs, outputs: c.outputs, feedthrough: c.feedthrough,
		state: s.action, input: w.times(c.input, len(c.inputs)), output: c.output.columns(s.pivots)}
	taken := map[string]bool{}
	for _, p := range s.pivots {
		taken[c.states[p].Name] = true
	}
	for k, p := range s.pivots {
		signal := c.states[p]
		if slices.IndexFunc(w[k][p+1:], func(v *big.Rat) bool { return v.Sign() != 0 }) >= 0 {
			for signal.Name += "_observed"; taken[signal.Name]; signal.Name += "_" {
			}
			taken[signal.Name] = true
		}
		out.states = append(out.states, signal)
	}
	return out
}

// others returns the indices below n that are not in a list.
func others(n int, indices []int) []int {
	var out []int
	for i := range n {
		if !slices.Contains(indices, i) {
			out = append(out, i)
		}
	}
	return out
}

func at(signals []units.Signal, indices []int) []units.Signal {
	out := make([]units.Signal, len(indices))
	for k, i := range indices {
		out[k] = signals[i]
	}
	return out
}

// MinimalRealization returns the model without the modes that no transfer function
// shows, and these modes. It has the same transfer functions, each with the
// hidden factors cancelled.
//
// States of the result are states of c where no unobservable mode was removed. A
// state in which others are mixed to what the outputs depend on has
// "_observed" at the end of its name.
//
// The method is the decomposition of Kalman (1963) with exact subspaces. The
// error is ErrLimit, as for ControllabilityRank and CharacteristicPolynomial.
func (c Continuous) MinimalRealization() (Continuous, HiddenModes, error) {
	m, hidden, err := c.minimal()
	return Continuous{model: m}, hidden, err
}

// MinimalRealization is Continuous.MinimalRealization.
func (d Discrete) MinimalRealization() (Discrete, HiddenModes, error) {
	m, hidden, err := d.minimal()
	return Discrete{model: m, period: d.period}, hidden, err
}
