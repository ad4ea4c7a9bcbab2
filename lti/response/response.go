// Package response computes how systems answer in time and in frequency.
//
// Step and Impulse are closed forms: sums of exponentials and sinusoids that
// keep the exact transfer function, with every value correctly rounded.
//
//	pool := tf.MustParse("1.12/(1493 s + 1) [mm -> mm]")
//	level := tf.Must(response.Step(pool, units.MustParseQuantity("50 mm")))
//	fmt.Println(level) // 56 − 56 e^(−t/1493) [mm]
package response

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Step returns the response of g to an input that is 0 before t = 0 and height
// from then on, from zero initial conditions, in the unit of g's output. The
// height is converted exactly to the unit of g's input.
//
// The errors are a *units.MismatchError where it does not convert,
// tf.ErrImpulseDerivative where g has a numerator of two degrees more than
// the denominator or higher, and tf.ErrLimit for a g beyond the limits of
// Poles. A final value exists where FinalValue of the result has no error.
func Step(g tf.Continuous, height units.Quantity) (tf.TimeFunction, error) {
	return toPower(g, height, g.Input().Unit, 1, "step height")
}

// Impulse returns the response of g to an impulse at t = 0, from zero initial
// conditions, in the unit of g's output. The strength is the integral of the
// impulse over time: for an input in volts it is in V*s. The errors are those
// of Step; a g that is not strictly proper puts an impulse into the result.
func Impulse(g tf.Continuous, strength units.Quantity) (tf.TimeFunction, error) {
	return toPower(g, strength, g.Input().Unit.Mul(units.MustParse("s")), 0, "impulse strength")
}

// toPower returns the response to the input with the transform size/s^power.
func toPower(g tf.Continuous, size units.Quantity, unit units.Unit, power int, what string) (tf.TimeFunction, error) {
	converted, err := size.ConvertTo(unit)
	if err != nil {
		return tf.TimeFunction{}, fmt.Errorf("response: %s: %w", what, err)
	}
	denominator := make([]*big.Rat, power+1)
	denominator[power] = big.NewRat(1, 1)
	input, err := tf.NewTimeFunction(poly.FromRats(converted.Value()), poly.FromRats(denominator...), g.Input())
	if err != nil {
		return tf.TimeFunction{}, err
	}
	return g.Response(input)
}
