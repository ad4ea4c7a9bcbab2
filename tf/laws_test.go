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
			{"a block less itself", sum(a, Must(Scale(a, big.NewRat(-1, 1)))), Continuous{}},
			{"doubling", sum(a, a), Must(Scale(a, big.NewRat(2, 1)))},
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
				{"positive feedback of -b", loop, Must(PositiveFeedback(a, Must(Scale(b, big.NewRat(-1, 1)))))},
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

// TestNestedLoops closes a thousand loops about each other, with blocks of
// second order in the return paths, and compares the value of the whole at a
// rational point with the same loops closed in rational numbers: nothing is
// lost.
func TestNestedLoops(t *testing.T) {
	loops := 1000
	if testing.Short() {
		loops = 100
	}
	x := big.NewRat(1, 3)
	r := splitmix(2)
	g := MustParse("1/(s^2 + s + 1)")
	value := Must(g.AtRat(x))
	for range loops {
		h := Must(New(ints(int64(r.intn(9)+1), int64(r.intn(9))), ints(int64(r.intn(9)+1), int64(r.intn(9)), 1)))
		g = Must(Feedback(g, h))
		loop := new(big.Rat).Mul(value, Must(h.AtRat(x)))
		value.Quo(value, loop.Add(loop, big.NewRat(1, 1)))
	}
	if got := Must(g.AtRat(x)); got.Cmp(value) != 0 {
		t.Errorf("the value of %d loops differs", loops)
	}
	if got := g.Denominator().Degree(); got != 2*loops+2 {
		t.Errorf("denominator of degree %d, want %d: something was cancelled", got, 2*loops+2)
	}
}
