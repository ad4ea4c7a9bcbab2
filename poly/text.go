package poly

import (
	"fmt"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/internal/polytext"
	"github.com/qofs/qofs/internal/ratpoly"
)

// Parse reads a polynomial in one variable of any name, such as
//
//	0.02 s^2 + 0.4 s + 9      3/4 z² − 1/3      2 s (s + 1)^2
//
// Decimals and fractions are read exactly. The error is a *SyntaxError, which
// wraps ErrDivisionByZero for a zero denominator and ErrLimit for a text beyond
// the bounds (1 MiB, degree 4096, nesting 100, coefficients of 2^18 bits, 2^21 words in all).
func Parse(text string) (Poly, error) {
	f, _, err := polytext.Parse(text, "")
	if err != nil {
		return Poly{}, err
	}
	if f.Den().Degree() > 0 {
		return Poly{}, lex.Fault(text, 0, "a ratio of polynomials", "a polynomial", nil)
	}
	return Poly(ratpoly.New(f.Num(), f.Den().Coefficient(0))), nil
}

// MustParse is Parse for polynomials written down in a program; it panics on
// an error.
func MustParse(text string) Poly {
	p, err := Parse(text)
	if err != nil {
		panic(err)
	}
	return p
}

// Text writes p in the given variable, highest power first, exactly: finite
// decimals as such, other numbers as fractions. Parse reads it back. Where Err is
// not nil it is "(too long)", which Parse refuses, and so are the other texts.
func (p Poly) Text(variable string) string { return p.write(polytext.Plain, variable) }

func (p Poly) write(n polytext.Notation, variable string) string {
	if p.Err() != nil {
		return n.Opening + "(too long)" + n.Close
	}
	return n.Write(p.Coefficients(), variable)
}

// String is Text("x").
func (p Poly) String() string { return p.Text("x") }

// Format prints p in x by a verb:
//
//	%v, %s    exactly, as String does
//	%g        coefficients rounded to six significant digits, or to the
//	          precision given (%.4g)
func (p Poly) Format(f fmt.State, verb rune) {
	switch verb {
	case 'v', 's':
		fmt.Fprint(f, p.String())
	case 'g':
		digits, ok := f.Precision()
		if !ok {
			digits = 6
		}
		fmt.Fprint(f, p.write(polytext.Rounded(min(max(digits, 1), 1000)), "x"))
	default:
		fmt.Fprintf(f, "%%!%c(poly.Poly=%s)", verb, p.String())
	}
}

// LaTeX writes p for the mathematics mode of LaTeX.
func (p Poly) LaTeX(variable string) string {
	return p.write(polytext.LaTeX, variable)
}

// MathML writes p as presentation MathML, one mrow element.
func (p Poly) MathML(variable string) string {
	return p.write(polytext.MathML, variable)
}

// MarshalText is String, for encoding.TextMarshaler; the error is that of Err.
func (p Poly) MarshalText() ([]byte, error) {
	if err := p.Err(); err != nil {
		return nil, err
	}
	return []byte(p.String()), nil
}

// UnmarshalText is Parse, for encoding.TextUnmarshaler.
func (p *Poly) UnmarshalText(text []byte) error {
	q, err := Parse(string(text))
	if err == nil {
		*p = q
	}
	return err
}
