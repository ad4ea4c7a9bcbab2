package lti

import (
	"fmt"
	"math/big"
	"slices"
	"strings"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/units"
)

// InitialValue is what a signal, or a derivative of one, is just before t = 0;
// Initially makes one.
type InitialValue struct {
	Signal   string // "level", or "level'" for its derivative
	Quantity string // "0.2 m"
}

// Initially returns the initial value of a signal or of a derivative, such as
//
//	lti.Initially("level", "0.2 m"), lti.Initially("level'", "1 mm/s")
//
// It is read and checked by System.InitialState.
func Initially(signal, quantity string) InitialValue { return InitialValue{signal, quantity} }

// String is "level = 0.2 m".
func (v InitialValue) String() string { return v.Signal + " = " + v.Quantity }

// MarshalText is String, for encoding.TextMarshaler.
func (v InitialValue) MarshalText() ([]byte, error) { return []byte(v.String()), nil }

// UnmarshalText reads what String writes. What stands on the two sides is read
// by System.InitialState. The error is a *SyntaxError.
func (v *InitialValue) UnmarshalText(text []byte) error {
	signal, quantity, found := strings.Cut(string(text), "=")
	if !found || len(text) > lex.MaxLength {
		return lex.Fault(string(text), 0, "an initial value", "a signal, =, and a quantity, such as level = 0.2 m", nil)
	}
	*v = Initially(strings.TrimSpace(signal), strings.TrimSpace(quantity))
	return nil
}

// InitialState is where the signals of a System stand just before t = 0, with
// all inputs at 0 until then. It is immutable and safe to share.
type InitialState struct {
	_           [0]func()
	system      *System
	elimination *elimination // of all but the inputs
	inputs      []int
	orders      []int // by column, the highest order in the equations
	form        *explicit
	states      vector // in coherent units
}

// InitialState returns the state that some initial values describe. Signals
// that the equations do not determine are inputs and must be named, as in
// TransferFunction.
//
// Values are those just before t = 0 (0−), and until then all inputs are 0: the
// signals follow the equations alone. So the values must fit the equations,
// which is decided exactly, and as many as the equations have order are free.
// Others follow from them, and may be given as well. A step of an input at t = 0
// may make signals jump, so that they differ just after; with inputs that stay
// 0 they do not.
//
// An integral(…) has no name and needs no value: where it stands follows from the
// signals beside it in its equation.
//
// The errors are a *InitialValueError for each value that cannot be read, has
// another dimension than its signal, belongs to an input, or contradicts the
// equations and the values before it, all joined (errors.Join); one for missing
// values, which proposes some that suffice; those of TransferFunction for the
// equations; and ErrLimit for numbers that grow too long: where making the
// equations explicit takes more than 2^30 products of words.
//
// The equations are made explicit by the Popov form of their polynomial matrix
// (V. M. Popov, SIAM Journal on Control 10, 1972).
func (s *System) InitialState(inputs []string, values ...InitialValue) (*InitialState, error) {
	at, err := s.lookUp(inputs)
	if err != nil {
		return nil, err
	}
	if err := s.apart(at, nil, nil); err != nil {
		return nil, err
	}
	unknowns, err := s.unknowns(nil, nil, at, "InitialState([]string{%s}, …)")
	if err != nil {
		return nil, err
	}
	if len(values) > maxPairs {
		return nil, ErrLimit
	}
	x := &InitialState{system: s, inputs: at}
	unknowns, x.orders = s.bySignificance(unknowns)
	x.elimination = s.elimination(nil, unknowns)
	if err := x.complete(values); err != nil {
		return nil, err
	}
	return x, nil
}

// complete finds the states.
func (x *InitialState) complete(values []InitialValue) error {
	left := budget(maxExplicitWork)
	form, ok, err := newExplicit(x.elimination.a, len(x.elimination.unknowns), &left)
	switch {
	case err != nil:
		return err
	case !ok: // asked again for the sake of the explanation
		if _, _, err := x.elimination.solve(nil, nil); err != nil {
			return err
		}
		return ErrLimit
	}
	x.form = form
	k := &knowledge{left: &left}
	if err := x.learn(k, values); err != nil {
		return err
	}
	if err := x.require(k, len(values)); err != nil {
		return err
	}
	x.states = k.solve()
	return nil
}

// value returns a derivative at t = 0, in coherent units.
func (x *InitialState) value(d state) (*big.Rat, error) {
	left := budget(maxExplicitWork)
	v, err := x.form.derivative(d, &left)
	if err != nil {
		return nil, err
	}
	sum := new(big.Rat)
	for i, c := range v {
		sum.Add(sum, new(big.Rat).Mul(c, x.states[i]))
	}
	return sum, nil
}

// learn takes in the values that are given; its error joins all faults.
func (x *InitialState) learn(k *knowledge, values []InitialValue) error {
	var faults []error
	for _, v := range values {
		d, number, err := x.read(v)
		if err != nil {
			faults = append(faults, err)
			continue
		}
		functional, err := x.form.derivative(d, k.left)
		if err != nil {
			return err
		}
		implied, from, err := k.add(functional, number, v)
		if err != nil {
			return err
		}
		if implied != nil && implied.Cmp(number) != 0 {
			faults = append(faults, x.contradiction(v, d, implied, from))
		}
	}
	return joined(faults)
}

