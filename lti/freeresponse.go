package lti

import (
	"fmt"
	"math/big"
	"slices"
	"strings"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Step returns the input that is 0 before t = 0 and has a height from then on,
// such as Step("opening", "50 mm"), for InitialState.Response. The errors are
// *UnknownNameError, and *InitialValueError for a height that cannot be read or
// does not fit the unit of the signal.
func (s *System) Step(input, height string) (tf.TimeFunction, error) {
	at, err := s.lookUp([]string{input})
	if err != nil {
		return tf.TimeFunction{}, err
	}
	signal := s.signals[at[0]]
	q, err := units.ParseQuantity(height)
	if err == nil {
		q, err = q.ConvertTo(signal.Unit)
	}
	if err != nil {
		return tf.TimeFunction{}, &InitialValueError{Signal: input, Quantity: height, Reason: reasonAgainst(err), Err: err}
	}
	return tf.NewTimeFunction(poly.FromRats(q.Value()), poly.FromInts(0, 1), signal)
}

// FreeResponse returns how a signal, or a derivative such as "level'", goes on
// from the initial state where all inputs stay 0: a closed form with exact
// transform, in the declared unit. Its derivatives at t = 0 are those of Value.
//
// The errors are *UnknownNameError, *InitialValueError for an input, and ErrLimit
// where the equations are too large for TransferFunction or the result for
// tf.NewTimeFunction.
//
// Source: the transform of the derivative, s·F(s) − f(0), rule 29.2.4 of
// Abramowitz and Stegun, 1964, applied to all equations at once.
func (x *InitialState) FreeResponse(signal string) (tf.TimeFunction, error) {
	return x.Response(signal)
}

// Response returns the course of a signal, or of a derivative such as "level'",
// from the initial state with inputs from t = 0 on: the free response and, added
// to it, what each input makes from rest. An input is a function of time that
// bears the name of an input of the state, made by System.Step or by
// tf.NewTimeFunction from its Laplace transform; those that are not given stay
// 0. The unit of an input is converted exactly.
//
//	state.Response("level", opening, offtake)
//
// The errors are those of FreeResponse, *InitialValueError for an input that is
// none, is given twice, has a dead time or another dimension, and
// tf.ErrImpulseDerivative where the signal would be more than an impulse.
func (x *InitialState) Response(signal string, inputs ...tf.TimeFunction) (tf.TimeFunction, error) {
	d, err := x.system.derivative(signal)
	if err != nil {
		return tf.TimeFunction{}, err
	}
	out, err := x.system.signalOf(d)
	if err != nil {
		return tf.TimeFunction{}, err
	}
	column := slices.Index(x.elimination.unknowns, d.signal)
	if column < 0 {
		return tf.TimeFunction{}, &InitialValueError{Signal: signal, Quantity: "?", Reason: "it is an input, or stands in no equation; a response is that of another signal"}
	}
	courses := make([]course, len(inputs))
	for k, input := range inputs {
		if courses[k], err = x.course(input, courses[:k]); err != nil {
			return tf.TimeFunction{}, err
		}
	}
	num, den, err := x.transform(column, courses)
	if err != nil {
		return tf.TimeFunction{}, err
	}
	// s^k·X(s) − s^(k−1)·x(0) − … − x^(k−1)(0)
	for order := range d.order {
		v, err := x.value(state{column, order})
		if err != nil {
			return tf.TimeFunction{}, err
		}
		num = num.Mul(poly.FromInts(0, 1)).Sub(den.Scale(v))
	}
	return tf.NewTimeFunction(num.Scale(new(big.Rat).Inv(out.Unit.Scale())), den, out)
}

// course is an input with its transform in coherent units.
type course struct {
	signal   int
	num, den poly.Poly
}

func (x *InitialState) course(f tf.TimeFunction, earlier []course) (course, error) {
	bad := func(reason string, err error) (course, error) {
		return course{}, &InitialValueError{Signal: f.Signal().Name, Quantity: "a function of time", Reason: reason, Err: err}
	}
	at, found := x.system.signalIndex(f.Signal().Name)
	switch {
	case !found || !slices.Contains(x.inputs, at):
		return bad(fmt.Sprintf("%q is no input of this state; there are %s", f.Signal().Name, strings.Join(x.system.namesOf(x.inputs), ", ")), nil)
	case slices.ContainsFunc(earlier, func(c course) bool { return c.signal == at }):
		return bad("the input is given twice", nil)
	case f.DeadTime().Sign() != 0:
		return bad("the input has a dead time, with which the sum has no closed form here; take the response to it from rest, by tf.Continuous.Response, and add the values", nil)
	}
	if _, err := f.Unit().ConversionTo(x.system.signals[at].Unit); err != nil {
		return bad(err.Error(), err)
	}
	laplace := f.Laplace()
	return course{at, laplace.Numerator().Scale(f.Unit().Scale()), laplace.Denominator()}, nil
}

// transform returns the Laplace transform of an unknown for inputs with the
// transforms N/D, in coherent units. It is over the determinant of the equations
// times each D, and nothing is cancelled.
func (x *InitialState) transform(column int, inputs []course) (num, den poly.Poly, err error) {
	free, scale, err := x.right()
	if err != nil {
		return num, den, err
	}
	right := [][]intpoly.Poly{free}
	for _, c := range inputs {
		right = append(right, x.elimination.of(c.signal))
	}
	nums, determinant, err := x.elimination.solve(right, []int{x.elimination.unknowns[column]})
	if err != nil {
		return num, den, err
	}
	num = poly.Poly(ratpoly.New(nums[0][0], scale))
	den = poly.Poly(ratpoly.FromInteger(determinant))
	all := poly.FromInts(1)
	for k, c := range inputs {
		num = num.Mul(c.den).Add(poly.Poly(ratpoly.FromInteger(nums[k+1][0])).Mul(c.num).Mul(all))
		all = all.Mul(c.den)
	}
	return num, den.Mul(all), nil
}

// right returns the right sides of A(s)·X(s) = right that the state makes, and
// a number to divide the result by: Σ a_k·(s^(k−1) x + s^(k−2) x' + …) for a
// coefficient a_k of s^k.
func (x *InitialState) right() ([]intpoly.Poly, *big.Int, error) {
	values, denominator := make([][]*big.Rat, len(x.orders)), big.NewInt(1)
	for column, order := range x.orders {
		for k := range order {
			v, err := x.value(state{column, k})
			if err != nil {
				return nil, nil, err
			}
			values[column] = append(values[column], v)
			g := new(big.Int).GCD(nil, nil, denominator, v.Denom())
			denominator.Mul(denominator, new(big.Int).Quo(v.Denom(), g))
		}
	}
	right := make([]intpoly.Poly, len(x.elimination.a))
	for i, entries := range x.elimination.a {
		for column, p := range entries {
			c := make([]*big.Int, max(0, p.Degree()))
			for power := range c {
				c[power] = new(big.Int)
				for k := power + 1; k <= p.Degree(); k++ {
					v := values[column][k-1-power]
					whole := new(big.Int).Quo(new(big.Int).Mul(v.Num(), denominator), v.Denom())
					c[power].Add(c[power], whole.Mul(whole, p.Coefficient(k)))
				}
			}
			right[i] = right[i].Add(intpoly.FromBigs(c...))
		}
	}
	return right, denominator, nil
}
