package lti

import (
	"fmt"
	"math/big"
	"math/bits"
	"slices"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/polymatrix"
)

// settle finds the parts of the closed network and their determinants, and
// reports loops that determine nothing. A dead time breaks an algebraic loop.
func (n *network) settle() []error {
	var faults []error
	n.parts = n.components(none, allPass)
	n.factors = make([]intpoly.Poly, len(n.parts))
	for k, part := range n.parts {
		det, err := n.determinant(part, none)
		if err != nil {
			faults = append(faults, err)
		}
		if len(n.delaysWithin(part)) == 0 {
			n.factors[k] = det
		}
	}
	return faults
}

// determinant returns that of the rows of a part in the network opened at a
// signal, without the blocks with dead time. The error is an *AlgebraicLoopError
// where det(I − G) is 0 at infinity: there the determinant has a lower degree
// than the product of the denominators.
func (n *network) determinant(part []int, opened int) (intpoly.Poly, error) {
	det := intpoly.FromInt64s(1)
	switch {
	case isLoop(part):
		a, _ := n.equations(part, opened, isPrompt)
		var err error
		if _, det, err = n.solve(part, a, nil, nil); err != nil {
			return det, err
		}
	case !n.rows[part[0]].input:
		det = n.rows[part[0]].den
	}
	if det.Degree() < n.degree(part) {
		return det, n.algebraicLoop(part, opened)
	}
	return det, nil
}

// solve is polymatrix.SolveAll for the equations of some rows; it returns the
// determinant 0 without an error.
func (n *network) solve(rows []int, a, rhs [][]intpoly.Poly, columns []int) (nums [][]intpoly.Poly, det intpoly.Poly, err error) {
	nums, det, err = polymatrix.SolveAll(a, rhs, columns)
	if _, singular := err.(*polymatrix.SingularError); singular {
		return nil, intpoly.Poly{}, nil
	}
	if err != nil {
		err = fmt.Errorf("lti: elimination of %d signals with blocks of total degree %d: %w", len(rows), n.degree(rows), err)
	}
	return nums, det, err
}

// degree is that of the product of the denominators of the rows.
func (n *network) degree(rows []int) int {
	degree := 0
	for _, i := range rows {
		degree += max(0, n.rows[i].den.Degree())
	}
	return degree
}

// equations returns the rows as a·x = b·source for the signals of the rows. The
// rows may hold the source itself: then it is what comes back to it.
func (n *network) equations(rows []int, source int, counts passes) (a [][]intpoly.Poly, b []intpoly.Poly) {
	column := make(map[int]int, len(rows))
	for k, i := range rows {
		column[i] = k
	}
	a, b = make([][]intpoly.Poly, len(rows)), make([]intpoly.Poly, len(rows))
	for k, i := range rows {
		row := &n.rows[i]
		a[k] = make([]intpoly.Poly, len(rows))
		a[k][k] = row.den
		for _, t := range row.terms {
			j, inside := column[t.from]
			switch {
			case !counts(row, t):
			case t.from == source:
				b[k] = t.num
			case inside:
				a[k][j] = t.num.Neg()
			}
		}
	}
	return a, b
}

// algebraicLoop names the signals of the loops in a part that determine
// nothing: those along which jumps pass at once.
func (n *network) algebraicLoop(part []int, opened int) error {
	e := &AlgebraicLoopError{}
	if opened != none {
		e.Opened = n.names[opened]
	}
	for _, loop := range n.components(opened, isDirect) {
		if isLoop(loop) && slices.Contains(part, loop[0]) && n.isStuck(loop, opened) {
			e.Signals = n.inOrder(loop)
			return e
		}
	}
	e.Signals = n.inOrder(part) // only in a loop with an improper block
	return e
}

// isStuck reports whether det(I − D) is 0 for the signals of a loop, D their
// matrix of direct gains. It is false where a block of the loop is improper.
func (n *network) isStuck(loop []int, opened int) bool {
	a, _ := n.equations(loop, opened, isDirect)
	for i := range a {
		degree := a[i][i].Degree()
		for j := range a[i] {
			if a[i][j].Degree() > degree {
				return false
			}
			a[i][j] = intpoly.FromBigs(a[i][j].Coefficient(degree))
		}
	}
	_, _, err := polymatrix.SolveAll(a, nil, nil)
	_, singular := err.(*polymatrix.SingularError)
	return singular
}

// ratio is a transfer function between two signals of a network.
type ratio struct {
	num, den intpoly.Poly
	delay    *big.Rat // nil is 0
}

