package statespace

import (
	"errors"
	"fmt"
	"strings"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/units"
)

// ErrPeriod is the error for a sampling period that is not above 0.
var ErrPeriod = errors.New("a sampling period must be above 0")

// ErrImproper is the error for a transfer function whose numerator has a higher
// degree than its denominator: no matrices give it.
var ErrImproper = errors.New("an improper transfer function has no state-space form; add the lag that the machine has")

// ErrDeadTime is the error for a transfer function with dead time: no finite
// number of states gives it.
var ErrDeadTime = errors.New("a dead time has no state-space form; PadeApproximant replaces it")

// SizeError tells that a matrix has other rows or columns than the signals ask
// for.
type SizeError struct {
	Matrix                               string // such as "input matrix"
	Rows, Columns, WantRows, WantColumns int
}

// Error names the matrix and both sizes.
func (e *SizeError) Error() string {
	return fmt.Sprintf("%s of %d by %d: the signals ask for %s and %s", e.Matrix, e.Rows, e.Columns, count(e.WantRows, "row"), count(e.WantColumns, "column"))
}

// count writes a number of things.
func count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// EntryError tells what is wrong with an entry of a matrix.
type EntryError struct {
	Matrix      string // such as "input matrix"
	Row, Column int    // from 1
	// The names of the signals that row and column belong to; empty where the
	// matrix is larger than the lists of signals, and in Floats, which has none.
	RowSignal, ColumnSignal string
	// Err tells what was found and expected: a *SyntaxError, or an error that wraps
	// ErrLimit, ErrNotFinite or ErrRange.
	Err error
}

// Error names the place and what is wrong there.
func (e *EntryError) Error() string {
	return fmt.Sprintf("%s, row %s, column %s: %v", e.Matrix, place(e.Row, e.RowSignal), place(e.Column, e.ColumnSignal), e.Err)
}

// Unwrap returns Err.
func (e *EntryError) Unwrap() error { return e.Err }

func place(index int, signal string) string {
	if signal == "" {
		return fmt.Sprint(index)
	}
	return fmt.Sprintf("%d (%s)", index, lex.Excerpt(signal, 0))
}

// SignalError tells what is wrong with a signal.
type SignalError struct {
	Kind   string // "state", "input" or "output"
	Signal units.Signal
	Reason string
	Err    error // the error behind it, or nil
}

// Error names the signal and the reason.
func (e *SignalError) Error() string {
	return fmt.Sprintf("%s %q: %s", e.Kind, lex.Excerpt(e.Signal.String(), 0), e.Reason)
}

// Unwrap returns the error behind the fault.
func (e *SignalError) Unwrap() error { return e.Err }

// UnknownSignalError tells that no signal of a kind has a name.
type UnknownSignalError struct {
	Kind string   // "input" or "output"
	Name string   // what was asked for
	Have []string // the names that there are, each once
}

// Error lists the names that exist.
func (e *UnknownSignalError) Error() string {
	if len(e.Have) == 0 {
		return fmt.Sprintf("no %s %q: the model has none", e.Kind, lex.Excerpt(e.Name, 0))
	}
	have, more := e.Have, ""
	if len(have) > 12 {
		have, more = have[:12], ", …"
	}
	return fmt.Sprintf("no %s %q: there are %s%s", e.Kind, lex.Excerpt(e.Name, 0), strings.Join(have, ", "), more)
}
