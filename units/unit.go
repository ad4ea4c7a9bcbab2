package units

import (
	"fmt"
	"math/big"
	"slices"
)

// Unit is a unit of measurement: a dimension, an exact scale to the coherent
// unit of that dimension, and a spelling. It is an immutable value of one
// word; the zero value is the unit 1.
//
// Two laws hold for all units within the bounds below: u.Mul(v).Div(v) equals
// u, and conversions compose: from u to v to w is from u to w, exactly.
//
// A product with a symbol beyond the power MaxPower, or with more than
// MaxSymbols different symbols, is no unit that anyone means. Mul and Div
// return for it a unit that equals none, not even itself, and converts to none
// (ErrLimit); whatever is multiplied by it stays so, as with a NaN.
type Unit struct {
	_ [0]func()
	d *definition // nil is the unit 1
}

// definition is what a Unit points to; it never changes.
type definition struct {
	dimension Dimension
	scale     *big.Rat // > 0
	spelling  string   // as read or composed; parses back
	factors   []factor // the spelling as named symbols with exponents
}

// factor is a power of a named symbol with its prefix, such as km^2.
type factor struct {
	text     string // as spelled, prefix included
	symbol   *symbol
	scale    *big.Rat // of one such symbol, prefix included
	exponent int
}

var one = big.NewRat(1, 1)

func (u Unit) scaleRat() *big.Rat {
	if u.d == nil {
		return one
	}
	return u.d.scale
}

func (u Unit) factors() []factor {
	if u.d == nil {
		return nil
	}
	return u.d.factors
}

// Dimension returns the dimension of u.
func (u Unit) Dimension() Dimension {
	if u.d == nil {
		return Dimension{}
	}
	return u.d.dimension
}

// Scale returns how many coherent units one u is: 1/1000 for mm, 1000 for
// kPa. Angles are measured in rad, so that 1 Hz is 2π (rational, see the
// package comment).
func (u Unit) Scale() *big.Rat { return new(big.Rat).Set(u.scaleRat()) }

// IsOne reports whether u is the unit 1: no dimension and the scale 1.
func (u Unit) IsOne() bool {
	return u.d == nil || u.d.dimension == Dimension{} && sameRat(u.d.scale, one)
}

// Equal reports whether u and v have the same dimension and the same scale.
// The spelling does not matter: N*m equals J. It does not allocate.
func (u Unit) Equal(v Unit) bool {
	if u.d == v.d {
		return !u.beyond()
	}
	return u.Dimension() == v.Dimension() && !u.beyond() && sameRat(u.scaleRat(), v.scaleRat())
}

// sameRat is a.Cmp(b) == 0 without allocating: a big.Rat is in lowest terms.
func sameRat(a, b *big.Rat) bool {
	if a.Num().Cmp(b.Num()) != 0 || a.IsInt() != b.IsInt() {
		return false
	}
	return a.IsInt() || a.Denom().Cmp(b.Denom()) == 0
}

// beyond reports whether u left the bounds of MaxPower and MaxSymbols.
func (u Unit) beyond() bool { return u.d != nil && u.d.dimension.beyond }

// Cycles returns the spelling of the first symbol in u that counts cycles,
// turns or parts of one (Hz, rpm, rev, deg, …), and whether there is one. Such
// a unit is where 2π gets lost when hertz are taken for radians per second.
func (u Unit) Cycles() (symbol string, ok bool) {
	for _, f := range u.factors() {
		if f.symbol.cycle {
			return f.text, true
		}
	}
	return "", false
}

// Mul returns the unit u·v. Symbols of the same unit are gathered, so that
// mA/m times m is mA.
func (u Unit) Mul(v Unit) Unit {
	switch {
	case v.d == nil:
		return u
	case u.d == nil:
		return v
	}
	return combine(u, v, 1)
}

// Div returns the unit u/v.
func (u Unit) Div(v Unit) Unit {
	if v.d == nil {
		return u
	}
	return combine(u, v, -1)
}

// Inverse returns the unit 1/u.
func (u Unit) Inverse() Unit { return Unit{}.Div(u) }

// The bounds of a unit.
const (
	MaxPower   = 64 // the power of one symbol, as an absolute value
	MaxSymbols = 32 // different symbols in one unit
)

