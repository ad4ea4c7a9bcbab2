package lti

import (
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
// input, those held at 0, and those in no equation.
func (s *System) unknowns(input, output int, zero []int) ([]int, error) {
	signs := s.determinations()
	for _, i := range []int{input, output} {
		if signs[i] == isAbsent {
			return nil, &DeterminacyError{Equations: len(s.rows), Open: []string{s.signals[i].Name},
				Reason: fmt.Sprintf("%s stands in no equation", s.signals[i].Name)}
		}
	}
	var rest []int
	for i := range s.signals {
		if i != input && !slices.Contains(zero, i) && signs[i] != isAbsent {
			rest = append(rest, i)
		}
	}
	if len(rest) != len(s.rows) {
		signs[output] = isDifferentiated + 1 // never proposed as an input
		return nil, s.miscounted(input, output, rest, zero, signs)
	}
	return rest, nil
}

// miscounted explains that the number of equations is not that of unknowns.
// Which further signals are inputs is asked, not guessed; the proposal names
// those that the form of the equations says the least about.
func (s *System) miscounted(input, output int, unknowns, zero []int, signs []determination) error {
	e := &DeterminacyError{Equations: len(s.rows), Unknowns: s.namesOf(unknowns)}
	counts := fmt.Sprintf("%d equations for %d unknown signals (%s) with %s as the input",
		len(s.rows), len(unknowns), strings.Join(e.Unknowns, ", "), s.signals[input].Name)
	missing := len(unknowns) - len(s.rows)
	if missing < 0 {
		e.Reason = fmt.Sprintf("%s: too many; leave %d out, or hold fewer signals at 0", counts, -missing)
		return e
	}
	weakest := slices.Clone(unknowns)
	slices.SortStableFunc(weakest, func(i, j int) int { return int(signs[i] - signs[j]) })
	call := fmt.Sprintf("TransferFunction(%q, %q", s.signals[input].Name, s.signals[output].Name)
	for _, name := range s.namesOf(append(slices.Clone(zero), weakest[:missing]...)) {
		call += fmt.Sprintf(", %q", name)
	}
	e.Reason = fmt.Sprintf("%s: name %d further inputs to hold at 0, perhaps %s), or add equations", counts, missing, call)
	return e
}
