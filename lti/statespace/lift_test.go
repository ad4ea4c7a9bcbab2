package statespace

import (
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/qofs/qofs/internal/modp"
	"github.com/qofs/qofs/tf"
)

// mixed is full with other states: each of a few hundred steps adds a multiple of
// a state to another one, so that the hidden ones are in no row of their own.
func mixed(n, hidden, steps int) Continuous {
	c := full(n, hidden)
	r := rand.New(rand.NewPCG(uint64(n), 6))
	m := c.Matrices()
	for range steps {
		i, j, k := r.IntN(n), r.IntN(n), big.NewRat(r.Int64N(7)-3, 1)
		if i == j {
			continue
		}
		add := func(to, from *big.Rat, k *big.Rat) { to.Add(to, new(big.Rat).Mul(k, from)) }
		minus := new(big.Rat).Neg(k)
		for l := range n { // T·A and A·T⁻¹
			add(m.State[i][l], m.State[j][l], k)
		}
		add(m.Input[i][0], m.Input[j][0], k)
		for l := range n {
			add(m.State[l][j], m.State[l][i], minus)
		}
		add(m.Output[0][j], m.Output[0][i], minus)
	}
	return tf.Must(New(c.States(), c.Inputs(), c.Outputs(), m))
}

// agrees compares a closure with that of the slow elimination and checks its
// action; it returns its rank.
func agrees(t *testing.T, generators, m matrix) int {
	t.Helper()
	got, err := new(work).closure(generators, m)
	if err != nil {
		t.Fatal(err)
	}
	want, err := slowClosure(generators, m)
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(got.pivots, want.pivots) || !got.rows.equal(want.rows) {
		t.Fatalf("closure of %v under %v: %v, by elimination %v", generators, m, got.rows, want.rows)
	}
	if n := len(m); len(got.rows) < n && !got.rows.times(m, n).equal(got.action.times(got.rows, n)) {
		t.Fatalf("closure of %v under %v: action %v", generators, m, got.action)
	}
	return len(got.rows)
}

func TestClosureAgainstElimination(t *testing.T) {
	r := rand.New(rand.NewPCG(17, 18))
	ranks := map[int]int{}
	for range 300 {
		n := 1 + r.IntN(6)
		fill := func(rows int) matrix {
			m := zeros(rows, n)
			for _, row := range m {
				for _, v := range row {
					if r.IntN(5) < 2 {
						v.SetFrac64(r.Int64N(2001)-1000, 1+r.Int64N(300))
					}
				}
			}
			return m
		}
		ranks[n-agrees(t, fill(r.IntN(3)), fill(n))]++
	}
	for _, hidden := range []int{0, 1, 2, 3} {
		if ranks[hidden] < 20 {
			t.Errorf("only %d closures with %d dimensions less than the space", ranks[hidden], hidden)
		}
	}
	// Fractions that take several primes, of the reached and of the seen space.
	for _, size := range [][3]int{{6, 1, 60}, {8, 3, 200}, {9, 8, 100}, {12, 5, 300}} {
		c := mixed(size[0], size[1], size[2])
		if rank := agrees(t, c.input.transpose(1), c.state.transpose(size[0])); rank != size[0]-size[1] {
			t.Errorf("%v: rank %d", size, rank)
		}
		dual := model{outputs: c.inputs, states: c.states, state: c.state.transpose(size[0]), output: c.input.transpose(1)}
		if rank := tf.Must(dual.ObservabilityRank()); rank != size[0]-size[1] {
			t.Errorf("%v: rank %d of the dual", size, rank)
		}
	}
}

