package lti

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"github.com/qofs/qofs/units"
)

// System is a checked set of linear differential equations. It is immutable and
// safe to share.
type System struct {
	signals   []units.Signal
	constants []Constant
	equations []equation
	rows      []row
}

// Signals returns the signals in the order of declaration.
func (s *System) Signals() []units.Signal { return slices.Clone(s.signals) }

// Constants returns the constants in the order of declaration.
func (s *System) Constants() []Constant { return slices.Clone(s.constants) }

// Equations returns the equations as they were entered.
func (s *System) Equations() []string {
	out := make([]string, len(s.equations))
	for i, q := range s.equations {
		out[i] = q.text
	}
	return out
}

func (s *System) signalIndex(name string) (int, bool) {
	i := slices.IndexFunc(s.signals, func(x units.Signal) bool { return x.Name == name })
	return i, i >= 0
}

func (s *System) constantIndex(name string) (int, bool) {
	i := slices.IndexFunc(s.constants, func(x Constant) bool { return x.Name == name })
	return i, i >= 0
}

// WithConstant returns the system with another value for a constant, such as
// "310 N/m". The errors are *UnknownNameError, *DeclarationError for the text,
// and those of Build where the new unit does not fit the equations.
func (s *System) WithConstant(name, quantity string) (*System, error) {
	i, ok := s.constantIndex(name)
	if !ok {
		e := &UnknownNameError{Kind: "constant", Name: name}
		for _, c := range s.constants {
			e.Have = append(e.Have, c.Name)
		}
		return nil, e
	}
	q, err := units.ParseQuantity(quantity)
	if err != nil {
		return nil, &DeclarationError{"constant", name, quantity, reasonAgainst(err), err}
	}
	t := &System{signals: s.signals, constants: slices.Clone(s.constants), equations: s.equations}
	t.constants[i].Value = q
	if faults := t.link(nil); len(faults) > 0 {
		return nil, errors.Join(faults...)
	}
	return t, nil
}

// String lists signals, constants and equations, a line each.
func (s *System) String() string {
	var b strings.Builder
	for _, x := range s.signals {
		fmt.Fprintf(&b, "signal %s\n", x)
	}
	for _, c := range s.constants {
		fmt.Fprintf(&b, "constant %s = %s\n", c.Name, c.Value)
	}
	for _, q := range s.equations {
		fmt.Fprintf(&b, "equation %s\n", q.text)
	}
	return strings.TrimSuffix(b.String(), "\n")
}
