package statespace

import (
	"fmt"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/units"
)

// String writes one equation per line, with exact numbers:
//
//	level' = -0.00067 level + 0.00018 inflow [m/s]
//	reading = 8 level [mA]
func (c Continuous) String() string {
	return c.text(func(n string) string { return n + "'" }, second, 0)
}

// String writes one equation per line, with exact numbers, and the period:
//
//	next level = 0.9 level + 0.1 inflow [m]
//	every 0.01 s
func (d Discrete) String() string { return d.periodic(0) }

// Format writes the model for the verbs v and s as String does; with a precision,
// as in %.4v or %.4g, numbers are rounded to so many significant digits.
func (c Continuous) Format(state fmt.State, verb rune) {
	format(state, verb, func(digits int) string { return c.text(func(n string) string { return n + "'" }, second, digits) })
}

// Format is Continuous.Format.
func (d Discrete) Format(state fmt.State, verb rune) { format(state, verb, d.periodic) }

func format(state fmt.State, verb rune, text func(digits int) string) {
	digits, ok := state.Precision()
	switch verb {
	case 'v', 's', 'g':
		if !ok {
			digits = 0
		}
		fmt.Fprint(state, text(digits))
	default:
		fmt.Fprintf(state, "%%!%c(statespace)", verb)
	}
}

func (d Discrete) periodic(digits int) string {
	lines := d.text(func(n string) string { return "next " + n }, units.Unit{}, digits)
	return strings.TrimPrefix(lines+"\nevery "+d.Period().String(), "\n")
}

// text writes the equations; an advance divides the unit by perStep.
func (c model) text(advanced func(name string) string, perStep units.Unit, digits int) string {
	var lines []string
	line := func(left string, unit units.Unit, states, fed []*big.Rat) {
		var b strings.Builder
		for j, v := range states {
			addTerm(&b, v, c.states[j].Name, digits)
		}
		for j, v := range fed {
			addTerm(&b, v, c.inputs[j].Name, digits)
		}
		if b.Len() == 0 {
			b.WriteString("0")
		}
		text := left + " = " + b.String()
		if u := unit.String(); u != "" && u != "1" {
			text += " [" + u + "]"
		}
		lines = append(lines, text)
	}
	for i, s := range c.states {
		line(advanced(s.Name), s.Unit.Div(perStep), c.state[i], c.input[i])
	}
	for i, s := range c.outputs {
		line(s.Name, s.Unit, c.output[i], c.feedthrough[i])
	}
	return strings.Join(lines, "\n")
}

// addTerm appends a summand.
func addTerm(b *strings.Builder, v *big.Rat, name string, digits int) {
	if v.Sign() == 0 {
		return
	}
	size := new(big.Rat).Abs(v)
	switch {
	case b.Len() > 0 && v.Sign() < 0:
		b.WriteString(" - ")
	case b.Len() > 0:
		b.WriteString(" + ")
	case v.Sign() < 0:
		b.WriteString("-")
	}
	if size.Cmp(big.NewRat(1, 1)) != 0 {
		text := decimal.Text(size)
		if digits > 0 {
			text = decimal.Significant(size, digits)
		}
		b.WriteString(text + " ")
	}
	b.WriteString(name)
}
