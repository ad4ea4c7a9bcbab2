package lti

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// LoopCut is a diagram cut at one signal: what is put in behind the cut comes
// back before it as −L times itself, L the loop transfer function, where
// all inputs are 0 and all other loops stay closed. It is immutable; the zero
// value is a loop of 0 at a signal of the unit 1.
type LoopCut[G tf.Block[G]] struct {
	_      [0]func()
	like   G
	signal units.Signal
	loop   ratio
	back   []string // blocks with dead time on the way round
}

// Cut opens the diagram at a signal that lies on a loop. The errors are
// *UnknownNameError, *NoLoopError, and those of TransferFunction: a dead time is
// fine here where all ways around the cut loop have the same and no other loop
// holds it.
func (d *Diagram[G]) Cut(signal string) (LoopCut[G], error) {
	i, err := d.find(signal)
	if err != nil {
		return LoopCut[G]{}, err
	}
	n := &d.network
	rows := n.between(i, i)
	if len(rows) == 0 {
		e := &NoLoopError{Signal: signal}
		for _, part := range n.parts {
			if isLoop(part) {
				e.Have = append(e.Have, n.inOrder(part)...)
			}
		}
		return LoopCut[G]{}, e
	}
	r, err := n.transfer(i, i)
	if err != nil {
		return LoopCut[G]{}, err
	}
	r.num = r.num.Neg()
	c := LoopCut[G]{signal: d.signals[i], loop: r, back: n.delayed(rows)}
	if len(d.record.blocks) > 0 {
		c.like = d.record.blocks[0].function
	}
	return c, nil
}

// String is the signal and the loop transfer function.
func (c LoopCut[G]) String() string {
	l, err := c.LoopTransferFunction()
	if err != nil {
		return fmt.Sprintf("cut at %s: %v", c.signal, err)
	}
	return fmt.Sprintf("cut at %s: %v", c.signal, l)
}

// Signal is the signal at the cut.
func (c LoopCut[G]) Signal() units.Signal { return c.signal }

// LoopTransferFunction returns L: what comes back, with the sign reversed, for
// what goes in, so that a static gain above 0 is negative feedback. It has the
// dead time of the loop. Its denominator is the characteristic polynomial of
// the opened diagram, and the sum of numerator and denominator, without dead
// time, that of the closed one.
func (c LoopCut[G]) LoopTransferFunction() (G, error) {
	return c.function(c.loop.num, c.denominator(), c.loop.delay)
}

// Sensitivity returns 1/(1 + L): by what feedback multiplies a disturbance that
// adds to the signal. Its denominator is the characteristic polynomial of the
// closed diagram. The error is a *DeadTimeError where the loop has a dead time.
func (c LoopCut[G]) Sensitivity() (G, error) {
	den := c.denominator()
	return c.closed("sensitivity at "+c.signal.Name, den)
}

// ComplementarySensitivity returns L/(1 + L), which is 1 less Sensitivity. The
// error is a *DeadTimeError where the loop has a dead time.
func (c LoopCut[G]) ComplementarySensitivity() (G, error) {
	return c.closed("complementary sensitivity at "+c.signal.Name, c.loop.num)
}

func (c LoopCut[G]) closed(result string, num intpoly.Poly) (G, error) {
	if c.loop.delay != nil {
		var g G
		return g, &DeadTimeError{Result: result, Blocks: c.back}
	}
	return c.function(num, c.loop.num.Add(c.denominator()), nil)
}

func (c LoopCut[G]) denominator() intpoly.Poly {
	if c.loop.den.IsZero() {
		return intpoly.FromInt64s(1)
	}
	return c.loop.den
}

func (c LoopCut[G]) function(num, den intpoly.Poly, delay *big.Rat) (G, error) {
	return putTogether(function{num, den, delay, c.signal, c.signal}, c.like)
}
