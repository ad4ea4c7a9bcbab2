package lti

import (
	"errors"
	"fmt"
	"math/big"
	"slices"
	"strings"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/polymatrix"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// System is a checked set of linear differential equations. It is immutable and
// safe to share.
type System struct {
	signals   []units.Signal
	constants []Constant
	equations []equation
	rows      []row
}

// Signals returns the signals in the order of declaration.
func (s *System) Signals() []units.Signal { return slices.Clone(s.signals) }

// Constants returns the constants in the order of declaration.
func (s *System) Constants() []Constant { return slices.Clone(s.constants) }

// Equations returns the equations as they were entered.
func (s *System) Equations() []string {
	out := make([]string, len(s.equations))
	for i, q := range s.equations {
		out[i] = q.text
	}
	return out
}

func (s *System) signalIndex(name string) (int, bool) {
	i := slices.IndexFunc(s.signals, func(x units.Signal) bool { return x.Name == name })
	return i, i >= 0
}

func (s *System) constantIndex(name string) (int, bool) {
	i := slices.IndexFunc(s.constants, func(x Constant) bool { return x.Name == name })
	return i, i >= 0
}

// WithConstant returns the system with another value for a constant, such as
// "310 N/m". The errors are *UnknownNameError, *DeclarationError for the text,
// and those of Build where the new unit does not fit the equations.
func (s *System) WithConstant(name, quantity string) (*System, error) {
	i, ok := s.constantIndex(name)
	if !ok {
		e := &UnknownNameError{Kind: "constant", Name: name}
		for _, c := range s.constants {
			e.Have = append(e.Have, c.Name)
		}
		return nil, e
	}
	q, err := units.ParseQuantity(quantity)
	if err != nil {
		return nil, &DeclarationError{"constant", name, quantity, err.Error(), err}
	}
	t := &System{signals: s.signals, constants: slices.Clone(s.constants), equations: s.equations}
	t.constants[i].Value = q
	if faults := t.link(nil); len(faults) > 0 {
		return nil, errors.Join(faults...)
	}
	return t, nil
}

// TransferFunction returns the transfer function from one signal to another,
// in their declared units and under their names, for zero initial conditions.
// The output may be a derivative of a signal, as in "level'". Which signal is
// the input is chosen here and may differ from call to call: the equations must
// determine all other signals from it.
//
// Further inputs, such as disturbances, are named in held and are 0. Which
// signals they are is never guessed: where the equations leave some open, the
// error proposes a call. A signal that stands in no equation plays no part.
//
// All other signals are eliminated exactly by Cramer's rule: the denominator
// is the determinant of the equations and nothing is cancelled, so that modes
// which the pair does not show remain in it as common factors
// (tf.Continuous.LowestTerms returns them).
//
// The errors are *UnknownNameError, *DeterminacyError where there are too many
// or too few equations or where they contradict or repeat each other, and
// ErrLimit for a system too large (256 unknowns, a total degree of 2048).
func (s *System) TransferFunction(in, out string, held ...string) (tf.Continuous, error) {
	name := strings.TrimRight(out, "'′")
	order := len([]rune(out)) - len([]rune(name))
	if order > maxPrimes {
		return tf.Continuous{}, ErrLimit
	}
	columns, err := s.lookUp(append([]string{in, name}, held...))
	if err != nil {
		return tf.Continuous{}, err
	}
	input, output, zero := columns[0], columns[1], columns[2:]
	if slices.Contains(zero, input) || slices.Contains(zero, output) {
		return tf.Continuous{}, &DeterminacyError{Equations: len(s.equations),
			Reason: fmt.Sprintf("a signal that is held at 0 is neither input nor output: %s", strings.Join(held, ", "))}
	}
	num, den := intpoly.FromInt64s(1), intpoly.FromInt64s(1)
	if input != output {
		if num, den, err = s.eliminate(input, output, zero); err != nil {
			return tf.Continuous{}, err
		}
	}
	from, to := s.signals[input], s.signals[output]
	// The equations are between coherent units: out/scale(out) = G·in/scale(in)…
	gain := new(big.Rat).Quo(from.Unit.Scale(), to.Unit.Scale())
	g, err := tf.New(poly.Poly(ratpoly.New(num.MulPower(order).MulInt(gain.Num()), gain.Denom())), poly.Poly(ratpoly.FromInteger(den)))
	if err != nil {
		return tf.Continuous{}, err
	}
	if order > 0 {
		perSecond, err := units.MustParse("1/s").Pow(order)
		if err != nil {
			return tf.Continuous{}, err
		}
		to = units.Signal{Name: out, Unit: to.Unit.Mul(perSecond)}
	}
	return g.WithSignals(from, to)
}

func (s *System) lookUp(names []string) ([]int, error) {
	out := make([]int, len(names))
	for k, name := range names {
		i, ok := s.signalIndex(name)
		if !ok {
			e := &UnknownNameError{Kind: "signal", Name: name}
			for _, x := range s.signals {
				e.Have = append(e.Have, x.Name)
			}
			return nil, e
		}
		out[k] = i
	}
	return out, nil
}

// eliminate returns the numerator and the denominator from one signal to
// another in coherent units.
func (s *System) eliminate(input, output int, zero []int) (num, den intpoly.Poly, err error) {
	unknowns, err := s.unknowns(input, output, zero)
	if err != nil {
		return num, den, err
	}
	a, b := make([][]intpoly.Poly, len(s.rows)), make([]intpoly.Poly, len(s.rows))
	for i, row := range s.rows {
		scale := commonDenominator(row)
		a[i] = make([]intpoly.Poly, len(unknowns))
		for j, signal := range unknowns {
			a[i][j] = coefficient(row, signal, scale)
		}
		b[i] = coefficient(row, input, scale).Neg()
	}
	num, den, err = polymatrix.Solve(a, b, slices.Index(unknowns, output))
	if singular, ok := err.(*polymatrix.SingularError); ok {
		e := &DeterminacyError{Equations: len(s.rows), Unknowns: s.namesOf(unknowns)}
		for _, j := range singular.Undetermined {
			e.Open = append(e.Open, s.signals[unknowns[j]].Name)
		}
		e.Reason = fmt.Sprintf("with %s as the input the equations repeat or contradict each other: they do not determine %s",
			s.signals[input].Name, strings.Join(e.Open, ", "))
		return num, den, e
	}
	return num, den, err
}

func (s *System) namesOf(indices []int) []string {
	out := make([]string, len(indices))
	for i, j := range indices {
		out[i] = s.signals[j].Name
	}
	return out
}

// commonDenominator returns a number that makes the coefficients of a row
// whole.
func commonDenominator(r row) *big.Int {
	d := big.NewInt(1)
	for _, c := range r.terms {
		g := new(big.Int).GCD(nil, nil, d, c.Denom())
		d.Mul(d, new(big.Int).Quo(c.Denom(), g))
	}
	return d
}

// coefficient returns scale times the polynomial in s with which a signal
// stands in a row.
func coefficient(r row, signal int, scale *big.Int) intpoly.Poly {
	c := make([]*big.Int, maxPrimes+r.integrals+1)
	for order := range c {
		if k := r.terms[derivative{signal, order}]; k != nil {
			c[order] = new(big.Int).Quo(new(big.Int).Mul(k.Num(), scale), k.Denom())
		}
	}
	return intpoly.FromBigs(c...)
}

// String lists signals, constants and equations, a line each.
func (s *System) String() string {
	var b strings.Builder
	for _, x := range s.signals {
		fmt.Fprintf(&b, "signal %s\n", x)
	}
	for _, c := range s.constants {
		fmt.Fprintf(&b, "constant %s = %s\n", c.Name, c.Value)
	}
	for _, q := range s.equations {
		fmt.Fprintf(&b, "equation %s\n", q.text)
	}
	return strings.TrimSuffix(b.String(), "\n")
}
