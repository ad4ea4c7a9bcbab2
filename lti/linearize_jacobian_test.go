package lti

import (
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/num/dual"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// quadratic is a random model of quadratic forms with integer coefficients, at
// integer values, so that float64 computes it exactly:
//
//	row i = Σ linear[i][j] v[j] + Σ product[i][j][k] v[j] v[k] − rest[i]
//
// with v the states and then the inputs, and rest what brings the rates to 0.
type quadratic struct {
	states, inputs, outputs int
	linear                  [][]int64
	product                 [][][]int64
	at, rest                []int64
}

func randomQuadratic(r *rand.Rand) *quadratic {
	q := &quadratic{states: 1 + r.IntN(4), inputs: r.IntN(4), outputs: r.IntN(4)}
	n := q.states + q.inputs
	number := func() int64 { return int64(r.IntN(41) - 20) }
	for range n {
		q.at = append(q.at, number())
	}
	for i := range q.states + q.outputs {
		line, square, sum := make([]int64, n), make([][]int64, n), int64(0)
		for j := range n {
			line[j], square[j] = number(), make([]int64, n)
			sum += line[j] * q.at[j]
			for k := range n {
				square[j][k] = number()
				sum += square[j][k] * q.at[j] * q.at[k]
			}
		}
		if i >= q.states {
			sum = 0
		}
		q.linear, q.product, q.rest = append(q.linear, line), append(q.product, square), append(q.rest, sum)
	}
	return q
}

func (q *quadratic) model() (m Nonlinear, at []OperatingValue) {
	signals := func(name string, n int) (out []units.Signal) {
		for i := range n {
			out = append(out, signalOf(fmt.Sprint(name, i), "m"))
		}
		return out
	}
	m = Nonlinear{States: signals("level", q.states), Inputs: signals("gate", q.inputs), Outputs: signals("gauge", q.outputs)}
	for i, v := range q.at {
		name := fmt.Sprint("level", i)
		if i >= q.states {
			name = fmt.Sprint("gate", i-q.states)
		}
		at = append(at, At(name, fmt.Sprint(v, " m")))
	}
	m.Equations = func(x, u []dual.Number) (rates, outputs []dual.Number) {
		v := append(append([]dual.Number(nil), x...), u...)
		for i, line := range q.linear {
			sum := dual.Number{Real: -float64(q.rest[i])}
			for j := range v {
				sum = dual.Add(sum, dual.Scale(float64(line[j]), v[j]))
				for k := range v {
					sum = dual.Add(sum, dual.Scale(float64(q.product[i][j][k]), dual.Mul(v[j], v[k])))
				}
			}
			if i < q.states {
				rates = append(rates, sum)
			} else {
				outputs = append(outputs, sum)
			}
		}
		return rates, outputs
	}
	return m, at
}

// slope is the derivative of row i by value j, by the rule of products.
func (q *quadratic) slope(i, j int) *big.Rat {
	sum := q.linear[i][j]
	for k, v := range q.at {
		sum += (q.product[i][j][k] + q.product[i][k][j]) * v
	}
	return big.NewRat(sum, 1)
}

// All four matrices of models with several states, inputs and outputs, entry by
// entry and exactly, against the derivatives written out.
func TestMatricesOfQuadraticModels(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 32))
	for range 100 {
		q := randomQuadratic(r)
		m, at := q.model()
		r.Shuffle(len(at), func(i, j int) { at[i], at[j] = at[j], at[i] })
		model, err := Linearize(m, at...)
		if err != nil {
			t.Fatalf("%+v: %v", q, err)
		}
		got := model.Matrices()
		check := func(name string, rows [][]*big.Rat, i, j, row, column int) {
			if want := q.slope(row, column); rows[i][j].Cmp(want) != 0 {
				t.Fatalf("%+v: %s [%d][%d] is %v, want %v", q, name, i, j, rows[i][j], want)
			}
		}
		for i := range q.states {
			for j := range q.states {
				check("State", got.State, i, j, i, j)
			}
			for j := range q.inputs {
				check("Input", got.Input, i, j, i, q.states+j)
			}
		}
		for i := range q.outputs {
			for j := range q.states {
				check("Output", got.Output, i, j, q.states+i, j)
			}
			for j := range q.inputs {
				check("Feedthrough", got.Feedthrough, i, j, q.states+i, q.states+j)
			}
		}
	}
}

