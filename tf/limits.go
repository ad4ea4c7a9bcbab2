package tf

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// NoLimitError tells why the initial- or final-value theorem does not apply.
type NoLimitError struct {
	Theorem string // "InitialValue" or "FinalValue"
	Reason  string // the condition that fails, in words
	Poles   int    // the poles that break it, counted with multiplicity; 0 where none does
}

// Error gives the condition that fails.
func (e *NoLimitError) Error() string { return e.Theorem + ": " + e.Reason }

// InitialValue returns f(0+) for the time function f(t) whose Laplace transform
// is g, the impulse response, by the initial-value theorem: the limit of s·g(s)
// for s → ∞. Its unit is that of the output over the input and a second; for
// the step response take Series with 1/s. With a dead time it is 0.
//
// The theorem asks that g be strictly proper, else f holds an impulse at 0: the
// error is then a *NoLimitError. (A dead time moves the impulse away from 0.)
//
// Source: the theorem is common practice, e.g. Doetsch, Introduction to the
// Theory and Application of the Laplace Transformation, 1974.
func (g Continuous) InitialValue() (units.Quantity, error) {
	unit := g.c.gainUnit().Div(second)
	if g.c.delay != nil {
		return units.NewQuantity(nil, unit), nil
	}
	if !g.c.f.IsZero() && relativeDegree(g.c.f) < 1 {
		return units.Quantity{}, &NoLimitError{Theorem: "InitialValue",
			Reason: "the function is not strictly proper, so that its time function has an impulse at t = 0"}
	}
	return units.NewQuantity(leadingRatio(g.c.f, 1), unit), nil
}

// InitialValue returns f_0 for the sequence f whose z-transform is g, the
// response to a single sample of 1: the limit of g(z) for z → ∞. The error is a
// *NoLimitError for an improper g, whose sequence begins before 0.
func (g Discrete) InitialValue() (units.Quantity, error) {
	if !g.c.f.IsZero() && relativeDegree(g.c.f) < 0 {
		return units.Quantity{}, &NoLimitError{Theorem: "InitialValue",
			Reason: "the function is improper, so that its sequence begins before k = 0"}
	}
	return units.NewQuantity(leadingRatio(g.c.f, 0), g.c.gainUnit()), nil
}

// leadingRatio is the limit of x^k·f(x) for x → ∞ where that is finite.
func leadingRatio(f ratfun.Func, k int) *big.Rat {
	if f.IsZero() || relativeDegree(f) > k {
		return new(big.Rat)
	}
	return new(big.Rat).SetFrac(f.Num().Leading(), f.Den().Leading())
}

// FinalValue returns the limit for t → ∞ of the time function f(t) whose
// Laplace transform is g, the impulse response, by the final-value theorem: the
// limit of s·g(s) for s → 0. Its unit is that of the output over the input and
// a second; for the step response take Series with 1/s. A dead time does not
// matter.
//
// The theorem asks that all poles of s·g(s) in lowest terms lie in the open left
// half-plane; that is decided exactly. The error is a *NoLimitError with the
// number of poles that do not, or that of poly.Poly.HalfPlane beyond its bounds.
func (g Continuous) FinalValue() (units.Quantity, error) {
	f, err := timesLinear(g.c.f, 0)
	if err != nil {
		return units.Quantity{}, err
	}
	counts, err := asPoly(f.Den()).HalfPlane()
	if err != nil {
		return units.Quantity{}, err
	}
	if err := settles(counts, "of s g(s) on the imaginary axis", "of s g(s) in the right half-plane"); err != nil {
		return units.Quantity{}, err
	}
	v, err := ratAt(f, nil, "FinalValue", "s")
	if err != nil {
		return units.Quantity{}, err
	}
	return units.NewQuantity(v, g.c.gainUnit().Div(second)), nil
}

// FinalValue returns the limit for k → ∞ of the sequence f_k whose z-transform
// is g, the response to a single sample of 1: the limit of (z − 1)·g(z) for
// z → 1. The theorem asks that all poles of (z − 1)·g(z) in lowest terms lie
// within the unit circle; errors as for Continuous.
func (g Discrete) FinalValue() (units.Quantity, error) {
	f, err := timesLinear(g.c.f, 1)
	if err != nil {
		return units.Quantity{}, err
	}
	counts, err := asPoly(f.Den()).UnitCircle()
	if err != nil {
		return units.Quantity{}, err
	}
	if err := settles(counts, "of (z - 1) g(z) on the unit circle", "of (z - 1) g(z) outside of the unit circle"); err != nil {
		return units.Quantity{}, err
	}
	v, err := ratAt(f, big.NewRat(1, 1), "FinalValue", "z")
	if err != nil {
		return units.Quantity{}, err
	}
	return units.NewQuantity(v, g.c.gainUnit()), nil
}

// timesLinear is (x − a)·f in lowest terms.
func timesLinear(f ratfun.Func, a int64) (ratfun.Func, error) {
	linear, _ := ratfun.New(intpoly.FromInt64s(-a, 1), intpoly.FromInt64s(1))
	return reduced(f.Mul(linear), "FinalValue")
}

// settles turns counts of poles that do not decay into the error.
func settles(counts poly.Counts, on, outside string) error {
	var reason string
	switch {
	case counts.Outside > 0 && counts.On > 0:
		reason = fmt.Sprintf("%s and %s", poles(counts.Outside, outside), poles(counts.On, on))
	case counts.Outside > 0:
		reason = poles(counts.Outside, outside)
	case counts.On > 0:
		reason = poles(counts.On, on)
	default:
		return nil
	}
	return &NoLimitError{Theorem: "FinalValue", Poles: counts.On + counts.Outside,
		Reason: reason + ", so that the time function does not settle"}
}

func poles(n int, where string) string {
	if n == 1 {
		return "1 pole " + where
	}
	return fmt.Sprintf("%d poles %s", n, where)
}
