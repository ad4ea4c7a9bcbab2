package lti

import (
	"errors"
	"fmt"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// ErrEmptyDiagram: a block diagram without a block and without a sum.
var ErrEmptyDiagram = errors.New("the diagram is empty: add Block or Sum")

// WiringError tells what is wrong with a block or a sum of a diagram, or with
// the signal at one of its ends.
type WiringError struct {
	Block string // the name of the block, or empty
	Sum   string // the signal that the sum determines, or empty
	// Signal is the signal at which the fault lies, or empty. Found is what the
	// block or the sum has there and Want what the diagram declares; both are
	// zero where the fault is another one.
	Signal      string
	Found, Want units.Signal
	Reason      string // what is wrong, and what to do
	Err         error  // the error behind it, or nil
}

// Error names the place, the signal and the reason.
func (e *WiringError) Error() string {
	place := "block"
	switch {
	case e.Block != "":
		place += " " + lex.Excerpt(e.Block, 0)
	case e.Sum != "":
		place = "sum " + lex.Excerpt(e.Sum, 0)
	}
	return place + ": " + e.Reason
}

// Unwrap returns the error behind the fault.
func (e *WiringError) Unwrap() error { return e.Err }

// AlgebraicLoopError tells that a loop determines none of its signals, because
// everything in it acts at once: with D the matrix of direct gains (the blocks
// at infinity), det(I − D) is 0. It unwraps to tf.ErrAlgebraicLoop.
type AlgebraicLoopError struct {
	// Signals are those of the loop, in the order in which they follow one
	// another.
	Signals []string
	// Opened is the signal at which the diagram was opened, or empty.
	Opened string
}

// Error names the signals of the loop and what mends it.
func (e *AlgebraicLoopError) Error() string {
	opened := ""
	if e.Opened != "" {
		opened = fmt.Sprintf("with the diagram opened at %s: ", e.Opened)
	}
	return fmt.Sprintf("%salgebraic loop through %s: a jump passes around it at once with a gain of exactly 1, so that the loop determines no signal; "+
		"give a block in it the lag that the real element has, or check the signs of the sums", opened, shortened(e.Signals))
}

// Unwrap returns tf.ErrAlgebraicLoop.
func (e *AlgebraicLoopError) Unwrap() error { return tf.ErrAlgebraicLoop }

// DeadTimeError tells that a result would hold a dead time where no rational
// function with one dead time can: in a loop, or in paths that join with
// different dead times.
type DeadTimeError struct {
	Result string   // what was asked for
	Blocks []string // the blocks whose dead times stand in the way
	// Join is the signal at which paths with different dead times meet, and
	// Times are two of them in seconds; empty where the blocks lie on a loop.
	Join  string
	Times []*big.Rat
}

// Error names the blocks and what serves instead.
func (e *DeadTimeError) Error() string {
	const serves = "replace it by its approximant (PadeApproximant, of the block or of the Diagram)"
	blocks := "block " + shortened(e.Blocks)
	if len(e.Blocks) > 1 {
		blocks = "blocks " + shortened(e.Blocks)
	}
	if e.Join == "" {
		return fmt.Sprintf("%s: the dead time of %s lies on a loop, which no rational function can hold: %s, or Cut the loop, which is exact with dead time",
			e.Result, blocks, serves)
	}
	times := make([]string, len(e.Times))
	for i, t := range e.Times {
		times[i] = decimal.Text(t) + " s"
	}
	return fmt.Sprintf("%s: paths with dead times of %s meet at %s, and no rational function can hold their sum: the dead time is that of %s; %s",
		e.Result, strings.Join(times, " and "), e.Join, blocks, serves)
}

// NoLoopError tells that a diagram was to be cut at a signal that lies on no
// loop.
type NoLoopError struct {
	Signal string
	Have   []string // the signals that lie on loops
}

// Error lists the signals that lie on loops.
func (e *NoLoopError) Error() string {
	if len(e.Have) == 0 {
		return fmt.Sprintf("signal %s lies on no loop, and the diagram has none: take TransferFunction", e.Signal)
	}
	return fmt.Sprintf("signal %s lies on no loop: those on loops are %s", e.Signal, shortened(e.Have))
}
