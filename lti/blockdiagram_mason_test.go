package lti_test

import (
	"errors"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"strconv"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"gonum.org/v1/gonum/mat"
)

// branches is a signal-flow graph: branches[to][from].
type branches []map[int]tf.Continuous

func sum(terms ...tf.Continuous) tf.Continuous {
	g, _ := tf.Must(tf.Parallel(tf.MustParse("0"), terms...)).LowestTerms()
	return g
}

func times(factors ...tf.Continuous) tf.Continuous {
	g, _ := tf.Must(tf.Series(tf.MustParse("1"), factors...)).LowestTerms()
	return g
}

// walks returns the elementary paths from one signal to another, or the
// elementary loops of a signal along signals of a higher number.
func (b branches) walks(from, to int) (paths [][]int) {
	var path []int
	var visit func(i int)
	visit = func(i int) {
		path = append(path, i)
		for j := range b {
			if _, ok := b[j][i]; !ok {
				continue
			}
			switch {
			case j == to:
				paths = append(paths, slices.Clone(path))
			case !slices.Contains(path, j) && (from != to || j > from):
				visit(j)
			}
		}
		path = path[:len(path)-1]
	}
	visit(from)
	return paths
}

// gain is the product along a path that ends in a signal.
func (b branches) gain(path []int, end int) tf.Continuous {
	g := tf.MustParse("1")
	for k, i := range path {
		j := end
		if k+1 < len(path) {
			j = path[k+1]
		}
		g = times(g, b[j][i])
	}
	return g
}

type loop struct {
	signals []int
	gain    tf.Continuous
}

func (b branches) loops() (out []loop) {
	for i := range b {
		for _, path := range b.walks(i, i) {
			out = append(out, loop{path, b.gain(path, i)})
		}
	}
	return out
}

func touch(a, b []int) bool {
	return slices.ContainsFunc(a, func(i int) bool { return slices.Contains(b, i) })
}

// determinant is 1 − ΣL + ΣLL − …, over products of loops that touch neither
// one another nor the given signals.
func determinant(loops []loop, apart []int) tf.Continuous {
	var out tf.Continuous
	var add func(rest []loop, used []int, g tf.Continuous)
	add = func(rest []loop, used []int, g tf.Continuous) {
		out = sum(out, g)
		for k, l := range rest {
			if !touch(l.signals, used) {
				add(rest[k+1:], append(slices.Clone(used), l.signals...), times(g, tf.MustParse("-1"), l.gain))
			}
		}
	}
	add(loops, apart, tf.MustParse("1"))
	return out
}

// mason is the gain formula (S. J. Mason, Feedback Theory: Further Properties
// of Signal Flow Graphs, Proceedings of the IRE 44, 1956): the sum over the
// paths of their gain times the determinant of what does not touch them, over
// the determinant.
func (b branches) mason(from, to int) tf.Continuous {
	loops := b.loops()
	var num tf.Continuous
	for _, path := range b.walks(from, to) {
		num = sum(num, times(b.gain(path, to), determinant(loops, append(slices.Clone(path), to))))
	}
	return times(num, tf.Must(tf.Inverse(determinant(loops, nil))))
}

// randomDiagram records a diagram of dimensionless signals and the same as a
// graph. The first signals are inputs.
func randomDiagram(r *rand.Rand, inputs, n int, block func(*rand.Rand) tf.Continuous) (*lti.BlockDiagram[tf.Continuous], branches) {
	d, b := lti.NewBlockDiagram(), make(branches, n)
	name := func(i int) string { return "x" + strconv.Itoa(i) }
	other := func(i int) int { return (i + 1 + r.IntN(n-1)) % n }
	for i := range n {
		b[i] = map[int]tf.Continuous{}
		if i < inputs {
			d.Input(name(i), "1")
			continue
		}
		d.Signal(name(i), "1")
		if r.IntN(2) == 0 {
			from, g := other(i), block(r)
			d.Block("b"+strconv.Itoa(i), g, name(from), name(i))
			b[i][from] = g
			continue
		}
		var terms []lti.Summand
		for range 2 + r.IntN(2) {
			from := other(i)
			if _, ok := b[i][from]; ok {
				continue
			}
			if r.IntN(2) == 0 {
				terms, b[i][from] = append(terms, lti.Plus(name(from))), tf.MustParse("1")
			} else {
				terms, b[i][from] = append(terms, lti.Minus(name(from))), tf.MustParse("-1")
			}
		}
		d.Sum(name(i), terms...)
	}
	return d, b
}

