package lti

import (
	"math/big"

	"github.com/qofs/qofs/units"
)

// term is a summand of an equation.
type term struct {
	node     *node
	negative bool
	value    value
}

// terms appends the summands of n.
func terms(out []term, n *node, negative bool) []term {
	switch n.kind {
	case isSum, isDifference:
		out = terms(out, n.a, negative)
		return terms(out, n.b, negative != (n.kind == isDifference))
	case isNegative:
		return terms(out, n.a, !negative)
	}
	return append(out, term{node: n, negative: negative})
}

// row is an equation, left − right, as a combination of signals and their
// derivatives in coherent units.
type row struct {
	terms     map[derivative]*big.Rat
	integrals int // how many times the equation was differentiated, until no integral was left
}

// linear returns left − right of the equation as a combination of signals. It
// reports every term that has a fault, and every term whose dimension is not
// that of most terms (of the first ones, where there is no majority).
func (e *evaluator) linear() (row, bool) {
	var good []term
	counts := map[units.Dimension]int{}
	for _, t := range terms(terms(nil, e.equation.left, false), e.equation.right, true) {
		v, ok := e.evaluate(t.node)
		if !ok || v.zero {
			continue
		}
		counts[v.dimension]++
		if t.value = v; t.negative {
			t.value = v.times(big.NewRat(-1, 1), units.Dimension{})
		}
		good = append(good, t)
	}
	var model term // one of those with the dimension that most terms have
	for _, t := range good {
		if counts[t.value.dimension] > counts[model.value.dimension] || model.node == nil {
			model = t
		}
	}
	sum := value{zero: true}
	for _, t := range good {
		if t.value.dimension != model.value.dimension {
			found, want := e.unit(t.node, t.value), e.unit(model.node, model.value)
			e.failWith(t.node, &units.MismatchError{Found: found, Want: want}, "the term is %s, where %q is %s",
				inUnit(found), e.equation.text[model.node.from:model.node.to], inUnit(want))
			continue
		}
		var ok bool
		if sum, ok = e.add(t.node, sum, t.value); !ok {
			return row{}, false
		}
	}
	if len(e.faults) > 0 {
		return row{}, false
	}
	return e.homogeneous(sum, good)
}

// homogeneous refuses an equation with a constant term, or without signals. An
// equation with integrals becomes the one that is differentiated as many times
// as they are nested: that adds the modes at 0 of the integrators, and no other.
func (e *evaluator) homogeneous(sum value, good []term) (row, bool) {
	whole := &node{from: 0, to: len(e.equation.text)}
	if sum.rat().Sign() != 0 {
		at := whole
		for _, t := range good {
			if t.value.rat().Sign() != 0 {
				at = t.node
				break
			}
		}
		e.fail(at, "a constant stands alone as a term; a linear model holds deviations from an operating point, in which it drops out: leave it away")
		return row{}, false
	}
	out := row{terms: make(map[derivative]*big.Rat, len(sum.terms))}
	for t, c := range sum.terms {
		if c.Sign() != 0 {
			out.integrals = max(out.integrals, t.integrals)
		}
	}
	for t, c := range sum.terms {
		t.order += out.integrals
		if old := out.terms[t.derivative]; old != nil {
			c = new(big.Rat).Add(old, c)
		}
		out.terms[t.derivative] = c
	}
	for t, c := range out.terms {
		if c.Sign() == 0 {
			delete(out.terms, t)
		}
	}
	if len(out.terms) == 0 {
		e.fail(whole, "the equation says nothing about any signal")
		return row{}, false
	}
	return out, true
}