// A slope is read as the binary fraction that it is: the share of the mount's
// damper is 640/206 as float64 divides, not as a fraction.
func TestSlopesAreBinary(t *testing.T) {
	point := tf.Must(Equilibrium(bench, At("push", "0 N")))
	model := tf.Must(Linearize(bench, point.Values()...))
	damping, perMass := 640.0, 1/206.0 // no constants, which Go would multiply exactly
	want := new(big.Rat).SetFloat64(-damping * perMass)
	if got := model.Matrices().State[1][1]; got.Cmp(want) != 0 || got.Cmp(big.NewRat(-640, 206)) == 0 {
		t.Errorf("got %v, want %v", got, want)
	}
}

// What a model does wrong is said in few words, and where a search cannot begin
// it says what to do.
func TestModelFaults(t *testing.T) {
	m := Nonlinear{States: []units.Signal{signalOf("upper", "mm"), signalOf("lower", "mm")}, Inputs: []units.Signal{signalOf("inflow", "L/s")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			between, out := dual.Sqrt(dual.Sub(x[0], x[1])), dual.Sqrt(x[1])
			return []dual.Number{dual.Sub(u[0], between), dual.Sub(between, out)}, nil
		}}
	_, err := Equilibrium(m, At("inflow", "5 L/s"), Near("upper", "1 mm"), Near("lower", "1 mm"))
	const want = "nonlinear model: the slope of the rate of upper by upper is +Inf at this point that the search came to: begin elsewhere with Near"
	if !errors.As(err, new(*ModelError)) || strings.Replace(err.Error(), "-Inf", "+Inf", 1) != want {
		t.Errorf("got %v, want %s", err, want)
	}
	point := tf.Must(Equilibrium(m, At("inflow", "5 L/s"), Near("upper", "2 mm"), Near("lower", "1 mm")))
	for name, level := range map[string]float64{"upper": 50, "lower": 25} { // both fall by 25 mm
		if v := floatOf(t, tf.Must(point.Value(name)), nil); v < level-1e-12 || v > level+1e-12 {
			t.Errorf("%s %v, want %v", name, v, level)
		}
	}
	m.Equations = func(x, u []dual.Number) (rates, outputs []dual.Number) { panic(strings.Repeat("no table ", 1e6)) }
	if _, err := Equilibrium(m, At("inflow", "5 L/s")); !errors.As(err, new(*ModelError)) || len(err.Error()) > 200 || !strings.Contains(err.Error(), "panicked: no table") || strings.Contains(err.Error(), "Near") {
		t.Errorf("%.300v", err)
	}
	cause := errors.New("no table")
	m.Equations = func(x, u []dual.Number) (rates, outputs []dual.Number) { panic(cause) }
	if _, err := Linearize(m, At("inflow", "5 L/s"), At("upper", "2 mm"), At("lower", "1 mm")); !errors.Is(err, cause) {
		t.Errorf("%v, want one that wraps what was panicked with", err)
	}
}

// A step that leaves where the model is defined is shortened: from 100 m on, the
// first one leads to −80 m. A panic there ends the search.
func TestSearchWithinBounds(t *testing.T) {
	m := Nonlinear{States: []units.Signal{signalOf("level", "m")}, Inputs: []units.Signal{signalOf("inflow", "m^3/s")},
		Equations: func(x, u []dual.Number) (rates, outputs []dual.Number) {
			return []dual.Number{dual.Sub(u[0], dual.Sqrt(x[0]))}, nil
		}}
	point, err := Equilibrium(m, At("inflow", "1 m^3/s"), Near("level", "100 m"))
	if err != nil {
		t.Fatal(err)
	}
	if v := floatOf(t, tf.Must(point.Value("level")), nil); v != 1 {
		t.Errorf("level %v, want 1", v)
	}
	defined := m.Equations
	m.Equations = func(x, u []dual.Number) (rates, outputs []dual.Number) {
		if x[0].Real < 0 {
			panic("dry")
		}
		return defined(x, u)
	}
	_, err = Equilibrium(m, At("inflow", "1 m^3/s"), Near("level", "100 m"))
	if !errors.As(err, new(*ModelError)) || err.Error() != "nonlinear model: Equations panicked: dry" {
		t.Errorf("got %v", err)
	}
}
