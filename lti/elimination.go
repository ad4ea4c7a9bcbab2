package lti

import (
	"fmt"
	"math/big"
	"slices"
	"strconv"
	"strings"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/polymatrix"
)

// elimination is the square set A(s)·X(s) = right that a choice of inputs leaves.
type elimination struct {
	system   *System
	inputs   []int
	unknowns []int      // signals, a column of A each
	scales   []*big.Int // what makes the coefficients of each row whole
	a        [][]intpoly.Poly
}

// elimination returns the equations for the given unknowns.
func (s *System) elimination(inputs, unknowns []int) *elimination {
	e := &elimination{system: s, inputs: inputs, unknowns: unknowns,
		scales: make([]*big.Int, len(s.rows)), a: make([][]intpoly.Poly, len(s.rows))}
	place := make(map[int]int, len(unknowns))
	for j, signal := range unknowns {
		place[signal] = j
	}
	for i, r := range s.rows {
		e.scales[i] = r.commonDenominator()
		e.a[i] = make([]intpoly.Poly, len(unknowns))
		for t := range r.terms {
			if j, ok := place[t.signal]; ok && e.a[i][j].IsZero() {
				e.a[i][j] = r.coefficient(t.signal, e.scales[i])
			}
		}
	}
	return e
}

// of returns the right sides that an input makes.
func (e *elimination) of(input int) []intpoly.Poly {
	b := make([]intpoly.Poly, len(e.scales))
	for i, r := range e.system.rows {
		b[i] = r.coefficient(input, e.scales[i]).Neg()
	}
	return b
}

// solve returns, for each right side and each of the signals asked for, the
// numerator over den, the determinant (Cramer's rule; nothing is cancelled).
func (e *elimination) solve(right [][]intpoly.Poly, signals []int) (nums [][]intpoly.Poly, den intpoly.Poly, err error) {
	columns := make([]int, len(signals))
	for k, signal := range signals {
		columns[k] = slices.Index(e.unknowns, signal)
	}
	nums, den, err = polymatrix.SolveAll(e.a, right, columns)
	if singular, ok := err.(*polymatrix.SingularError); ok {
		err = e.singular(singular)
	}
	return nums, den, err
}

// singular tells which equations depend on each other and what they leave open.
func (e *elimination) singular(found *polymatrix.SingularError) error {
	s := e.system
	out := &DeterminacyError{Equations: len(s.rows), Unknowns: s.namesOf(e.unknowns)}
	for _, j := range found.Undetermined {
		out.Open = append(out.Open, s.signals[e.unknowns[j]].Name)
	}
	transposed := make([][]intpoly.Poly, len(e.a))
	for j := range transposed {
		transposed[j] = make([]intpoly.Poly, len(e.a))
		for i := range e.a {
			transposed[j][i] = e.a[i][j]
		}
	}
	// The null space of the transposed set holds the rows that add up to 0.
	_, _, err := polymatrix.SolveAll(transposed, nil, nil)
	what := "the equations repeat or contradict each other and leave"
	if rows, ok := err.(*polymatrix.SingularError); ok {
		for _, i := range rows.Undetermined {
			out.Dependent = append(out.Dependent, i+1)
		}
		if what = numbered(out.Dependent) + " repeat or contradict each other and leave"; len(out.Dependent) == 1 {
			what = numbered(out.Dependent) + " holds none of the unknown signals, so that the others leave"
		}
	}
	out.Reason = fmt.Sprintf("%s%s %s open%s", s.with(e.inputs), what, shortened(out.Open), s.twice(out.Dependent))
	return out
}

// with says which signals are inputs.
func (s *System) with(inputs []int) string {
	switch names := s.namesOf(inputs); len(names) {
	case 0:
		return ""
	case 1:
		return "with " + names[0] + " as the input "
	default:
		return "with " + shortened(names) + " as the inputs "
	}
}

// twice names a signal that two of the equations define, or is empty.
func (s *System) twice(numbers []int) string {
	by := map[string][]int{}
	for _, n := range numbers {
		if left := s.equations[n-1].left; left.kind == isName {
			by[left.name] = append(by[left.name], n)
			if ns := by[left.name]; len(ns) > 1 {
				return fmt.Sprintf("; %s has two definitions, %s", left.name, numbered(ns))
			}
		}
	}
	return ""
}

// numbered writes "equations 2 and 3".
func numbered(equations []int) string {
	var texts []string
	for _, n := range equations {
		texts = append(texts, strconv.Itoa(n))
	}
	switch n := len(texts); {
	case n == 1:
		return "equation " + texts[0]
	case n > 1 && n <= 12:
		return "equations " + strings.Join(texts[:n-1], ", ") + " and " + texts[n-1]
	}
	return "equations " + shortened(texts)
}

// shortened lists the first of some names.
func shortened(names []string) string {
	if len(names) > 12 {
		names = append(slices.Clone(names[:12]), "…")
	}
	return strings.Join(names, ", ")
}

// commonDenominator returns a number that makes the coefficients of a row
// whole.
func (r row) commonDenominator() *big.Int {
	d := big.NewInt(1)
	for _, c := range r.terms {
		g := new(big.Int).GCD(nil, nil, d, c.Denom())
		d.Mul(d, new(big.Int).Quo(c.Denom(), g))
	}
	return d
}

// coefficient returns scale times the polynomial in s with which a signal
// stands in a row.
func (r row) coefficient(signal int, scale *big.Int) intpoly.Poly {
	c := make([]*big.Int, maxPrimes+r.integrals+1)
	for order := range c {
		if k := r.terms[derivative{signal, order}]; k != nil {
			c[order] = new(big.Int).Quo(new(big.Int).Mul(k.Num(), scale), k.Denom())
		}
	}
	return intpoly.FromBigs(c...)
}
