package tf

import (
	"math/big"
	"testing"
)

// TestLaws checks the algebra of blocks on random ones.
func TestLaws(t *testing.T) {
	one := Must(New(ints(1), ints(1)))
	r := splitmix(1)
	for range 200 {
		a, b, c := r.block(), r.block(), r.block()
		series := func(x, y Continuous) Continuous { return Must(Series(x, y)) }
		sum := func(x, y Continuous) Continuous { return Must(Parallel(x, y)) }
		inverse := func(x Continuous) Continuous { return Must(Inverse(x)) }
		cases := []struct {
			name        string
			left, right Continuous
		}{
			{"series commutes", series(a, b), series(b, a)},
			{"series associates", series(series(a, b), c), series(a, series(b, c))},
			{"a chain is its pairs", Must(Series(a, b, c)), series(series(a, b), c)},
			{"parallel commutes", sum(a, b), sum(b, a)},
			{"parallel associates", sum(sum(a, b), c), sum(a, sum(b, c))},
			{"a sum is its pairs", Must(Parallel(a, b, c)), sum(sum(a, b), c)},
			{"series distributes", series(a, sum(b, c)), sum(series(a, b), series(a, c))},
			{"a block and its inverse", series(a, inverse(a)), one},
			{"inverse of a chain", inverse(series(a, b)), series(inverse(b), inverse(a))},
			{"a block less itself", sum(a, Scale(a, big.NewRat(-1, 1))), Continuous{}},
			{"doubling", sum(a, a), Scale(a, big.NewRat(2, 1))},
		}
		if loop, err := Feedback(a, b); err == nil {
			push, err := Feedback(series(a, b), one) // a/(1+ab) = (ab/(1+ab))/b
			if err != nil {
				t.Fatal(err)
			}
			cases = append(cases, []struct {
				name        string
				left, right Continuous
			}{
				{"feedback is g/(1+gh)", loop, series(a, inverse(sum(one, series(a, b))))},
				{"push-through", series(loop, b), push},
				{"unity feedback", push, Must(UnityFeedback(series(a, b)))},
				{"positive feedback of -b", loop, Must(PositiveFeedback(a, Scale(b, big.NewRat(-1, 1))))},
				{"undo the loop", a, Must(PositiveFeedback(loop, b))},
			}...)
		}
		for _, c := range cases {
			if !c.left.Equivalent(c.right) {
				t.Fatalf("%s: %v is not %v\nof %v and %v", c.name, c.left, c.right, a, b)
			}
		}
		if sum(a, b).Equivalent(sum(a, sum(b, one))) {
			t.Fatal("Equivalent cannot tell functions apart")
		}
		if !inverse(inverse(a)).Equal(a) {
			t.Fatalf("the inverse of the inverse of %v is not equal to it", a)
		}
	}
}

// TestNestedLoops closes a thousand loops of second order about each other and
// opens them again: what is left is the first block, with nothing lost.
func TestNestedLoops(t *testing.T) {
	const loops = 1000
	blocks := make([]Continuous, loops)
	r := splitmix(2)
	for i := range blocks {
		blocks[i] = Must(New(r.poly(1), r.poly(2)))
	}
	// Reduced after each step, because 1000 loops opened and closed would
	// otherwise keep all 2000 pairs of common factors.
	g := blocks[0]
	for _, h := range blocks[1:] {
		g, _ = Must(Feedback(g, h)).LowestTerms()
		g, _ = Must(PositiveFeedback(g, h)).LowestTerms()
		if !g.Equivalent(blocks[0]) {
			t.Fatalf("after a loop closed and opened: %v", g)
		}
	}
}