// The first primes hide a rank, move a pivot, divide a denominator, or make what
// differs look alike.
func TestClosureModuloUnluckyPrimes(t *testing.T) {
	var primes modp.Primes
	p := [6]*big.Int{}
	for k := range p {
		p[k] = new(big.Int).SetUint64(primes.Next().P)
	}
	all := new(big.Int).Mul(p[0], new(big.Int).Mul(p[1], p[2]))
	number := func(num, den *big.Int) *big.Rat { return new(big.Rat).SetFrac(num, den) }
	one := big.NewInt(1)
	for name, c := range map[string]struct {
		generators, m matrix
		rank          int
	}{
		"rank":         {matrix{{number(p[0], one), new(big.Rat), new(big.Rat)}}, zeros(3, 3), 1},
		"ranks":        {matrix{{number(all, one), new(big.Rat), new(big.Rat)}}, zeros(3, 3), 1},
		"pivot":        {matrix{{number(p[0], one), number(one, one), number(p[1], one)}}, zeros(3, 3), 1},
		"denominator":  {matrix{{number(one, p[0]), number(one, p[1]), number(one, all)}}, zeros(3, 3), 1},
		"alike":        {matrix{{number(one, one), number(all, one)}, {number(one, one), new(big.Rat)}}, zeros(2, 2), 2},
		"matrix":       {matrix{{number(one, one), new(big.Rat), new(big.Rat)}}, matrix{{new(big.Rat), number(p[0], p[1]), new(big.Rat)}, {new(big.Rat), new(big.Rat), new(big.Rat)}, {new(big.Rat), new(big.Rat), number(one, p[2])}}, 2},
		"large":        {matrix{{number(one, one), number(all, p[3]), number(p[4], p[5])}}, zeros(3, 3), 1},
		"third prime":  {matrix{{number(p[2], one), number(all, p[3]), number(p[4], p[5])}}, zeros(3, 3), 1},
		"nothing":      {matrix{{new(big.Rat), new(big.Rat)}}, zeros(2, 2), 0},
		"no generator": {nil, zeros(2, 2), 0},
	} {
		t.Run(name, func(t *testing.T) {
			if rank := agrees(t, c.generators, c.m); rank != c.rank {
				t.Errorf("rank %d, want %d", rank, c.rank)
			}
		})
	}
}

// FuzzClosure takes a byte for the size and one for each entry: a small number, or
// one of the first two primes or its inverse.
func FuzzClosure(f *testing.F) {
	f.Add([]byte{2, 1, 0, 3, 4, 0, 5})
	f.Add([]byte{3, 127, 1, 126, 0, 1, 0, 2, 0, 128, 1, 129, 9})
	f.Add([]byte{4, 0, 1, 1, 0, 255, 0, 0, 7, 0, 255, 0, 7, 0, 0, 8, 9, 0, 0, 9, 8})
	var primes modp.Primes
	first, second := primes.Next(), primes.Next()
	f.Fuzz(func(t *testing.T, data []byte) {
		if len(data) == 0 {
			return
		}
		n := 1 + int(data[0])%5
		data = data[1:]
		row := func() []*big.Rat {
			out := zeros(1, n)[0]
			for _, v := range out[:min(n, len(data))] {
				switch b := int8(data[0]); b {
				case 127:
					v.SetUint64(first.P)
				case 126:
					v.SetUint64(second.P)
				case -128:
					v.SetUint64(first.P).Inv(v)
				case -127:
					v.SetUint64(second.P).Inv(v)
				default:
					v.SetInt64(int64(b))
				}
				data = data[1:]
			}
			return out
		}
		generators, m := matrix{row()}, make(matrix, n)
		for i := range m {
			m[i] = row()
		}
		if len(data) > 0 {
			generators = append(generators, row())
		}
		agrees(t, generators, m)
	})
}

