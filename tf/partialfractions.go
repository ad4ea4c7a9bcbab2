package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/algebraic"
	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
)

// PartialFractions is a rational function as a polynomial and a sum of
// fractions, in two forms: over ℚ, where everything is exact, and over ℂ, with
// one fraction for each pole and power. Common factors of numerator and
// denominator have cancelled. It is immutable; the zero value is 0.
type PartialFractions struct {
	_          [0]func()
	variable   string
	polynomial poly.Poly
	rational   []RationalFraction
	terms      []PartialFraction
}

// RationalFraction is Numerator/Factor^Power, exactly.
type RationalFraction struct {
	_ [0]func()
	// Numerator has a lower degree than Factor.
	Numerator poly.Poly
	// Factor is monic. It is linear or quadratic and then irreducible over ℚ,
	// or the product of all factors of one multiplicity that have no rational
	// linear or quadratic factor.
	Factor poly.Poly
	Power  int
}

// PartialFraction is Coefficient/(s − Pole)^Power, or the same in z. Each
// component of both numbers is the exact one, correctly rounded.
type PartialFraction struct {
	_           [0]func()
	Pole        complex128
	Power       int
	Coefficient complex128

	exactPole, exactCoefficient gaussian
}

// ExactPole returns the components of the pole where both are known to be
// rational.
func (f PartialFraction) ExactPole() (re, im *big.Rat, ok bool) { return f.exactPole.parts() }

// ExactCoefficient returns the components of the coefficient where both are
// known to be rational, as they are at rational poles and at those of a rational
// quadratic s² + 2 s + 5, whose roots −1 ± 2j have rational components.
func (f PartialFraction) ExactCoefficient() (re, im *big.Rat, ok bool) {
	return f.exactCoefficient.parts()
}

// gaussian is a complex number with rational components; nil components are
// unknown.
type gaussian struct{ re, im *big.Rat }

func (g gaussian) parts() (re, im *big.Rat, ok bool) {
	if g.re == nil || g.im == nil {
		return nil, nil, false
	}
	return new(big.Rat).Set(g.re), new(big.Rat).Set(g.im), true
}

// PartialFractions expands g into partial fractions in s. The dead time is no
// part of it. The error is ErrLimit beyond the limits of Poles, of LowestTerms, of
// poly.Poly.QuoRem for an improper g, where the work passes a bound (degree 430 with
// 62-bit coefficients, degree 64 with 25,000 bits, degree 16 with 160,000), or where the
// digits of a coefficient stay undecided.
//
// Laws: the polynomial and the rational fractions add up to g exactly; the
// terms of one factor add up to its rational fractions.
func (g Continuous) PartialFractions() (PartialFractions, error) {
	return partialFractions(g.c.f, "s")
}

// PartialFractions expands g into partial fractions in z, as for Continuous.
func (g Discrete) PartialFractions() (PartialFractions, error) {
	return partialFractions(g.c.f, "z")
}

func partialFractions(f ratfun.Func, variable string) (PartialFractions, error) {
	f, err := reduced(f, "PartialFractions")
	if err != nil {
		return PartialFractions{}, err
	}
	polynomial, remainder, err := asPoly(f.Num()).QuoRem(asPoly(f.Den()))
	if err != nil {
		return PartialFractions{}, fmt.Errorf("tf: polynomial part: %w", err)
	}
	out := PartialFractions{variable: variable, polynomial: polynomial}
	if remainder.IsZero() {
		return out, nil
	}
	proper, err := quotient(remainder, asPoly(f.Den()))
	if err != nil {
		return PartialFractions{}, err
	}
	if err := partialWork(proper.Den()); err != nil {
		return PartialFractions{}, err
	}
	e, err := newExpansion(proper.Num(), proper.Den())
	if err != nil {
		return PartialFractions{}, err
	}
	factors, err := e.factorize()
	if err != nil {
		return PartialFractions{}, err
	}
	for _, factor := range factors {
		rational, err := e.overRationals(factor)
		if err != nil {
			return PartialFractions{}, err
		}
		out.rational = append(out.rational, rational...)
		terms, err := e.overPoles(factor)
		if err != nil {
			return PartialFractions{}, err
		}
		out.terms = append(out.terms, terms...)
	}
	return out, nil
}

// maxPartialWork bounds PartialFractions to some seconds: the square of the degree
// times what a product of balls takes at the precision that they come to.
const maxPartialWork = 1 << 25

func partialWork(den intpoly.Poly) error {
	n := float64(den.Degree())
	words := (float64(den.Span()) + 2*n) / 64
	if work := n * n * (100 + words*math.Sqrt(words)); work > maxPartialWork {
		return fmt.Errorf("tf: partial fractions over a denominator of degree %d with coefficients of %d bits: %w", den.Degree(), den.Span(), fault.ErrLimit)
	}
	return nil
}

// Polynomial returns the polynomial part.
func (p PartialFractions) Polynomial() poly.Poly { return p.polynomial }

