package statespace

import (
	"errors"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func randomPoly(r *rand.Rand, degree int) poly.Poly {
	c := make([]*big.Rat, degree+1)
	for i := range c {
		c[i] = big.NewRat(r.Int64N(41)-20, 1+r.Int64N(9))
	}
	c[degree] = big.NewRat(1+r.Int64N(9), 1+r.Int64N(9))
	return poly.FromRats(c...)
}

// Every form gives the transfer function back: the companion forms as it was,
// common factors included, the modal one in lowest terms.
func TestFormsGiveTheFunctionBack(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for range 120 {
		den := randomPoly(r, r.IntN(4))
		for range r.IntN(3) {
			den = den.Mul(randomPoly(r, 1+r.IntN(2)))
		}
		if r.IntN(2) == 0 {
			den = den.Mul(den)
		}
		num := randomPoly(r, r.IntN(den.Degree()+1))
		if r.IntN(3) == 0 && den.Degree() > 0 {
			shared := randomPoly(r, 1)
			num, den = num.Mul(shared), den.Mul(shared)
		}
		in, out := units.Signal{Name: "u", Unit: units.MustParse("V")}, units.Signal{Name: "y", Unit: units.MustParse("mm")}
		g := tf.Must(tf.Must(tf.New(num, den)).WithSignals(in, out))
		reduced, _ := g.LowestTerms()
		sampled := tf.Must(tf.Must(tf.NewDiscrete(num, den, units.MustParseQuantity("10 ms"))).WithSignals(in, out))
		for name, c := range map[string]struct {
			model Continuous
			order int
		}{
			"controllable": {tf.Must(ControllableForm(g, "x")), den.Degree()},
			"observable":   {tf.Must(ObservableForm(g, "x")), den.Degree()},
			"modal":        {tf.Must(ModalForm(g, "x")), reduced.Denominator().Degree()},
		} {
			back := tf.Must(c.model.TransferFunction("u", "y"))
			if !back.Equivalent(g) || len(c.model.States()) != c.order || name != "modal" && !back.Equal(g) {
				t.Fatalf("%s form of %v:\n%v\ngives %v", name, g, c.model, back)
			}
			minimal, hidden, err := c.model.MinimalRealization()
			if err != nil || len(minimal.States()) != reduced.Denominator().Degree() {
				t.Fatalf("%s form of %v: %v, %v", name, g, minimal, err)
			}
			gone := hidden.Uncontrollable.Mul(hidden.Unobservable)
			want, _, _ := g.Denominator().Monic().QuoRem(reduced.Denominator().Monic())
			if name != "modal" && !gone.Equal(want) || name == "modal" && gone.Degree() != 0 {
				t.Fatalf("%s form of %v hides %v", name, g, gone)
			}
			if again := tf.Must(minimal.TransferFunction("u", "y")); !again.Equivalent(g) || !again.Output().Equal(out) {
				t.Fatalf("%s form of %v: the minimal one gives %v", name, g, again)
			}
		}
		for name, form := range map[string]func(tf.Discrete, string) (Discrete, error){
			"controllable": ControllableFormDiscrete, "observable": ObservableFormDiscrete, "modal": ModalFormDiscrete} {
			c, err := form(sampled, "x")
			if err != nil {
				t.Fatal(err)
			}
			if back := tf.Must(c.TransferFunction("u", "y")); !back.Equivalent(sampled) {
				t.Fatalf("%s form of %v gives %v", name, sampled, back)
			}
			minimal, _, err := c.MinimalRealization()
			if err != nil || !tf.Must(minimal.TransferFunction("u", "y")).Equivalent(sampled) {
				t.Fatalf("%s form of %v: minimal %v, %v", name, sampled, minimal, err)
			}
		}
	}
}

func TestFormRefusals(t *testing.T) {
	for text, want := range map[string]error{
		"s [a: V -> b: V]":                      ErrImproper,
		"exp(-3 s)/(s + 1) [a: V -> b: V]":      ErrDeadTime,
		"(s^2 + 1)/(s + 1) [a: V -> b: V]":      ErrImproper,
		"exp(-3 s) s/(s + 1) [a: V -> b: V]":    ErrDeadTime,
		"(s^3 + s)/(3 s^2 + 1) [a: V -> b: mm]": ErrImproper,
	} {
		for _, form := range []func(tf.Continuous, string) (Continuous, error){ControllableForm, ObservableForm, ModalForm} {
			if _, err := form(tf.MustParse(text), "x"); !errors.Is(err, want) {
				t.Errorf("%s: %v", text, err)
			}
		}
	}
	var signal *SignalError
	if _, err := ControllableForm(tf.MustParse("1/(s + 1)"), "x"); !errors.As(err, &signal) {
		t.Error(err)
	}
}

// Two equal tanks fed side by side: the difference of their levels is reached by
// no common inflow. Kalman 1963 has the same with two equal circuits; a tank that
// nobody looks at is not observable.
func TestHiddenTanks(t *testing.T) {
	c := tf.Must(New(signals("m", "left", "right", "unseen"), signals("m^3/s", "inflow"), signals("m", "left", "right"), Matrices{
		State:  [][]*big.Rat{{big.NewRat(-1, 50), nil, nil}, {nil, big.NewRat(-1, 50), nil}, {nil, big.NewRat(1, 9), big.NewRat(-1, 7)}},
		Input:  rats([]int64{1}, []int64{1}, []int64{0}),
		Output: rats([]int64{1, 0, 0}, []int64{0, 1, 0}),
	}))
	reach, see := tf.Must(c.ControllabilityRank()), tf.Must(c.ObservabilityRank())
	if reach != 2 || see != 2 {
		t.Errorf("ranks %d and %d, want 2 and 2", reach, see)
	}
	minimal, hidden, err := c.MinimalRealization()
	if err != nil || !hidden.Uncontrollable.Equal(poly.MustParse("s + 1/50")) || !hidden.Unobservable.Equal(poly.MustParse("s + 1/7")) {
		t.Errorf("hidden %v and %v, %v", hidden.Uncontrollable, hidden.Unobservable, err)
	}
	if len(minimal.States()) != 1 || minimal.States()[0].Name != "left" {
		t.Error(minimal)
	}
	for _, o := range []string{"left", "right"} {
		if g, h := tf.Must(c.TransferFunction("inflow", o)), tf.Must(minimal.TransferFunction("inflow", o)); !g.Equivalent(h) {
			t.Errorf("%v and %v", g, h)
		}
	}
}

// The rank of the matrix of Kalman, [B, AB, A²B …], by elimination over its
// columns, is the oracle of the ranks.
func TestRanksAgainstKalmanMatrix(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	deficient := 0
	for range 200 {
		n := 1 + r.IntN(5)
		c := random(r, n, 1+r.IntN(2), 1)
		m := c.Matrices()
		for i := range n {
			for j := range n {
				if r.IntN(2) == 0 {
					m.State[i][j] = nil
				}
			}
			if r.IntN(2) == 0 {
				m.Input[i][0] = nil
			}
		}
		c = tf.Must(New(c.States(), c.Inputs(), c.Outputs(), m))
		block := c.input
		all := block.transpose(len(c.inputs))
		for range n - 1 {
			block = c.state.times(block, len(c.inputs))
			all = append(all, block.transpose(len(c.inputs))...)
		}
		want := rank(all)
		got, err := c.ControllabilityRank()
		if err != nil || got != want {
			t.Fatalf("%v: rank %d, %v, want %d", c, got, err, want)
		}
		if want < n {
			deficient++
		}
		// Duality: observability of the transposed model is controllability.
		dual := model{states: c.states, inputs: c.outputs, outputs: c.inputs, state: c.state.transpose(n), output: c.input.transpose(len(c.inputs))}
		if got, err := dual.ObservabilityRank(); err != nil || got != want {
			t.Fatalf("the dual of %v: rank %d, %v, want %d", c, got, err, want)
		}
	}
	if deficient < 30 {
		t.Errorf("only %d models with uncontrollable states", deficient)
	}
}

// full is a model of n states with full matrices; hidden states of it are reached
// by no input.
func full(n, hidden int) Continuous {
	r := rand.New(rand.NewPCG(uint64(n), 5))
	c := random(r, n, 1, 1)
	m := c.Matrices()
	for i := range n {
		for j := range n {
			m.State[i][j] = big.NewRat(r.Int64N(2e9)-1e9, 1+r.Int64N(9))
			if i >= n-hidden && j < n-hidden {
				m.State[i][j] = nil
			}
		}
		if m.Input[i][0].SetInt64(int64(i + 1)); i >= n-hidden {
			m.Input[i][0] = nil
		}
		m.Output[0][i].SetInt64(int64(n - i))
	}
	return tf.Must(New(c.States(), c.Inputs(), c.Outputs(), m))
}

// Full matrices come to an end soon, at an answer or at ErrLimit.
func TestFullMatrices(t *testing.T) {
	c := full(60, 0)
	if k := tf.Must(c.ControllabilityRank()); k != 60 {
		t.Errorf("rank %d", k)
	}
	if k := tf.Must(c.ObservabilityRank()); k != 60 {
		t.Errorf("rank %d", k)
	}
	if minimal, hidden, err := full(30, 0).MinimalRealization(); err != nil || len(minimal.States()) != 30 || hidden.Uncontrollable.Degree()+hidden.Unobservable.Degree() != 0 {
		t.Errorf("%d states, %v", len(minimal.States()), err)
	}
	c = full(12, 3)
	minimal, hidden, err := c.MinimalRealization()
	if err != nil || len(minimal.States()) != 9 || hidden.Uncontrollable.Degree() != 3 {
		t.Errorf("%d states, hidden %v, %v", len(minimal.States()), hidden.Uncontrollable, err)
	}
	if k := tf.Must(full(100, 40).ControllabilityRank()); k != 60 {
		t.Errorf("rank %d of 100 states, 40 of them not reached", k)
	}
	// 128 inputs that move 256 states at random, with no feedback among them: the
	// fractions of the reached space have a thousand digits.
	r := rand.New(rand.NewPCG(19, 20))
	wide := random(r, 256, 128, 0)
	m := Matrices{Input: wide.Matrices().Input}
	for _, row := range m.Input {
		for _, v := range row {
			v.SetInt64(r.Int64N(2e9) - 1e9)
		}
	}
	wide = tf.Must(New(wide.states, wide.inputs, nil, m))
	if _, err := wide.ControllabilityRank(); !errors.Is(err, ErrLimit) {
		t.Errorf("256 states: %v", err)
	}
}

// rank is that of the rows, by elimination.
func rank(m matrix) int {
	m = m.clone()
	found := 0
	for j := 0; len(m) > 0 && j < len(m[0]); j++ {
		for i := found; i < len(m); i++ {
			if m[i][j].Sign() == 0 {
				continue
			}
			m[i], m[found] = m[found], m[i]
			for k := found + 1; k < len(m); k++ {
				factor := new(big.Rat).Quo(m[k][j], m[found][j])
				for l, v := range m[found] {
					m[k][l].Sub(m[k][l], new(big.Rat).Mul(factor, v))
				}
			}
			found++
			break
		}
	}
	return found
}