// read returns the derivative that a value belongs to and its number in
// coherent units.
func (x *InitialState) read(v InitialValue) (state, *big.Rat, error) {
	bad := func(reason string, err error) (state, *big.Rat, error) {
		return state{}, nil, &InitialValueError{Signal: v.Signal, Quantity: v.Quantity, Reason: reason, Err: err}
	}
	d, err := x.system.derivative(v.Signal)
	if err != nil {
		return bad(err.Error(), err)
	}
	signal, err := x.system.signalOf(d)
	if err != nil {
		return bad(err.Error(), err)
	}
	column := slices.Index(x.elimination.unknowns, d.signal)
	switch {
	case slices.Contains(x.inputs, d.signal):
		return bad(fmt.Sprintf("%s is an input, which is 0 before t = 0", x.system.signals[d.signal].Name), nil)
	case column < 0:
		return bad(fmt.Sprintf("%s stands in no equation", x.system.signals[d.signal].Name), nil)
	}
	q, err := units.ParseQuantity(v.Quantity)
	if err == nil {
		q, err = q.ConvertTo(signal.Unit)
	}
	if err != nil {
		return bad(reasonAgainst(err), err)
	}
	number := q.Value()
	return state{column, d.order}, number.Mul(number, signal.Unit.Scale()), nil
}

// quantity puts the unit of its signal on a number in coherent units.
func (x *InitialState) quantity(d state, number *big.Rat) (units.Quantity, error) {
	signal, err := x.system.signalOf(derivative{x.elimination.unknowns[d.column], d.order})
	if err != nil {
		return units.Quantity{}, err
	}
	return units.NewQuantity(new(big.Rat).Quo(number, signal.Unit.Scale()), signal.Unit), nil
}

func (x *InitialState) contradiction(v InitialValue, d state, implied *big.Rat, from []string) error {
	text := "another one"
	if q, err := x.quantity(d, implied); err == nil {
		text = q.String()
		if len(text) > 40 {
			text = fmt.Sprintf("%.6g", q)
		}
	}
	reason := fmt.Sprintf("the equations make it %s, whatever the other values are", text)
	if len(from) > 0 {
		reason = fmt.Sprintf("the equations make it %s, as %s", text, shortened(from))
	}
	return &InitialValueError{Signal: v.Signal, Quantity: v.Quantity, Reason: reason}
}

// require reports what is missing, and proposes values that suffice: the lowest
// derivatives first.
func (x *InitialState) require(k *knowledge, given int) error {
	n := len(x.form.states)
	if len(k.rows) == n {
		return nil
	}
	known := len(k.rows)
	e := &InitialValueError{}
	for order := 0; len(k.rows) < n; order++ {
		for column, highest := range x.orders {
			if order >= highest || len(k.rows) == n {
				continue
			}
			v, err := x.form.derivative(state{column, order}, k.left)
			if err != nil {
				return err
			}
			name := x.system.signals[x.elimination.unknowns[column]].Name + strings.Repeat("'", order)
			implied, _, err := k.add(v, new(big.Rat), InitialValue{Signal: name})
			if err != nil {
				return err
			}
			if implied == nil {
				e.Missing = append(e.Missing, name)
			}
		}
		if order > 2*maxPrimes {
			return fault.ErrLimit // not reached: these values determine all others
		}
	}
	e.Reason = fmt.Sprintf("the equations are of order %d and need as many initial values; ", n)
	suffices := fmt.Sprintf("; it suffices to give %s too", shortened(e.Missing))
	switch {
	case given == 0:
		e.Reason += "none is given"
		suffices = strings.TrimSuffix(suffices, " too")
	case known == given:
		e.Reason += fmt.Sprintf("%d given", given)
	default:
		e.Reason += fmt.Sprintf("%d given, of which only %d do not follow from the others", given, known)
	}
	e.Reason += suffices
	return e
}

// Value returns the initial value of a signal or of a derivative, such as
// "level'", in the declared unit per power of a second: as it was given, or as
// it follows. An input is 0. The errors are *UnknownNameError, and ErrLimit for a
// derivative of an order above 16.
func (x *InitialState) Value(name string) (units.Quantity, error) {
	d, err := x.system.derivative(name)
	if err != nil {
		return units.Quantity{}, err
	}
	signal, err := x.system.signalOf(d)
	if err != nil {
		return units.Quantity{}, err
	}
	column := slices.Index(x.elimination.unknowns, d.signal)
	if column < 0 {
		return units.NewQuantity(nil, signal.Unit), nil
	}
	v, err := x.value(state{column, d.order})
	if err != nil {
		return units.Quantity{}, err
	}
	return x.quantity(state{column, d.order}, v)
}

// String lists the values that determine all others, a line each: as many as
// the equations have order, not always those that were given.
func (x *InitialState) String() string {
	var b strings.Builder
	for i, d := range x.form.states {
		name := x.system.signals[x.elimination.unknowns[d.column]].Name + strings.Repeat("'", d.order)
		if q, err := x.quantity(d, x.states[i]); err == nil {
			fmt.Fprintf(&b, "%s = %s\n", name, q)
		}
	}
	return strings.TrimSuffix(b.String(), "\n")
}