// Rational returns the fractions over ℚ: factor by factor in the order of
// their first poles, with ascending powers; fractions that are 0 are left out.
func (p PartialFractions) Rational() []RationalFraction {
	return append([]RationalFraction(nil), p.rational...)
}

// Terms returns the fractions over ℂ: factor by factor, pole by pole, with
// ascending powers; terms that are 0 are left out. Conjugate poles stand next
// to one another, with conjugate coefficients.
func (p PartialFractions) Terms() []PartialFraction {
	return append([]PartialFraction(nil), p.terms...)
}

// IsExact reports whether every factor is linear or quadratic over ℚ, so that
// the rational fractions tell the whole.
func (p PartialFractions) IsExact() bool {
	for _, f := range p.rational {
		if f.Factor.Degree() > 2 {
			return false
		}
	}
	return true
}

// overRationals returns R_k/q^k with num/den = Σ R_k/q^k + (a function without
// q in the denominator). With den = q^m·c the sum has the numerator
// num·c⁻¹ modulo q^m, and its digits to the base q are the R_k.
func (e *expansion) overRationals(f factor) ([]RationalFraction, error) {
	power := f.q.Pow(f.multiplicity)
	cofactor, _ := e.den.QuoExact(power)
	ring := residues{power}
	inverse, ok := ring.inverse(ratpoly.FromInteger(cofactor))
	if !ok {
		return nil, fmt.Errorf("tf: fractions of a factor of degree %d: %w", f.q.Degree(), fault.ErrLimit)
	}
	rest := ring.mul(ring.reduce(ratpoly.FromInteger(e.num)), inverse)
	lead := new(big.Rat).SetInt(f.q.Leading())
	monic := ratpoly.FromInteger(f.q).Scale(new(big.Rat).Inv(lead))
	scale := big.NewRat(1, 1)
	var out []RationalFraction
	for k := f.multiplicity; k > 0; k-- {
		quo, digit, lift := rest.Integer().PseudoQuoRem(f.q)
		den := new(big.Int).Exp(f.q.Leading(), big.NewInt(int64(lift)), nil)
		den.Mul(den, rest.Denominator())
		rest = ratpoly.New(quo, den)
		// q^k = lead^k·monic^k
		scale.SetFrac(big.NewInt(1), new(big.Int).Exp(f.q.Leading(), big.NewInt(int64(k)), nil))
		if !digit.IsZero() {
			numerator := poly.Poly(ratpoly.New(digit, den).Scale(scale).Checked())
			if err := numerator.Err(); err != nil {
				return nil, fmt.Errorf("tf: fractions of a factor of degree %d: %w", f.q.Degree(), err)
			}
			out = append(out, RationalFraction{
				Numerator: numerator,
				Factor:    poly.Poly(monic),
				Power:     k,
			})
		}
	}
	for i, j := 0, len(out)-1; i < j; i, j = i+1, j-1 {
		out[i], out[j] = out[j], out[i]
	}
	return out, nil
}

// overPoles returns the fractions at the roots of one factor.
func (e *expansion) overPoles(f factor) ([]PartialFraction, error) {
	var out []PartialFraction
	for i := 0; i < len(f.roots); i++ {
		x := f.roots[i]
		coefficients, err := e.coefficients(f, x, unscaled)
		if err != nil {
			return nil, err
		}
		pole := f.exactRoot(x)
		for k, c := range coefficients {
			if c.value != 0 {
				out = append(out, PartialFraction{Pole: x.Value(), Power: k + 1, Coefficient: c.value,
					exactPole: pole, exactCoefficient: c.exact})
			}
		}
		if x.IsReal() {
			continue
		}
		i++ // the conjugate follows
		for k, c := range coefficients {
			if c.value != 0 {
				out = append(out, PartialFraction{Pole: conjugate(x.Value()), Power: k + 1, Coefficient: conjugate(c.value),
					exactPole: pole.conjugate(), exactCoefficient: c.exact.conjugate()})
			}
		}
	}
	return out, nil
}

func conjugate(x complex128) complex128 { return complex(real(x), 0-imag(x)) }

func (g gaussian) conjugate() gaussian {
	if g.im == nil {
		return g
	}
	return gaussian{g.re, new(big.Rat).Neg(g.im)}
}

// center and square describe the roots of a linear or quadratic factor: they
// are center ± √square.
func (f factor) centerAndSquare() (center, square *big.Rat) {
	if f.q.Degree() == 1 {
		return new(big.Rat).SetFrac(new(big.Int).Neg(f.q.Coefficient(0)), f.q.Leading()), new(big.Rat)
	}
	center = new(big.Rat).SetFrac(f.q.Coefficient(1), f.q.Leading())
	center.Mul(center, big.NewRat(-1, 2))
	square = new(big.Rat).SetFrac(f.q.Coefficient(0), f.q.Leading())
	return center, square.Sub(new(big.Rat).Mul(center, center), square)
}

