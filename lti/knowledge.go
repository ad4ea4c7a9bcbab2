package lti

import (
	"errors"
	"math/big"
	"slices"
)

// knowledge is a set of linear equations for the states, in echelon form.
type knowledge struct {
	rows []fact
	left *budget
}

// fact is a combination of states with a known value. It begins with the state
// pivot, which has the factor 1 and stands in no later fact.
type fact struct {
	pivot  int
	states vector
	value  *big.Rat
	parts  vector // how it was made from the values that were given, by index of rows
	name   string // of the value that brought it, as "level = 0.2 m"
}

// add takes in that a combination of states has a value. Where that follows from
// what is known, or contradicts it, it returns the value that follows and the
// names of the values it follows from, and takes in nothing.
func (k *knowledge) add(v vector, value *big.Rat, source InitialValue) (implied *big.Rat, from []string, err error) {
	f := fact{states: vector{}, value: new(big.Rat).Set(value), parts: vector{}, name: source.String()}
	one := big.NewRat(1, 1)
	if err := f.states.addMultiple(v, one, k.left); err != nil {
		return nil, nil, err
	}
	for _, old := range k.rows {
		c := f.states[old.pivot]
		if c == nil {
			continue
		}
		c = new(big.Rat).Neg(c)
		if err := f.states.addMultiple(old.states, c, k.left); err != nil {
			return nil, nil, err
		}
		if err := f.parts.addMultiple(old.parts, c, k.left); err != nil {
			return nil, nil, err
		}
		f.value.Add(f.value, new(big.Rat).Mul(c, old.value))
	}
	if len(f.states) == 0 {
		for _, i := range f.parts.indices() {
			from = append(from, k.rows[i].name)
		}
		return new(big.Rat).Sub(value, f.value), from, nil
	}
	f.parts[len(k.rows)] = one
	f.pivot = f.states.indices()[0]
	inverse := new(big.Rat).Inv(f.states[f.pivot])
	for _, w := range []vector{f.states, f.parts} {
		for i, c := range w {
			w[i] = new(big.Rat).Mul(c, inverse)
		}
	}
	f.value.Mul(f.value, inverse)
	k.rows = append(k.rows, f)
	return nil, nil, nil
}

// solve returns the states. There are as many facts.
func (k *knowledge) solve() vector {
	out := vector{}
	for _, f := range slices.Backward(k.rows) {
		sum := new(big.Rat).Set(f.value)
		for i, c := range f.states {
			if i != f.pivot {
				sum.Sub(sum, new(big.Rat).Mul(c, out[i]))
			}
		}
		out[f.pivot] = sum
	}
	return out
}

// joined is errors.Join, but for a single error, which stays as it is.
func joined(faults []error) error {
	if len(faults) == 1 {
		return faults[0]
	}
	return errors.Join(faults...)
}
