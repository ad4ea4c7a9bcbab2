package units

import (
	"fmt"
	"math"
	"math/big"
	"strings"
	"time"

	"github.com/qofs/qofs/internal/lex"
)

// Quantity is an exact number with a unit. It is an immutable value; the zero
// value is the pure number 0.
type Quantity struct {
	_     [0]func()
	value *big.Rat // nil is 0
	unit  Unit
}

// NewQuantity returns value·unit. The value is copied; nil reads as 0.
func NewQuantity(value *big.Rat, unit Unit) Quantity {
	if value == nil || value.Sign() == 0 {
		return Quantity{unit: unit}
	}
	return Quantity{value: new(big.Rat).Set(value), unit: unit}
}

// FromDuration returns d in seconds, exactly.
func FromDuration(d time.Duration) Quantity {
	return NewQuantity(big.NewRat(int64(d), int64(time.Second)), seconds)
}

func (q Quantity) rat() *big.Rat {
	if q.value == nil {
		return new(big.Rat)
	}
	return q.value
}

// Value returns the number of q in its own unit, as a fresh copy.
func (q Quantity) Value() *big.Rat { return new(big.Rat).Set(q.rat()) }

// Unit returns the unit of q.
func (q Quantity) Unit() Unit { return q.unit }

// Sign is −1, 0 or 1.
func (q Quantity) Sign() int { return q.rat().Sign() }

// Float64 returns the number of q in its own unit, correctly rounded. The
// error is ErrRange beyond the largest float64.
func (q Quantity) Float64() (float64, error) {
	v, _ := q.rat().Float64()
	if math.IsInf(v, 0) {
		return 0, ErrRange
	}
	return v, nil
}

// ConvertTo returns q in the unit u, exactly. The error is a *MismatchError.
func (q Quantity) ConvertTo(u Unit) (Quantity, error) {
	k, err := q.unit.ConversionTo(u)
	if err != nil {
		return Quantity{}, err
	}
	return NewQuantity(k.Mul(k, q.rat()), u), nil
}

// In returns the number of q in the unit u, converted exactly and rounded once,
// correctly. The error is a *MismatchError, or ErrRange.
func (q Quantity) In(u Unit) (float64, error) {
	r, err := q.ConvertTo(u)
	if err != nil {
		return 0, err
	}
	return r.Float64()
}

// Compare returns −1, 0 or 1 as q is less than, equal to or greater than r. The
// error is a *MismatchError.
func (q Quantity) Compare(r Quantity) (int, error) {
	r, err := r.ConvertTo(q.unit)
	if err != nil {
		return 0, err
	}
	return q.rat().Cmp(r.rat()), nil
}

// Add returns q + r in the unit of q. The error is a *MismatchError.
func (q Quantity) Add(r Quantity) (Quantity, error) {
	r, err := r.ConvertTo(q.unit)
	if err != nil {
		return Quantity{}, err
	}
	return NewQuantity(new(big.Rat).Add(q.rat(), r.rat()), q.unit), nil
}

// Sub returns q − r in the unit of q. The error is a *MismatchError.
func (q Quantity) Sub(r Quantity) (Quantity, error) { return q.Add(r.Neg()) }

// Neg returns −q.
func (q Quantity) Neg() Quantity { return NewQuantity(new(big.Rat).Neg(q.rat()), q.unit) }

// Mul returns q·r.
func (q Quantity) Mul(r Quantity) Quantity {
	return NewQuantity(new(big.Rat).Mul(q.rat(), r.rat()), q.unit.Mul(r.unit))
}

// Div returns q/r. The error is ErrDivisionByZero.
func (q Quantity) Div(r Quantity) (Quantity, error) {
	if r.Sign() == 0 {
		return Quantity{}, ErrDivisionByZero
	}
	return NewQuantity(new(big.Rat).Quo(q.rat(), r.rat()), q.unit.Div(r.unit)), nil
}

// Equal reports whether q and r are the same amount: 1 m equals 1000 mm.
func (q Quantity) Equal(r Quantity) bool {
	k, err := r.unit.ConversionTo(q.unit)
	return err == nil && q.rat().Cmp(k.Mul(k, r.rat())) == 0
}

// ParseQuantity reads a number and a unit, such as "12.5 mN*m/A", "-3/4 m",
// "50 %" or "2". Decimals and fractions are read exactly. A bare temperature
// such as "900 degC" is refused, because it may mean the temperature itself
// (ParseAbsolute) or a difference: write a difference as "900 K".
//
// The error is a *SyntaxError; behind it stands a *TemperatureError for a bare
// temperature.
func ParseQuantity(text string) (Quantity, error) {
	q, err := parseQuantity(text)
	if err != nil {
		return Quantity{}, err
	}
	if symbol, ok := q.unit.temperature(); ok {
		return Quantity{}, lex.Fault(text, strings.Index(text, symbol), fmt.Sprintf("a bare %q", symbol),
			"K for a difference of temperatures, or ParseAbsolute for the temperature itself", &TemperatureError{Text: text, Difference: q.unambiguous()})
	}
	return q, nil
}