func randomBlock(r *rand.Rand) tf.Continuous {
	small := func() int64 { return r.Int64N(9) - 4 }
	num := poly.FromInts(small(), small())
	switch r.IntN(6) {
	case 0: // lead or lag, or improper
		return tf.Must(tf.New(num, poly.FromInts(1+r.Int64N(3), r.Int64N(2))))
	case 1:
		num = poly.FromInts(1 + r.Int64N(5)) // a gain
		return tf.Must(tf.New(num, poly.FromInts(1+r.Int64N(5))))
	case 2:
		num = poly.FromInts(1 + r.Int64N(5))
	}
	return tf.Must(tf.New(num, poly.FromInts(small(), small(), 1+r.Int64N(4))))
}

// Every transfer function of random diagrams, from inputs and from imposed
// signals, against Mason's formula; denominators against det(I − G) times the
// denominators of all blocks.
func TestMason(t *testing.T) {
	r := rand.New(rand.NewPCG(41, 42))
	wellPosed, zero, loops := 0, 0, 0
	for k := range 300 {
		d, b := randomDiagram(r, 1+r.IntN(2), 4+r.IntN(4), randomBlock)
		diagram, err := d.Build()
		delta := determinant(b.loops(), nil)
		if (err == nil) != (delta.RelativeDegree() <= 0) {
			t.Fatalf("%d: Build says %v, det(I − G) is %v", k, err, delta)
		}
		var stuck *lti.AlgebraicLoopError
		if errors.As(err, &stuck) { // the signals that it names are stuck by themselves
			some := make(branches, len(b))
			for i := range b {
				some[i] = map[int]tf.Continuous{}
				for j, g := range b[i] {
					if slices.Contains(stuck.Signals, "x"+strconv.Itoa(i)) && slices.Contains(stuck.Signals, "x"+strconv.Itoa(j)) {
						some[i][j] = g
					}
				}
			}
			if delta := determinant(some.loops(), nil); delta.RelativeDegree() <= 0 {
				t.Errorf("%d: the loop through %v is well posed, det(I − G) is %v", k, stuck.Signals, delta)
			}
		}
		if err != nil {
			continue
		}
		wellPosed++
		loops += len(b.loops())
		blocks := poly.FromInts(1)
		for _, name := range diagram.Blocks() {
			blocks = blocks.Mul(tf.Must(diagram.Block(name)).Denominator())
		}
		p := tf.Must(diagram.CharacteristicPolynomial())
		if !p.Mul(delta.Denominator()).Monic().Equal(blocks.Mul(delta.Numerator()).Monic()) {
			t.Fatalf("%d: characteristic polynomial %v, want %v over %v of %v\n%v", k, p, blocks, delta.Denominator(), delta.Numerator(), diagram)
		}
		for i, from := range diagram.Signals() {
			open := b
			if i >= len(diagram.Inputs()) { // imposed: nothing leads there
				open = slices.Clone(b)
				open[i] = nil
			}
			j := r.IntN(len(b))
			if j == i {
				continue
			}
			to := diagram.Signals()[j]
			delta := determinant(open.loops(), nil)
			g, err := diagram.TransferFunction(from.Name, to.Name)
			if delta.RelativeDegree() > 0 {
				if err == nil {
					t.Errorf("%d: %s imposed leaves an algebraic loop, found %v\n%v", k, from.Name, g, diagram)
				}
				continue
			}
			want := open.mason(i, j)
			if err != nil || !g.Equivalent(want) {
				t.Fatalf("%d: %s to %s: %v, %v, want %v\n%v", k, from.Name, to.Name, g, err, want, diagram)
			}
			if want.Numerator().IsZero() {
				zero++
			}
			// A numerator of 0 leaves only the primitive denominator.
			if !g.Denominator().Monic().Mul(delta.Denominator()).Monic().Equal(blocks.Mul(delta.Numerator()).Monic()) {
				t.Fatalf("%d: the denominator of %v is not the characteristic polynomial\n%v", k, g, diagram)
			}
		}
	}
	if wellPosed < 100 || zero == 0 || loops < 300 {
		t.Errorf("the random diagrams are too tame: %d well posed, %d pairs without a path, %d loops", wellPosed, zero, loops)
	}
}