// Pow returns u^n. The error is ErrLimit for |n| > MaxPower, or where an
// exponent of the result would pass it.
func (u Unit) Pow(n int) (Unit, error) {
	if n > MaxPower || n < -MaxPower {
		return Unit{}, ErrLimit
	}
	fs := slices.Clone(u.factors())
	for i := range fs {
		fs[i].exponent *= n
	}
	p := fromFactors(fs)
	if u.beyond() || p.beyond() {
		return Unit{}, ErrLimit
	}
	return p, nil
}

// combine returns u·v^sign.
func combine(u, v Unit, sign int) Unit {
	if u.beyond() || v.beyond() {
		return unbounded
	}
	fs := make([]factor, 0, len(u.factors())+len(v.factors()))
	fs = append(fs, u.factors()...)
	return fromFactors(appendFactors(fs, v.factors(), sign))
}

// unbounded is the unit past the bounds; see Unit.
var unbounded = Unit{d: &definition{dimension: Dimension{beyond: true}, scale: big.NewRat(1, 1), spelling: "(a unit past the bounds)"}}

// fromFactors makes the unit with the given factors, of which it takes
// possession: those of the same unit are gathered, those with the exponent 0
// dropped.
func fromFactors(all []factor) Unit {
	fs := all[:0]
	for _, f := range all {
		if i := slices.IndexFunc(fs, f.same); i >= 0 {
			fs[i].exponent += f.exponent
		} else {
			fs = append(fs, f)
		}
		if len(fs) > 2*MaxSymbols { // the second half are those that cancelled
			return unbounded
		}
	}
	fs = slices.DeleteFunc(fs, func(f factor) bool { return f.exponent == 0 })
	if len(fs) == 0 {
		return Unit{}
	}
	if len(fs) > MaxSymbols {
		return unbounded
	}
	d := &definition{factors: fs, scale: big.NewRat(1, 1)}
	for _, f := range fs {
		if f.exponent > MaxPower || f.exponent < -MaxPower {
			return unbounded
		}
		for i, e := range f.symbol.dimension.exponents {
			d.dimension.exponents[i] += e * int32(f.exponent)
		}
		d.scale.Mul(d.scale, power(f.scale, f.exponent))
	}
	d.spelling = spell(fs)
	return Unit{d: d}
}

// same reports whether f and g are powers of the same unit, however spelled:
// µm and um, K and degC.
func (f factor) same(g factor) bool {
	return f.symbol.dimension == g.symbol.dimension && f.symbol.cycle == g.symbol.cycle && sameRat(f.scale, g.scale)
}

// power returns x^n for x > 0.
func power(x *big.Rat, n int) *big.Rat {
	num, den := x.Num(), x.Denom()
	if n < 0 {
		num, den, n = den, num, -n
	}
	e := big.NewInt(int64(n))
	return new(big.Rat).SetFrac(new(big.Int).Exp(num, e, nil), new(big.Int).Exp(den, e, nil))
}

// ConversionTo returns the exact factor that turns a number of u into a number
// of v: 1000 from m to mm. The error is a *MismatchError where the dimensions
// differ; radians count.
func (u Unit) ConversionTo(v Unit) (*big.Rat, error) {
	if u.beyond() || v.beyond() {
		return nil, fmt.Errorf("units: %w: from %s to %s", ErrLimit, u, v)
	}
	if u.Dimension() != v.Dimension() {
		return nil, &MismatchError{Found: u, Want: v}
	}
	return new(big.Rat).Quo(u.scaleRat(), v.scaleRat()), nil
}

// ConversionInEquation is ConversionTo with the radian weightless, as in the
// SI: kg·m²·rad/s² and N·m are the same term of an equation.
func (u Unit) ConversionInEquation(v Unit) (*big.Rat, error) {
	if u.beyond() || v.beyond() {
		return nil, fmt.Errorf("units: %w: from %s to %s", ErrLimit, u, v)
	}
	if u.Dimension().WithoutAngle() != v.Dimension().WithoutAngle() {
		return nil, &MismatchError{Found: u, Want: v}
	}
	return new(big.Rat).Quo(u.scaleRat(), v.scaleRat()), nil
}
