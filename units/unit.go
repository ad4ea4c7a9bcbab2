package units

import (
	"math/big"
	"slices"
)

// Unit is a unit of measurement: a dimension, an exact scale to the coherent
// unit of that dimension, and a spelling. It is an immutable value of one
// word; the zero value is the unit 1.
//
// Two laws hold for all units: u.Mul(v).Div(v) equals u, and conversions
// compose: from u to v to w is from u to w, exactly.
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
	return u.d == nil || u.d.dimension == Dimension{} && u.d.scale.Cmp(one) == 0
}

// Equal reports whether u and v have the same dimension and the same scale.
// The spelling does not matter: N*m equals J.
func (u Unit) Equal(v Unit) bool {
	if u.d == v.d {
		return true
	}
	return u.Dimension() == v.Dimension() && sameRat(u.scaleRat(), v.scaleRat())
}

// sameRat is a.Cmp(b) == 0 without the products that Cmp allocates: a big.Rat
// is kept in lowest terms.
func sameRat(a, b *big.Rat) bool {
	return a.Num().Cmp(b.Num()) == 0 && (a.IsInt() && b.IsInt() || a.Denom().Cmp(b.Denom()) == 0)
}

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

// Mul returns the unit u·v. Equal symbols are gathered, so that mA/m times m
// is mA.
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

// MaxPower bounds the exponent that Pow and Parse take, as an absolute value.
const MaxPower = 64

// Pow returns u^n. The error is ErrLimit for |n| > MaxPower, or where an
// exponent of the result would pass it.
func (u Unit) Pow(n int) (Unit, error) {
	if n > MaxPower || n < -MaxPower {
		return Unit{}, ErrLimit
	}
	fs := slices.Clone(u.factors())
	for i := range fs {
		fs[i].exponent *= n
		if e := fs[i].exponent; e > MaxPower || e < -MaxPower {
			return Unit{}, ErrLimit
		}
	}
	return fromFactors(fs), nil
}

// combine returns u·v^sign.
func combine(u, v Unit, sign int) Unit {
	fs := slices.Clone(u.factors())
	for _, f := range v.factors() {
		f.exponent *= sign
		if i := slices.IndexFunc(fs, func(g factor) bool { return g.text == f.text }); i >= 0 {
			fs[i].exponent += f.exponent
		} else {
			fs = append(fs, f)
		}
	}
	return fromFactors(fs)
}

// fromFactors makes the unit with the given factors, dropping those with the
// exponent 0, and spells it.
func fromFactors(fs []factor) Unit {
	fs = slices.DeleteFunc(fs, func(f factor) bool { return f.exponent == 0 })
	if len(fs) == 0 {
		return Unit{}
	}
	d := &definition{factors: fs, scale: big.NewRat(1, 1)}
	for _, f := range fs {
		for i, e := range f.symbol.dimension.exponents {
			d.dimension.exponents[i] += e * int32(f.exponent)
		}
		d.scale.Mul(d.scale, power(f.scale, f.exponent))
	}
	d.spelling = spell(fs)
	return Unit{d: d}
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
	if u.Dimension() != v.Dimension() {
		return nil, &MismatchError{Found: u, Want: v}
	}
	return new(big.Rat).Quo(u.scaleRat(), v.scaleRat()), nil
}

// ConversionInEquation is ConversionTo with the radian weightless, as in the
// SI: kg·m²·rad/s² and N·m are the same term of an equation.
func (u Unit) ConversionInEquation(v Unit) (*big.Rat, error) {
	if u.Dimension().WithoutAngle() != v.Dimension().WithoutAngle() {
		return nil, &MismatchError{Found: u, Want: v}
	}
	return new(big.Rat).Quo(u.scaleRat(), v.scaleRat()), nil
}