// transfer returns the ratio of target to source, in the network opened at the
// source: what determines the source is set aside. A target that is the source
// stands for what comes back to it.
func (n *network) transfer(source, target int) (ratio, error) {
	rows := n.between(source, target)
	rest, err := n.outside(rows, source)
	if err != nil {
		return ratio{}, err
	}
	if len(rows) == 0 {
		return ratio{den: rest}, nil
	}
	delay, err := n.deadTime(rows, source, target)
	if err != nil {
		return ratio{}, err
	}
	a, b := n.equations(rows, source, allPass)
	nums, den, err := n.solve(rows, a, [][]intpoly.Poly{b}, []int{slices.Index(rows, target)})
	if err != nil {
		return ratio{}, err
	}
	if den.Degree() < n.degree(rows) {
		return ratio{}, n.algebraicLoop(rows, source)
	}
	num, err := product(nums[0][0], rest)
	if err != nil {
		return ratio{}, err
	}
	den, err = product(den, rest)
	return ratio{num, den, delay}, err
}

// outside returns the product of the determinants of all parts beside the given
// rows, of the network opened at the source. Parts with a dead time on a loop
// are left out.
func (n *network) outside(rows []int, source int) (intpoly.Poly, error) {
	var factors []intpoly.Poly
	for _, part := range n.openedAt(source) {
		if slices.Contains(rows, part[0]) || len(n.delaysWithin(part)) > 0 {
			continue
		}
		f, known := n.factor(part)
		if !known {
			var err error
			if f, err = n.determinant(part, source); err != nil {
				return f, err
			}
		}
		factors = append(factors, f)
	}
	return product(factors...)
}

// openedAt returns the parts of the network in which what determines the source
// is set aside.
func (n *network) openedAt(source int) [][]int {
	if n.rows[source].input {
		return n.parts
	}
	return n.components(source, allPass)
}

// factor returns the determinant of a part that the closed network has too.
func (n *network) factor(part []int) (f intpoly.Poly, known bool) {
	for k, p := range n.parts {
		if slices.Contains(p, part[0]) {
			return n.factors[k], len(p) == len(part)
		}
	}
	return f, false
}

// Bounds on a product of determinants: its degree, and its terms times the
// bits of the longest that it can have.
const (
	maxProductDegree = 4096
	maxProductBits   = 1 << 26
)

// product returns the product of the factors, or ErrLimit.
func product(factors ...intpoly.Poly) (intpoly.Poly, error) {
	degree, length := 0, 1
	for _, f := range factors {
		degree += max(0, f.Degree())
		length += f.MaxBitLen() + bits.Len(uint(f.Degree()+1))
	}
	if degree > maxProductDegree || (degree+1)*length > maxProductBits {
		return intpoly.Poly{}, fmt.Errorf("lti: a product of degree %d with coefficients of up to %d bits: %w", degree, length, ErrLimit)
	}
	return halves(factors), nil
}

// halves multiplies by halves, so that the operands are of similar length.
func halves(factors []intpoly.Poly) intpoly.Poly {
	switch len(factors) {
	case 0:
		return intpoly.FromInt64s(1)
	case 1:
		return factors[0]
	}
	m := len(factors) / 2
	return halves(factors[:m]).Mul(halves(factors[m:]))
}

// deadTime returns the dead time that all paths from the source to the target
// along the rows have in common.
func (n *network) deadTime(rows []int, source, target int) (*big.Rat, error) {
	result := fmt.Sprintf("from %s to %s", n.names[source], n.names[target])
	for _, part := range n.openedAt(source) {
		if blocks := n.delaysWithin(part); len(blocks) > 0 && slices.Contains(rows, part[0]) {
			return nil, &DeadTimeError{Result: result, Blocks: blocks}
		}
	}
	readers, times := n.readers(), make([]*big.Rat, len(n.rows))
	type arrival struct {
		signal int
		time   *big.Rat
	}
	for rest := []arrival{{source, new(big.Rat)}}; len(rest) > 0; rest = rest[1:] {
		for _, j := range readers[rest[0].signal] {
			if !slices.Contains(rows, j) {
				continue
			}
			t := new(big.Rat).Add(rest[0].time, n.delayFrom(rest[0].signal, j))
			switch {
			case times[j] == nil:
				times[j] = t
				if j != source {
					rest = append(rest, arrival{j, t})
				}
			case times[j].Cmp(t) != 0:
				return nil, &DeadTimeError{Result: result, Blocks: n.delayed(rows), Join: n.names[j], Times: []*big.Rat{times[j], t}}
			}
		}
	}
	if times[target].Sign() == 0 {
		return nil, nil
	}
	return times[target], nil
}

// delayFrom returns the dead time with which the signal j reads i.
func (n *network) delayFrom(i, j int) *big.Rat {
	for _, t := range n.rows[j].terms {
		if t.from == i && t.delay != nil {
			return t.delay
		}
	}
	return new(big.Rat)
}

// delayed returns the blocks with dead time that determine the given signals.
func (n *network) delayed(rows []int) []string {
	var out []string
	for _, i := range rows {
		if slices.ContainsFunc(n.rows[i].terms, func(t networkTerm) bool { return t.delay != nil }) {
			out = append(out, n.rows[i].block)
		}
	}
	return out
}
