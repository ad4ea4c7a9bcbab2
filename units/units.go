// Package units holds units of measurement, quantities and signals, exactly.
//
// A Unit is a dimension and an exact rational scale, spelled as it was read. A
// Quantity is an exact number with a unit, a Signal a name with a unit.
//
// Radians are tracked: rad/s and 1/s are different units. Hz, rpm, rev, deg
// count cycles or parts of one, so that 1 Hz is 2π rad/s and never 1/s. In
// these conversions, and only there, π is a rational number within 1.42e-38 of
// the true one (see Pi): conversions compose and cancel exactly, and a float64
// does not see the difference. count, LSB and % have dimensions of their own
// and never vanish silently. degC and K are one unit, that of temperature
// differences; the temperature itself is read by ParseAbsolute.
package units

import (
	"fmt"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/lex"
)

// The errors of this package that are plain values.
var (
	ErrLimit          = fault.ErrLimit          // a documented bound was reached
	ErrRange          = fault.ErrRange          // a value does not fit a float64
	ErrDivisionByZero = fault.ErrDivisionByZero // a division by 0
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// TemperatureError tells that a text such as "60 degC" may mean a temperature
// itself, which ParseAbsolute reads, or a difference of temperatures.
type TemperatureError struct {
	Text       string
	Difference Quantity // what the text is as a difference, in K
}

// Error says what to write for a difference.
func (e *TemperatureError) Error() string {
	return fmt.Sprintf("as a difference %q is %v", lex.Excerpt(e.Text, 0), e.Difference)
}

// MismatchError tells that a quantity in one unit stands where another unit is
// needed.
type MismatchError struct {
	Found, Want Unit
	What        string // what the unit belongs to, or empty
}

// Error names both units, and the conversion or the dimensions that explain
// the difference.
func (e *MismatchError) Error() string {
	s := fmt.Sprintf("unit %s found where %s is needed", e.Found, e.Want)
	if e.What != "" {
		s = e.What + ": " + s
	}
	f, w := e.Found.Dimension(), e.Want.Dimension()
	dimensions := fmt.Sprintf(" (%s against %s)", f, w)
	if f.String() == e.Found.String() && w.String() == e.Want.String() {
		dimensions = ""
	}
	switch {
	case f == w:
		k, _ := e.Found.ConversionTo(e.Want)
		return s + fmt.Sprintf(": the dimension agrees, convert by the factor %s", shortRat(k))
	case f.WithoutAngle() == w.WithoutAngle():
		return s + ": they differ by radians" + dimensions
	}
	return s + ": the dimensions differ" + dimensions
}
