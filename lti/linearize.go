package lti

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/units"
)

// Nonlinear is a model as a Go function over dual numbers, from which Linearize
// takes the slopes at an operating point:
//
//	tank := lti.Nonlinear{
//		States:  []units.Signal{{Name: "level", Unit: units.MustParse("m")}},
//		Inputs:  []units.Signal{{Name: "inflow", Unit: units.MustParse("m^3/s")}},
//		Outputs: []units.Signal{{Name: "outflow", Unit: units.MustParse("m^3/s")}},
//		Equations: func(x, u []dual.Number) (rates, y []dual.Number) {
//			out := dual.Scale(0.8, dual.Sqrt(x[0])) // over a weir, m³/s
//			return []dual.Number{dual.Scale(1/5600.0, dual.Sub(u[0], out))}, []dual.Number{out}
//		},
//	}
//
// Equations gets the values of states and inputs in the units of their signals,
// absolutely: a temperature from absolute zero on, in K where the unit is degC. It
// returns the rates of the states, in their units per second, and the outputs in
// theirs. It must compute with the dual numbers throughout, must not depend on
// anything else, and may be called many times.
type Nonlinear struct {
	States, Inputs, Outputs []units.Signal

	Equations func(states, inputs []dual.Number) (rates, outputs []dual.Number)
}

// OperatingValue is the value of a state or an input at an operating point; At and
// Near make one.
type OperatingValue struct {
	Signal   string
	Quantity string // absolute: "900 degC" is 1173.15 K
	Sought   bool   // whether Quantity is only where a search begins
}

// At returns a value that holds at the operating point, such as
// lti.At("zone", "900 degC"), which is 1173.15 K.
func At(signal, quantity string) OperatingValue {
	return OperatingValue{Signal: signal, Quantity: quantity}
}

// Near returns a value near which Equilibrium looks for the one that belongs to
// the operating point.
func Near(signal, quantity string) OperatingValue {
	return OperatingValue{Signal: signal, Quantity: quantity, Sought: true}
}

// OperatingPoint holds the values of all states, inputs and outputs of a
// Nonlinear. It is immutable.
type OperatingPoint struct {
	_       [0]func()
	signals []units.Signal // states, inputs, outputs
	values  []float64      // in the units of the signals
	free    int            // how many of them are states and inputs
}

// Value returns the value of a state, an input or an output at the point: the
// exact quantity that its float64 is. A temperature is in K, absolutely. The error
// is *UnknownNameError.
func (p OperatingPoint) Value(signal string) (units.Quantity, error) {
	for i, s := range p.signals {
		if s.Name == signal {
			return p.quantity(i)
		}
	}
	return units.Quantity{}, unknownSignal(signal, p.signals)
}

func (p OperatingPoint) quantity(i int) (units.Quantity, error) {
	r, err := exactFloat(p.values[i])
	if err != nil {
		return units.Quantity{}, err
	}
	q := units.NewQuantity(r, p.signals[i].Unit)
	if p.signals[i].Unit.Dimension() == kelvin.Dimension() {
		return q.ConvertTo(kelvin) // where degC would look like a reading
	}
	return q, nil
}

var kelvin = units.MustParse("K")

// String lists the values with six digits, a line each.
func (p OperatingPoint) String() string {
	var lines []string
	for i, s := range p.signals {
		q, err := p.quantity(i)
		if err != nil {
			continue
		}
		if line := fmt.Sprintf("%s = %.6g", s.Name, q); !slices.Contains(lines, line) { // an output may be a state
			lines = append(lines, line)
		}
	}
	return strings.Join(lines, "\n")
}

