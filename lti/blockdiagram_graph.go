package lti

import (
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/intpoly"
)

// network is a block diagram as a graph and as a set of linear equations: for
// every signal that is no input
//
//	den·x = Σ num·exp(−delay·s)·x[from]
//
// so that the determinant of the equations is the product of the denominators
// of the blocks times det(I − G), G the matrix of the blocks.
type network struct {
	names []string
	rows  []networkRow // by signal
	// parts are the strongly connected components and factors their
	// determinants; the factor is 0 where a dead time lies on a loop of the part.
	parts   [][]int
	factors []intpoly.Poly
}

// networkRow is what determines a signal.
type networkRow struct {
	block string // empty for a sum and for an input
	input bool
	den   intpoly.Poly
	terms []networkTerm
}

type networkTerm struct {
	from  int
	num   intpoly.Poly
	delay *big.Rat // nil is 0
}

// none stands for no signal, as the place where a network is opened.
const none = -1

// components returns the strongly connected components (Tarjan 1972) of the
// network in which nothing reads the signal opened and only some terms count.
// Each comes after those that it reads from.
func (n *network) components(opened int, passes passes) [][]int {
	c := &components{network: n, opened: opened, passes: passes,
		number: make([]int, len(n.rows)), low: make([]int, len(n.rows)), waiting: make([]bool, len(n.rows))}
	for i := range n.rows {
		if c.number[i] == 0 {
			c.visit(i)
		}
	}
	return c.found
}

type components struct {
	*network
	opened      int
	passes      passes
	number, low []int
	waiting     []bool
	stack       []int
	count       int
	found       [][]int
}

func (c *components) visit(i int) {
	c.count++
	c.number[i], c.low[i] = c.count, c.count
	c.stack, c.waiting[i] = append(c.stack, i), true
	for _, t := range c.rows[i].terms {
		switch {
		case t.from == c.opened || !c.passes(&c.rows[i], t):
		case c.number[t.from] == 0:
			c.visit(t.from)
			c.low[i] = min(c.low[i], c.low[t.from])
		case c.waiting[t.from]:
			c.low[i] = min(c.low[i], c.number[t.from])
		}
	}
	if c.low[i] != c.number[i] {
		return
	}
	k := slices.Index(c.stack, i)
	part := slices.Clone(c.stack[k:])
	for _, j := range part {
		c.waiting[j] = false
	}
	c.stack = c.stack[:k]
	c.found = append(c.found, part)
}

// passes tells which terms of a row count.
type passes func(*networkRow, networkTerm) bool

func allPass(*networkRow, networkTerm) bool      { return true }
func isPrompt(_ *networkRow, t networkTerm) bool { return t.delay == nil }

// isDirect tells that a jump passes at once.
func isDirect(r *networkRow, t networkTerm) bool {
	return t.delay == nil && !t.num.IsZero() && t.num.Degree() >= r.den.Degree()
}

// delaysWithin returns the blocks with dead time from one signal of a part to
// another. They lie on loops, because the part is strongly connected.
func (n *network) delaysWithin(part []int) []string {
	var blocks []string
	for _, i := range part {
		for _, t := range n.rows[i].terms {
			if t.delay != nil && slices.Contains(part, t.from) {
				blocks = append(blocks, n.rows[i].block)
			}
		}
	}
	return blocks
}

// isLoop reports whether a part holds a loop. No signal is read by what
// determines it, so that one signal alone is none.
func isLoop(part []int) bool { return len(part) > 1 }

// readers returns for each signal those that are determined from it.
func (n *network) readers() [][]int {
	out := make([][]int, len(n.rows))
	for i, row := range n.rows {
		for _, t := range row.terms {
			out[t.from] = append(out[t.from], i)
		}
	}
	return out
}

// downstream returns the signals that something at the sources reaches; the
// sources themselves count where they are reached around a loop.
func (n *network) downstream(sources ...int) []bool {
	readers, seen := n.readers(), make([]bool, len(n.rows))
	for rest := slices.Clone(sources); len(rest) > 0; {
		i := rest[len(rest)-1]
		rest = rest[:len(rest)-1]
		for _, j := range readers[i] {
			if !seen[j] {
				seen[j] = true
				if !slices.Contains(sources, j) {
					rest = append(rest, j)
				}
			}
		}
	}
	return seen
}

// between returns the signals other than the source on paths from the source to
// the target, on which nothing reads the source a second time, in ascending
// order. A target that is the source itself stands for what comes back to it.
func (n *network) between(source, target int) []int {
	down := n.downstream(source)
	if !down[target] {
		return nil
	}
	up := make([]bool, len(n.rows))
	up[target] = true
	for rest := []int{target}; len(rest) > 0; {
		i := rest[len(rest)-1]
		rest = rest[:len(rest)-1]
		for _, t := range n.rows[i].terms {
			if j := t.from; j != source && down[j] && !up[j] {
				up[j] = true
				rest = append(rest, j)
			}
		}
	}
	var out []int
	for i, u := range up {
		if u {
			out = append(out, i)
		}
	}
	return out
}

// inOrder returns the signals of a part as they follow one another, from the
// first one on; a part that is a single loop comes in the order of the loop.
func (n *network) inOrder(part []int) []string {
	readers, seen := n.readers(), map[int]bool{}
	var names []string
	var visit func(i int)
	visit = func(i int) {
		seen[i] = true
		names = append(names, n.names[i])
		for _, j := range readers[i] {
			if !seen[j] && slices.Contains(part, j) {
				visit(j)
			}
		}
	}
	for _, i := range slices.Sorted(slices.Values(part)) {
		if !seen[i] {
			visit(i)
		}
	}
	return names
}
