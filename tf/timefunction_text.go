package tf

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"

	"github.com/qofs/qofs/internal/ball"
)

// String returns the function as a person would write it, such as
//
//	2.4 − 3 e^(−0.5 t) cos(2 t) [mm]
//
// Rational numbers appear exactly, as finite decimals or short fractions,
// where that takes no more than 12 digits; all other numbers are rounded to 6
// significant digits, each of them correct. An impulse is written δ(t), and a
// dead time of 180 s as in 1 − e^(−0.1 (t − 180)) for t ≥ 180.
func (f TimeFunction) String() string { return f.text(0) }

// Format prints the function by a verb:
//
//	%v, %s  as String does
//	%g      with every number rounded to six significant digits, or to the
//	        precision given (%.4g), each digit correct
func (f TimeFunction) Format(state fmt.State, verb rune) {
	digits := 0
	switch verb {
	case 'v', 's':
	case 'g':
		var ok bool
		if digits, ok = state.Precision(); !ok {
			digits = plainDigits
		}
		digits = min(max(digits, 1), 100)
	default:
		fmt.Fprintf(state, "%%!%c(tf.TimeFunction=%s)", verb, f.text(0))
		return
	}
	fmt.Fprint(state, f.text(digits))
}

func (f TimeFunction) text(digits int) string {
	variable := "t"
	if f.delay != nil {
		variable = "(t − " + rationalText(f.delay, digits) + ")"
	}
	terms, err := f.Terms()
	var s sum
	if f.impulse != nil {
		s.add(rationalText(f.impulse, digits), "δ("+strings.Trim(variable, "()")+")")
	}
	for _, term := range terms {
		term.write(&s, variable, digits)
	}
	text := s.String()
	if err != nil {
		text = "a time function whose terms cannot be printed: " + err.Error()
	}
	if f.delay != nil {
		text += " for t ≥ " + rationalText(f.delay, digits)
	}
	if unit := unitText(f.signal.Unit); unit != "" {
		text += " [" + unit + "]"
	}
	return text
}

// write adds the one or two products of the term to a sum.
func (t TimeTerm) write(s *sum, variable string, digits int) {
	var factors []string
	if t.Power > 0 {
		power := variable
		if t.Power > 1 {
			power += "^" + strconv.Itoa(t.Power)
		}
		factors = append(factors, power)
	}
	if t.Decay != 0 {
		factors = append(factors, "e^("+rate(t.decay().text(digits), variable)+")")
	}
	if t.Frequency == 0 {
		s.add(t.cosine().text(digits), factors...)
		return
	}
	angle := "(" + rate(t.frequency().text(digits), variable) + ")"
	n := len(factors)
	if t.Cosine != 0 {
		s.add(t.cosine().text(digits), append(factors[:n:n], "cos"+angle)...)
	}
	if t.Sine != 0 {
		s.add(t.sine().text(digits), append(factors[:n:n], "sin"+angle)...)
	}
}

// product joins a number and a factor, leaving out a 1.
func product(number string, factors ...string) string {
	sign := ""
	if rest, ok := strings.CutPrefix(number, "−"); ok {
		sign, number = "−", rest
	}
	if number == "1" && len(factors) > 0 {
		return sign + strings.Join(factors, " ")
	}
	return sign + strings.Join(append([]string{number}, factors...), " ")
}

// rate joins a number and the time, a fraction as in 2 t/3.
func rate(number, variable string) string {
	above, below, ok := strings.Cut(number, "/")
	if !ok {
		return product(number, variable)
	}
	return product(above, variable) + "/" + below
}

// sum joins products with their signs.
type sum struct{ text strings.Builder }

func (s *sum) add(number string, factors ...string) {
	text := product(number, factors...)
	if s.text.Len() > 0 {
		if rest, ok := strings.CutPrefix(text, "−"); ok {
			text = " − " + rest
		} else {
			text = " + " + text
		}
	}
	s.text.WriteString(text)
}

// String returns the sum, 0 where it is empty.
func (s *sum) String() string {
	if s.text.Len() == 0 {
		return "0"
	}
	return s.text.String()
}

const (
	plainDigits    = 6  // of a rounded number
	exactDigits    = 12 // of an exact decimal
	fractionDigits = 5  // of each part of a fraction
)

// text prints a figure with the given number of significant digits; 0 asks
// for exact text where it is short, and else for 6 digits.
func (f figure) text(digits int) string {
	if f.exact != nil {
		return rationalText(f.exact, digits)
	}
	if digits == 0 {
		digits = plainDigits
	}
	for i := range rungs {
		b, err := f.enclose(firstPrecision << i)
		if err != nil {
			break
		}
		if text, ok := agreed(b, digits); ok {
			return text
		}
	}
	return tidy(strconv.FormatFloat(f.value, 'g', min(digits, 17), 64))
}

// agreed returns the text that all points of b round to.
func agreed(b ball.Real, digits int) (string, bool) {
	if !b.IsFinite() {
		return "", false
	}
	lo, hi := b.Lower().Text('g', digits), b.Upper().Text('g', digits)
	return tidy(lo), lo == hi
}

// rationalText prints a rational number, exactly where digits is 0 and the text is
// short, and else rounded.
func rationalText(r *big.Rat, digits int) string {
	if digits == 0 {
		if n, finite := r.FloatPrec(); finite && n <= exactDigits {
			text := r.FloatString(n)
			if len(strings.Trim(text, "-.0")) <= exactDigits && len(text) <= exactDigits+6 {
				return strings.Replace(text, "-", "−", 1)
			}
		} else if text := r.RatString(); len(r.Denom().String()) <= fractionDigits && len(new(big.Int).Abs(r.Num()).String()) <= fractionDigits {
			return strings.Replace(text, "-", "−", 1)
		}
		digits = plainDigits
	}
	for prec := uint(firstPrecision); prec <= firstPrecision<<rungs; prec *= 2 {
		if text, ok := agreed(ball.FromRat(r, prec), digits); ok {
			return text
		}
	}
	// A tie between two decimals: round half to even in decimal, exactly.
	lo := ball.FromRat(r, firstPrecision).Mid()
	return tidy(lo.Text('g', digits))
}

// tidy turns the text of a float into the text of a person: no trailing zeros
// after the point, no padded exponent, a minus sign.
func tidy(text string) string {
	mantissa, exponent, has := strings.Cut(text, "e")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	if has {
		n, _ := strconv.Atoi(exponent)
		mantissa += "e" + strconv.Itoa(n)
	}
	return strings.ReplaceAll(mantissa, "-", "−")
}
