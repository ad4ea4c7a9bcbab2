// Package lti holds models that are given as equations, as block diagrams, and as
// nonlinear functions that are linearised at an operating point: Equations,
// BlockDiagram and Linearize.
//
// Equations records signals, constants and linear differential equations as
// text; Build checks every term for its dimension and returns a System, from
// which TransferFunction eliminates, exactly, all signals but two:
//
//	tank := lti.NewEquations()
//	tank.Signal("inflow", "L/min")
//	tank.Signal("level", "mm")
//	tank.Constant("area", "1.5 m^2")
//	tank.Constant("outflow", "0.02 m^2/s")
//	tank.Equation("area level' + outflow level = inflow")
//	system, err := tank.Build()
//	plant, err := system.TransferFunction("inflow", "level")
//
// In an equation x' is the derivative of x by time in seconds and integral(x)
// its integral, a space multiplies, a name is a signal or a constant and never a
// unit, and a literal is a pure number. Signals and constants may be in any units: the equation is
// one between physical quantities, so that millimetres beside metres are
// converted exactly. The radian is weightless there, as in the SI. A constant in
// a unit that counts cycles or degrees, such as Hz, is refused, because 2π gets
// lost there; a signal may be in rpm or deg, which count as the radians that they
// are. Initial conditions are zero, unless InitialState is told others; signals
// are deviations from an operating point.
//
// Inputs may be differentiated, and expressions integrated, as in a controller:
//
//	u = kp error + ki integral(error) + kd error'
//
// integral(x) is a quantity whose derivative is x, in the unit of x times
// seconds. An equation with integrals stands for the one that is differentiated
// until none is left, as many times as they are nested; the one above for
//
//	u' = kp error' + ki error + kd error''
//
// That adds the integrator's own mode at 0, one for all integrals side by side
// in an equation, and no other. The name "integral" is reserved.
//
// TransferFunctions does so for several inputs and outputs at once, the
// function Inspect says in words what a transfer function hides (and that a sign is
// missing, where a plant that should settle is unstable), System.Warnings names
// declarations and equations that look like slips, StateSpace brings the equations to first order,
// and InitialState goes on from initial values that are not 0.
package lti

import (
	"errors"
	"fmt"
	"unicode"

	"github.com/qofs/qofs/units"
)

// Bounds on a set of equations.
const (
	maxSignals   = 512
	maxConstants = 4096
	maxEquations = 256
)

// Equations records a model. Its methods only record; Build reports every
// fault at once. It is not safe for concurrent use; the System is.
type Equations struct {
	signals, constants []declaration
	texts              []string
}

type declaration struct{ name, text string }

// NewEquations returns an empty record.
func NewEquations() *Equations { return &Equations{} }

// Signal declares a signal, a quantity that varies in time, and its unit.
func (e *Equations) Signal(name, unit string) {
	e.signals = append(e.signals, declaration{name, unit})
}

// Constant declares a constant with its value, such as "0.0042 m^3/(s*mm)". A
// temperature is a difference here, in K: an absolute one belongs into the
// operating point of Linearize or Equilibrium.
func (e *Equations) Constant(name, quantity string) {
	e.constants = append(e.constants, declaration{name, quantity})
}

// Equation adds an equation, such as
//
//	m x'' + c x' + k x = f
func (e *Equations) Equation(text string) { e.texts = append(e.texts, text) }

// Constant is a named quantity of a System.
type Constant struct {
	Name  string
	Value units.Quantity
}

// Build checks the record and returns the system. The error joins (errors.Join)
// one *DeclarationError or *EquationError for each fault: an unknown unit or
// name, a name declared twice, a syntax fault, terms of different dimensions, a
// constant in hertz or degrees, a term that is not linear. Where there is none
// of them it is a *DeterminacyError if some of the equations hold fewer signals
// than there are of them, so that no choice of inputs helps. It is ErrLimit for
// more than 512 signals, 4096 constants or 256 equations. What is accepted but
// seldom meant is in System.Warnings.
func (e *Equations) Build() (*System, error) {
	if len(e.signals) > maxSignals || len(e.constants) > maxConstants || len(e.texts) > maxEquations {
		return nil, ErrLimit
	}
	s := &System{}
	var faults []error
	declared, faulty := map[string]bool{}, map[string]bool{}
	fault := func(kind string, d declaration, reason string, err error) {
		faulty[d.name] = true
		faults = append(faults, &DeclarationError{kind, d.name, d.text, reason, err})
	}
	check := func(kind string, d declaration) {
		switch {
		case !isIdentifier(d.name):
			fault(kind, d, "the name must be of letters, digits and underscores, and begin with a letter", nil)
		case d.name == integralWord:
			fault(kind, d, "the name stands for the integral by time in equations; take another", nil)
		case declared[d.name]:
			fault(kind, d, "the name is declared already", nil)
		}
		declared[d.name] = true
	}
	for _, d := range e.signals {
		u, err := units.Parse(d.text)
		if err != nil {
			fault("signal", d, err.Error(), err)
		}
		check("signal", d)
		s.signals = append(s.signals, units.Signal{Name: d.name, Unit: u})
	}
	for _, d := range e.constants {
		q, err := units.ParseQuantity(d.text)
		if err != nil {
			fault("constant", d, reasonAgainst(err), err)
		}
		check("constant", d)
		s.constants = append(s.constants, Constant{d.name, q})
	}
	for i, text := range e.texts {
		q, err := parseEquation(text)
		if err != nil {
			faults = append(faults, unread(i+1, text, err))
		}
		s.equations = append(s.equations, q)
	}
	faults = append(faults, s.link(faulty)...)
	if len(faults) > 0 {
		return nil, errors.Join(faults...)
	}
	if err := s.overdetermined(); err != nil {
		return nil, err
	}
	return s, nil
}

// unread makes the fault of an equation that could not be read.
func unread(number int, text string, err error) error {
	e := &EquationError{Number: number, Equation: text, Term: text, Reason: err.Error(), Err: err}
	var syntax *SyntaxError
	if errors.As(err, &syntax) {
		e.Offset = min(syntax.Offset, len(text))
		e.Term = text[e.Offset:]
		if e.Reason = "found " + syntax.Found; syntax.Want != "" {
			e.Reason += ", want " + syntax.Want
		}
	}
	return e
}

// link evaluates the equations and returns the faults. It passes over an
// equation that could not be read or that uses a faulty declaration, which has
// been reported already.
func (s *System) link(faulty map[string]bool) []error {
	s.rows = make([]row, len(s.equations))
	var faults []error
	for i, q := range s.equations {
		if q.left == nil || q.left.uses(faulty) || q.right.uses(faulty) {
			continue
		}
		e := &evaluator{number: i + 1, equation: q, system: s}
		s.rows[i], _ = e.linear()
		faults = append(faults, e.faults...)
		if len(faults) >= maxFaults {
			return append(faults[:maxFaults], fmt.Errorf("more than %d faults: %w", maxFaults-1, ErrLimit))
		}
	}
	return faults
}

// uses reports whether one of the names stands in the tree.
func (n *node) uses(names map[string]bool) bool {
	return n != nil && (n.kind == isName && names[n.name] || n.a.uses(names) || n.b.uses(names))
}

func isIdentifier(name string) bool {
	if len(name) > 256 {
		return false
	}
	for i, r := range name {
		if r != '_' && !unicode.IsLetter(r) && (i == 0 || !unicode.IsDigit(r)) {
			return false
		}
	}
	return name != ""
}
