package tf

import (
	"errors"
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/units"
)

// ErrAlgebraicLoop is the error of a feedback loop in which 1 + g·h is
// identically 0, so that no signal in it is determined.
var ErrAlgebraicLoop = errors.New("algebraic loop: 1 plus the loop gain is identically 0, so that the loop determines no signal")

// JunctionError tells that two blocks of a composition do not connect, because
// their signals differ in unit or in name. An empty name fits any; a radian
// is a unit like any other.
type JunctionError struct {
	// Operation is the composition: "Series", "Parallel", "Feedback", ….
	Operation string
	// Index is the place of the second block among the arguments; the first
	// argument has index 0.
	Index int
	// Earlier and Later are the two signals that do not fit: of an argument
	// before Index, and of the argument at Index.
	Earlier, Later units.Signal
	// EarlierEnd and LaterEnd name them in words, such as "output of block 0".
	EarlierEnd, LaterEnd string
}

// Error names both sides and what mends the junction.
func (e *JunctionError) Error() string {
	s := fmt.Sprintf("%s: the %s [%v] does not fit the %s [%v]", e.Operation,
		e.LaterEnd, e.Later, e.EarlierEnd, e.Earlier)
	if !e.Later.Unit.Equal(e.Earlier.Unit) {
		return s + ": " + unitAdvice(e.Later.Unit, e.Earlier.Unit)
	}
	return s + fmt.Sprintf(": the names differ; rename one of the signals with WithSignals if both are the same quantity, %q", e.Earlier.Name)
}

// DeadTimeError tells that a composition would need a dead time inside a sum
// or a loop, where no rational function with one dead time can hold it.
type DeadTimeError struct {
	Operation string
	Index     int // the argument at which the fault was seen
	// Earlier and Later are the dead times in seconds of the arguments before
	// Index (the first of them) and at Index.
	Earlier, Later *big.Rat
}

// Error says what serves instead.
func (e *DeadTimeError) Error() string {
	const serves = "; replace each dead time by PadeApproximant, or analyse the open loop as a frequency response, which is exact with dead time, or discretise and close the sampled loop"
	switch e.Operation {
	case "Parallel":
		return fmt.Sprintf("Parallel: block %d has a dead time of %s s and block 0 one of %s s; a sum of different dead times is no rational function"+serves,
			e.Index, decimal.Text(e.Later), decimal.Text(e.Earlier))
	case "Inverse":
		return fmt.Sprintf("Inverse: a block with a dead time of %s s has no inverse, which would foresee its input; take WithoutDeadTime first to invert the rest", decimal.Text(e.Later))
	}
	if e.Operation == "AtRat" {
		return fmt.Sprintf("AtRat: with a dead time of %s s the value is irrational; At rounds it, WithoutDeadTime gives the rational part", decimal.Text(e.Later))
	}
	return fmt.Sprintf("%s: a dead time inside a loop (forward %s s, back %s s) leaves the rational functions"+serves,
		e.Operation, decimal.Text(e.Earlier), decimal.Text(e.Later))
}

// ErrPeriod is the error for a sampling period that is not above 0.
var ErrPeriod = errors.New("a sampling period must be above 0")

// PeriodError tells that two blocks of a composition have different sampling
// periods.
type PeriodError struct {
	Operation      string
	Index          int      // the argument at which the fault was seen
	Earlier, Later *big.Rat // periods in seconds of the first argument and of the one at Index
}

// Error names the periods.
func (e *PeriodError) Error() string {
	return fmt.Sprintf("%s: block %d is sampled every %s s and block 0 every %s s; resample one of them so that the periods agree",
		e.Operation, e.Index, decimal.Text(e.Later), decimal.Text(e.Earlier))
}

// fits reports whether two signals connect.
func fits(a, b *units.Signal) bool { return a.Connects(*b) }

// merge returns a with the name of b where it has none of its own.
func merge(a, b units.Signal) units.Signal {
	if a.Name == "" {
		a.Name = b.Name
	}
	return a
}

// sameTime reports whether two times are equal; nil stands for a default.
func sameTime(a, b *big.Rat) bool {
	if a == nil || b == nil {
		return a == b
	}
	return a == b || a.Cmp(b) == 0
}

// checkPeriod demands equal sampling periods.
func checkPeriod(operation string, index int, a, b *core) error {
	if sameTime(a.period, b.period) {
		return nil
	}
	return &PeriodError{Operation: operation, Index: index, Earlier: a.periodSeconds(), Later: b.periodSeconds()}
}

// periodSeconds is a copy of the period.
func (c *core) periodSeconds() *big.Rat {
	if c.period == nil {
		return big.NewRat(1, 1)
	}
	return new(big.Rat).Set(c.period)
}

// delaySeconds is a copy of the dead time.
func (c *core) delaySeconds() *big.Rat {
	if c.delay == nil {
		return new(big.Rat)
	}
	return new(big.Rat).Set(c.delay)
}

// setPeriod sets the period and keeps 1 s as nil, so that equal periods are
// equal in memory too.
func (c *core) setPeriod(t *big.Rat) {
	c.period = nil
	if t.Cmp(big.NewRat(1, 1)) != 0 {
		c.period = t
	}
}

// setDelay sets the dead time and keeps 0 as nil.
func (c *core) setDelay(t *big.Rat) {
	c.delay = nil
	if t.Sign() != 0 {
		c.delay = t
	}
}
