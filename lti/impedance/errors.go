package impedance

import (
	"fmt"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/units"
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// ValueError tells that the value of an element is not above 0.
type ValueError struct {
	Element string // such as "a resistor"
	Value   units.Quantity
}

// Error names the element and its value.
func (e *ValueError) Error() string {
	return fmt.Sprintf("impedance: %s of %s: want a value above 0", e.Element, lex.Excerpt(e.Value.String(), 0))
}

// UnknownElementError tells that the unit of a quantity is that of no element.
type UnknownElementError struct {
	Found units.Unit
}

// Error lists the units that are, or names the one of which Found is the
// reciprocal.
func (e *UnknownElementError) Error() string {
	for _, k := range kinds {
		if k.unit.Dimension().Mul(e.Found.Dimension()).IsZero() {
			return fmt.Sprintf("impedance: %s is the reciprocal of the unit of %s: want its value in %s, 1 over this one",
				e.Found, k.name, k.unit)
		}
	}
	s := fmt.Sprintf("impedance: %s is the unit of no element: want", e.Found)
	for i, k := range kinds {
		if i > 0 {
			s += ","
		}
		s += fmt.Sprintf(" %s for %s", k.unit, k.name)
	}
	return s
}

// DomainError tells that one-ports of two domains stand in one network.
type DomainError struct {
	Operation string // "Series", "Parallel", "Divider", …
	Index     int    // the place among the arguments
	Found     Domain // of the argument there
	Want      Domain // of those before it, or of the operation
}

// Error names the place and both domains.
func (e *DomainError) Error() string {
	return fmt.Sprintf("impedance: %s: argument %d is %s (%s), want %s (%s)", e.Operation, e.Index,
		e.Found, domainUnits(e.Found), e.Want, domainUnits(e.Want))
}

func domainUnits(d Domain) string {
	return "across in " + d.Across().String() + ", through in " + d.Through().String()
}

// GroundError tells that a one-port with one terminal at the ground stands
// where none of its terminals can be: a mass or a heat capacity in a series
// arm, or two of them in series.
type GroundError struct {
	Operation string
	Index     int     // the place among the arguments
	Found     OnePort // what stands there
}

// Error says where such an element can stand.
func (e *GroundError) Error() string {
	s := fmt.Sprintf("impedance: %s: argument %d, %s, has an end at the ground, ", e.Operation, e.Index, lex.Excerpt(e.Found.String(), 0))
	if e.Found.Domain() == Thermal {
		s = fmt.Sprintf("impedance: %s: argument %d, %s, has an end at the reference temperature, ", e.Operation, e.Index, lex.Excerpt(e.Found.String(), 0))
	}
	if e.Operation == "Series" {
		return s + "as one before it has; want one such element at most in series"
	}
	return s + "so that nothing passes through it to the next; want it as the shunt element"
}

// EmptyError tells that a network has no elements.
type EmptyError struct {
	Operation string
}

// Error names the operation.
func (e *EmptyError) Error() string {
	return fmt.Sprintf("impedance: %s: no elements found, want one at least", e.Operation)
}
