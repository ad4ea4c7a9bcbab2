// Package algebraic finds the complex roots of integer polynomials and proves
// them: exact multiplicities, isolating discs, enclosures of any precision and
// correctly rounded float64 values.
package algebraic
