package lti

import (
	"fmt"
	"slices"
)

// incidence says which signals stand in each equation.
type incidence [][]int

// written returns the signals that stand in the text of the equations, whatever
// the values of the constants make of them.
func (s *System) written() incidence {
	out := make(incidence, len(s.equations))
	index := make(map[string]int, len(s.signals))
	for i, x := range s.signals {
		index[x.Name] = i
	}
	for i, q := range s.equations {
		found := map[int]bool{}
		for _, name := range q.right.names(q.left.names(nil)) {
			if signal, ok := index[name]; ok {
				found[signal] = true
			}
		}
		out[i] = sortedKeys(found)
	}
	return out
}

// left returns the signals that stand in the equations once constants of 0 and
// terms that cancel are gone.
func (s *System) left() incidence {
	out := make(incidence, len(s.rows))
	for i, r := range s.rows {
		found := map[int]bool{}
		for t := range r.terms {
			found[t.signal] = true
		}
		out[i] = sortedKeys(found)
	}
	return out
}

func sortedKeys(set map[int]bool) []int {
	out := make([]int, 0, len(set))
	for i := range set {
		out = append(out, i)
	}
	slices.Sort(out)
	return out
}

// names appends the names that stand in the tree.
func (n *node) names(out []string) []string {
	if n == nil {
		return out
	}
	if n.kind == isName {
		return append(out, n.name)
	}
	return n.b.names(n.a.names(out))
}

// match gives as many equations as possible a signal of their own (H. W. Kuhn,
// Naval Research Logistics Quarterly 2, 1955) and returns it by equation and the
// equation by signal, −1 where there is none.
func (m incidence) match(signals int) (signal, equation []int) {
	signal, equation = make([]int, len(m)), make([]int, signals)
	for i := range signal {
		signal[i] = -1
	}
	for j := range equation {
		equation[j] = -1
	}
	for start := range m {
		tried := make([]bool, signals)
		var find func(i int) bool
		find = func(i int) bool {
			for _, j := range m[i] {
				if tried[j] {
					continue
				}
				tried[j] = true
				if equation[j] < 0 || find(equation[j]) {
					signal[i], equation[j] = j, i
					return true
				}
			}
			return false
		}
		find(start)
	}
	return signal, equation
}

// overdetermined is a *DeterminacyError where some equations hold fewer signals
// than there are of them: then no choice of inputs leaves as many unknown signals
// in them (P. Hall, Journal of the London Mathematical Society 10, 1935).
func (s *System) overdetermined() error {
	m := s.written()
	signal, equation := m.match(len(s.signals))
	rows, signals := map[int]bool{}, map[int]bool{}
	var reach func(i int)
	reach = func(i int) {
		if rows[i] {
			return
		}
		rows[i] = true
		for _, j := range m[i] {
			signals[j] = true
			reach(equation[j]) // another signal in place of j would have been found
		}
	}
	for i, j := range signal {
		if j < 0 {
			reach(i)
		}
	}
	if len(rows) == 0 {
		return nil
	}
	e := &DeterminacyError{Equations: len(s.equations), Unknowns: s.namesOf(sortedKeys(signals)), Dependent: fromOne(sortedKeys(rows))}
	excess := len(rows) - len(signals)
	e.Reason = fmt.Sprintf("%s: too many for any choice of inputs; leave %d out, or write %s that they lack%s",
		holding(e.Dependent, e.Unknowns), excess, counted(excess, "signal"), s.twice(e.Dependent))
	return e
}

func fromOne(indices []int) []int {
	for k := range indices {
		indices[k]++
	}
	return indices
}

// holding says which signals some equations hold.
func holding(numbers []int, names []string) string {
	verb := "hold"
	if len(numbers) == 1 {
		verb = "holds"
	}
	return fmt.Sprintf("%s %s %s only (%s)", numbered(numbers), verb, counted(len(names), "signal"), shortened(names))
}

// closed returns the equations, from 0, that hold no signals but some that they
// determine by themselves, and these signals: no choice of inputs reaches them
// (the square part of A. L. Dulmage and N. S. Mendelsohn, Canadian Journal of
// Mathematics 10, 1958). Signals that stand in no equation are no part of it.
func (m incidence) closed(signals int) (equations, within []int) {
	own, equation := m.match(signals)
	holding := make([][]int, signals)
	for i, js := range m {
		for _, j := range js {
			holding[j] = append(holding[j], i)
		}
	}
	open, rows := make([]bool, signals), make([]bool, len(m))
	var reach func(j int)
	reach = func(j int) {
		if open[j] {
			return
		}
		open[j] = true
		for _, i := range holding[j] {
			rows[i] = true
			reach(own[i]) // an equation without its own would have taken j
		}
	}
	for j, i := range equation {
		if i < 0 {
			reach(j)
		}
	}
	for i := range m {
		if !rows[i] {
			equations = append(equations, i)
		}
	}
	for j := range signals {
		if !open[j] {
			within = append(within, j)
		}
	}
	return equations, within
}
