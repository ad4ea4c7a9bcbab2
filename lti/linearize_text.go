package lti

import (
	"strings"

	"github.com/qofs/qofs/internal/lex"
)

// String is "level = 1.4 m", or "level near 1.4 m" for a value that is sought.
func (v OperatingValue) String() string {
	if v.Sought {
		return v.Signal + " near " + v.Quantity
	}
	return v.Signal + " = " + v.Quantity
}

// MarshalText is String, for encoding.TextMarshaler.
func (v OperatingValue) MarshalText() ([]byte, error) { return []byte(v.String()), nil }

// UnmarshalText reads what String writes. What stands on the two sides is read by
// Linearize and Equilibrium. The error is a *SyntaxError.
func (v *OperatingValue) UnmarshalText(text []byte) error {
	if len(text) <= lex.MaxLength {
		if signal, quantity, found := strings.Cut(string(text), "="); found {
			*v = At(strings.TrimSpace(signal), strings.TrimSpace(quantity))
			return nil
		}
		if signal, quantity, found := strings.Cut(string(text), " near "); found {
			*v = Near(strings.TrimSpace(signal), strings.TrimSpace(quantity))
			return nil
		}
	}
	return lex.Fault(string(text), 0, "no operating value", "a signal, = or near, and a quantity, such as level = 1.4 m", nil)
}
