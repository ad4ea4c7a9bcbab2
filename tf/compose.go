package tf

import (
	"fmt"
	"math/big"
	"strconv"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/units"
)

// unity is the function 1.
var unity, _ = ratfun.New(intpoly.FromInt64s(1), intpoly.FromInt64s(1))

// maxWords bounds a polynomial of a composition, its coefficients times their
// words of 64 bits, and maxCoefficient the words of one of them.
const (
	maxWords       = ratpoly.MaxWords
	maxCoefficient = 1 << 14
)

// size adds up what a composition of functions may take.
type size struct{ degree, words int }

func (s *size) add(f ratfun.Func) {
	d, w := f.Size()
	s.degree, s.words = s.degree+d, s.words+w
}

// check refuses what would take more.
func (s *size) check(operation string) error {
	if float64(s.degree+1)*float64(s.words) > maxWords || s.words > maxCoefficient {
		return fmt.Errorf("tf: %s: a polynomial of degree %d with coefficients of %d words: %w", operation, s.degree, s.words, fault.ErrLimit)
	}
	return nil
}

// Series returns the chain of blocks in the order in which a signal passes
// them: first's input to the last one's output. Dead times add up, nothing is
// cancelled. The errors are *JunctionError where an output does not fit the
// next input, *PeriodError where sampling periods differ, and ErrLimit where a
// polynomial of the result could take more than 2^21 words of 64 bits, or a
// coefficient more than 2^14.
//
// Series is associative; where the signals allow both orders it is commutative
// up to Equivalent.
func Series[G Block[G]](first G, rest ...G) (G, error) {
	c := first.core()
	var total size
	total.add(c.f)
	for i := range rest {
		r := rest[i].core()
		total.add(r.f)
		if !fits(&c.output, &r.input) {
			return junction[G]("Series", i+1, c.output, "output of block "+strconv.Itoa(i),
				r.input, "input of block "+strconv.Itoa(i+1))
		}
		if err := checkPeriod("Series", i+1, &c, &r); err != nil {
			return first.with(core{}), err
		}
		c.output = r.output
		if r.delay != nil {
			if c.delay == nil {
				c.delay = r.delay
			} else {
				c.delay = new(big.Rat).Add(c.delay, r.delay)
			}
		}
	}
	if err := total.check("Series"); err != nil {
		return first.with(core{}), err
	}
	c.f = halves(first, rest, ratfun.Func.Mul)
	return first.with(c), nil
}

// halves joins the functions of the blocks by halves, so that long chains are
// products of factors of equal length.
func halves[G Block[G]](first G, rest []G, join func(f, g ratfun.Func) ratfun.Func) ratfun.Func {
	if len(rest) == 0 {
		return first.core().f
	}
	m := len(rest) / 2
	return join(halves(first, rest[:m], join), halves(rest[m], rest[m+1:], join))
}

// Parallel returns the sum of blocks that share input and output. The errors
// are *JunctionError where signals do not fit, *PeriodError where sampling
// periods differ, *DeadTimeError where dead times differ, and ErrLimit as for
// Series.
//
// Denominators multiply even where they are equal, because two blocks with the
// same pole hold it twice; LowestTerms reduces the sum. Parallel is associative
// and commutative, and Series distributes over it, up to Equivalent.
func Parallel[G Block[G]](first G, rest ...G) (G, error) {
	c := first.core()
	var total size
	total.add(c.f)
	for i := range rest {
		r := rest[i].core()
		total.add(r.f)
		if !fits(&c.input, &r.input) {
			return junction[G]("Parallel", i+1, c.input, "input of the blocks before",
				r.input, "input of block "+strconv.Itoa(i+1))
		}
		if !fits(&c.output, &r.output) {
			return junction[G]("Parallel", i+1, c.output, "output of the blocks before",
				r.output, "output of block "+strconv.Itoa(i+1))
		}
		if err := checkPeriod("Parallel", i+1, &c, &r); err != nil {
			return first.with(core{}), err
		}
		if !sameTime(c.delay, r.delay) {
			return first.with(core{}), &DeadTimeError{Operation: "Parallel", Index: i + 1,
				Earlier: c.delaySeconds(), Later: r.delaySeconds()}
		}
		c.input, c.output = merge(c.input, r.input), merge(c.output, r.output)
	}
	if err := total.check("Parallel"); err != nil {
		return first.with(core{}), err
	}
	c.f = halves(first, rest, ratfun.Func.Add)
	return first.with(c), nil
}