// exactRoot returns the components of the root x that are rational.
func (f factor) exactRoot(x *algebraic.Number) gaussian {
	if f.q.Degree() > 2 {
		return gaussian{}
	}
	center, square := f.centerAndSquare()
	if square.Sign() == 0 {
		return gaussian{center, new(big.Rat)}
	}
	if square.Sign() > 0 {
		return gaussian{nil, new(big.Rat)}
	}
	root, ok := rationalSqrt(new(big.Rat).Neg(square))
	if !ok {
		return gaussian{center, nil}
	}
	if imag(x.Value()) < 0 {
		root.Neg(root)
	}
	return gaussian{center, root}
}

// rationalSqrt returns √r where it is rational.
func rationalSqrt(r *big.Rat) (*big.Rat, bool) {
	if r.Sign() < 0 {
		return nil, false
	}
	num, den := new(big.Int).Sqrt(r.Num()), new(big.Int).Sqrt(r.Denom())
	root := new(big.Rat).SetFrac(num, den)
	return root, new(big.Rat).Mul(root, root).Cmp(r) == 0
}

// coefficient is a number known by its nearest complex128 and, in components
// that are rational, exactly. enclose returns a ball around it.
type coefficient struct {
	value   complex128
	exact   gaussian
	enclose func(prec uint) (ball.Complex, error)
}

// unscaled is the scale of partial fractions.
func unscaled(int) *big.Rat { return big.NewRat(1, 1) }

// coefficients returns the coefficients of 1/(s−x), 1/(s−x)², … for a root x
// of f, that of power k+1 multiplied by scale(k).
func (e *expansion) coefficients(f factor, x *algebraic.Number, scale func(k int) *big.Rat) ([]coefficient, error) {
	if f.q.Degree() > 2 {
		return e.certifiedCoefficients(f, x, scale)
	}
	ring := residues{f.q}
	c, _ := expand(ring, e.num, e.den, ring.variable(), f.multiplicity)
	out := make([]coefficient, len(c))
	for i, v := range c {
		var err error
		if out[i], err = f.coefficient(v.Scale(scale(i)), x); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// coefficient returns a + b·x for a residue a + b·s modulo a linear or
// quadratic q: with x = center ± √square it is (a + b·center) ± b√square.
func (f factor) coefficient(v ratpoly.Poly, x *algebraic.Number) (coefficient, error) {
	center, square := f.centerAndSquare()
	b := v.Coefficient(1)
	re := new(big.Rat).Mul(b, center)
	re.Add(re, v.Coefficient(0))
	if square.Sign() == 0 || b.Sign() == 0 {
		return exactCoefficient(gaussian{re, new(big.Rat)})
	}
	negative := b.Sign() < 0 // the sign of b·(x − center)
	if x.IsReal() {
		// Of the two real roots the greater one is center + √square.
		above, err := enclosure(x, firstPrecision)
		for prec := uint(firstPrecision); err == nil; prec *= 2 {
			s, ok := above.Re.Sub(ball.FromRat(center, prec), prec).Sign()
			if ok {
				negative = negative != (s < 0)
				break
			}
			above, err = enclosure(x, 2*prec)
		}
		if err != nil {
			return coefficient{}, err
		}
	} else {
		negative = negative != (imag(x.Value()) < 0)
	}
	square.Mul(square, b)
	square.Mul(square, b)
	if root, ok := rationalSqrt(new(big.Rat).Neg(square)); ok {
		if negative {
			root.Neg(root)
		}
		return exactCoefficient(gaussian{re, root})
	}
	return surdCoefficient(re, square, negative)
}

func exactCoefficient(g gaussian) (coefficient, error) {
	re, err := rounded(g.re)
	if err != nil {
		return coefficient{}, err
	}
	im, err := rounded(g.im)
	enclose := func(prec uint) (ball.Complex, error) {
		return ball.NewComplex(ball.FromRat(g.re, prec), ball.FromRat(g.im, prec)), nil
	}
	return coefficient{complex(re, im), g, enclose}, err
}

// surdCoefficient returns re ± √square, which is complex for a negative square.
// The root is irrational, so that no boundary between two float64 is met.
func surdCoefficient(re, square *big.Rat, negative bool) (coefficient, error) {
	enclose := func(prec uint) (ball.Complex, error) {
		root := ball.FromRat(new(big.Rat).Abs(square), prec).Sqrt(prec)
		if negative {
			root = root.Neg()
		}
		center := ball.FromRat(re, prec)
		if square.Sign() < 0 {
			return ball.NewComplex(center, root), nil
		}
		return ball.NewComplex(center.Add(root, prec), ball.FromInt64(0)), nil
	}
	limit := uint(firstPrecision) << (rungs - 1)
	a, err := ball.Round(firstPrecision, limit, func(prec uint) (ball.Real, error) {
		z, err := enclose(prec)
		return z.Re, err
	})
	exact := gaussian{im: new(big.Rat)}
	if square.Sign() < 0 {
		a, err = rounded(re)
		exact = gaussian{re: re}
	}
	if err != nil {
		return coefficient{}, err
	}
	b, err := ball.Round(firstPrecision, limit, func(prec uint) (ball.Real, error) {
		z, err := enclose(prec)
		return z.Im, err
	})
	return coefficient{complex(a, b), exact, enclose}, err
}
