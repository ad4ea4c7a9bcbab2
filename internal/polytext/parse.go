// Package polytext reads and writes the text of polynomials and of ratios of
// polynomials.
package polytext

import (
	"errors"
	"fmt"
	"math/big"
	"strconv"
	"strings"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
)

// Bounds on what a text may describe.
const (
	maxDegree = lex.MaxDegree
	maxBits   = 1 << 18 // of a coefficient
	maxWork   = 1 << 26 // word multiplications over a whole text
)

// Parse reads a whole text as a ratio of polynomials in a variable; where
// variable is empty, the first name in the text is it. It returns the variable
// that it met, or variable.
//
// A sum, product, quotient or power is carried out as it stands and nothing is
// cancelled: (s + 1)/(s + 1) keeps both, and a sum of ratios stands over the
// product of the denominators.
func Parse(text, variable string) (f ratfun.Func, name string, err error) {
	tokens, err := lex.Tokens(text)
	if err != nil {
		return ratfun.Func{}, "", err
	}
	f, n, name, err := Expression(text, tokens, variable)
	if err == nil && tokens[n].Kind != lex.End {
		t := tokens[n]
		err = lex.Fault(text, t.Offset, t.Describe(), "an operator or the end", nil)
	}
	return f, name, err
}

// Expression reads the longest expression that the tokens begin with, and
// returns how many tokens it took. The tokens end in lex.End and their offsets
// are those in text.
//
//	expression  [+ -] term { (+ -) term }
//	term        factor { * factor | / factor | factor }
//	factor      (number | variable | "(" expression ")") [^integer | superscript]
//
// Only a number over a number may stand before a factor without a sign, as in
// 3/4 s^2: what 1/s (s + 1) means is asked, not guessed.
func Expression(text string, tokens []lex.Token, variable string) (f ratfun.Func, taken int, name string, err error) {
	p := &parser{text: text, tokens: tokens, variable: variable}
	f, err = p.expression()
	return f, p.next, p.variable, err
}

type parser struct {
	text     string
	tokens   []lex.Token
	next     int
	variable string
	work     int
}

func (p *parser) peek() lex.Token { return p.tokens[p.next] }

func (p *parser) fault(want string, err error) error {
	t := p.peek()
	return lex.Fault(p.text, t.Offset, t.Describe(), want, err)
}

func (p *parser) expression() (ratfun.Func, error) {
	negative := p.peek().Is("-")
	if negative || p.peek().Is("+") {
		p.next++
	}
	sum, err := p.term()
	if err != nil {
		return sum, err
	}
	if negative {
		sum = sum.Neg()
	}
	for {
		at := p.peek()
		if !at.Is("+") && !at.Is("-") {
			return sum, nil
		}
		p.next++
		t, err := p.term()
		if err != nil {
			return sum, err
		}
		if at.Is("-") {
			t = t.Neg()
		}
		if err := p.spend(at, sum.Den(), t.Den()); err != nil {
			return sum, err
		}
		if err := p.spend(at, sum.Num(), t.Den()); err != nil {
			return sum, err
		}
		if err := p.spend(at, sum.Den(), t.Num()); err != nil {
			return sum, err
		}
		// One factor may bring the degree, the other one the length.
		degree := max(sum.Num().Degree()+t.Den().Degree(), sum.Den().Degree()+t.Num().Degree())
		bits := max(sum.Num().Span()+t.Den().Span(), sum.Den().Span()+t.Num().Span()) + 1
		if !ratpoly.Fits(degree+1, bits, 0) {
			return sum, p.tooLarge(at)
		}
		sum = sum.Add(t)
	}
}

func (p *parser) term() (ratfun.Func, error) {
	start := p.next
	product, err := p.factor()
	if err != nil {
		return product, err
	}
	numbers := p.next == start+1 && p.tokens[start].Kind == lex.Number // only plain numbers so far
	divided := false
	for {
		at := p.peek()
		implicit := at.Kind == lex.Name || at.Is("(")
		switch {
		case at.Is("*"), at.Is("/"):
			p.next++
		case implicit && divided && !numbers:
			return product, p.fault("* or parentheses: what follows a division is read in two ways", nil)
		case implicit:
		default:
			return product, nil
		}
		from := p.next
		f, err := p.factor()
		if err != nil {
			return product, err
		}
		numbers = numbers && p.next == from+1 && p.tokens[from].Kind == lex.Number
		if at.Is("/") {
			inverse, ok := f.Inverse()
			if !ok {
				return product, lex.Fault(p.text, p.tokens[from].Offset, "a zero denominator", "", fault.ErrDivisionByZero)
			}
			f, divided = inverse, true
		} else if at.Is("*") {
			divided = false
		}
		if product, err = p.mul(at, product, f); err != nil {
			return product, err
		}
	}
}

