package lti

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// determination is how strongly the form of the equations says that a signal is
// determined by them and is not an input.
type determination int

const (
	isAbsent         determination = iota // stands in no equation
	isMentioned                           // only among other signals
	isAloneRight                          // alone on a right side, as f in m x'' = f
	isAloneLeft                           // alone on a left side, as inflow in inflow = kq opening
	isDifferentiated                      // a state of some equation
)

// determinations returns the strongest sign for each signal.
func (s *System) determinations() []determination {
	out := make([]determination, len(s.signals))
	raise := func(signal int, d determination) { out[signal] = max(out[signal], d) }
	for i, r := range s.rows {
		for t := range r.terms {
			raise(t.signal, isMentioned)
			if t.order > r.integrals {
				raise(t.signal, isDifferentiated)
			}
		}
		for _, side := range []struct {
			tree *node
			sign determination
		}{{s.equations[i].left, isAloneLeft}, {s.equations[i].right, isAloneRight}} {
			if side.tree.kind != isName {
				continue
			}
			if signal, ok := s.signalIndex(side.tree.name); ok && out[signal] > isAbsent {
				raise(signal, side.sign)
			}
		}
	}
	return out
}

// unknowns returns the signals that the equations must determine: all but the
// inputs, those held at 0, and those in no equation. A proposal of further inputs
// is the call with their names in the place of %s.
func (s *System) unknowns(inputs, outputs, zero []int, call string) ([]int, error) {
	signs := s.determinations()
	for _, i := range slices.Concat(inputs, outputs) {
		if signs[i] == isAbsent {
			return nil, &DeterminacyError{Equations: len(s.rows), Open: []string{s.signals[i].Name},
				Reason: fmt.Sprintf("%s stands in no equation", s.signals[i].Name)}
		}
	}
	var rest []int
	for i := range s.signals {
		if !slices.Contains(inputs, i) && !slices.Contains(zero, i) && signs[i] != isAbsent {
			rest = append(rest, i)
		}
	}
	if len(rest) != len(s.rows) {
		for _, i := range outputs {
			signs[i] = isDifferentiated + 1 // never proposed as an input
		}
		return nil, s.miscounted(inputs, rest, zero, signs, call)
	}
	return rest, nil
}

// bySignificance orders unknowns, and returns the highest order of each in the
// rows. The higher a derivative of one stands in the equations as they were
// entered, the sooner it counts as a state; where that is the same, in the
// equations without their integrals.
func (s *System) bySignificance(unknowns []int) (sorted, orders []int) {
	order, entered := make(map[int]int, len(unknowns)), make(map[int]int, len(unknowns))
	for _, r := range s.rows {
		for t := range r.terms {
			order[t.signal] = max(order[t.signal], t.order)
			entered[t.signal] = max(entered[t.signal], t.order-r.integrals)
		}
	}
	sorted = slices.Clone(unknowns)
	slices.SortStableFunc(sorted, func(i, j int) int {
		return cmp.Or(entered[j]-entered[i], order[j]-order[i])
	})
	for _, signal := range sorted {
		orders = append(orders, order[signal])
	}
	return sorted, orders
}

// miscounted explains that the number of equations is not that of unknowns.
// Which further signals are inputs is asked, not guessed; the proposal names
// those that the form of the equations says the least about.
func (s *System) miscounted(inputs, unknowns, zero []int, signs []determination, call string) error {
	e := &DeterminacyError{Equations: len(s.rows), Unknowns: s.namesOf(unknowns)}
	counts := fmt.Sprintf("%s%s for %s (%s)", s.with(inputs), counted(len(s.rows), "equation"),
		counted(len(unknowns), "unknown signal"), shortened(e.Unknowns))
	missing := len(unknowns) - len(s.rows)
	if missing < 0 {
		var all []int
		for n := range s.rows {
			all = append(all, n+1)
		}
		e.Reason = fmt.Sprintf("%s: too many; leave %d out, or hold fewer signals at 0%s", counts, -missing, s.twice(all))
		return e
	}
	weakest := slices.Clone(unknowns)
	slices.SortStableFunc(weakest, func(i, j int) int { return int(signs[i] - signs[j]) })
	further := s.namesOf(append(slices.Clone(zero), weakest[:missing]...))
	e.Reason = fmt.Sprintf("%s: add %s, perhaps for %s, or, where what is missing comes from outside, name %s to hold at 0, perhaps %s",
		counts, counted(missing, "equation"), shortened(s.namesOf(weakest[:missing])), counted(missing, "further input"), strings.Replace(call, "%s", quoted(further), 1))
	return e
}

// counted writes "1 equation" or "2 equations".
func counted(n int, what string) string {
	if n != 1 {
		what += "s"
	}
	return fmt.Sprintf("%d %s", n, what)
}
