package tf

import (
	"math/big"

	"github.com/qofs/qofs/internal/polytext"
)

// LaTeX returns the function, without its signals, for LaTeX's mathematical
// mode: e^{-180 \, s} \, \frac{8}{15 \, s + 1}. Numbers are exact, in the scale
// of String.
func (g Continuous) LaTeX() string { return g.c.latex("s") }

// LaTeX returns the function, without its signals and period, for LaTeX's
// mathematical mode. Numbers are exact, in the scale of String.
func (g Discrete) LaTeX() string { return g.c.latex("z") }

// MathML returns the function, without its signals, as a math element of
// MathML Core. Numbers are exact, in the scale of String.
func (g Continuous) MathML() string { return g.c.mathML("s") }

// MathML returns the function, without its signals and period, as a math
// element of MathML Core. Numbers are exact, in the scale of String.
func (g Discrete) MathML() string { return g.c.mathML("z") }

func (c *core) latex(variable string) string {
	num, den, exponent := c.markup(polytext.LaTeX, variable)
	text := num
	switch {
	case den != "1":
		text = `\frac{` + num + "}{" + den + "}"
	case exponent != "" && (terms(c.f.Num()) > 1 || num[0] == '-'):
		text = `\left(` + num + `\right)`
	}
	if exponent != "" {
		text = "e^{" + exponent + `} \, ` + text
	}
	return text
}

func (c *core) mathML(variable string) string {
	num, den, exponent := c.markup(polytext.MathML, variable)
	text := num
	switch {
	case den != "<mrow><mn>1</mn></mrow>":
		text = "<mfrac>" + num + den + "</mfrac>"
	case exponent != "":
		text = "<mrow><mo>(</mo>" + num + "<mo>)</mo></mrow>"
	}
	if exponent != "" {
		text = "<msup><mi>e</mi>" + exponent + "</msup><mo>&#x2062;</mo>" + text
	}
	return "<math>" + text + "</math>"
}

// markup writes the parts; exponent, −T s, is empty without dead time.
func (c *core) markup(w polytext.Notation, variable string) (num, den, exponent string) {
	k := scale(c.f, variable, exact)
	num, den = w.Write(scaled(c.f.Num(), k), variable), w.Write(scaled(c.f.Den(), k), variable)
	if c.delay != nil {
		exponent = w.Write([]*big.Rat{{}, new(big.Rat).Neg(c.delay)}, variable)
	}
	return num, den, exponent
}
