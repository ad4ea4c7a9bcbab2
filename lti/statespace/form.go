package statespace

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// ratio is a proper function: num/den + feedthrough with a monic den and a num
// of lower degree.
type ratio struct {
	num, den    poly.Poly
	feedthrough *big.Rat
	in, out     units.Signal
	perStep     units.Unit // what an advance (a derivative) divides the unit by
}

func newRatio(num, den poly.Poly, in, out units.Signal, perStep units.Unit) (*ratio, error) {
	n := den.Degree()
	if num.Degree() > n {
		return nil, ErrImproper
	}
	lead := den.Coefficient(n)
	lead.Inv(lead)
	num, den = num.Scale(lead), den.Scale(lead)
	for _, p := range []poly.Poly{num, den} {
		if err := p.Err(); err != nil {
			return nil, err
		}
	}
	r := &ratio{den: den, feedthrough: num.Coefficient(n), in: in, out: out, perStep: perStep}
	r.num = num.Sub(den.Scale(r.feedthrough))
	return r, r.num.Err()
}

func continuousRatio(g tf.Continuous) (*ratio, error) {
	if g.DeadTime().Value().Sign() != 0 {
		return nil, ErrDeadTime
	}
	return newRatio(g.Numerator(), g.Denominator(), g.Input(), g.Output(), second)
}

func discreteRatio(g tf.Discrete) (*ratio, error) {
	return newRatio(g.Numerator(), g.Denominator(), g.Input(), g.Output(), units.Unit{})
}

// ControllableForm returns a model of g whose state matrix is the companion matrix
// of the denominator, with the coefficients in its last row. With x the response of
// 1/denominator, made monic, to the input, the states name_1, name_2 … are x and
// its derivatives; in the unit of the input times s^n, s^(n−1) … s for the degree n of
// the denominator. Every input moves every state: the model is controllable,
// whatever the numerator. Both signals of g need a name.
//
// The model is exact and keeps common factors of numerator and denominator. The
// errors are ErrImproper, ErrDeadTime, *SignalError, and ErrLimit for more than
// MaxSignals states.
func ControllableForm(g tf.Continuous, name string) (Continuous, error) {
	return continuous(name, (*ratio).controllable)(continuousRatio(g))
}

// ObservableForm returns a model of g whose first state is the output less the
// fed-through input and whose state matrix has the coefficients of the denominator
// in its first column. The output tells every state, whatever the numerator; in
// all else it is like ControllableForm.
func ObservableForm(g tf.Continuous, name string) (Continuous, error) {
	return continuous(name, (*ratio).observable)(continuousRatio(g))
}

// ModalForm returns a model of g whose state matrix has a block for each rational
// factor of the denominator in lowest terms: one state for a simple rational
// pole, two for a pair from a quadratic factor without rational roots, and a
// companion matrix for a power of these and for the factors of one multiplicity
// that have no rational factors of degree 2 or less (see
// tf.PartialFractions.Rational). Common factors of numerator and denominator are
// not in it. The errors are those of ControllableForm and of
// tf.Continuous.PartialFractions.
func ModalForm(g tf.Continuous, name string) (Continuous, error) {
	fractions, err := g.PartialFractions()
	if err != nil {
		return Continuous{}, err
	}
	return continuous(name, modal(fractions))(continuousRatio(g))
}

// ControllableFormDiscrete is ControllableForm for a function of z: name_1,
// name_2 … are a sequence and its samples ahead.
func ControllableFormDiscrete(g tf.Discrete, name string) (Discrete, error) {
	return discrete(g, name, (*ratio).controllable)
}

// ObservableFormDiscrete is ObservableForm for a function of z.
func ObservableFormDiscrete(g tf.Discrete, name string) (Discrete, error) {
	return discrete(g, name, (*ratio).observable)
}

// ModalFormDiscrete is ModalForm for a function of z.
func ModalFormDiscrete(g tf.Discrete, name string) (Discrete, error) {
	fractions, err := g.PartialFractions()
	if err != nil {
		return Discrete{}, err
	}
	return discrete(g, name, modal(fractions))
}

// builder makes a model of a ratio.
type builder func(r *ratio, name string) (model, error)

func continuous(name string, build builder) func(*ratio, error) (Continuous, error) {
	return func(r *ratio, err error) (Continuous, error) {
		if err != nil {
			return Continuous{}, err
		}
		m, err := build(r, name)
		return Continuous{model: m}, err
	}
}

func discrete(g tf.Discrete, name string, build builder) (Discrete, error) {
	r, err := discreteRatio(g)
	if err != nil {
		return Discrete{}, err
	}
	m, err := build(r, name)
	if err != nil {
		return Discrete{}, err
	}
	return Discrete{model: m, period: g.Period().Value()}, nil
}

