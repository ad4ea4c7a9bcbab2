package tf

import (
	"errors"
	"fmt"
	"math/big"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/units"
)

// maxNameLength bounds the name of a signal in bytes.
const maxNameLength = 256

// Gain returns the constant block k, from 1 to the unit of k. WithUnits gives
// it the input and the output that the unit is a ratio of:
//
//	tf.Gain(units.MustParseQuantity("8 mA/m")).WithUnits(m, mA)
func Gain(k units.Quantity) Continuous {
	c := core{f: ratfun.Constant(k.Value())}
	c.output.Unit = k.Unit()
	return Continuous{c: c}
}

// withUnits puts units on the signals; the numbers stay.
func (c core) withUnits(input, output units.Unit) (core, error) {
	var one units.Unit
	if !c.input.Unit.Equal(one) || !c.output.Unit.Equal(one) {
		if old, found := c.output.Unit.Div(c.input.Unit), output.Div(input); !found.Equal(old) {
			return core{}, fmt.Errorf("tf: units put on a block [%s]; ConvertUnits changes the numbers with the units: %w", c.signals(),
				&units.MismatchError{Found: found, Want: old, What: "output over input"})
		}
	}
	c.input.Unit, c.output.Unit = input, output
	return c, nil
}

// withSignals puts names and units on the signals.
func (c core) withSignals(input, output units.Signal) (core, error) {
	for _, s := range []units.Signal{input, output} {
		if err := checkName(s.Name); err != nil {
			return core{}, err
		}
	}
	c, err := c.withUnits(input.Unit, output.Unit)
	if err != nil {
		return core{}, err
	}
	c.input.Name, c.output.Name = input.Name, output.Name
	return c, nil
}

// ErrName is the error for a signal name that the text form could not hold.
var ErrName = errors.New("a signal name must be printable, without ':', '[', ']', '->' and outer spaces, and at most 256 bytes long")

func checkName(name string) error {
	bad := len(name) > maxNameLength || !utf8.ValidString(name) || strings.TrimSpace(name) != name ||
		strings.ContainsAny(name, ":[]") || strings.Contains(name, "->") || strings.Contains(name, "→")
	for _, r := range name {
		bad = bad || !unicode.IsPrint(r)
	}
	if bad {
		return fmt.Errorf("tf: signal name %q: %w", name[:min(len(name), maxNameLength)], ErrName)
	}
	return nil
}

// convertUnits changes units and numbers together.
func (c core) convertUnits(input, output units.Unit) (core, error) {
	back, err := input.ConversionTo(c.input.Unit)
	if err != nil {
		return core{}, fmt.Errorf("tf: input: %w", err)
	}
	forth, err := c.output.Unit.ConversionTo(output)
	if err != nil {
		return core{}, fmt.Errorf("tf: output: %w", err)
	}
	c.f = c.f.Scale(new(big.Rat).Mul(back, forth))
	c.input.Unit, c.output.Unit = input, output
	return c, nil
}

// WithUnits returns g with the given units of input and output; its numbers
// and the names of its signals stay. A g from 1 to 1 takes any units. On any
// other the unit of output over input must stay what it is, because the
// numbers would mean something else: the error is then a
// *units.MismatchError.
func (g Continuous) WithUnits(input, output units.Unit) (Continuous, error) {
	c, err := g.c.withUnits(input, output)
	return Continuous{c: c}, err
}

// WithSignals returns g with the given signals, names and units; its numbers
// stay. The rule for the units is that of WithUnits; the error for a name that
// the text form cannot hold is ErrName.
func (g Continuous) WithSignals(input, output units.Signal) (Continuous, error) {
	c, err := g.c.withSignals(input, output)
	return Continuous{c: c}, err
}

// ConvertUnits returns the same physical block with its input and output in
// other units of the same dimensions: the numbers change exactly. The error is
// a *units.MismatchError where a dimension differs; radians count.
func (g Continuous) ConvertUnits(input, output units.Unit) (Continuous, error) {
	c, err := g.c.convertUnits(input, output)
	return Continuous{c: c}, err
}

// WithUnits is Continuous.WithUnits for a function of z.
func (g Discrete) WithUnits(input, output units.Unit) (Discrete, error) {
	c, err := g.c.withUnits(input, output)
	return Discrete{c: c}, err
}