// MustParseQuantity is ParseQuantity for quantities written down in a program;
// it panics on an error.
func MustParseQuantity(text string) Quantity {
	q, err := ParseQuantity(text)
	if err != nil {
		panic(err)
	}
	return q
}

// offsets are the zero points of the temperature scales, in kelvin.
var offsets = map[string]string{
	"degC": "273.15", "°C": "273.15", "℃": "273.15",
	"degF": "45967/180", "°F": "45967/180", "℉": "45967/180", // 459.67 · 5/9
}

// ParseAbsolute reads a quantity that is meant absolutely: "900 degC" is
// 1173.15 K, "32 degF" is 273.15 K. Units without a zero point of their own
// are read as by ParseQuantity. A temperature below 0 K is refused. The error
// is a *SyntaxError.
func ParseAbsolute(text string) (Quantity, error) {
	q, err := parseQuantity(text)
	if err != nil {
		return Quantity{}, err
	}
	if symbol, ok := q.unit.temperature(); ok {
		v := rationalOfPi(offsets[symbol])
		q = NewQuantity(v.Add(v, new(big.Rat).Mul(q.rat(), q.unit.scaleRat())), kelvins)
	}
	if q.unit.Dimension() == kelvins.Dimension() && q.Sign() < 0 {
		return Quantity{}, lex.Fault(text, 0, "a temperature below absolute zero", "at least 0 K", nil)
	}
	return q, nil
}

// MustParseAbsolute is ParseAbsolute for quantities written down in a program;
// it panics on an error.
func MustParseAbsolute(text string) Quantity {
	q, err := ParseAbsolute(text)
	if err != nil {
		panic(err)
	}
	return q
}

// Reading returns an absolute temperature on the scale of a unit, correctly
// rounded: 323.15 K is 50 in degC. It is the inverse of ParseAbsolute. A unit
// without a zero point of its own gives In. The errors are those of In.
func (q Quantity) Reading(u Unit) (float64, error) {
	symbol, ok := u.temperature()
	if !ok {
		return q.In(u)
	}
	k, err := q.ConvertTo(kelvins)
	if err != nil {
		return 0, err
	}
	v := k.Value()
	return NewQuantity(v.Quo(v.Sub(v, rationalOfPi(offsets[symbol])), u.Scale()), u).Float64()
}

var kelvins, seconds = MustParse("K"), MustParse("s")

// temperature returns the symbol of a unit that is the degree of a temperature
// scale with a zero point of its own, and whether u is one.
func (u Unit) temperature() (symbol string, ok bool) {
	if fs := u.factors(); len(fs) == 1 && fs[0].exponent == 1 {
		_, ok = offsets[fs[0].text]
		return fs[0].text, ok
	}
	return "", false
}

// parseQuantity reads [sign] number [/ number] [unit].
func parseQuantity(text string) (Quantity, error) {
	p, err := newParser(text, symbols)
	if err != nil {
		return Quantity{}, err
	}
	negative := p.peek().Is("-")
	if negative || p.peek().Is("+") {
		p.next++
	}
	if p.peek().Kind != lex.Number {
		return Quantity{}, p.fault("a number and a unit, as in 12.5 mm")
	}
	v := p.peek().Value()
	p.next++
	if p.peek().Is("/") && p.tokens[p.next+1].Kind == lex.Number {
		if d := p.tokens[p.next+1]; d.Text != "1" || !p.peek().Spaced {
			p.next++
			if d.Value().Sign() == 0 {
				return Quantity{}, lex.Fault(text, d.Offset, "a zero denominator", "", ErrDivisionByZero)
			}
			v.Quo(v, d.Value())
			p.next++
		}
	}
	if negative {
		v.Neg(v)
	}
	t := p.peek()
	switch {
	case t.Kind == lex.End:
		return NewQuantity(v, Unit{}), nil
	case t.Is("/"): // "3 /s"
		return Quantity{}, p.fault("1 before the solidus, as in 3 1/s")
	}
	fs, err := p.product()
	if err != nil {
		return Quantity{}, err
	}
	if p.peek().Kind != lex.End {
		return Quantity{}, p.fault("the end of the quantity")
	}
	u, err := p.unit(fs, t.Offset)
	if err != nil {
		return Quantity{}, err
	}
	return NewQuantity(v, u), nil
}
