package units

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"
)

// String returns the spelling that was read, or for a unit that was computed a
// spelling over one solidus. It parses back to an equal unit; the unit 1 is
// "1".
func (u Unit) String() string {
	if u.d == nil {
		return "1"
	}
	return u.d.spelling
}

// MarshalText is String, for encoding.TextMarshaler.
func (u Unit) MarshalText() ([]byte, error) { return []byte(u.String()), nil }

// UnmarshalText is Parse, for encoding.TextUnmarshaler.
func (u *Unit) UnmarshalText(text []byte) error {
	v, err := Parse(string(text))
	if err == nil {
		*u = v
	}
	return err
}

// String returns the exact number and the unit: a finite decimal where there
// is one, a fraction otherwise. It parses back to an equal quantity, within the
// bounds of Parse. A number of bare degC or degF is a difference here and
// written in K, because as text it would be taken for a temperature.
func (q Quantity) String() string {
	q = q.unambiguous()
	s := exactRat(q.rat())
	if q.unit.d == nil {
		return s
	}
	return s + " " + q.unit.String()
}

func (q Quantity) unambiguous() Quantity {
	if _, ok := q.unit.temperature(); ok {
		return NewQuantity(new(big.Rat).Mul(q.rat(), q.unit.scaleRat()), kelvins)
	}
	return q
}

// Format prints q by a verb:
//
//	%v, %s        exactly, as String does
//	%g, %e, %f    the number rounded to the precision given (%.4g), then the unit
func (q Quantity) Format(f fmt.State, verb rune) {
	switch verb {
	case 'g', 'e', 'f':
		q = q.unambiguous()
		v, _ := q.rat().Float64()
		fmt.Fprintf(f, fmt.FormatString(f, verb), v)
		if q.unit.d != nil {
			fmt.Fprint(f, " ", q.unit)
		}
	case 'v', 's':
		fmt.Fprint(f, q.String())
	default:
		fmt.Fprintf(f, "%%!%c(units.Quantity=%s)", verb, q.String())
	}
}

// MarshalText is String, for encoding.TextMarshaler.
func (q Quantity) MarshalText() ([]byte, error) { return []byte(q.String()), nil }

// UnmarshalText is ParseQuantity, for encoding.TextUnmarshaler.
func (q *Quantity) UnmarshalText(text []byte) error {
	r, err := ParseQuantity(string(text))
	if err == nil {
		*q = r
	}
	return err
}

// exactRat writes a rational number exactly: as a decimal where that ends, with
// an exponent where it would have many zeros.
func exactRat(v *big.Rat) string {
	n, exact := v.FloatPrec()
	switch {
	case !exact:
		return v.String()
	case n > 30:
		digits := new(big.Rat).Mul(v, power(big.NewRat(10, 1), n))
		return digits.Num().String() + "e-" + strconv.Itoa(n)
	case n > 0:
		return v.FloatString(n)
	}
	s := v.Num().String()
	if t := strings.TrimRight(s, "0"); len(s)-len(t) > 30 {
		return t + "e" + strconv.Itoa(len(s)-len(t))
	}
	return s
}

// shortRat writes a rational number for a message: exactly where that is
// short, else to seven digits.
func shortRat(v *big.Rat) string {
	if s := exactRat(v); len(s) <= 16 {
		return s
	}
	f, _ := v.Float64()
	return fmt.Sprintf("%.7g", f)
}
