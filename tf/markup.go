package tf

import (
	"strconv"
	"strings"
)

var latex = notation{
	number: latexNumber,
	power: func(variable string, n int) string {
		if n == 1 {
			return variable
		}
		return variable + "^{" + strconv.Itoa(n) + "}"
	},
	times: ` \, `, plus: " + ", minus: " - ", negative: "-",
	group:    func(text string) string { return `\left(` + text + `\right)` },
	fraction: func(num, den string, _, _ int) string { return `\frac{` + num + "}{" + den + "}" },
}

// latexNumber writes 1.25e-9 as a product with a power of ten.
func latexNumber(digits string) string {
	mantissa, exponent, ok := strings.Cut(digits, "e")
	switch {
	case !ok:
		return digits
	case mantissa == "1":
		return "10^{" + exponent + "}"
	}
	return mantissa + ` \cdot 10^{` + exponent + "}"
}

var mathML = notation{
	number: mathMLNumber,
	power: func(variable string, n int) string {
		if n == 1 {
			return "<mi>" + variable + "</mi>"
		}
		return "<msup><mi>" + variable + "</mi><mn>" + strconv.Itoa(n) + "</mn></msup>"
	},
	times: "<mo>&#x2062;</mo>", plus: "<mo>+</mo>", minus: "<mo>&#x2212;</mo>", negative: "<mo>&#x2212;</mo>",
	group: func(text string) string { return "<mrow><mo>(</mo>" + text + "<mo>)</mo></mrow>" },
	fraction: func(num, den string, _, _ int) string {
		return "<mfrac><mrow>" + num + "</mrow><mrow>" + den + "</mrow></mfrac>"
	},
}

func mathMLNumber(digits string) string {
	mantissa, exponent, ok := strings.Cut(digits, "e")
	if !ok {
		return "<mn>" + digits + "</mn>"
	}
	power := "<msup><mn>10</mn><mn>" + strings.Replace(exponent, "-", "&#x2212;", 1) + "</mn></msup>"
	if mantissa == "1" {
		return power
	}
	return "<mn>" + mantissa + "</mn><mo>&#x22C5;</mo>" + power
}

// LaTeX returns the function, without its signals, for LaTeX's mathematical
// mode: e^{-180 \, s} \, \frac{8}{15 \, s + 1}. Numbers are exact, in the scale
// of String.
func (g Continuous) LaTeX() string { return g.c.markup(&latex, "s", "e^{-", "}") }

// LaTeX returns the function, without its signals and period, for LaTeX's
// mathematical mode. Numbers are exact, in the scale of String.
func (g Discrete) LaTeX() string { return g.c.markup(&latex, "z", "", "") }

// MathML returns the function, without its signals, as a math element of
// MathML Core. Numbers are exact, in the scale of String.
func (g Continuous) MathML() string {
	return "<math>" + g.c.markup(&mathML, "s", "<msup><mi>e</mi><mrow><mo>&#x2212;</mo>", "</mrow></msup>") + "</math>"
}

// MathML returns the function, without its signals and period, as a math
// element of MathML Core. Numbers are exact, in the scale of String.
func (g Discrete) MathML() string { return "<math>" + g.c.markup(&mathML, "z", "", "") + "</math>" }

// markup writes dead time and quotient.
func (c *core) markup(w *notation, variable, open, close string) string {
	ratio, terms := w.shortest(c.f, variable, exact)
	if c.delay == nil {
		return ratio
	}
	if terms > 1 || strings.HasPrefix(ratio, w.negative) {
		ratio = w.group(ratio)
	}
	t, ok := decimal(c.delay)
	number := w.number(t)
	if !ok {
		number = w.fraction(w.number(c.delay.Num().String()), w.number(c.delay.Denom().String()), 1, 1)
	}
	return open + number + w.times + w.power(variable, 1) + close + w.times + ratio
}