// The proof refuses an echelon form with one wrong number, and one that lacks a
// row.
func TestProofRefuses(t *testing.T) {
	c := mixed(7, 3, 40)
	generators, m := c.input.transpose(1), c.state.transpose(7)
	s := tf.Must(new(work).closure(generators, m))
	form := func() *echelon {
		e := &echelon{pivots: s.pivots, free: others(7, s.pivots)}
		for k := range s.pivots {
			scale := commonDenominator(s.rows[k], nil, nil)
			var row []*big.Int
			for _, j := range e.free {
				row = append(row, whole(s.rows[k][j], scale))
			}
			e.numerators, e.denominators = append(e.numerators, row), append(e.denominators, scale)
		}
		return e
	}
	if got, err := new(work).prove(form(), generators, m); err != nil || got == nil || !got.rows.equal(s.rows) {
		t.Fatalf("%v, %v", got, err)
	}
	for k := range s.pivots {
		for j := range 3 {
			e := form()
			e.numerators[k][j].Add(e.numerators[k][j], big.NewInt(1))
			if got, err := new(work).prove(e, generators, m); got != nil || err != nil {
				t.Errorf("row %d, column %d: %v, %v", k, j, got, err)
			}
		}
		e := form()
		e.pivots, e.free = slices.Delete(slices.Clone(e.pivots), k, k+1), append(slices.Clone(e.free), e.pivots[k])
		e.numerators, e.denominators = slices.Delete(e.numerators, k, k+1), slices.Delete(e.denominators, k, k+1)
		for i := range e.numerators {
			e.numerators[i] = append(e.numerators[i], new(big.Int))
		}
		if got, err := new(work).prove(e, generators, m); got != nil || err != nil {
			t.Errorf("without row %d: %v, %v", k, got, err)
		}
	}
}

// A budget of work ends in the result or in ErrLimit, and more of it never ends in
// less.
func TestWorkLimit(t *testing.T) {
	c := mixed(10, 4, 300)
	generators, m := c.input.transpose(1), c.state.transpose(10)
	var w work
	want := tf.Must(w.closure(generators, m))
	for budget := 1; budget < 2*w.spent; budget += 1 + budget/8 {
		got, err := (&work{maxProducts - budget}).closure(generators, m)
		if (budget < w.spent) != errors.Is(err, ErrLimit) || err == nil && !got.rows.equal(want.rows) {
			t.Errorf("%d of %d products: %v, %v", budget, w.spent, got, err)
		}
	}
}

// Forty states in full matrices: what is hidden has the characteristic polynomial
// of the block that it was made from, by the recurrence of Faddeev and Leverrier,
// and the transfer function stays.
func TestFullMatricesWithHiddenModes(t *testing.T) {
	const n, hidden = 40, 10
	c := mixed(n, hidden, 400)
	for i, row := range c.state {
		for j, v := range row {
			if v.Sign() == 0 {
				t.Fatalf("row %d, column %d is 0", i, j)
			}
		}
	}
	if rank := tf.Must(c.ControllabilityRank()); rank != n-hidden {
		t.Errorf("rank %d", rank)
	}
	last := others(n, upTo(n-hidden))
	block := full(n, hidden).state.rows(last).columns(last)
	_, want := leverrier(model{states: c.states[:hidden], state: block, output: zeros(1, hidden), input: zeros(hidden, 1), feedthrough: zeros(1, 1)}, 0, 0)
	minimal, modes, err := c.MinimalRealization()
	if err != nil || len(minimal.States()) != n-hidden || !modes.Uncontrollable.Equal(want) || modes.Unobservable.Degree() != 0 {
		t.Fatalf("%d states, hidden %v, %v", len(minimal.States()), modes.Uncontrollable, err)
	}
	g, h := tf.Must(c.TransferFunction("in0", "out0")), tf.Must(minimal.TransferFunction("in0", "out0"))
	if !g.Equivalent(h) {
		t.Error("the minimal realization has another transfer function")
	}
	// The dual model shows too little instead.
	dual := tf.Must(New(c.states, c.outputs, c.inputs, Matrices{c.state.transpose(n), c.output.transpose(n), c.input.transpose(1), nil}))
	minimal, modes, err = dual.MinimalRealization()
	if err != nil || len(minimal.States()) != n-hidden || !modes.Unobservable.Equal(want) || modes.Uncontrollable.Degree() != 0 {
		t.Fatalf("dual: %d states, hidden %v, %v", len(minimal.States()), modes.Unobservable, err)
	}
}

func upTo(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = i
	}
	return out
}

func BenchmarkMinimalRealizationHidden(b *testing.B) {
	for _, n := range []int{12, 20, 40, 80} {
		b.Run(fmt.Sprintf("states=%d", n), func(b *testing.B) {
			c := mixed(n, n/4, 10*n)
			for b.Loop() {
				if _, _, err := c.MinimalRealization(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