// values returns all signals at a complex point where one of them is imposed as
// 1, by gonum's elimination in float64, with every complex equation as two real
// ones; ok is false where that is ill conditioned.
func (b branches) values(source int, s complex128) (x []complex128, ok bool) {
	n := len(b)
	a, rhs := mat.NewDense(2*n, 2*n, nil), mat.NewVecDense(2*n, nil)
	set := func(i, j int, v complex128) {
		a.Set(2*i, 2*j, real(v))
		a.Set(2*i, 2*j+1, -imag(v))
		a.Set(2*i+1, 2*j, imag(v))
		a.Set(2*i+1, 2*j+1, real(v))
	}
	for i := range b {
		set(i, i, 1)
		for j, g := range b[i] {
			if i != source {
				set(i, j, -tf.Must(g.At(s)))
			}
		}
	}
	rhs.SetVec(2*source, 1)
	var lu mat.LU
	lu.Factorize(a)
	var v mat.VecDense
	if lu.Cond() > 1e8 || lu.SolveVecTo(&v, false, rhs) != nil {
		return nil, false
	}
	for i := range n {
		x = append(x, complex(v.AtVec(2*i), v.AtVec(2*i+1)))
	}
	return x, true
}

// Larger random diagrams at a complex point, against elimination in float64.
func TestAgainstLinearAlgebra(t *testing.T) {
	r := rand.New(rand.NewPCG(43, 44))
	compared := 0
	for range 40 {
		n := 10 + r.IntN(40)
		d, b := randomDiagram(r, 2, n, randomBlock)
		diagram, err := d.Build()
		if err != nil {
			continue
		}
		s := complex(r.Float64(), 1+r.Float64())
		x, ok := b.values(0, s)
		for j := 0; ok && j < n; j++ {
			g, err := diagram.TransferFunction("x0", "x"+strconv.Itoa(j))
			if err != nil {
				t.Fatal(err)
			}
			if v := tf.Must(g.At(s)); cmplx.Abs(v-x[j]) > 1e-7*(1+cmplx.Abs(v)) {
				t.Fatalf("x%d at %v: %v, want %v\n%v", j, s, v, x[j], diagram)
			}
			compared++
		}
	}
	if compared < 300 {
		t.Errorf("only %d values compared", compared)
	}
}

// The laws of a cut: S + T = 1, T = L/(1 + L), and S is what an input makes of
// the signal that it is added to, as an input added there says.
func TestCutLaws(t *testing.T) {
	r := rand.New(rand.NewPCG(45, 46))
	cuts := 0
	for k := range 150 {
		d, b := randomDiagram(r, 1, 4+r.IntN(5), randomBlock)
		diagram, err := d.Build()
		if err != nil {
			continue
		}
		i := 1 + r.IntN(len(b)-1)
		name := "x" + strconv.Itoa(i)
		cut, err := diagram.Cut(name)
		if err != nil {
			continue
		}
		cuts++
		l, s, c := tf.Must(cut.LoopTransferFunction()), tf.Must(cut.Sensitivity()), tf.Must(cut.ComplementarySensitivity())
		if !tf.Must(tf.UnityFeedback(l)).Equivalent(c) || !tf.Must(tf.Parallel(s, c)).Equivalent(tf.MustParse("1")) {
			t.Fatalf("%d: at %s L is %v, S %v, T %v", k, name, l, s, c)
		}
		if p := tf.Must(diagram.CharacteristicPolynomial()); !s.Denominator().Monic().Equal(p.Monic()) {
			t.Fatalf("%d: S is %v, the characteristic polynomial %v", k, s, p)
		}
		// What reads the signal reads it with an input added.
		e := make(branches, len(b)+2)
		copy(e, b)
		before, input := len(b), len(b)+1
		e[before], e[input] = b[i], nil
		e[i] = map[int]tf.Continuous{before: tf.MustParse("1"), input: tf.MustParse("1")}
		if want := e.mason(input, i); !s.Equivalent(want) {
			t.Fatalf("%d: S at %s is %v, want %v", k, name, s, want)
		}
	}
	if cuts < 30 {
		t.Errorf("only %d cuts", cuts)
	}
}