// controllable is the companion form.
func (r *ratio) controllable(name string) (model, error) {
	b := &blocks{}
	if err := b.add(r, r.num, r.den, name); err != nil {
		return model{}, err
	}
	return b.model(r)
}

// blocks gathers companion matrices along a diagonal.
type blocks struct {
	states        []units.Signal
	row           []int // first state of the block of each state
	coefficients  []*big.Rat
	last          []bool // whether a state is the last one of its block
	output, input []*big.Rat
}

// add appends the companion form of num/den, den monic.
func (b *blocks) add(r *ratio, num, den poly.Poly, name string) error {
	if err := num.Err(); err != nil {
		return err
	}
	n, from := den.Degree(), len(b.states)
	if from+n > MaxSignals {
		return tooMany("state", from+n)
	}
	for k := range n {
		unit, err := r.advance(r.in.Unit, k-n)
		if err != nil {
			return err
		}
		b.states = append(b.states, units.Signal{Name: fmt.Sprintf("%s_%d", name, from+k+1), Unit: unit})
		b.row, b.last = append(b.row, from), append(b.last, k == n-1)
		b.coefficients = append(b.coefficients, den.Coefficient(k))
		b.output, b.input = append(b.output, num.Coefficient(k)), append(b.input, new(big.Rat))
	}
	if n > 0 {
		b.input[from+n-1].SetInt64(1)
	}
	return nil
}

// advance returns the unit of a signal after k derivatives, k of either sign.
func (r *ratio) advance(unit units.Unit, k int) (units.Unit, error) {
	factor, err := r.perStep.Pow(-k)
	return unit.Mul(factor), err
}

func (b *blocks) model(r *ratio) (model, error) {
	n := len(b.states)
	m := Matrices{State: zeros(n, n), Input: zeros(n, 1), Output: [][]*big.Rat{b.output}, Feedthrough: [][]*big.Rat{{r.feedthrough}}}
	for i := range n {
		m.Input[i][0] = b.input[i]
		if !b.last[i] {
			m.State[i][i+1].SetInt64(1)
			continue
		}
		for j := b.row[i]; j <= i; j++ {
			m.State[i][j].Neg(b.coefficients[j])
		}
	}
	return newModel(b.states, []units.Signal{r.in}, []units.Signal{r.out}, m)
}

// observable is the companion form with the coefficients in the first column.
func (r *ratio) observable(name string) (model, error) {
	n := r.den.Degree()
	if n > MaxSignals {
		return model{}, tooMany("state", n)
	}
	states := make([]units.Signal, n)
	m := Matrices{State: zeros(n, n), Input: zeros(n, 1), Output: zeros(1, n), Feedthrough: [][]*big.Rat{{r.feedthrough}}}
	for k := range n {
		unit, err := r.advance(r.out.Unit, k)
		if err != nil {
			return model{}, err
		}
		states[k] = units.Signal{Name: fmt.Sprintf("%s_%d", name, k+1), Unit: unit}
		m.State[k][0].Neg(r.den.Coefficient(n - 1 - k))
		if k+1 < n {
			m.State[k][k+1].SetInt64(1)
		}
		m.Input[k][0] = r.num.Coefficient(n - 1 - k)
	}
	if n > 0 {
		m.Output[0][0].SetInt64(1)
	}
	return newModel(states, []units.Signal{r.in}, []units.Signal{r.out}, m)
}

// modal returns the builder that puts the rational fractions side by side.
func modal(fractions tf.PartialFractions) builder {
	return func(r *ratio, name string) (model, error) {
		type sum struct {
			factor, num poly.Poly
			power       int
		}
		var sums []sum
		for _, f := range fractions.Rational() {
			k := len(sums) - 1
			if k < 0 || !sums[k].factor.Equal(f.Factor) {
				sums = append(sums, sum{factor: f.Factor, num: f.Numerator, power: f.Power})
				continue
			}
			// Both over the higher power of the factor.
			s := &sums[k]
			num := f.Numerator
			for s.power < f.Power {
				s.num, s.power = s.num.Mul(f.Factor), s.power+1
			}
			for p := f.Power; p < s.power; p++ {
				num = num.Mul(f.Factor)
			}
			s.num = s.num.Add(num)
		}
		b := &blocks{}
		for _, s := range sums {
			den, err := s.factor.Pow(s.power)
			if err != nil {
				return model{}, err
			}
			if err := b.add(r, s.num, den, name); err != nil {
				return model{}, err
			}
		}
		return b.model(r)
	}
}
