package lti

import (
	"errors"
	"fmt"
	"strings"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/lti/statespace"
	"github.com/qofs/qofs/units"
)

// ErrLimit: a documented bound on size or work was reached.
var ErrLimit = fault.ErrLimit

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// EquationError tells what is wrong in an equation.
type EquationError struct {
	Number   int    // of the equation in the order of entry, from 1
	Equation string // as entered
	Term     string // the part that is wrong, as entered
	Offset   int    // byte offset of the term in the equation
	Reason   string // what is wrong, and what to do
	Err      error  // the error behind it, or nil
}

// Error names the equation, the term and the reason.
func (e *EquationError) Error() string {
	return fmt.Sprintf("equation %d, %q, at %q (offset %d): %s", e.Number, lex.Excerpt(e.Equation, e.Offset), lex.Excerpt(e.Term, 0), e.Offset, e.Reason)
}

// Unwrap returns the error behind the fault.
func (e *EquationError) Unwrap() error { return e.Err }

// DeclarationError tells what is wrong in the declaration of a signal or a
// constant.
type DeclarationError struct {
	Kind   string // "signal" or "constant"
	Name   string
	Text   string // the unit or quantity as entered
	Reason string
	Err    error // the error behind it, or nil
}

// Error names the declaration and the reason.
func (e *DeclarationError) Error() string {
	return fmt.Sprintf("%s %s = %q: %s", e.Kind, lex.Excerpt(e.Name, 0), lex.Excerpt(e.Text, 0), e.Reason)
}

// Unwrap returns the error behind the fault.
func (e *DeclarationError) Unwrap() error { return e.Err }

// UnknownNameError tells that no signal, constant or block has a name.
type UnknownNameError struct {
	Kind string   // "signal", "constant" or "block"
	Name string   // what was asked for
	Have []string // what there is
}

// Error lists the names that exist.
func (e *UnknownNameError) Error() string {
	have := e.Have
	more := ""
	if len(have) > 12 {
		have, more = have[:12], ", …"
	}
	return fmt.Sprintf("no %s %q: there are %s%s", e.Kind, lex.Excerpt(e.Name, 0), strings.Join(have, ", "), more)
}

// DeterminacyError tells that a set of equations does not determine the signal
// that was asked for: it is singular, or has too many or too few equations. Build
// returns it where that is so for every choice of signals.
type DeterminacyError struct {
	Equations int      // how many there are
	Unknowns  []string // the signals that are neither the input nor held at 0; from Build, those in the equations Dependent
	Open      []string // those that are not determined, where that can be told
	Dependent []int    // numbers of the equations, from 1, that repeat or contradict each other, where that can be told
	Reason    string
}

// Error says what is too many, too few or open, and what to do.
func (e *DeterminacyError) Error() string { return e.Reason }

// reasonAgainst says why a quantity was refused. For a bare temperature it says
// what a linear model holds.
func reasonAgainst(err error) string {
	var bare *units.TemperatureError
	if !errors.As(err, &bare) {
		return err.Error()
	}
	return fmt.Sprintf("signals and constants of a linear model are deviations from an operating point: write a difference of %s as %q; "+
		"an absolute temperature is read by units.ParseAbsolute and belongs into the operating point (Linearize, Equilibrium)",
		lex.Excerpt(bare.Text, 0), lex.Excerpt(bare.Difference.String(), 0))
}

// InitialValueError tells what is wrong with an initial value, or which are
// missing.
type InitialValueError struct {
	Signal   string   // as it was given; empty where values are missing
	Quantity string   // as it was given
	Missing  []string // signals and derivatives whose values would suffice
	Reason   string
	Err      error // the error behind it, or nil
}

// Error names the value and the reason.
func (e *InitialValueError) Error() string {
	if e.Signal == "" {
		return "initial values: " + e.Reason
	}
	return fmt.Sprintf("initial value %s = %s: %s", lex.Excerpt(e.Signal, 0), lex.Excerpt(e.Quantity, 0), e.Reason)
}

// Unwrap returns the error behind the fault.
func (e *InitialValueError) Unwrap() error { return e.Err }

// ImproperError tells that a signal follows a derivative of an input, so that
// the equations have no state-space form with it.
type ImproperError struct {
	Signal, Input string
	Order         int // of the derivative
}

// Error names both and says what mends it.
func (e *ImproperError) Error() string {
	return fmt.Sprintf("%s follows a derivative of order %d of %s, which no state-space form does; "+
		"leave it out of the outputs, take the derivative for the input, or add the lag that the machine has", e.Signal, e.Order, e.Input)
}

// Unwrap returns statespace.ErrImproper.
func (e *ImproperError) Unwrap() error { return statespace.ErrImproper }