// Linearize returns the model of small deviations from an operating point, which
// must be at rest, with the signals of m. It is at rest if no rate differs from 0 by
// more than a change of the values by 1e-6 of each and by 1e-13 of its unit would
// make. The slopes are those that automatic
// differentiation finds (Wengert 1964), without a step size: exact but for the
// rounding of the float64 operations of the model, and then read as the binary
// fractions that they are. A slope that differs by more than an eighth from what
// differences of the values show is an error: the model lost a dual part, or has a
// kink there.
//
// Every state and every input needs a value; Equilibrium finds those that are not
// known. The errors are *ModelError where the function does not do as it should,
// *UnknownNameError and *OperatingError for values, *NotAtRestError, and those of
// statespace.New.
func Linearize(m Nonlinear, values ...OperatingValue) (statespace.Continuous, error) {
	o, err := newOperation(m, values)
	if err != nil {
		return statespace.Continuous{}, err
	}
	for i, given := range o.given {
		if !given {
			return statespace.Continuous{}, &OperatingError{Signal: o.signal(i).Name, Reason: "has no value: give one with At, or let Equilibrium find it"}
		}
		if o.sought[i] {
			return statespace.Continuous{}, &OperatingError{Signal: o.signal(i).Name, Reason: "has a value by Near, where a search begins; Equilibrium finds it"}
		}
	}
	s, err := o.slopes()
	if err != nil {
		return statespace.Continuous{}, err
	}
	if err := o.atRest(s); err != nil {
		return statespace.Continuous{}, err
	}
	if err := o.compare(s); err != nil {
		return statespace.Continuous{}, err
	}
	n := len(m.States)
	part := func(rows, columns, i, j int) mat.Matrix {
		if rows == 0 || columns == 0 {
			return nil
		}
		return s.matrix.Slice(i, i+rows, j, j+columns)
	}
	k, q := len(m.Inputs), len(m.Outputs)
	return statespace.FromFloats(m.States, m.Inputs, m.Outputs,
		statespace.Floats{State: part(n, n, 0, 0), Input: part(n, k, 0, n), Output: part(q, n, n, 0), Feedthrough: part(q, k, n, n)})
}

// Equilibrium returns an operating point at rest. Values made by At hold; the
// others, as many as there are states, are found, from where Near says. For a tank
// one may hold the inflow and look for the level, or hold the level and look for the
// inflow:
//
//	point, err := lti.Equilibrium(tank, lti.At("level", "1.4 m"), lti.Near("inflow", "2 m^3/s"))
//	plant, err := lti.Linearize(tank, point.Values()...)
//
// The method is Newton's, damped by the natural test of Deuflhard (1974); it is
// float64 work and finds one of the points, if there are several. The errors are
// *OperatingError where too many or too few values are sought, where a sought value
// has no effect, or where the search does not settle within 100 steps, and those
// of Linearize.
func Equilibrium(m Nonlinear, values ...OperatingValue) (OperatingPoint, error) {
	o, err := newOperation(m, values)
	if err != nil {
		return OperatingPoint{}, err
	}
	if err := o.find(); err != nil {
		return OperatingPoint{}, err
	}
	s, err := o.slopes()
	if err != nil {
		return OperatingPoint{}, err
	}
	if err := o.atRest(s); err != nil {
		return OperatingPoint{}, err
	}
	return OperatingPoint{signals: slices.Concat(m.States, m.Inputs, m.Outputs),
		values: slices.Concat(o.values, s.values[len(m.States):]), free: len(o.values)}, nil
}

// Values returns the values of states and inputs as Linearize takes them: each
// text reads as the float64 that was found, and can be stored or replaced.
func (p OperatingPoint) Values() []OperatingValue {
	var out []OperatingValue
	for i, s := range p.signals[:p.free] {
		if q, err := p.text(i); err == nil {
			out = append(out, At(s.Name, q.String()))
		}
	}
	return out
}

// text is a quantity with the fewest digits that tell its float64 from all others;
// one of degF, whose size is no decimal of a kelvin, is exact.
func (p OperatingPoint) text(i int) (units.Quantity, error) {
	unit := p.signals[i].Unit
	if unit.Dimension() == kelvin.Dimension() {
		if !unit.Equal(kelvin) {
			return p.quantity(i)
		}
		unit = kelvin
	}
	r, ok := new(big.Rat).SetString(strconv.FormatFloat(p.values[i], 'g', -1, 64))
	if !ok {
		return units.Quantity{}, fault.ErrNotFinite
	}
	return units.NewQuantity(r, unit), nil
}

// scaleOf is the size of a number that may be 0.
func scaleOf(v float64) float64 {
	if v = math.Abs(v); v > 0 {
		return v
	}
	return 1
}
