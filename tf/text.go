package tf

import (
	"math/big"
	"strconv"
	"strings"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratfun"
)

// precision is the number of significant digits of printed numbers, or exact.
type precision int

const exact precision = 0

func (p precision) write(r *big.Rat) (text string, ok bool) {
	if p == exact {
		return decimal(r)
	}
	return significant(r, int(p)), true
}

// notation writes a quotient in some language. The functions get finished
// parts.
type notation struct {
	number   func(digits string) string
	power    func(variable string, n int) string
	times    string // between a coefficient and a power
	plus     string
	minus    string // between terms
	negative string // before the first term
	group    func(text string) string
	fraction func(num, den string, numTerms, denTerms int) string
}

var plain = notation{
	number: func(digits string) string { return digits },
	power: func(variable string, n int) string {
		if n == 1 {
			return variable
		}
		return variable + "^" + strconv.Itoa(n)
	},
	times: " ", plus: " + ", minus: " - ", negative: "-",
	group: func(text string) string { return "(" + text + ")" },
	fraction: func(num, den string, numTerms, denTerms int) string {
		if numTerms > 1 {
			num = "(" + num + ")"
		}
		if denTerms > 1 || strings.Contains(den, " ") {
			den = "(" + den + ")"
		}
		return num + "/" + den
	},
}

// polynomial writes k·p with its number of terms; coefficients are written by
// digits. ok is false where digits cannot write one.
func (w *notation) polynomial(p intpoly.Poly, k *big.Rat, variable string, digits precision) (text string, terms int, ok bool) {
	var b strings.Builder
	for i := p.Degree(); i >= 0; i-- {
		if p.Sign(i) == 0 {
			continue
		}
		c := new(big.Rat).SetInt(p.Coefficient(i))
		c.Mul(c, k)
		switch {
		case c.Sign() < 0 && terms == 0:
			b.WriteString(w.negative)
		case c.Sign() < 0:
			b.WriteString(w.minus)
		case terms > 0:
			b.WriteString(w.plus)
		}
		terms++
		d, ok := digits.write(c.Abs(c))
		if !ok {
			return "", 0, false
		}
		switch {
		case i == 0:
			b.WriteString(w.number(d))
		case d == "1":
			b.WriteString(w.power(variable, i))
		default:
			b.WriteString(w.number(d) + w.times + w.power(variable, i))
		}
	}
	if terms == 0 {
		return w.number("0"), 1, true
	}
	return b.String(), terms, true
}

// quotient writes f multiplied above and below by k.
func (w *notation) quotient(f ratfun.Func, k *big.Rat, variable string, digits precision) (text string, terms int, ok bool) {
	num, numTerms, ok := w.polynomial(f.Num(), k, variable, digits)
	if !ok {
		return "", 0, false
	}
	den, denTerms, ok := w.polynomial(f.Den(), k, variable, digits)
	if !ok {
		return "", 0, false
	}
	if den == w.number("1") {
		return num, numTerms, true
	}
	return w.fraction(num, den, numTerms, denTerms), 1, true
}

// integers writes f with integer coefficients.
func (w *notation) integers(f ratfun.Func, variable string) (text string, terms int) {
	text, terms, _ = w.quotient(f, big.NewRat(1, 1), variable, exact)
	return text, terms
}

// shortest writes f with a denominator whose leading or lowest coefficient is
// 1, or with integers: the shortest of them, and of equals the first. A
// function of z has the leading coefficient 1 wherever that is possible, as is
// usual in the trade.
func (w *notation) shortest(f ratfun.Func, variable string, digits precision) (text string, terms int) {
	den := f.Den()
	lead := new(big.Rat).SetFrac(big.NewInt(1), den.Leading())
	if text, terms, ok := w.quotient(f, lead, variable, digits); ok && variable == "z" {
		return text, terms
	}
	low := den.Coefficient(den.Valuation())
	for i, k := range []*big.Rat{lead, new(big.Rat).SetFrac(big.NewInt(1), low.Abs(low)), big.NewRat(1, 1)} {
		t, n, ok := w.quotient(f, k, variable, digits)
		if ok && (text == "" || len(t) < len(text)) && (i < 2 || digits == exact) {
			text, terms = t, n
		}
	}
	return text, terms
}
