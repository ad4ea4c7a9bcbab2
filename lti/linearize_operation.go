package lti

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"strconv"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/units"
)

// ModelError tells that the function of a Nonlinear does not do as it should.
type ModelError struct {
	Reason string
	Err    error // the error behind it, or nil
}

// Error gives the reason.
func (e *ModelError) Error() string { return "nonlinear model: " + e.Reason }

// Unwrap returns the error behind the fault.
func (e *ModelError) Unwrap() error { return e.Err }

// OperatingError tells what is wrong with a value of an operating point.
type OperatingError struct {
	Signal string
	Reason string
	Err    error // the error behind it, or nil
}

// Error names the signal and the reason.
func (e *OperatingError) Error() string {
	if e.Signal == "" {
		return "operating point: " + e.Reason
	}
	return fmt.Sprintf("operating point, %s: %s", lex.Excerpt(e.Signal, 0), e.Reason)
}

// Unwrap returns the error behind the fault.
func (e *OperatingError) Unwrap() error { return e.Err }

// NotAtRestError tells that an operating point is no equilibrium, and how the
// states drift there.
type NotAtRestError struct {
	Drifts []Drift
}

// Drift is a state and its rate.
type Drift struct {
	State units.Signal
	Rate  float64 // in the unit of the state per second
}

// Error is "not an equilibrium: level drifts 3.1 mm/s".
func (e *NotAtRestError) Error() string {
	text := "not an equilibrium: "
	for i, d := range e.Drifts {
		if i > 0 {
			text += ", "
		}
		text += fmt.Sprintf("%s drifts %s %s", d.State.Name, rounded(d.Rate), d.State.Unit.Div(second.Unit()))
	}
	return text + "; Equilibrium finds a point at rest"
}

// rounded writes a number with two significant digits, 120 and not 1.2e+02.
func rounded(v float64) string {
	if r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 2, 64), 64); err == nil {
		v = r
	}
	return strconv.FormatFloat(v, 'g', -1, 64)
}

// exactFloat returns the number that a float64 is.
func exactFloat(v float64) (*big.Rat, error) {
	if r := new(big.Rat).SetFloat64(v); r != nil {
		return r, nil
	}
	return nil, fault.ErrNotFinite
}

func unknownSignal(name string, signals []units.Signal) error {
	e := &UnknownNameError{Kind: "signal", Name: name}
	for _, s := range signals {
		e.Have = append(e.Have, s.Name)
	}
	return e
}

// operation is a model at a point.
type operation struct {
	m      Nonlinear
	values []float64 // of states and inputs
	given  []bool    // whether there is a value at all
	sought []bool
}

func newOperation(m Nonlinear, values []OperatingValue) (*operation, error) {
	n := len(m.States) + len(m.Inputs)
	o := &operation{m: m, values: make([]float64, n), given: make([]bool, n), sought: make([]bool, n)}
	if m.Equations == nil {
		return nil, &ModelError{Reason: "Equations is nil"}
	}
	// The signals are checked as those of the result will be.
	if _, err := statespace.New(m.States, m.Inputs, m.Outputs, statespace.Matrices{}); err != nil {
		return nil, err
	}
	for i := range n {
		for j := range i {
			if o.signal(i).Name == o.signal(j).Name {
				return nil, &OperatingError{Signal: o.signal(i).Name, Reason: "is both a state and an input"}
			}
		}
	}
	for _, v := range values {
		i := 0
		for i < n && o.signal(i).Name != v.Signal {
			i++
		}
		if i == n {
			var all []units.Signal
			for k := range n {
				all = append(all, o.signal(k))
			}
			if slices.ContainsFunc(m.Outputs, func(s units.Signal) bool { return s.Name == v.Signal }) {
				return nil, &OperatingError{Signal: v.Signal, Reason: "is an output, which follows from states and inputs"}
			}
			return nil, unknownSignal(v.Signal, all)
		}
		if o.given[i] {
			return nil, &OperatingError{Signal: v.Signal, Reason: "has two values"}
		}
		number, err := v.number(o.signal(i).Unit)
		if err != nil {
			return nil, &OperatingError{Signal: v.Signal, Reason: err.Error(), Err: err}
		}
		o.values[i], o.given[i], o.sought[i] = number, true, v.Sought
	}
	return o, nil
}

