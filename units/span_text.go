package units

import (
	"cmp"
	"errors"
	"fmt"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/lex"
)

// ParseRange reads a range:
//
//	0 m … 2 m    500 mm ... 2 m    0 … 100 %    0 to 4095 count    -20 … 60 degC
//
// Between the ends stands …, three full stops, or the word "to" between
// white space. A first end without a unit has that of the second; else the result
// is in the unit of the first. degC and degF are temperatures themselves, as for
// ParseAbsolute; K is read as by ParseQuantity. "4-20 mA" is refused, because its
// second end may be −20 mA.
//
// The error is a *SyntaxError; behind it stands ErrZeroWidth, or a
// *MismatchError for two dimensions.
func ParseRange(text string) (Range, error) {
	if len(text) > MaxText {
		_, err := newParser(text, symbols)
		return Range{}, err
	}
	at, length := separator(text)
	if length == 0 {
		return Range{}, lex.Fault(text, len(text), "no second end", "a range as in 4 mA … 20 mA or 4 mA to 20 mA", nil)
	}
	to, toDegree, err := rangeEnd(text, at+length, len(text), Unit{})
	if err != nil {
		return Range{}, err
	}
	from, fromDegree, err := rangeEnd(text, 0, at, to.unit)
	if err != nil {
		return Range{}, err
	}
	if from, err = absolute(text, 0, from); err != nil {
		return Range{}, err
	}
	if to, err = absolute(text, at+length, to); err != nil {
		return Range{}, err
	}
	r, err := NewRange(from, to)
	if err != nil {
		found, want := "ends that do not fit", ""
		switch {
		case errors.Is(err, ErrZeroWidth):
			found = "two equal ends"
		case to.unit.IsOne():
			found, want = "an end without a unit", fmt.Sprintf("one in %s", from.unit)
		}
		return Range{}, lex.Fault(text, at+length, found, want, err)
	}
	r.degree = cmp.Or(fromDegree, toDegree)
	return r, nil
}

// MustParseRange is ParseRange for ranges written down in a program; it panics
// on an error.
func MustParseRange(text string) Range {
	r, err := ParseRange(text)
	if err != nil {
		panic(err)
	}
	return r
}

// separator finds what stands between the ends of a range.
func separator(text string) (at, length int) {
	at = len(text)
	for _, s := range []string{"…", "..."} {
		if i := strings.Index(text, s); i >= 0 && i < at {
			at, length = i, len(s)
		}
	}
	const white = " \t\r\n"
	for i := 1; i+2 < at; i++ {
		if text[i:i+2] == "to" && strings.IndexByte(white, text[i-1]) >= 0 && strings.IndexByte(white, text[i+2]) >= 0 {
			return i, len("to")
		}
	}
	return at, length
}

// rangeEnd reads the end of a range that stands at text[start:stop], and the
// symbol of its temperature scale. One without a unit takes the default.
func rangeEnd(text string, start, stop int, otherwise Unit) (q Quantity, degree string, err error) {
	q, err = parseQuantity(text[start:stop])
	if err != nil {
		return Quantity{}, "", moved(err, text, start)
	}
	if q.unit.IsOne() {
		q = NewQuantity(q.rat(), otherwise)
	}
	if symbol, ok := q.unit.temperature(); ok {
		degree = symbol
	}
	return q, degree, nil
}

// absolute takes a number of degC or degF for the temperature itself.
func absolute(text string, offset int, q Quantity) (Quantity, error) {
	symbol, ok := q.unit.temperature()
	if !ok {
		return q, nil
	}
	v := rationalOfPi(offsets[symbol])
	q = NewQuantity(v.Add(v, new(big.Rat).Mul(q.rat(), q.unit.scaleRat())), kelvins)
	if q.Sign() < 0 {
		return Quantity{}, lex.Fault(text, offset, "a temperature below absolute zero", "at least 0 K", nil)
	}
	return q, nil
}

// moved is the error of a part of a text that begins at an offset.
func moved(err error, text string, offset int) error {
	if e, ok := err.(*SyntaxError); ok {
		return lex.Fault(text, offset+e.Offset, e.Found, e.Want, e.Err)
	}
	return err
}

// String writes both ends with their unit, exactly: "4 mA … 20 mA", and
// "0 degC … 1200 degC" where one end was read so. ParseRange reads it back.
func (r Range) String() string {
	return r.end(r.from) + " … " + r.end(r.To())
}

func (r Range) end(q Quantity) string {
	if r.degree == "" {
		return q.String()
	}
	f := symbolFactor(r.degree)
	v := new(big.Rat).Mul(q.rat(), q.unit.scaleRat())
	v.Sub(v, rationalOfPi(offsets[r.degree]))
	return exactRat(v.Quo(v, f.scale)) + " " + r.degree
}

// MarshalText is String, for encoding.TextMarshaler.
func (r Range) MarshalText() ([]byte, error) { return []byte(r.String()), nil }

// UnmarshalText is ParseRange, for encoding.TextUnmarshaler.
func (r *Range) UnmarshalText(text []byte) error {
	t, err := ParseRange(string(text))
	if err == nil {
		*r = t
	}
	return err
}

// ParseSpan reads two ranges with an arrow between them, as ParseRange reads
// each:
//
//	0 m … 2 m -> 4 mA … 20 mA      0 degC to 1200 degC → 0 to 4095 count
//
// The error is a *SyntaxError.
func ParseSpan(text string) (Span, error) {
	if len(text) > MaxText {
		_, err := newParser(text, symbols)
		return Span{}, err
	}
	at, length := strings.Index(text, "->"), len("->")
	if i := strings.Index(text, "→"); i >= 0 && (at < 0 || i < at) {
		at, length = i, len("→")
	}
	if at < 0 {
		return Span{}, lex.Fault(text, len(text), "no second range", "a span as in 0 m … 2 m -> 4 mA … 20 mA", nil)
	}
	input, err := ParseRange(text[:at])
	if err != nil {
		return Span{}, moved(err, text, 0)
	}
	output, err := ParseRange(text[at+length:])
	if err != nil {
		return Span{}, moved(err, text, at+length)
	}
	return NewSpan(input, output), nil
}

// MustParseSpan is ParseSpan for spans written down in a program; it panics on
// an error.
func MustParseSpan(text string) Span {
	s, err := ParseSpan(text)
	if err != nil {
		panic(err)
	}
	return s
}

// String writes both ranges, exactly: "0 m … 2 m -> 4 mA … 20 mA". ParseSpan
// reads it back.
func (s Span) String() string { return fmt.Sprintf("%v -> %v", s.input, s.output) }

// MarshalText is String, for encoding.TextMarshaler.
func (s Span) MarshalText() ([]byte, error) { return []byte(s.String()), nil }

// UnmarshalText is ParseSpan, for encoding.TextUnmarshaler.
func (s *Span) UnmarshalText(text []byte) error {
	t, err := ParseSpan(string(text))
	if err == nil {
		*s = t
	}
	return err
}
