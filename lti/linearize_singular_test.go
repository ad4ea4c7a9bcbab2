package lti

import (
	"errors"
	"testing"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/units"
)

// Where the slopes leave a value open the error names it, and those that move
// with it, and no other: of two pools joined by a gate only their total is
// kept, so that any common level is at rest.
func TestSingularSlopes(t *testing.T) {
	difference := func(x []dual.Number) dual.Number { return dual.Sub(x[0], x[2]) }
	pools := Nonlinear{
		States: []units.Signal{signalOf("upper", "m"), signalOf("hoist", "mm"), signalOf("lower", "m")},
		Inputs: []units.Signal{signalOf("opening", "mm")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			through := dual.Mul(x[1], difference(x))
			return []dual.Number{dual.Scale(-0.001, through), dual.Sub(u[0], x[1]), dual.Scale(0.002, through)}, nil
		},
	}
	var fault *OperatingError
	_, err := Equilibrium(pools, At("opening", "500 mm"), Near("upper", "1.4 m"), Near("lower", "1.4 m"))
	const want = "operating point, upper: is not determined here: the slopes of the rates are singular; " +
		"it can change together with lower without an effect on any rate"
	const other = "operating point, lower: is not determined here: the slopes of the rates are singular; " +
		"it can change together with upper without an effect on any rate"
	if !errors.As(err, &fault) || fault.Signal != "upper" && fault.Signal != "lower" || err.Error() != want && err.Error() != other {
		t.Errorf("got %v, want %s", err, want)
	}

	// Slopes beyond a float64 leave nothing to name, and nothing panics.
	steep := Nonlinear{States: []units.Signal{signalOf("a", "m"), signalOf("b", "m")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			s := dual.Scale(1e200, dual.Add(x[0], x[1]))
			return []dual.Number{s, s}, nil
		}}
	if _, err := Equilibrium(steep, Near("a", "1e150 m"), Near("b", "1e150 m")); !errors.As(err, &fault) && !errors.As(err, new(*ModelError)) {
		t.Errorf("steep slopes: %v", err)
	}
}