func (p *parser) factor() (ratfun.Func, error) {
	t := p.peek()
	var base ratfun.Func
	switch {
	case t.Kind == lex.Number:
		v := t.Value()
		base, _ = ratfun.New(intpoly.FromBigs(v.Num()), intpoly.FromBigs(v.Denom()))
		p.next++
	case t.Kind == lex.Name:
		if notNumbers[strings.ToLower(t.Text)] {
			return base, p.fault("a finite number", fault.ErrNotFinite)
		}
		if p.variable == "" {
			p.variable = t.Text
		}
		if t.Text != p.variable {
			return base, lex.Fault(p.text, t.Offset, fmt.Sprintf("the name %q", lex.Excerpt(t.Text, 0)),
				fmt.Sprintf("the variable %q", p.variable), nil)
		}
		base, _ = ratfun.New(intpoly.FromInt64s(0, 1), intpoly.FromInt64s(1))
		p.next++
	case t.Is("("):
		p.next++
		inner, err := p.expression()
		if err != nil {
			return inner, err
		}
		if !p.peek().Is(")") {
			return inner, p.fault("a closing parenthesis or an operator", nil)
		}
		p.next++
		base = inner
	default:
		return base, p.fault("a number, a variable or a parenthesis", nil)
	}
	return p.power(t, base)
}

// notNumbers are words that stand for no number and are no name either.
var notNumbers = map[string]bool{"nan": true, "inf": true, "infinity": true}

// power raises base to the exponent that follows, if one does.
func (p *parser) power(at lex.Token, base ratfun.Func) (ratfun.Func, error) {
	t := p.peek()
	digits := t.Text
	switch {
	case t.Kind == lex.Superscript:
		p.next++
	case t.Is("^"):
		p.next++
		sign := ""
		if p.peek().Is("-") {
			sign = "-"
			p.next++
		}
		t = p.peek()
		if t.Kind != lex.Number {
			return base, p.fault("a whole exponent", nil)
		}
		digits = sign + t.Text
		p.next++
	default:
		return base, nil
	}
	n, err := strconv.Atoi(digits)
	if err != nil || n > maxDegree || n < -maxDegree {
		return base, lex.Fault(p.text, t.Offset, fmt.Sprintf("the exponent %s", lex.Excerpt(digits, 0)),
			fmt.Sprintf("a whole number of at most %d", maxDegree), limitIf(err == nil || errors.Is(err, strconv.ErrRange)))
	}
	if n < 0 {
		inverse, ok := base.Inverse()
		if !ok {
			return base, lex.Fault(p.text, at.Offset, "a negative power of 0", "", fault.ErrDivisionByZero)
		}
		base, n = inverse, -n
	}
	out, _ := ratfun.New(intpoly.FromInt64s(1), intpoly.FromInt64s(1))
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			if out, err = p.mul(at, out, base); err != nil {
				return out, err
			}
		}
		if n > 1 {
			if base, err = p.mul(at, base, base); err != nil {
				return out, err
			}
		}
	}
	return out, nil
}

// limitIf gives ErrLimit where the exponent was a whole number, only too large.
func limitIf(number bool) error {
	if number {
		return fault.ErrLimit
	}
	return nil
}

// mul multiplies within the bounds.
func (p *parser) mul(at lex.Token, f, g ratfun.Func) (ratfun.Func, error) {
	if err := p.spend(at, f.Num(), g.Num()); err != nil {
		return f, err
	}
	if err := p.spend(at, f.Den(), g.Den()); err != nil {
		return f, err
	}
	return f.Mul(g), nil
}

// spend accounts for the product of a and b before it is computed.
func (p *parser) spend(at lex.Token, a, b intpoly.Poly) error {
	if a.Degree()+b.Degree() > maxDegree {
		return lex.Fault(p.text, at.Offset, fmt.Sprintf("a product of degree %d", a.Degree()+b.Degree()),
			fmt.Sprintf("a degree of at most %d", maxDegree), fault.ErrLimit)
	}
	bits := a.MaxBitLen() + b.MaxBitLen()
	words := func(q intpoly.Poly) int { return (q.Degree() + 1) * (q.MaxBitLen()/64 + 1) }
	// the product, and the greatest common divisor that brings its numbers down
	p.work += words(a)*words(b) + (bits/64)*(bits/64)
	if bits > maxBits || p.work > maxWork || !ratpoly.Fits(a.Degree()+b.Degree()+1, bits, 0) {
		return p.tooLarge(at)
	}
	return nil
}

func (p *parser) tooLarge(at lex.Token) error {
	return lex.Fault(p.text, at.Offset, "a product too large to expand",
		fmt.Sprintf("coefficients of at most %d bits and fewer factors", maxBits), fault.ErrLimit)
}

// Rational returns f as a number where it is one.
func Rational(f ratfun.Func) (*big.Rat, bool) {
	if f.Num().Degree() > 0 || f.Den().Degree() > 0 {
		return nil, false
	}
	return new(big.Rat).SetFrac(f.Num().Coefficient(0), f.Den().Coefficient(0)), true
}
