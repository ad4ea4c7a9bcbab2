package lti_test

import (
	"errors"
	"math/big"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// laggingBlock has a dead time now and then.
func laggingBlock(r *rand.Rand) tf.Continuous {
	g := randomBlock(r)
	if r.IntN(3) > 0 {
		return g
	}
	return tf.Must(g.WithDeadTime(units.NewQuantity(big.NewRat(1+r.Int64N(2), 2), units.MustParse("s"))))
}

// deadTimes returns the dead times of all elementary paths between two signals,
// and whether one lies on a loop that such a path can take in.
func (b branches) deadTimes(from, to int) (paths []string, loop bool) {
	total := func(path []int, end int) *big.Rat {
		sum := new(big.Rat)
		for k, i := range path {
			j := end
			if k+1 < len(path) {
				j = path[k+1]
			}
			sum.Add(sum, b[j][i].DeadTime().Value())
		}
		return sum
	}
	for _, path := range b.walks(from, to) {
		if t := total(path, to).String(); !slices.Contains(paths, t) {
			paths = append(paths, t)
		}
	}
	for i := range b {
		reached := (i == from || len(b.walks(from, i)) > 0) && (i == to || len(b.walks(i, to)) > 0)
		for _, path := range b.walks(i, i) {
			loop = loop || reached && total(path, i).Sign() > 0
		}
	}
	return paths, loop
}

// Dead times on random topologies: a result where the paths have one dead time
// and the loops between the two signals have none, with the right values; an
// error everywhere else.
func TestRandomDeadTimes(t *testing.T) {
	r := rand.New(rand.NewPCG(47, 48))
	delayed, refused := 0, 0
	for k := range 1500 {
		d, b := randomDiagram(r, 1+r.IntN(2), 4+r.IntN(5), laggingBlock)
		diagram, err := d.Build()
		if err != nil {
			continue
		}
		source, target := r.IntN(len(b)), r.IntN(len(b))
		if source == target {
			continue
		}
		open := slices.Clone(b)
		open[source] = nil // imposed; an input has nothing there
		g, err := diagram.TransferFunction("x"+strconv.Itoa(source), "x"+strconv.Itoa(target))
		var stuck *lti.AlgebraicLoopError
		if errors.As(err, &stuck) {
			continue
		}
		paths, loop := open.deadTimes(source, target)
		var delay *lti.DeadTimeError
		if want := loop || len(paths) > 1; errors.As(err, &delay) != want || err != nil && !want {
			t.Fatalf("%d: x%d to x%d: %v, %v; paths %v, loop %v\n%v", k, source, target, g, err, paths, loop, diagram)
		}
		if err != nil {
			refused++
			if (delay.Join == "") != loop || len(delay.Blocks) == 0 {
				t.Errorf("%d: %+v; paths %v, loop %v\n%v", k, delay, paths, loop, diagram)
			}
			continue
		}
		s := complex(r.Float64(), 1+r.Float64())
		x, ok := open.values(source, s)
		if !ok {
			continue
		}
		if v := tf.Must(g.At(s)); cmplx.Abs(v-x[target]) > 1e-8*(1+cmplx.Abs(v)) {
			t.Fatalf("%d: x%d to x%d at %v: %v, want %v\n%v", k, source, target, s, v, x[target], diagram)
		}
		if g.DeadTime().Sign() > 0 {
			delayed++
		}
	}
	if delayed < 30 || refused < 30 {
		t.Errorf("the diagrams are too tame: %d with dead time, %d refused", delayed, refused)
	}
}

// Warnings of positive feedback on random topologies: there is one where some
// loop has it, and it names such a loop. Where no loop has, the diagram cut
// anywhere has negative feedback.
func TestRandomPositiveFeedback(t *testing.T) {
	r := rand.New(rand.NewPCG(49, 50))
	warned, sound := 0, 0
	for k := range 400 {
		d, b := randomDiagram(r, 1, 3+r.IntN(5), randomBlock)
		diagram, err := d.Build()
		if err != nil {
			continue
		}
		var positive [][]string
		loops := b.loops()
		for _, l := range loops {
			if slowSign(l.gain) > 0 {
				var names []string
				for _, i := range l.signals {
					names = append(names, "x"+strconv.Itoa(i))
				}
				positive = append(positive, sorted(names))
			}
		}
		count := 0
		for _, w := range diagram.Warnings() {
			if !strings.Contains(w.Text, "positive feedback") {
				continue
			}
			count++
			if !slices.ContainsFunc(positive, func(p []string) bool { return slices.Equal(p, sorted(w.Signals)) }) {
				t.Errorf("%d: %v: no such loop among %v\n%v", k, w, positive, diagram)
			}
		}
		if (count > 0) != (len(positive) > 0) {
			t.Fatalf("%d: %d warnings, loops with positive feedback %v\n%v", k, count, positive, diagram)
		}
		if count > 0 {
			warned++
			continue
		}
		for i := 1; i < len(b); i++ {
			cut, err := diagram.Cut("x" + strconv.Itoa(i))
			if err != nil {
				continue
			}
			if l := tf.Must(cut.LoopTransferFunction()); slowSign(tf.Must(tf.Scale(l, big.NewRat(-1, 1)))) > 0 {
				t.Errorf("%d: positive feedback at x%d: %v\n%v", k, i, l, diagram)
			}
			sound++
		}
	}
	if warned < 30 || sound < 30 {
		t.Errorf("the diagrams are too tame: %d warned, %d cuts", warned, sound)
	}
}

// Trees of Series, Parallel, Feedback and PositiveFeedback, and the same drawn as
// a diagram.
func TestCompositionTrees(t *testing.T) {
	r := rand.New(rand.NewPCG(51, 52))
	loops := 0
	for k := range 200 {
		d := lti.NewBlockDiagram()
		count := 0
		signal := func() string {
			count++
			name := "x" + strconv.Itoa(count)
			d.Signal(name, "1")
			return name
		}
		failed := false
		keep := func(g tf.Continuous, err error) tf.Continuous {
			failed = failed || err != nil
			return g
		}
		var draw func(depth int, from string) (tf.Continuous, string)
		draw = func(depth int, from string) (tf.Continuous, string) {
			kind := r.IntN(4)
			switch {
			case depth == 0 || r.IntN(5) == 0:
				to, g := signal(), randomBlock(r)
				d.Block(to, g, from, to)
				return g, to
			case kind == 0:
				g, middle := draw(depth-1, from)
				h, to := draw(depth-1, middle)
				return keep(tf.Series(g, h)), to
			case kind == 1:
				g, a := draw(depth-1, from)
				h, b := draw(depth-1, from)
				to := signal()
				d.Sum(to, lti.Plus(a), lti.Plus(b))
				return keep(tf.Parallel(g, h)), to
			}
			loops++
			sum := signal()
			g, to := draw(depth-1, sum)
			h, back := draw(depth-1, to)
			if kind == 2 {
				d.Sum(sum, lti.Plus(from), lti.Minus(back))
				return keep(tf.Feedback(g, h)), to
			}
			d.Sum(sum, lti.Plus(from), lti.Plus(back))
			return keep(tf.PositiveFeedback(g, h)), to
		}
		d.Input("r", "1")
		want, to := draw(3, "r")
		diagram, err := d.Build()
		if failed || err != nil { // TestMason has the algebraic loops
			continue
		}
		if g, err := diagram.TransferFunction("r", to); err != nil || !g.Equivalent(want) {
			t.Fatalf("%d: %v, %v, want %v\n%v", k, g, err, want, diagram)
		}
	}
	if loops < 100 {
		t.Errorf("only %d loops", loops)
	}
}

// slowSign is the sign of a function near s = 0, from the right, and 0 where it
// vanishes there.
func slowSign(g tf.Continuous) int {
	g, _ = g.LowestTerms()
	if g.Numerator().IsZero() || g.SystemType() < 0 {
		return 0
	}
	num, den := g.Numerator(), g.Denominator()
	for i := 0; ; i++ {
		if c := den.Coefficient(i); c.Sign() != 0 {
			return num.Coefficient(0).Sign() * c.Sign()
		}
	}
}
