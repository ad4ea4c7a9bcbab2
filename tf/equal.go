package tf

import (
	"fmt"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
)

// equal: same quotient, signals, dead time and period.
func (c *core) equal(d *core) bool {
	return c.f.Equal(d.f) && c.input.Name == d.input.Name && c.output.Name == d.output.Name &&
		c.sameUnits(d) && sameTime(c.delay, d.delay) && sameTime(c.period, d.period)
}

func (c *core) sameUnits(d *core) bool {
	return c.input.Unit.Equal(d.input.Unit) && c.output.Unit.Equal(d.output.Unit)
}

// equivalent: same function between the same units.
func (c *core) equivalent(d *core) bool {
	return c.sameUnits(d) && sameTime(c.period, d.period) && c.f.Equivalent(d.f) &&
		(c.f.IsZero() || sameTime(c.delay, d.delay))
}

// Equal reports whether g and h have
//   - the same numerator and denominator up to a common constant, common
//     factors included,
//   - the same units (their spelling does not matter) and signal names, and
//   - the same dead time.
func (g Continuous) Equal(h Continuous) bool { return g.c.equal(&h.c) }

// Equivalent reports whether g and h are the same function: between the same
// units, with the same value at every s, so that common factors of numerator
// and denominator do not matter, nor do the names of signals.
func (g Continuous) Equivalent(h Continuous) bool { return g.c.equivalent(&h.c) }

// Equal reports whether g and h have
//   - the same numerator and denominator up to a common constant, common
//     factors included,
//   - the same units (their spelling does not matter) and signal names, and
//   - the same sampling period.
func (g Discrete) Equal(h Discrete) bool { return g.c.equal(&h.c) }

// Equivalent reports whether g and h are the same function: between the same
// units, at the same sampling period, with the same value at every z, so that
// common factors of numerator and denominator do not matter, nor do the names
// of signals.
func (g Discrete) Equivalent(h Discrete) bool { return g.c.equivalent(&h.c) }

// LowestTerms returns g without the polynomial factor that numerator and
// denominator share, and that factor, with integer coefficients and a positive
// leading one; it is 1 where there is none. Roots of the factor are modes that
// g hides: look whether one of them is unstable. Where the greatest common divisor
// would take more than 2^34 multiplications of words (see poly.Poly.GCD), g comes
// back as it is, and the Err of the factor is ErrLimit.
func (g Continuous) LowestTerms() (reduced Continuous, cancelled poly.Poly) {
	f, cancelled := lowestTerms(g.c.f)
	g.c.f = f
	return g, cancelled
}

// LowestTerms returns g without the polynomial factor that numerator and
// denominator share, and that factor, with integer coefficients and a positive
// leading one; it is 1 where there is none. Roots of the factor are modes that
// g hides: look whether one of them is unstable. Where the greatest common divisor
// would take more than 2^34 multiplications of words (see poly.Poly.GCD), g comes
// back as it is, and the Err of the factor is ErrLimit.
func (g Discrete) LowestTerms() (reduced Discrete, cancelled poly.Poly) {
	f, cancelled := lowestTerms(g.c.f)
	g.c.f = f
	return g, cancelled
}

func lowestTerms(f ratfun.Func) (ratfun.Func, poly.Poly) {
	reduced, factor, ok := f.LowestTerms()
	if !ok {
		return f, poly.Poly(ratpoly.TooLong)
	}
	return reduced, asPoly(factor)
}

// reduced is LowestTerms with an error that names the operation.
func reduced(f ratfun.Func, operation string) (ratfun.Func, error) {
	f, _, ok := f.LowestTerms()
	if !ok {
		return f, fmt.Errorf("tf: %s: a greatest common divisor: %w", operation, fault.ErrLimit)
	}
	return f, nil
}

// Poles returns the roots of the denominator with their multiplicities, before
// any cancellation; see poly.Poly.Roots for accuracy, order and errors. A dead
// time adds none.
func (g Continuous) Poles() ([]poly.Root, error) { return g.Denominator().Roots() }

// Zeros returns the roots of the numerator with their multiplicities, before
// any cancellation. The error for g = 0 is poly.ErrZeroPolynomial.
func (g Continuous) Zeros() ([]poly.Root, error) { return g.Numerator().Roots() }

// Poles returns the roots of the denominator with their multiplicities, before
// any cancellation; see poly.Poly.Roots for accuracy, order and errors.
func (g Discrete) Poles() ([]poly.Root, error) { return g.Denominator().Roots() }

// Zeros returns the roots of the numerator with their multiplicities, before
// any cancellation. The error for g = 0 is poly.ErrZeroPolynomial.
func (g Discrete) Zeros() ([]poly.Root, error) { return g.Numerator().Roots() }

// relativeDegree is the degree of the denominator less that of the numerator.
func relativeDegree(f ratfun.Func) int { return f.Den().Degree() - f.Num().Degree() }

// RelativeDegree is the degree of the denominator less that of the numerator:
// how fast g falls at high frequencies. It is negative for an improper
// function. For g = 0 it is the degree of the denominator plus one.
func (g Continuous) RelativeDegree() int { return relativeDegree(g.c.f) }

// RelativeDegree is the degree of the denominator less that of the numerator:
// the number of samples until the output answers. It is negative for an
// improper function, which would foresee its input. For g = 0 it is the degree
// of the denominator plus one.
func (g Discrete) RelativeDegree() int { return relativeDegree(g.c.f) }

// IsProper reports whether the numerator's degree does not exceed the
// denominator's.
func (g Continuous) IsProper() bool { return relativeDegree(g.c.f) >= 0 }

// IsProper reports whether the numerator's degree does not exceed the
// denominator's, so that no output comes before its input.
func (g Discrete) IsProper() bool { return relativeDegree(g.c.f) >= 0 }
