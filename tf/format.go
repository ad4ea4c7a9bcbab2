package tf

import (
	"fmt"
	"io"
	"math/big"
	"strings"
)

const (
	defaultDigits = 6
	maxDigits     = 1000
)

// String returns g as a text of one line that Parse reads back to an Equal
// value, such as "exp(-180 s) 8/(15 s + 1) [m -> mA]" or
// "(2 s + 1)/(s^2 + 0.4 s + 9) [opening: V -> level: mm]". All numbers are
// exact. Numerator and denominator are multiplied by the common number that
// makes the leading or the lowest coefficient below 1, or all coefficients
// integers, whichever text is the shortest. The signals are left out where both
// are unnamed and have the unit 1. Use Format's verb g for short numbers.
func (g Continuous) String() string { return g.c.text("s", exact) }

// String returns g as a text of one line that ParseDiscrete reads back to an
// Equal value, such as "0.1/(z - 0.9) [V -> mm] every 0.01 s". All numbers are
// exact. The leading coefficient of the denominator is 1 where that leaves
// finite decimals; else the form is chosen as for Continuous.
func (g Discrete) String() string { return g.c.text("z", exact) }

// Format writes g for the verbs
//
//	%s %v   exactly, like String
//	%q      the same in double quotes
//	%d      exactly, with integer coefficients
//	%g      every number rounded to 6 significant digits, or to the given
//	        number of them, as in %.4g
//
// A width pads with spaces, on the right with the flag '-'.
func (g Continuous) Format(state fmt.State, verb rune) { g.c.format(state, verb, "s", "Continuous") }

// Format writes g for the verbs of Continuous.
func (g Discrete) Format(state fmt.State, verb rune) { g.c.format(state, verb, "z", "Discrete") }

func (c *core) format(state fmt.State, verb rune, variable, name string) {
	var text string
	switch verb {
	case 's', 'v':
		text = c.text(variable, exact)
	case 'q':
		text = fmt.Sprintf("%q", c.text(variable, exact))
	case 'd':
		text = c.scaledText(big.NewRat(1, 1), variable, exact)
	case 'g':
		digits := defaultDigits
		if p, ok := state.Precision(); ok {
			digits = min(max(p, 1), maxDigits)
		}
		text = c.text(variable, precision(digits))
	default:
		text = "%!" + string(verb) + "(tf." + name + "=" + c.text(variable, exact) + ")"
	}
	if width, ok := state.Width(); ok {
		pad := strings.Repeat(" ", max(0, width-len([]rune(text))))
		if state.Flag('-') {
			text += pad
		} else {
			text = pad + text
		}
	}
	_, _ = io.WriteString(state, text) // the printer keeps the error
}

// text writes the value on one line.
func (c *core) text(variable string, p precision) string {
	return c.scaledText(scale(c.f, variable, p), variable, p)
}

// scaledText writes the value with numerator and denominator multiplied by k.
func (c *core) scaledText(k *big.Rat, variable string, p precision) string {
	var b strings.Builder
	ratio, loose := plainRatio(c.f, k, variable, p)
	if c.delay != nil {
		t := p.write(c.delay)
		if strings.Contains(t, "/") {
			t = "(" + t + ")"
		}
		b.WriteString("exp(-" + t + " " + variable + ") ")
		if loose {
			ratio = "(" + ratio + ")"
		}
	}
	b.WriteString(ratio)
	if signals := c.signals(); signals != "" {
		b.WriteString(" [" + signals + "]")
	}
	if variable == "z" {
		b.WriteString(" every " + p.write(c.periodSeconds()) + " s")
	}
	return b.String()
}
