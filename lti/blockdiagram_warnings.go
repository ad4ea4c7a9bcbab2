package lti

import (
	"fmt"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/intpoly"
)

// Warning is something in a diagram or in equations that is no fault of their
// form but is seldom meant.
type Warning struct {
	Signals []string // the signals that it is about; none for a constant
	Text    string   // what was found, and what to look at
}

// String is the text.
func (w Warning) String() string { return w.Text }

// Bounds on the search for loops.
const (
	maxLoopSteps = 1 << 20 // blocks and terms of sums passed
	maxLoops     = 1 << 12 // loops with positive feedback kept
)

// Warnings returns what in the diagram deserves a second look:
//
//   - an input that nothing reads or from which no way leads to any Output, and
//     a signal that nothing reads and that is no Output;
//   - a signal that no input reaches;
//   - a loop with positive feedback at zero frequency, as a controller that acts
//     direct instead of reverse makes it: the product of the static gains
//     around it is above 0, or it integrates and the sign of its gain near
//     zero frequency is positive. Of several such loops that share a block or a
//     sum only one of the shortest is named. The search passes at most 2^20
//     blocks and terms of sums, and says so where that is not enough.
//
// Positive feedback can be meant. If every loop has negative feedback, so has
// the diagram cut at any signal.
func (d *Diagram[G]) Warnings() []Warning {
	n := &d.network
	var out []Warning
	var inputs, outputs []int
	for i, s := range d.record.signals {
		switch s.role {
		case isInput:
			inputs = append(inputs, i)
		case isOutput:
			outputs = append(outputs, i)
		}
	}
	readers := n.readers()
	for i, s := range d.record.signals {
		text := ""
		switch unread := len(readers[i]) == 0; {
		case s.role == isInput && unread:
			text = fmt.Sprintf("input %s: no block and no sum reads it", s.name)
		case s.role == isInput && len(outputs) > 0 && !slices.ContainsFunc(outputs, n.reached(i)):
			text = fmt.Sprintf("input %s reaches no output", s.name)
		case s.role == isInner && unread:
			text = fmt.Sprintf("signal %s: no block and no sum reads it; declare it with Output if it is read outside", s.name)
		default:
			continue
		}
		out = append(out, Warning{[]string{s.name}, text})
	}
	var apart []string
	for i, reached := range n.downstream(inputs...) {
		if !reached && !n.rows[i].input {
			apart = append(apart, n.names[i])
		}
	}
	if len(apart) > 0 {
		out = append(out, Warning{apart, "no input reaches " + shortened(apart)})
	}
	return append(out, n.positiveFeedback(constantPoint[G]())...)
}

// reached returns a function that reports whether a source reaches a signal.
func (n *network) reached(source int) func(int) bool {
	down := n.downstream(source)
	return func(i int) bool { return down[i] }
}

// slow is how a function behaves near the point that stands for a constant
// signal: as gain·(s − point)^order, s above the point. The gain serves for its
// sign, which is exact, and for a few digits.
type slow struct {
	order int
	gain  *big.Float
}

const gainBits = 128 // far more than the digits that are shown need

func near(point int64, num, den intpoly.Poly) slow {
	if point != 0 {
		num, den = num.TaylorShift(big.NewInt(point)), den.TaylorShift(big.NewInt(point))
	}
	i, j := num.Valuation(), den.Valuation()
	above := new(big.Float).SetPrec(gainBits).SetInt(num.Coefficient(i))
	return slow{i - j, above.Quo(above, new(big.Float).SetPrec(gainBits).SetInt(den.Coefficient(j)))}
}

func (a slow) times(b slow) slow {
	return slow{a.order + b.order, new(big.Float).Mul(a.gain, b.gain)}
}

// loopSearch walks all elementary loops of a part, within the bounds.
type loopSearch struct {
	*network
	readers [][]int
	gains   []map[int]slow // by signal, of what it reads in its part
	inside  []bool         // signals of the part that may still be passed
	steps   int
	path    []int
	found   []positiveLoop
}

type positiveLoop struct {
	signals []int
	slow    slow
}

func (n *network) positiveFeedback(point int64) []Warning {
	s := &loopSearch{network: n, readers: n.readers(), gains: make([]map[int]slow, len(n.rows)), inside: make([]bool, len(n.rows))}
	for _, part := range n.parts {
		for _, i := range part {
			s.inside[i] = isLoop(part)
		}
		for _, i := range part {
			s.gains[i] = map[int]slow{}
			for _, t := range n.rows[i].terms {
				if s.inside[t.from] {
					s.gains[i][t.from] = near(point, t.num, n.rows[i].den)
				}
			}
		}
		for _, i := range slices.Sorted(slices.Values(part)) {
			if s.inside[i] {
				s.walk(i, i, slow{0, big.NewFloat(1)})
				s.inside[i] = false // its loops are done
			}
		}
	}
	return s.warnings()
}

// walk goes on from the signal i towards start; g is the gain so far.
func (s *loopSearch) walk(start, i int, g slow) {
	s.inside[i] = false
	s.path = append(s.path, i)
	for _, j := range s.readers[i] {
		if s.steps++; s.steps > maxLoopSteps {
			break
		}
		switch {
		case j == start:
			s.close(g.times(s.gains[j][i]))
		case s.inside[j]:
			s.walk(start, j, g.times(s.gains[j][i]))
		}
	}
	s.path = s.path[:len(s.path)-1]
	s.inside[i] = true
}

// close notes a loop with positive feedback.
func (s *loopSearch) close(g slow) {
	if g.order <= 0 && g.gain.Sign() > 0 && len(s.found) < maxLoops {
		s.found = append(s.found, positiveLoop{slices.Clone(s.path), g})
	}
}

// warnings names loops of which no two share what determines a signal.
func (s *loopSearch) warnings() []Warning {
	slices.SortStableFunc(s.found, func(a, b positiveLoop) int { return len(a.signals) - len(b.signals) })
	var out []Warning
	named := make([]bool, len(s.rows))
	for _, l := range s.found {
		if slices.ContainsFunc(l.signals, func(i int) bool { return named[i] }) {
			continue
		}
		w := Warning{}
		for _, i := range l.signals {
			named[i] = true
			w.Signals = append(w.Signals, s.names[i])
		}
		gain := "it integrates with a positive gain"
		if l.slow.order == 0 {
			k, _ := l.slow.gain.Rat(nil)
			gain = "the static gain around it is +" + decimal.Significant(k, 4)
		}
		w.Text = fmt.Sprintf("positive feedback at zero frequency in the loop %s: %s; check whether the action is direct or reverse, and the signs of the sums",
			shortened(w.Signals), gain)
		out = append(out, w)
	}
	if s.steps > maxLoopSteps {
		out = append(out, Warning{Text: fmt.Sprintf("more loops than could be searched for positive feedback (%d steps)", maxLoopSteps)})
	}
	return out
}
