// Package identify makes transfer functions from recorded tests: from records of
// an input and an output in time, and from measured frequency responses.
//
// A fit is float64 work by nature: it looks for the parameters that come closest
// to noisy numbers. What leaves the package as a transfer function is exact again,
// with the fitted parameters as the binary fractions that they are. Every fit says
// how far its parameters can be trusted, and in words what a person should look at.
//
//	record, err := identify.ReadRecord(file, "heater", "zone")
//	fit, err := identify.FirstOrder(record, identify.Drift())
//	fmt.Println(fit) // parameters with their uncertainty, and warnings
//	plant := fit.Function()
package identify

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/units"
)

// ErrLimit: a documented bound on size or work was reached.
var ErrLimit = fault.ErrLimit

// ErrNotFinite: a value is not a number or infinite.
var ErrNotFinite = fault.ErrNotFinite

// ErrNoTest is the error for a record from which nothing can be learnt: its input
// or its output never moves, or it has too few rows.
var ErrNoTest = errors.New("the record holds no test")

// MaxRows bounds a record.
const MaxRows = 1 << 20

// Record is a recorded test: an input and an output at instants that need not be
// evenly spaced. It is immutable; the zero value is empty. Only changes count in a
// linear model, so that readings of temperature may be in degC.
type Record struct {
	_             [0]func()
	input, output units.Signal
	time, u, y    []float64 // seconds; the units of the signals
	joined        bool      // the input moves along straight lines between the stamps
	lines         []int     // of the file that was read, nil where there was none
	notes         []string  // warnings from reading
}

// NewRecord returns the record with the given instants in seconds, ascending, and
// values in the units of the signals. The errors are ErrNotFinite, *RowError where
// instants run backwards, ErrLimit beyond MaxRows, and ErrNoTest for slices of
// different lengths.
func NewRecord(input, output units.Signal, time, u, y []float64) (Record, error) {
	if len(time) != len(u) || len(time) != len(y) {
		return Record{}, fmt.Errorf("identify: %d instants, %d values of the input, %d of the output: %w", len(time), len(u), len(y), ErrNoTest)
	}
	if len(time) > MaxRows {
		return Record{}, ErrLimit
	}
	for i, t := range time {
		if math.IsNaN(t-t) || math.IsNaN(u[i]-u[i]) || math.IsNaN(y[i]-y[i]) {
			return Record{}, fmt.Errorf("identify: row %d: %w", i+1, ErrNotFinite)
		}
		if i > 0 && t < time[i-1] {
			return Record{}, &RowError{Row: i + 1, Found: fmt.Sprintf("%v s after %v s", t, time[i-1]), Want: "instants that ascend"}
		}
	}
	return Record{input: input, output: output, time: slices.Clone(time), u: slices.Clone(u), y: slices.Clone(y)}, nil
}

// JoinedByLines returns the record with an input that moves along straight lines
// between its instants. Without it the input holds each value until the next
// instant, as the output of a digital controller does.
func (r Record) JoinedByLines() Record {
	r.joined = true
	return r
}

// Between returns the part of the record from one instant to another, in
// seconds, both included.
func (r Record) Between(from, to float64) Record {
	i, _ := slices.BinarySearch(r.time, from)
	j, _ := slices.BinarySearch(r.time, math.Nextafter(to, math.Inf(1)))
	j = max(i, j)
	r.time, r.u, r.y = r.time[i:j:j], r.u[i:j:j], r.y[i:j:j]
	if r.lines != nil {
		r.lines = r.lines[i:j:j]
	}
	return r
}

// line is what a person calls the row i: the line of the file that was read, or
// the row counted from 1.
func (r Record) line(i int) int {
	if r.lines == nil {
		return i + 1
	}
	return r.lines[i]
}

// Len is the number of rows.
func (r Record) Len() int { return len(r.time) }

// Row returns the instant in seconds and the values of input and output in a row,
// counted from 0.
func (r Record) Row(i int) (time, input, output float64) { return r.time[i], r.u[i], r.y[i] }

// Input is the signal that was moved.
func (r Record) Input() units.Signal { return r.input }

// Output is the signal that answered.
func (r Record) Output() units.Signal { return r.output }

// duration is the time from the first to the last row.
func (r Record) duration() float64 { return r.time[len(r.time)-1] - r.time[0] }

// interval is the median of the steps between the instants.
func (r Record) interval() float64 {
	steps := make([]float64, len(r.time)-1)
	for i := range steps {
		steps[i] = r.time[i+1] - r.time[i]
	}
	return median(steps)
}

func median(v []float64) float64 {
	v = slices.Sorted(slices.Values(v))
	if len(v) == 0 {
		return 0
	}
	return v[len(v)/2]
}

// check refuses a record from which nothing can be learnt.
func (r Record) check(parameters int) error {
	switch {
	case len(r.time) < parameters+2:
		return fmt.Errorf("identify: %d rows for %d parameters: %w", len(r.time), parameters, ErrNoTest)
	case !(r.duration() > 0):
		return fmt.Errorf("identify: all rows at the same instant: %w", ErrNoTest)
	case slices.Min(r.u) == slices.Max(r.u):
		return fmt.Errorf("identify: %s never moves: %w", named(r.input, "the input"), ErrNoTest)
	case slices.Min(r.y) == slices.Max(r.y):
		return fmt.Errorf("identify: %s never moves: %w", named(r.output, "the output"), ErrNoTest)
	}
	return nil
}

func named(s units.Signal, otherwise string) string {
	if s.Name == "" {
		return otherwise
	}
	return s.Name
}

// RowError tells what is wrong in a row of a table.
type RowError struct {
	Row    int    // from 1; the line of the file where there is one
	Column string // the name of the column, or empty
	Found  string
	Want   string
	Err    error // the error behind it, or nil
}

// Error names the row, the column, what was found and what was expected.
func (e *RowError) Error() string {
	at := fmt.Sprintf("row %d", e.Row)
	if e.Column != "" {
		at += fmt.Sprintf(", column %q", e.Column)
	}
	return fmt.Sprintf("%s: found %s, want %s", at, e.Found, e.Want)
}

// Unwrap returns the error behind the fault.
func (e *RowError) Unwrap() error { return e.Err }
