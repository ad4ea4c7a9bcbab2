package statespace

import (
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/polymatrix"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// CharacteristicPolynomial returns det(s·I − state matrix), with z in the place of s
// for a Discrete; it is monic. Its
// roots are all modes of the model, those included that no input reaches or no
// output shows. The error is ErrLimit for a matrix whose determinant would take
// more than 2^31 multiplications: far beyond 100 states in chains and networks,
// about 60 states with full matrices of nine digits.
func (c model) CharacteristicPolynomial() (poly.Poly, error) {
	a, _ := c.rows(nil, nil)
	_, den, err := polymatrix.SolveAll(a, nil, nil)
	if err != nil {
		return poly.Poly{}, err
	}
	return poly.Poly(ratpoly.FromInteger(den)).Monic(), nil
}

// reading is an output, or a state read as one.
type reading struct {
	signal units.Signal
	states []*big.Rat // coefficients of the states
	fed    []*big.Rat // and of the inputs
}

// readings returns the outputs, and where there is none, the states, of some
// names.
func (c model) readings(names []string) ([]reading, error) {
	out := make([]reading, len(names))
	for k, name := range names {
		named := func(s units.Signal) bool { return s.Name == name }
		if o := slices.IndexFunc(c.outputs, named); o >= 0 {
			out[k] = reading{c.outputs[o], c.output[o], c.feedthrough[o]}
			continue
		}
		i, err := find("output", append(slices.Clone(c.outputs), c.states...), []string{name})
		if err != nil {
			return nil, err
		}
		x := i[0] - len(c.outputs)
		unit := zeros(2, max(len(c.states), len(c.inputs)))
		unit[0][x].SetInt64(1)
		out[k] = reading{c.states[x], unit[0][:len(c.states)], unit[1][:len(c.inputs)]}
	}
	return out, nil
}

// rows returns the equations (s·I − state)·x = input·u and, below them, y −
// output·x = feedthrough·u for some inputs and readings, each multiplied by a
// number that makes it whole.
func (c model) rows(inputs []int, outputs []reading) (a, right [][]intpoly.Poly) {
	n := len(c.states)
	size := n + len(outputs)
	a, right = make([][]intpoly.Poly, size), make([][]intpoly.Poly, len(inputs))
	one := big.NewInt(1)
	fill := func(i int, states, fed []*big.Rat, own intpoly.Poly) {
		scale := commonDenominator(states, fed, inputs)
		a[i] = make([]intpoly.Poly, size)
		for j, v := range states {
			if v.Sign() != 0 {
				a[i][j] = intpoly.FromBigs(whole(v, scale)).Neg()
			}
		}
		a[i][i] = a[i][i].Add(own.MulInt(scale))
		for r, k := range inputs {
			right[r] = append(right[r], intpoly.FromBigs(whole(fed[k], scale)))
		}
	}
	for i := range c.states {
		fill(i, c.state[i], c.input[i], intpoly.FromBigs(nil, one))
	}
	for k, o := range outputs {
		fill(n+k, o.states, o.fed, intpoly.FromBigs(one))
	}
	return a, right
}

// commonDenominator returns a number that makes a row whole.
func commonDenominator(states, fed []*big.Rat, inputs []int) *big.Int {
	d := big.NewInt(1)
	take := func(v *big.Rat) {
		if !v.IsInt() {
			g := new(big.Int).GCD(nil, nil, d, v.Denom())
			d.Mul(d, g.Quo(v.Denom(), g))
		}
	}
	for _, v := range states {
		take(v)
	}
	for _, k := range inputs {
		take(fed[k])
	}
	return d
}

// whole returns scale·v, which is a whole number.
func whole(v *big.Rat, scale *big.Int) *big.Int {
	n := new(big.Int).Mul(v.Num(), scale)
	return n.Quo(n, v.Denom())
}

// functions returns numerators by input and output, and the denominator.
func (c model) functions(inputs, outputs []string) (from []int, to []reading, nums [][]poly.Poly, den poly.Poly, err error) {
	if from, err = find("input", c.inputs, inputs); err != nil {
		return nil, nil, nil, den, err
	}
	if to, err = c.readings(outputs); err != nil {
		return nil, nil, nil, den, err
	}
	a, right := c.rows(from, to)
	columns := make([]int, len(to))
	for k := range columns {
		columns[k] = len(c.states) + k
	}
	found, d, err := polymatrix.SolveAll(a, right, columns)
	if err != nil {
		return nil, nil, nil, den, err
	}
	nums = make([][]poly.Poly, len(from))
	for i := range found {
		for _, num := range found[i] {
			nums[i] = append(nums[i], poly.Poly(ratpoly.FromInteger(num)))
		}
	}
	return from, to, nums, poly.Poly(ratpoly.FromInteger(d)), nil
}

// find returns the indices of names.
func find(kind string, signals []units.Signal, names []string) ([]int, error) {
	out := make([]int, len(names))
	for k, name := range names {
		out[k] = slices.IndexFunc(signals, func(s units.Signal) bool { return s.Name == name })
		if out[k] < 0 {
			e := &UnknownSignalError{Kind: kind, Name: name}
			for _, s := range signals {
				if !slices.Contains(e.Have, s.Name) { // a state may be an output
					e.Have = append(e.Have, s.Name)
				}
			}
			return nil, e
		}
	}
	return out, nil
}

// TransferFunction returns the transfer function from an input to an output, or to
// a state, in their units and under their names, exactly. Its denominator is the
// characteristic polynomial up to a constant: nothing is cancelled, so that modes
// which the pair does not show are common factors (tf.Continuous.LowestTerms
// returns them). The errors are *UnknownSignalError, and ErrLimit as for
// CharacteristicPolynomial.
//
// The method is sparse elimination modulo primes (see CharacteristicPolynomial),
// which measures far below the recurrence of Faddeev and Leverrier.
func (c Continuous) TransferFunction(input, output string) (tf.Continuous, error) {
	all, err := c.TransferFunctions([]string{input}, []string{output})
	if err != nil {
		return tf.Continuous{}, err
	}
	return all[0][0], nil
}

// TransferFunctions returns the transfer functions from some inputs to some
// outputs, a row for each output, from one elimination; in all else it is like
// TransferFunction.
func (c Continuous) TransferFunctions(inputs, outputs []string) ([][]tf.Continuous, error) {
	from, to, nums, den, err := c.functions(inputs, outputs)
	if err != nil {
		return nil, err
	}
	out := make([][]tf.Continuous, len(to))
	for k, o := range to {
		for i, u := range from {
			g, err := tf.New(nums[i][k], den)
			if err != nil {
				return nil, err
			}
			if g, err = g.WithSignals(c.inputs[u], o.signal); err != nil {
				return nil, err
			}
			out[k] = append(out[k], g)
		}
	}
	return out, nil
}

// TransferFunction is Continuous.TransferFunction, in z.
func (d Discrete) TransferFunction(input, output string) (tf.Discrete, error) {
	all, err := d.TransferFunctions([]string{input}, []string{output})
	if err != nil {
		return tf.Discrete{}, err
	}
	return all[0][0], nil
}

// TransferFunctions is Continuous.TransferFunctions, in z.
func (d Discrete) TransferFunctions(inputs, outputs []string) ([][]tf.Discrete, error) {
	from, to, nums, den, err := d.functions(inputs, outputs)
	if err != nil {
		return nil, err
	}
	out := make([][]tf.Discrete, len(to))
	for k, o := range to {
		for i, u := range from {
			g, err := tf.NewDiscrete(nums[i][k], den, d.Period())
			if err != nil {
				return nil, err
			}
			if g, err = g.WithSignals(d.inputs[u], o.signal); err != nil {
				return nil, err
			}
			out[k] = append(out[k], g)
		}
	}
	return out, nil
}
