package units

import (
	"cmp"
	"errors"
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/lex"
)

// ErrZeroWidth: both ends of a range are the same value.
var ErrZeroWidth = errors.New("a range of zero width")

// Range is what an instrument covers, from one value to another: 4 mA … 20 mA,
// or 100 % … 0 % for one that acts the other way round. Temperatures are
// absolute: 0 degC is 273.15 K. It is an immutable value; the zero value is the
// range 0 … 1 of pure numbers.
type Range struct {
	_        [0]func()
	from, to Quantity // in one unit
	degree   string   // degC or degF where the text had one of them
	set      bool
}

// NewRange returns the range between two values, in the unit of from. A quantity
// of temperature counts from absolute zero. The errors are a *MismatchError, and
// one that wraps ErrZeroWidth where both are the same.
func NewRange(from, to Quantity) (Range, error) {
	from = from.unambiguous()
	to, err := to.ConvertTo(from.unit)
	if err != nil {
		return Range{}, fmt.Errorf("units: the ends of a range: %w", err)
	}
	if from.rat().Cmp(to.rat()) == 0 {
		return Range{}, fmt.Errorf("units: from %v to %v: %w: want two different values", from, to, ErrZeroWidth)
	}
	return Range{from: from, to: to, set: true}, nil
}

// From returns the first end of the range; temperatures are in K.
func (r Range) From() Quantity { return r.from }

// To returns the second end of the range, in the unit of From.
func (r Range) To() Quantity {
	if !r.set {
		return NewQuantity(one, Unit{})
	}
	return r.to
}

// Unit returns the unit of both ends.
func (r Range) Unit() Unit { return r.from.unit }

// Width returns To − From, which is not 0, and negative for a range that
// descends.
func (r Range) Width() Quantity {
	return NewQuantity(new(big.Rat).Sub(r.To().rat(), r.from.rat()), r.from.unit)
}

// Contains reports whether a value lies between the ends or on one of them. The
// error is a *MismatchError.
func (r Range) Contains(q Quantity) (bool, error) {
	first, err := r.from.Compare(q)
	if err != nil {
		return false, err
	}
	second, err := r.To().Compare(q)
	return first*second <= 0, err
}

// Equal reports whether both ranges go from the same value to the same value.
func (r Range) Equal(t Range) bool { return r.from.Equal(t.from) && r.To().Equal(t.To()) }

// Span is how an instrument turns one range into another, along a straight
// line: a level of 0 m … 2 m into 4 mA … 20 mA. The linear algebra of deviations
// takes its Slope, the program that runs takes Convert and ConvertBack, or the
// Offset:
//
//	output = slope · input + offset
//
// It is exact and immutable; the zero value turns 0 … 1 into 0 … 1. It does not
// limit: a value outside the range is converted along the same line, and
// Range.Contains tells. A temperature is the exception: outside a range that was
// read in degC or degF it is refused, because it is nearly always a difference
// or a reading in K (60 K for 60 degC) and would give a value that looks like any
// other.
type Span struct {
	_             [0]func()
	input, output Range
}

// NewSpan returns the span that turns the first range into the second, end for
// end.
func NewSpan(input, output Range) Span { return Span{input: input, output: output} }

// Input returns the range that goes in.
func (s Span) Input() Range { return s.input }

// Output returns the range that comes out.
func (s Span) Output() Range { return s.output }

// Slope returns the width of the output over that of the input, such as
// 8 mA/m, in the unit of the output over that of the input. It is not 0. A block
// of it is
//
//	tf.Gain(span.Slope()).WithUnits(span.Input().Unit(), span.Output().Unit())
func (s Span) Slope() Quantity {
	k := new(big.Rat).Quo(s.output.Width().rat(), s.input.Width().rat())
	return NewQuantity(k, s.output.Unit().Div(s.input.Unit()))
}

// Offset returns the output for an input of 0, in the unit of the output. For
// a temperature that is the output at absolute zero.
func (s Span) Offset() Quantity {
	return NewQuantity(s.along(new(big.Rat)), s.output.Unit())
}

// along is the output for a number in the unit of the input.
func (s Span) along(x *big.Rat) *big.Rat {
	v := new(big.Rat).Sub(x, s.input.from.rat())
	v.Mul(v, s.Slope().rat())
	return v.Add(v, s.output.from.rat())
}

// Convert returns the output for an input, exactly, in the unit of the output
// range. A temperature goes in and comes out from absolute zero: ParseAbsolute
// reads it, Quantity.Reading gives its number on a scale. The errors are a
// *MismatchError, and an *OutsideError for a temperature outside a range in degC
// or degF.
func (s Span) Convert(input Quantity) (Quantity, error) {
	q, err := s.input.admit(input)
	if err != nil {
		return Quantity{}, fmt.Errorf("units: input of a span: %w", err)
	}
	return NewQuantity(s.along(q.rat()), s.output.Unit()), nil
}

// admit returns a value in the unit of the range.
func (r Range) admit(q Quantity) (Quantity, error) {
	q, err := q.ConvertTo(r.Unit())
	if err != nil || r.degree == "" {
		return q, err
	}
	if inside, err := r.Contains(q); !inside {
		return q, cmp.Or[error](err, &OutsideError{Value: q, Range: r})
	}
	return q, nil
}

// OutsideError tells that a temperature lies outside of a range that was read in
// degC or degF.
type OutsideError struct {
	Value Quantity // in the unit of the range
	Range Range
}

// Error gives the value on the scale of the range, and says what was meant where
// its number would be a reading within the range.
func (e *OutsideError) Error() string {
	s := fmt.Sprintf("%.7g is %s, outside of %s", e.Value, lex.Excerpt(e.Range.end(e.Value), 0), lex.Excerpt(e.Range.String(), 0))
	if reading, err := absolute("", 0, NewQuantity(e.Value.rat(), MustParse(e.Range.degree))); err == nil {
		if inside, _ := e.Range.Contains(reading); inside {
			s += fmt.Sprintf(": a temperature counts from absolute zero; ParseAbsolute reads %s as %.7g", lex.Excerpt(e.Range.end(reading), 0), reading)
		}
	}
	return s + "; Slope and Offset hold beyond the range"
}

// ConvertBack returns the input for an output, exactly, in the unit of the input
// range. It undoes Convert, and has its errors for the output.
func (s Span) ConvertBack(output Quantity) (Quantity, error) {
	q, err := s.output.admit(output)
	if err != nil {
		return Quantity{}, fmt.Errorf("units: output of a span: %w", err)
	}
	return NewQuantity(s.Inverse().along(q.rat()), s.input.Unit()), nil
}

// Inverse returns the span from the output to the input.
func (s Span) Inverse() Span { return Span{input: s.output, output: s.input} }

// Equal reports whether both spans turn the same range into the same range.
func (s Span) Equal(t Span) bool { return s.input.Equal(t.input) && s.output.Equal(t.output) }
