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
	for i, row := range s.rows {
		for t := range row {
			raise(t.signal, isMentioned)
			if t.order > 0 {
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

// unknowns returns the signals that the equations determine once input is given
// and the signals in zero are 0, as many as there are equations; see
// TransferFunction for the rule.
func (s *System) unknowns(input, output int, zero []int) ([]int, error) {
	signs := s.determinations()
	for _, i := range []int{input, output} {
		if signs[i] == isAbsent {
			return nil, &DeterminacyError{Equations: len(s.rows), Open: []string{s.signals[i].Name},
				Reason: fmt.Sprintf("%s stands in no equation", s.signals[i].Name)}
		}
	}
	signs[output] = isDifferentiated + 1
	var rest []int
	for i := range s.signals {
		if i != input && !slices.Contains(zero, i) && signs[i] != isAbsent {
			rest = append(rest, i)
		}
	}
	strongest := slices.Clone(rest)
	slices.SortStableFunc(strongest, func(i, j int) int { return int(signs[j] - signs[i]) })
	n := len(s.rows)
	switch {
	case len(rest) < n, len(rest) > n && signs[strongest[n-1]] == signs[strongest[n]]:
		return nil, s.miscounted(input, output, rest, strongest)
	case len(rest) > n:
		strongest = strongest[:n]
		slices.Sort(strongest)
		return strongest, nil
	}
	return rest, nil
}

// miscounted explains that the number of equations is not that of unknowns.
// The weakest of the unknowns is the likeliest input.
func (s *System) miscounted(input, output int, unknowns, strongest []int) error {
	e := &DeterminacyError{Equations: len(s.rows), Unknowns: s.namesOf(unknowns)}
	counts := fmt.Sprintf("%d equations for %d unknown signals (%s) with %s as the input",
		len(s.rows), len(unknowns), strings.Join(e.Unknowns, ", "), s.signals[input].Name)
	if missing := len(unknowns) - len(s.rows); missing > 0 {
		e.Reason = fmt.Sprintf("%s: name %d further inputs to hold at 0, as in TransferFunction(%q, %q, %q), or add equations",
			counts, missing, s.signals[input].Name, s.signals[output].Name, s.signals[strongest[len(strongest)-1]].Name)
	} else {
		e.Reason = fmt.Sprintf("%s: too many; leave %d out, or hold fewer signals at 0", counts, -missing)
	}
	return e
}
