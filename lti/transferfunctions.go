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

// maxPairs bounds the results of TransferFunctions.
const maxPairs = 4096

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
	all, err := s.transferFunctions("TransferFunction(%s, %s, %%s)", []string{in}, []string{out}, held)
	if err != nil {
		return tf.Continuous{}, err
	}
	return all[0][0], nil
}

// TransferFunctions returns the transfer functions from several inputs to
// several outputs, the one to outputs[i] from inputs[j] at [i][j], each for all
// other inputs at 0. It is one elimination, and all functions have its
// determinant as their denominator, up to a number. An output that is one of
// the inputs is 1 from itself and 0 from the others. In all else it is like
// TransferFunction; ErrLimit also bounds the pairs, at 4096.
func (s *System) TransferFunctions(inputs, outputs []string, held ...string) ([][]tf.Continuous, error) {
	return s.transferFunctions("TransferFunctions([]string{%s}, []string{%s}, %%s)", inputs, outputs, held)
}

func (s *System) transferFunctions(call string, inputs, outputs, held []string) ([][]tf.Continuous, error) {
	if len(inputs)*len(outputs) > maxPairs {
		return nil, ErrLimit
	}
	in, out, zero, err := s.parts(inputs, outputs, held)
	if err != nil {
		return nil, err
	}
	solved, err := s.solved(in, out, zero, fmt.Sprintf(call, quoted(inputs), quoted(outputs)))
	if err != nil {
		return nil, err
	}
	all := make([][]tf.Continuous, len(out))
	for i, output := range out {
		all[i] = make([]tf.Continuous, len(in))
		for j, input := range in {
			num, den := solved.fraction(input, output.signal)
			if all[i][j], err = s.between(input, output, num, den); err != nil {
				return nil, err
			}
		}
	}
	return all, nil
}

// parts looks up the signals of a choice of inputs and outputs.
func (s *System) parts(inputs, outputs, held []string) (in []int, out []derivative, zero []int, err error) {
	all, err := s.lookUp(slices.Concat(inputs, held))
	if err != nil {
		return nil, nil, nil, err
	}
	out = make([]derivative, len(outputs))
	for i, name := range outputs {
		if out[i], err = s.derivative(name); err != nil {
			return nil, nil, nil, err
		}
	}
	in, zero = all[:len(inputs)], all[len(inputs):]
	return in, out, zero, s.apart(in, out, zero)
}

// apart checks that no signal has two parts to play.
func (s *System) apart(inputs []int, outputs []derivative, zero []int) error {
	for k, i := range inputs {
		if slices.Contains(inputs[:k], i) {
			return &DeterminacyError{Equations: len(s.rows), Reason: fmt.Sprintf("%s is named twice as an input", s.signals[i].Name)}
		}
	}
	for _, i := range zero {
		if slices.Contains(inputs, i) || slices.ContainsFunc(outputs, func(d derivative) bool { return d.signal == i }) {
			return &DeterminacyError{Equations: len(s.rows),
				Reason: fmt.Sprintf("a signal that is held at 0 is neither input nor output: %s", shortened(s.namesOf(zero)))}
		}
	}
	return nil
}

// solution holds numerators over one denominator, in coherent units.
type solution struct {
	inputs, signals []int
	nums            [][]intpoly.Poly // by input, then by signal
	den             intpoly.Poly
}

// solved eliminates all signals but those asked for.
func (s *System) solved(inputs []int, outputs []derivative, zero []int, call string) (*solution, error) {
	out := &solution{inputs: inputs, den: intpoly.FromInt64s(1)}
	for _, d := range outputs {
		if !slices.Contains(inputs, d.signal) && !slices.Contains(out.signals, d.signal) {
			out.signals = append(out.signals, d.signal)
		}
	}
	if len(out.signals) == 0 || len(inputs) == 0 {
		return out, nil
	}
	unknowns, err := s.unknowns(inputs, out.signals, zero, call)
	if err != nil {
		return nil, err
	}
	e := s.elimination(inputs, unknowns)
	right := make([][]intpoly.Poly, len(inputs))
	for k, input := range inputs {
		right[k] = e.of(input)
	}
	out.nums, out.den, err = e.solve(right, out.signals)
	return out, err
}

// fraction returns what one signal is of another.
func (x *solution) fraction(input, signal int) (num, den intpoly.Poly) {
	one := intpoly.FromInt64s(1)
	switch {
	case input == signal:
		return one, one
	case slices.Contains(x.inputs, signal):
		return intpoly.Poly{}, one
	}
	return x.nums[slices.Index(x.inputs, input)][slices.Index(x.signals, signal)], x.den
}

// between puts declared units and names on num/den, which is in coherent units,
// and differentiates the output.
func (s *System) between(input int, output derivative, num, den intpoly.Poly) (tf.Continuous, error) {
	from, to := s.signals[input], s.signals[output.signal]
	// The equations are between coherent units: out/scale(out) = G·in/scale(in)…
	gain := new(big.Rat).Quo(from.Unit.Scale(), to.Unit.Scale())
	g, err := tf.New(poly.Poly(ratpoly.New(num.MulPower(output.order).MulInt(gain.Num()), gain.Denom())), poly.Poly(ratpoly.FromInteger(den)))
	if err != nil {
		return tf.Continuous{}, err
	}
	to, err = s.signalOf(output)
	if err != nil {
		return tf.Continuous{}, err
	}
	return g.WithSignals(from, to)
}

// signalOf returns the name and the unit of a derivative.
func (s *System) signalOf(d derivative) (units.Signal, error) {
	x := s.signals[d.signal]
	if d.order == 0 {
		return x, nil
	}
	perSecond, err := units.MustParse("1/s").Pow(d.order)
	return units.Signal{Name: x.Name + strings.Repeat("'", d.order), Unit: x.Unit.Mul(perSecond)}, err
}

// derivative reads the name of a signal with primes.
func (s *System) derivative(text string) (derivative, error) {
	name := strings.TrimRight(text, "'′’")
	order := len([]rune(text)) - len([]rune(name))
	if order > maxPrimes {
		return derivative{}, ErrLimit
	}
	at, err := s.lookUp([]string{name})
	if err != nil {
		return derivative{}, err
	}
	return derivative{at[0], order}, nil
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

func (s *System) namesOf(indices []int) []string {
	out := make([]string, len(indices))
	for i, j := range indices {
		out[i] = s.signals[j].Name
	}
	return out
}

// quoted writes names as Go strings, separated by commas.
func quoted(names []string) string {
	out := make([]string, len(names))
	for i, name := range names {
		out[i] = fmt.Sprintf("%q", name)
	}
	return strings.Join(out, ", ")
}
