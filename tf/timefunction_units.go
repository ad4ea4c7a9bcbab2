package tf

import (
	"math/big"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

var second = units.MustParse("s")

// impulseResponseSignal is the signal at the output after an impulse of 1 unit
// of input times a second.
func impulseResponseSignal(input, output units.Signal) units.Signal {
	return units.Signal{Name: output.Name, Unit: output.Unit.Div(input.Unit.Mul(second))}
}

// A derivative or an integral is another signal, with a name of its own.
func perSecond(s units.Signal) units.Signal { return units.Signal{Unit: s.Unit.Div(second)} }

func timesSeconds(s units.Signal) units.Signal { return units.Signal{Unit: s.Unit.Mul(second)} }

// NewTimeFunction returns the function whose Laplace transform is
// numerator/denominator, with values in the unit of a signal: 1/s for the unit
// step, 1/s² for a ramp, s/(s² + 4) for cos 2t. The errors are those of
// InverseLaplace, and ErrDivisionByZero for a zero denominator.
func NewTimeFunction(numerator, denominator poly.Poly, signal units.Signal) (TimeFunction, error) {
	f, err := quotient(numerator, denominator)
	if err != nil {
		return TimeFunction{}, err
	}
	return newTimeFunction(f, nil, signal)
}

// Response returns what g makes of an input that is a function of time: the
// inverse transform of g times the transform of the input, from zero
// initial conditions, in the unit of g's output. Dead times add. The error is a
// *JunctionError where the input is another signal than that of g, and
// ErrImpulseDerivative where g differentiates a jump more than once.
func (g Continuous) Response(input TimeFunction) (TimeFunction, error) {
	if !fits(&input.signal, &g.c.input) {
		return TimeFunction{}, &JunctionError{Operation: "Response", Index: 1,
			Earlier: input.signal, EarlierEnd: "function of time",
			Later: g.c.input, LaterEnd: "input of the block"}
	}
	delay := new(big.Rat).Add(input.DeadTime(), g.c.delaySeconds())
	return newTimeFunction(g.c.f.Mul(input.transform()), delay, g.c.output)
}

// Laplace returns the transform of f: a function of s whose input is a unit
// impulse, with the unit 1/s, and whose output is f. It is the inverse of
// InverseLaplace.
func (f TimeFunction) Laplace() Continuous {
	g := Continuous{c: core{f: f.transform(), output: f.signal}}
	g.c.input.Unit = second.Inverse()
	if f.delay != nil {
		g.c.setDelay(f.delay)
	}
	return g
}

func unitText(u units.Unit) string {
	if u.IsOne() {
		return ""
	}
	return u.String()
}