// number reads the absolute quantity in a unit.
func (v OperatingValue) number(unit units.Unit) (float64, error) {
	q, err := units.ParseAbsolute(v.Quantity)
	if err != nil {
		return 0, err
	}
	return q.In(unit)
}

// signal returns a state or an input.
func (o *operation) signal(i int) units.Signal {
	if n := len(o.m.States); i >= n {
		return o.m.Inputs[i-n]
	}
	return o.m.States[i]
}

// slopes are the values of rates and outputs, and their derivatives by states and
// inputs.
type slopes struct {
	values []float64
	matrix *mat.Dense
}

// slopes calls the model once for each state and input.
func (o *operation) slopes() (*slopes, error) {
	rows, columns := len(o.m.States)+len(o.m.Outputs), len(o.values)
	s := &slopes{}
	if rows > 0 && columns > 0 {
		s.matrix = mat.NewDense(rows, columns, nil)
	}
	for j := range max(1, columns) {
		out, err := o.call(j)
		if err != nil {
			return nil, err
		}
		s.values = s.values[:0]
		for i, v := range out {
			s.values = append(s.values, v.Real)
			if columns > 0 {
				s.matrix.Set(i, j, v.Emag)
			}
		}
	}
	return s, nil
}

// call evaluates the model with the dual part on one variable.
func (o *operation) call(j int) (out []dual.Number, err error) {
	x := make([]dual.Number, len(o.values))
	for i, v := range o.values {
		x[i].Real = v
	}
	if j < len(x) {
		x[j].Emag = 1
	}
	n := len(o.m.States)
	rates, outputs, err := o.guarded(x[:n:n], x[n:])
	if err != nil {
		return nil, err
	}
	if len(rates) != n || len(outputs) != len(o.m.Outputs) {
		return nil, &ModelError{Reason: fmt.Sprintf("Equations returned %d rates and %d outputs for %d states and %d outputs",
			len(rates), len(outputs), n, len(o.m.Outputs))}
	}
	out = append(append(make([]dual.Number, 0, n+len(outputs)), rates...), outputs...)
	for i, v := range out {
		if math.IsNaN(v.Real-v.Real) || math.IsNaN(v.Emag-v.Emag) {
			name := o.row(i)
			what := fmt.Sprintf("%s is %v", name, v.Real)
			if !math.IsNaN(v.Real - v.Real) {
				what = fmt.Sprintf("the slope of %s by %s is %v", name, o.signal(j).Name, v.Emag)
			}
			return nil, &ModelError{Reason: what + " at this point", Err: fault.ErrNotFinite}
		}
	}
	return out, nil
}

// row names a rate or an output.
func (o *operation) row(i int) string {
	if n := len(o.m.States); i >= n {
		return "the output " + o.m.Outputs[i-n].Name
	}
	return "the rate of " + o.m.States[i].Name
}

// guarded calls the user's function and turns a panic into an error.
func (o *operation) guarded(x, u []dual.Number) (rates, outputs []dual.Number, err error) {
	defer func() {
		if r := recover(); r != nil {
			e := &ModelError{Reason: "Equations panicked: " + lex.Excerpt(fmt.Sprint(r), 40)}
			if cause, ok := r.(error); ok {
				e.Err = cause
			}
			err = e
		}
	}()
	rates, outputs = o.m.Equations(x, u)
	return rates, outputs, nil
}

// restTolerance and restFloor are how far from rest a point may be: a rate may
// differ from 0 by what these parts of the values, and these parts of their units,
// would change it. The first is for operating points that are typed with a few
// digits; Equilibrium finds all of them. The second is for values of 0, about which
// constants balance but for their rounding, 2^-53 of each.
const (
	restTolerance = 1e-6
	restFloor     = 1e-13
)

// atRest checks the rates.
func (o *operation) atRest(s *slopes) error {
	e := &NotAtRestError{}
	for i, state := range o.m.States {
		allowed := 0.0
		for j, v := range o.values {
			allowed += math.Abs(s.matrix.At(i, j)) * (restTolerance*math.Abs(v) + restFloor)
		}
		if rate := s.values[i]; math.Abs(rate) > allowed {
			e.Drifts = append(e.Drifts, Drift{state, rate})
		}
	}
	if len(e.Drifts) > 0 {
		return e
	}
	return nil
}
