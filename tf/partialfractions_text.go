package tf

import (
	"fmt"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
)

// String writes the polynomial and the rational fractions, exactly, such as
//
//	1/(3 s) - 2/(3 (s + 3)^2) + (s + 1)/(s^2 + 2 s + 5)
//
// Parse and ParseDiscrete read it back to an equivalent function.
func (p PartialFractions) String() string {
	var out signedSum
	if !p.polynomial.IsZero() {
		out.add(p.polynomial.Text(p.variable))
	}
	for _, f := range p.rational {
		out.add(f.Text(p.variable))
	}
	return out.String()
}

// Format prints the expansion by a verb:
//
//	%v, %s  over ℚ, exactly, as String does
//	%g      over the poles, such as 0.5/(s + 1.2) + (0.2 - 0.1j)/(s + 1 - 2j),
//	        with numbers rounded to six significant digits, or to the
//	        precision given (%.4g)
func (p PartialFractions) Format(state fmt.State, verb rune) {
	switch verb {
	case 'v', 's':
		fmt.Fprint(state, p.String())
	case 'g':
		digits, ok := state.Precision()
		if !ok {
			digits = plainDigits
		}
		fmt.Fprint(state, p.overPolesText(min(max(digits, 1), 17)))
	default:
		fmt.Fprintf(state, "%%!%c(tf.PartialFractions=%s)", verb, p.String())
	}
}

// signedSum joins texts that may begin with a minus.
type signedSum struct{ strings.Builder }

func (s *signedSum) add(text string) {
	if s.Len() > 0 {
		if rest, ok := strings.CutPrefix(text, "-"); ok {
			s.WriteString(" - ")
			text = rest
		} else {
			s.WriteString(" + ")
		}
	}
	s.WriteString(text)
}

// String is the sum, 0 where it has no terms.
func (s *signedSum) String() string {
	if s.Len() == 0 {
		return "0"
	}
	return s.Builder.String()
}

// Text writes the fraction in the given variable, exactly. The factor appears
// with whole coefficients where its monic form has no finite decimals, and a
// common denominator of the numerator moves below.
func (f RationalFraction) Text(variable string) string {
	factor, numerator := f.Factor, f.Numerator
	if factor.Err() != nil || numerator.Err() != nil {
		return grouped(numerator.Text(variable)) + "/" + grouped(factor.Text(variable))
	}
	// The text may be longer than a polynomial of its own could be.
	scale := func(p poly.Poly, k *big.Int) poly.Poly {
		return poly.Poly(ratpoly.Poly(p).Scale(new(big.Rat).SetInt(k)))
	}
	if !isFinite(coefficientsOf(factor)) {
		lead := ratpoly.Poly(factor).Denominator()
		factor = scale(factor, lead)
		for range f.Power {
			numerator = scale(numerator, lead)
		}
	}
	divisor := big.NewInt(1)
	if !isFinite(coefficientsOf(numerator)) {
		divisor = ratpoly.Poly(numerator).Denominator()
		numerator = scale(numerator, divisor)
	}
	sign := ""
	if ratpoly.Poly(numerator).Integer().Sign(numerator.Degree()) < 0 {
		sign, numerator = "-", numerator.Neg()
	}
	return sign + grouped(numerator.Text(variable)) + "/" + below(factor, f.Power, divisor, variable)
}

// below writes divisor·factor^power as a denominator.
func below(factor poly.Poly, power int, divisor *big.Int, variable string) string {
	text := grouped(factor.Text(variable))
	if power > 1 {
		text += fmt.Sprintf("^%d", power)
	}
	if divisor.IsInt64() && divisor.Int64() == 1 {
		return text
	}
	return "(" + divisor.String() + " " + text + ")"
}

// grouped puts a text of several parts into parentheses.
func grouped(text string) string {
	if strings.Contains(text, " ") {
		return "(" + text + ")"
	}
	return text
}

func coefficientsOf(p poly.Poly) []*big.Rat {
	c := make([]*big.Rat, p.Degree()+1)
	for i := range c {
		c[i] = p.Coefficient(i)
	}
	return c
}

func (p PartialFractions) overPolesText(digits int) string {
	var out signedSum
	if !p.polynomial.IsZero() {
		out.add(precision(digits).notation().Write(coefficientsOf(p.polynomial), p.variable))
	}
	for _, t := range p.terms {
		text := p.variable
		if t.Pole != 0 {
			text = "(" + p.variable + shiftText(-real(t.Pole), -imag(t.Pole), digits) + ")"
		}
		if t.Power > 1 {
			text += fmt.Sprintf("^%d", t.Power)
		}
		out.add(complexText(t.Coefficient, digits) + "/" + text)
	}
	return out.String()
}

// complexText writes a number, in parentheses where it has two parts.
func complexText(z complex128, digits int) string {
	switch {
	case imag(z) == 0:
		return floatText(real(z), digits)
	case real(z) == 0:
		return imaginary(floatText(imag(z), digits))
	}
	return "(" + floatText(real(z), digits) + imaginary(signed(imag(z), digits)) + ")"
}

// shiftText writes what is added to the variable.
func shiftText(re, im float64, digits int) string {
	text := ""
	if re != 0 {
		text = signed(re, digits)
	}
	if im != 0 {
		text += imaginary(signed(im, digits))
	}
	return text
}

// imaginary appends the unit j, in place of a factor 1.
func imaginary(text string) string {
	if rest, ok := strings.CutSuffix(text, "1"); ok && (rest == "" || strings.HasSuffix(rest, " ") || rest == "-") {
		return rest + "j"
	}
	return text + "j"
}

// signed writes x as a summand.
func signed(x float64, digits int) string {
	if rest, ok := strings.CutPrefix(floatText(x, digits), "-"); ok {
		return " - " + rest
	}
	return " + " + floatText(x, digits)
}

func floatText(x float64, digits int) string {
	return decimal.Significant(new(big.Rat).SetFloat64(x), digits)
}