// WithSignals is Continuous.WithSignals for a function of z.
func (g Discrete) WithSignals(input, output units.Signal) (Discrete, error) {
	c, err := g.c.withSignals(input, output)
	return Discrete{c: c}, err
}

// ConvertUnits is Continuous.ConvertUnits for a function of z. The period
// stays.
func (g Discrete) ConvertUnits(input, output units.Unit) (Discrete, error) {
	c, err := g.c.convertUnits(input, output)
	return Discrete{c: c}, err
}

// gainUnit is the unit of a value of the function.
func (c *core) gainUnit() units.Unit { return c.output.Unit.Div(c.input.Unit) }

// StaticGain returns the value at s = 0, in the unit of the output over that
// of the input: what a constant input is multiplied by once everything has
// settled, where g is stable. A dead time does not matter. The error is a
// *PoleError where the denominator is 0 at s = 0; where the numerator is too,
// LowestTerms removes the shared factor.
func (g Continuous) StaticGain() (units.Quantity, error) {
	v, err := ratAt(g.c.f, nil, "StaticGain", "s")
	if err != nil {
		return units.Quantity{}, err
	}
	return units.NewQuantity(v, g.c.gainUnit()), nil
}

// StaticGain returns the value at z = 1; in all else it is like that of
// Continuous.
func (g Discrete) StaticGain() (units.Quantity, error) {
	v, err := ratAt(g.c.f, big.NewRat(1, 1), "StaticGain", "z")
	if err != nil {
		return units.Quantity{}, err
	}
	return units.NewQuantity(v, g.c.gainUnit()), nil
}

// SystemType is the number of integrators, poles at s = 0 in lowest terms; it
// is negative for zeros there. For g = 0 it is 0.
func (g Continuous) SystemType() int {
	f := g.c.f
	if f.IsZero() {
		return 0
	}
	return f.Den().Valuation() - f.Num().Valuation()
}

// SystemType is the number of summing elements, poles at z = 1 in lowest
// terms; it is negative for zeros there. For g = 0 it is 0.
func (g Discrete) SystemType() int {
	f := g.c.f
	if f.IsZero() {
		return 0
	}
	atOne := func(p intpoly.Poly) int { return p.TaylorShift(big.NewInt(1)).Valuation() }
	return atOne(f.Den()) - atOne(f.Num())
}

// signals writes "V -> mm" or "opening: V -> level: mm"; it is empty where both
// signals are unnamed and have the unit 1.
func (c *core) signals() string {
	if c.input.Name == "" && c.output.Name == "" && c.input.Unit.IsOne() && c.output.Unit.IsOne() {
		return ""
	}
	return c.input.String() + " -> " + c.output.String()
}

// unitAdvice says what makes a signal of the unit found fit where the unit
// wanted is expected.
func unitAdvice(found, wanted units.Unit) string {
	k, err := wanted.ConversionTo(found)
	if err != nil {
		return err.Error()
	}
	return fmt.Sprintf("1 %s is %s %s; ConvertUnits on one of the blocks mends it", wanted, decimal.Text(k), found)
}

// seconds is a time as an exact number of seconds.
func seconds(t units.Quantity) (*big.Rat, error) {
	s, err := t.ConvertTo(second)
	if err != nil {
		return nil, err
	}
	return s.Value(), nil
}

// WithDeadTime returns g with the dead time t, an exact time of at least 0, in
// place of the one that it has: units.FromDuration makes one of a
// time.Duration. The errors are a *units.MismatchError for what is no time and
// ErrNegativeDeadTime.
func (g Continuous) WithDeadTime(t units.Quantity) (Continuous, error) {
	s, err := seconds(t)
	if err != nil {
		return Continuous{}, fmt.Errorf("tf: dead time: %w", err)
	}
	if s.Sign() < 0 {
		return Continuous{}, fmt.Errorf("tf: dead time of %v: %w", t, ErrNegativeDeadTime)
	}
	g.c.setDelay(s)
	return g, nil
}

// ErrNegativeDeadTime is the error for a dead time below 0, which would foresee
// the input.
var ErrNegativeDeadTime = errors.New("a dead time must not be negative")

// DeadTime is the dead time, a number of seconds.
func (g Continuous) DeadTime() units.Quantity {
	return units.NewQuantity(g.c.delaySeconds(), second)
}

// Period is the sampling period, a number of seconds.
func (g Discrete) Period() units.Quantity {
	return units.NewQuantity(g.c.periodSeconds(), second)
}
