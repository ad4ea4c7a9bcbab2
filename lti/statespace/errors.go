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
	return fmt.Sprintf("%s of %d by %d: the signals ask for %d rows and %d columns", e.Matrix, e.Rows, e.Columns, e.WantRows, e.WantColumns)
}

// SignalError tells what is wrong with a signal.
type SignalError struct {
	Kind   string // "state", "input" or "output"
	Signal units.Signal
	Reason string
}

// Error names the signal and the reason.
func (e *SignalError) Error() string {
	return fmt.Sprintf("%s %q: %s", e.Kind, lex.Excerpt(e.Signal.String(), 0), e.Reason)
}

// UnknownSignalError tells that no signal of a kind has a name.
type UnknownSignalError struct {
	Kind string // "input" or "output"
	Name string // what was asked for
	Have []string
}

// Error lists the names that exist.
func (e *UnknownSignalError) Error() string {
	have, more := e.Have, ""
	if len(have) > 12 {
		have, more = have[:12], ", …"
	}
	return fmt.Sprintf("no %s %q: there are %s%s", e.Kind, lex.Excerpt(e.Name, 0), strings.Join(have, ", "), more)
}