// Feedback returns the closed loop forward/(1 + forward·back) with negative
// feedback: what back makes of the output is subtracted from the input. It
// goes from forward's input to forward's output. Nothing is cancelled: the
// zeros are those of forward and the poles of back.
//
// The errors are *JunctionError where forward's output does not fit back's
// input, or back's output forward's input; *PeriodError where sampling periods
// differ; *DeadTimeError where one of the blocks has a dead time;
// ErrAlgebraicLoop where 1 + forward·back is identically 0; and ErrLimit as for
// Series.
func Feedback[G Block[G]](forward, back G) (G, error) {
	return feedback("Feedback", forward, back, 1)
}

// PositiveFeedback returns forward/(1 − forward·back): what back makes of the
// output is added to the input. In all else it is like Feedback.
func PositiveFeedback[G Block[G]](forward, back G) (G, error) {
	return feedback("PositiveFeedback", forward, back, -1)
}

func feedback[G Block[G]](operation string, forward, back G, sign int) (G, error) {
	f, b := forward.core(), back.core()
	if !fits(&f.output, &b.input) {
		return junction[G](operation, 1, f.output, "output of block 0 (forward)", b.input, "input of block 1 (back)")
	}
	if !fits(&f.input, &b.output) {
		return junction[G](operation, 1, f.input, "input of block 0 (forward)", b.output, "output of block 1 (back)")
	}
	if err := checkPeriod(operation, 1, &f, &b); err != nil {
		return forward.with(core{}), err
	}
	if f.delay != nil || b.delay != nil {
		return forward.with(core{}), &DeadTimeError{Operation: operation, Index: 1,
			Earlier: f.delaySeconds(), Later: b.delaySeconds()}
	}
	var total size
	total.add(f.f)
	total.add(b.f)
	if err := total.check(operation); err != nil {
		return forward.with(core{}), err
	}
	loop, ok := f.f.Feedback(b.f, sign)
	if !ok {
		return forward.with(core{}), ErrAlgebraicLoop
	}
	f.f = loop
	f.input, f.output = merge(f.input, b.output), merge(f.output, b.input)
	return forward.with(f), nil
}

// UnityFeedback returns forward/(1 + forward): the output itself is subtracted
// from the input. The two must have the same unit; their names may differ, as
// a setpoint and the level that follows it do. The errors are those of
// Feedback.
func UnityFeedback[G Block[G]](forward G) (G, error) {
	f := forward.core()
	if !f.output.Unit.Equal(f.input.Unit) {
		return junction[G]("UnityFeedback", 0, f.input, "input of block 0 (forward)", f.output, "output of block 0 (forward)")
	}
	if f.delay != nil {
		return forward.with(core{}), &DeadTimeError{Operation: "UnityFeedback",
			Earlier: f.delaySeconds(), Later: new(big.Rat)}
	}
	loop, ok := f.f.Feedback(unity, 1)
	if !ok {
		return forward.with(core{}), ErrAlgebraicLoop
	}
	f.f = loop
	return forward.with(f), nil
}

// Inverse returns 1/g, from g's output to g's input. It is improper where g is
// strictly proper. The errors are ErrDivisionByZero for g = 0 and
// *DeadTimeError where g has a dead time. Inverse undoes itself up to Equal.
func Inverse[G Block[G]](g G) (G, error) {
	c := g.core()
	if c.delay != nil {
		return g.with(core{}), &DeadTimeError{Operation: "Inverse", Earlier: new(big.Rat), Later: c.delaySeconds()}
	}
	f, ok := c.f.Inverse()
	if !ok {
		return g.with(core{}), fault.ErrDivisionByZero
	}
	c.f = f
	c.input, c.output = c.output, c.input
	return g.with(c), nil
}

// Scale returns k·g for a pure number k; nil reads as 0. Signals stay. For a
// factor with a unit put a Gain in Series. The error is ErrLimit as for Series.
func Scale[G Block[G]](g G, k *big.Rat) (G, error) {
	c := g.core()
	if k == nil {
		k = new(big.Rat)
	}
	var s size
	s.add(c.f)
	s.words += wordsOf(k)
	if err := s.check("Scale"); err != nil {
		return g.with(core{}), err
	}
	c.f = c.f.Scale(k)
	return g.with(c), nil
}

// wordsOf is how many words of 64 bits k takes above or below.
func wordsOf(k *big.Rat) int { return max(k.Num().BitLen(), k.Denom().BitLen())/64 + 1 }

func junction[G any](operation string, index int, earlier units.Signal, earlierEnd string, later units.Signal, laterEnd string) (g G, err error) {
	return g, &JunctionError{Operation: operation, Index: index,
		Earlier: earlier, EarlierEnd: earlierEnd, Later: later, LaterEnd: laterEnd}
}
