package lti_test

import (
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// network is a random set of equations between dimensionless signals with
// derivatives and integrals, kept as text and as numbers.
type network struct {
	inputs, outputs []string
	equations       []string
	terms           [][]randomTerm // by equation
}

// randomTerm is a whole number times a signal (the inputs come first),
// differentiated order times, −1 for an integral.
type randomTerm struct {
	factor        int64
	signal, order int
}

func newNetwork(random *rand.Rand, n, m int) *network {
	net := &network{}
	for j := range m {
		net.inputs = append(net.inputs, fmt.Sprintf("u%d", j))
	}
	for j := range n {
		net.outputs = append(net.outputs, fmt.Sprintf("x%d", j))
	}
	for i := range n {
		var terms []randomTerm
		for j := range n + m {
			if j != m+i && (j >= m || j%n != i) && random.IntN(5) > 1 { // every input stands somewhere
				continue
			}
			order := random.IntN(4) - 1
			if j == m+i {
				order = random.IntN(3)
			}
			terms = append(terms, randomTerm{random.Int64N(9) + 1 - 10*random.Int64N(2), j, order})
		}
		net.terms = append(net.terms, terms)
		text := "0 u0"
		for _, t := range terms {
			text += " + " + net.text(t)
		}
		net.equations = append(net.equations, text+" = 0")
	}
	return net
}

func (net *network) name(signal int) string {
	if signal < len(net.inputs) {
		return net.inputs[signal]
	}
	return net.outputs[signal-len(net.inputs)]
}

func (net *network) text(t randomTerm) string {
	x := net.name(t.signal)
	switch t.order {
	case -1:
		x = "w integral(" + x + ")"
	case 1:
		x = "T " + x + "'"
	case 2:
		x = "T T " + x + "''"
	}
	return fmt.Sprintf("(%d) %s", t.factor, x)
}

func (net *network) build(t *testing.T) *lti.System {
	t.Helper()
	e := lti.NewEquations()
	for j := range len(net.inputs) + len(net.outputs) {
		e.Signal(net.name(j), "1")
	}
	e.Constant("T", "1 s")
	e.Constant("w", "1 1/s")
	for _, q := range net.equations {
		e.Equation(q)
	}
	return build(t, e)
}

// check puts the functions into the equations at a random point, one input at
// a time.
func (net *network) check(t *testing.T, all [][]tf.Continuous, random *rand.Rand) {
	t.Helper()
	s := big.NewRat(random.Int64N(1000)+1, random.Int64N(50)+51)
	for j := range net.inputs {
		value := make([]*big.Rat, len(net.inputs)+len(net.outputs))
		for k := range value {
			value[k] = new(big.Rat)
		}
		value[j].SetInt64(1)
		for i := range net.outputs {
			v, err := all[i][j].AtRat(s)
			if err != nil {
				return // the point is a pole
			}
			value[len(net.inputs)+i] = v
		}
		for i, terms := range net.terms {
			sum := new(big.Rat)
			for _, x := range terms {
				f := new(big.Rat).Mul(big.NewRat(x.factor, 1), value[x.signal])
				switch x.order {
				case -1:
					f.Quo(f, s)
				default:
					f.Mul(f, tf.Must(poly.FromInts(append(make([]int64, x.order), 1)...).AtRat(s)))
				}
				sum.Add(sum, f)
			}
			if sum.Sign() != 0 {
				t.Errorf("equation %d of %q is off by %v at s = %v", i+1, net.equations, sum, s)
			}
		}
	}
}
