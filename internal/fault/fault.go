// Package fault holds the error values that several packages share, so that
// each has one identity: errors.Is(err, poly.ErrLimit) and
// errors.Is(err, tf.ErrLimit) ask the same question.
package fault

import "errors"

// The sentinels. The public packages export them under the same names.
var (
	// ErrLimit: a documented bound on size or work was reached.
	ErrLimit = errors.New("work limit reached")
	// ErrRange: the result does not fit a float64.
	ErrRange = errors.New("value out of range of a float64")
	// ErrDivisionByZero: a division by the zero number, polynomial or function.
	ErrDivisionByZero = errors.New("division by zero")
	// ErrNotFinite: a NaN or an infinity where a number is needed.
	ErrNotFinite = errors.New("not a finite number")
)
