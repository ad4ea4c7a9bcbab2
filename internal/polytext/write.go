package polytext

import (
	"fmt"
	"html"
	"math/big"
	"strconv"
	"strings"

	"github.com/qofs/qofs/internal/decimal"
)

// Notation is a language in which a polynomial is written.
type Notation struct {
	Number         func(r *big.Rat) string // of a positive number
	Power          func(variable string, n int) string
	Times          string // between a coefficient and a power
	Plus, Minus    string // between terms
	Negative       string // before the first term
	Opening, Close string // around all
}

// Plain is the text that Parse reads.
var Plain = Notation{
	Number: decimal.Text,
	Power: func(variable string, n int) string {
		if n == 1 {
			return variable
		}
		return variable + "^" + strconv.Itoa(n)
	},
	Times: " ", Plus: " + ", Minus: " - ", Negative: "-",
}

// Rounded is Plain with every coefficient rounded to some significant digits.
func Rounded(digits int) Notation {
	n := Plain
	n.Number = func(r *big.Rat) string { return decimal.Significant(r, digits) }
	return n
}

// LaTeX is the notation of LaTeX's mathematics mode.
var LaTeX = Notation{
	Number: func(r *big.Rat) string {
		s, ok := decimal.Finite(r)
		if !ok {
			return `\frac{` + r.Num().String() + `}{` + r.Denom().String() + `}`
		}
		if m, e, ok := strings.Cut(s, "e"); ok {
			return m + ` \cdot 10^{` + e + `}`
		}
		return s
	},
	Power: func(variable string, n int) string {
		if n == 1 {
			return variable
		}
		return variable + "^{" + strconv.Itoa(n) + "}"
	},
	Times: ` \, `, Plus: " + ", Minus: " - ", Negative: "-",
}

// MathML is presentation MathML, one <mrow>.
var MathML = Notation{
	Number: func(r *big.Rat) string {
		s, ok := decimal.Finite(r)
		if !ok {
			return "<mfrac><mn>" + r.Num().String() + "</mn><mn>" + r.Denom().String() + "</mn></mfrac>"
		}
		if m, e, ok := strings.Cut(s, "e"); ok {
			return fmt.Sprintf("<mn>%s</mn><mo>&#xB7;</mo><msup><mn>10</mn><mn>%s</mn></msup>", m, e)
		}
		return "<mn>" + s + "</mn>"
	},
	Power: func(variable string, n int) string {
		if n == 1 {
			return "<mi>" + html.EscapeString(variable) + "</mi>"
		}
		return fmt.Sprintf("<msup><mi>%s</mi><mn>%d</mn></msup>", html.EscapeString(variable), n)
	},
	Times: "<mo>&#x2062;</mo>", Plus: "<mo>+</mo>", Minus: "<mo>&#x2212;</mo>", Negative: "<mo>&#x2212;</mo>",
	Opening: "<mrow>", Close: "</mrow>",
}

// Write writes the polynomial with the given ascending coefficients, highest
// power first.
func (w Notation) Write(ascending []*big.Rat, variable string) string {
	var b strings.Builder
	b.WriteString(w.Opening)
	terms := 0
	for i := len(ascending) - 1; i >= 0; i-- {
		c := ascending[i]
		if c.Sign() == 0 {
			continue
		}
		switch {
		case c.Sign() < 0 && terms == 0:
			b.WriteString(w.Negative)
		case c.Sign() < 0:
			b.WriteString(w.Minus)
		case terms > 0:
			b.WriteString(w.Plus)
		}
		terms++
		number := w.Number(new(big.Rat).Abs(c))
		switch {
		case i == 0:
			b.WriteString(number)
		case number == w.Number(big.NewRat(1, 1)):
			b.WriteString(w.Power(variable, i))
		default:
			b.WriteString(number + w.Times + w.Power(variable, i))
		}
	}
	if terms == 0 {
		b.WriteString(w.Number(new(big.Rat)))
	}
	b.WriteString(w.Close)
	return b.String()
}
