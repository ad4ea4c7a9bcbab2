package lti

import (
	"fmt"
	"math/big"
	"slices"
)

// Warnings returns what in the equations deserves a second look:
//
//   - a signal or a constant that stands in no equation;
//   - a signal that drops out of an equation in which it was written, because
//     its terms cancel or a factor of them is 0;
//   - equations that say the same, up to a factor and derivatives in time;
//   - some equations that hold no more signals than there are of them: none of
//     these signals can be an input, and no input reaches them.
//
// All of it can be meant: a constant may be set later by WithConstant, and a set
// without inputs has free responses.
func (s *System) Warnings() []Warning {
	var out []Warning
	warn := func(names []string, format string, args ...any) {
		out = append(out, Warning{names, fmt.Sprintf(format, args...)})
	}
	used := map[string]bool{}
	for _, q := range s.equations {
		for _, name := range q.right.names(q.left.names(nil)) {
			used[name] = true
		}
	}
	for _, x := range s.signals {
		if !used[x.Name] {
			warn([]string{x.Name}, "signal %s stands in no equation", x.Name)
		}
	}
	for _, c := range s.constants {
		if !used[c.Name] {
			warn(nil, "constant %s stands in no equation", c.Name)
		}
	}
	left := s.left()
	for i, signals := range s.written() {
		for _, j := range signals {
			if !slices.Contains(left[i], j) {
				warn([]string{s.signals[j].Name}, "signal %s drops out of equation %d, %q: its terms cancel or have a factor of 0",
					s.signals[j].Name, i+1, s.equations[i].text)
			}
		}
	}
	for _, same := range s.repeated() {
		warn(s.namesOf(left[same[0]-1]), "%s say the same, so that no choice of inputs is determined; leave all but one out", numbered(same))
	}
	if equations, signals := left.closed(len(s.signals)); len(equations) > 0 {
		names := s.namesOf(signals)
		warn(names, "%s: none of them can be an input, and no input reaches them", holding(fromOne(equations), names))
	}
	return out
}

// repeated returns the numbers of equations, from 1, that are the same up to a
// factor and a power of s.
func (s *System) repeated() [][]int {
	at := map[string]int{} // the place in out
	var out [][]int
	for i, r := range s.rows {
		key := r.key()
		k, ok := at[key]
		if !ok {
			k = len(out)
			at[key] = k
			out = append(out, nil)
		}
		out[k] = append(out[k], i+1)
	}
	return slices.DeleteFunc(out, func(numbers []int) bool { return len(numbers) < 2 })
}

// key is the same text for rows that differ by a factor and a power of s.
func (r row) key() string {
	terms := make([]derivative, 0, len(r.terms))
	lowest := maxPrimes * 2
	for t := range r.terms {
		terms = append(terms, t)
		lowest = min(lowest, t.order)
	}
	slices.SortFunc(terms, func(a, b derivative) int {
		if a.signal != b.signal {
			return a.signal - b.signal
		}
		return a.order - b.order
	})
	key := ""
	for _, t := range terms {
		key += fmt.Sprintf("%d %d %v,", t.signal, t.order-lowest, new(big.Rat).Quo(r.terms[t], r.terms[terms[0]]))
	}
	return key
}
