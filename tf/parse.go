package tf

import (
	"errors"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/internal/polytext"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/units"
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// Parse reads a transfer function in s:
//
//	[exp(-T s) [* | /]] ratio ["[" signal -> signal "]"]
//
//	(2 s + 1)/(s^2 + 0.4 s + 9) [V -> mm]
//	exp(-180 s) 8/(15 s + 1) [level: m -> reading: mA]
//	400 + 400/(1500 s) [mA -> mm]
//
// The ratio is any expression of numbers, s, + - * / ^ and parentheses; it is
// carried out exactly as it stands and nothing is cancelled. A signal is a unit
// in the notation of units.Parse, or a name, a colon and a unit. Without
// signals both are unnamed and have the unit 1.
//
// The error is a *SyntaxError with the offset; the sentinel behind it is
// ErrDivisionByZero for a zero denominator, ErrLimit for a text beyond the
// bounds (length 1 MiB, degree and decimal exponents 4096), ErrNegativeDeadTime
// or ErrName.
func Parse(text string) (Continuous, error) {
	c, err := parse(text, "s")
	return Continuous{c: c}, err
}

// ParseDiscrete reads a transfer function in z and its sampling period,
//
//	ratio ["[" signal -> signal "]"] every time
//
//	0.1/(z - 0.9) [V -> mm] every 0.01 s
//
// in the notation of Parse. The error is a *SyntaxError.
func ParseDiscrete(text string) (Discrete, error) {
	c, err := parse(text, "z")
	return Discrete{c: c}, err
}

// MustParse is Parse for functions written down in a program; it panics on an
// error.
func MustParse(text string) Continuous { return Must(Parse(text)) }

// MustParseDiscrete is ParseDiscrete for functions written down in a program;
// it panics on an error.
func MustParseDiscrete(text string) Discrete { return Must(ParseDiscrete(text)) }

// reader reads one text.
type reader struct {
	text        string
	variable    string
	tokens      []lex.Token
	open, close int // offsets of the brackets about the signals; both len(text) without them
}

func parse(text, variable string) (core, error) {
	r := reader{text: text, variable: variable}
	if err := r.split(); err != nil {
		return core{}, err
	}
	var c core
	var err error
	if r.tokens[0].Kind == lex.Name && r.tokens[0].Text == "exp" {
		if err := r.delay(&c); err != nil {
			return core{}, err
		}
	}
	if c.f, err = r.ratio(c.delay != nil); err != nil {
		return core{}, err
	}
	if r.open < len(text) {
		if err := r.signals(&c); err != nil {
			return core{}, err
		}
	}
	if err := r.every(&c); err != nil {
		return core{}, err
	}
	return c, nil
}

// split finds the brackets and the tokens outside them.
func (r *reader) split() error {
	outside := r.text
	r.open, r.close = len(r.text), len(r.text)
	if len(r.text) <= lex.MaxLength {
		if i := strings.IndexByte(r.text, '['); i >= 0 {
			n := strings.IndexByte(r.text[i:], ']')
			if n < 0 {
				return lex.Fault(r.text, len(r.text), "the end", "a bracket ] after the signals", nil)
			}
			r.open, r.close = i, i+n
			outside = r.text[:i] + strings.Repeat(" ", n+1) + r.text[i+n+1:]
		}
	}
	tokens, err := lex.Tokens(outside)
	if err != nil {
		return r.rebase(err, 0)
	}
	r.tokens = tokens
	return nil
}

// rebase moves a syntax error of a part of the text, from offset on, to the
// whole.
func (r *reader) rebase(err error, offset int) error {
	var s *SyntaxError
	if !errors.As(err, &s) {
		return lex.Fault(r.text, offset, "a fault", err.Error(), err)
	}
	moved := *s
	moved.Offset += offset
	moved.Text = lex.Excerpt(r.text, moved.Offset)
	return &moved
}

func (r *reader) fault(t lex.Token, want string, err error) error {
	return lex.Fault(r.text, t.Offset, t.Describe(), want, err)
}

// delay reads exp(−T s) and an optional sign of multiplication or division.
func (r *reader) delay(c *core) error {
	const want = "a dead time as exp(-T s), T a number of seconds"
	if r.variable != "s" {
		return r.fault(r.tokens[0], "a ratio in z; a dead time of n periods is a factor 1/z^n", nil)
	}
	if !r.tokens[1].Is("(") {
		return r.fault(r.tokens[1], want, nil)
	}
	f, n, _, err := polytext.Expression(r.text, r.tokens[2:], r.variable)
	if err != nil {
		return err
	}
	argument, num := r.tokens[2], f.Num()
	if f.Den().Degree() > 0 || num.Degree() > 1 || num.Sign(0) != 0 {
		return lex.Fault(r.text, argument.Offset, "an exponent that is no multiple of s", want, nil)
	}
	if num.Sign(1) > 0 {
		return lex.Fault(r.text, argument.Offset, "an exponent above 0", want, ErrNegativeDeadTime)
	}
	r.tokens = r.tokens[2+n:]
	if !r.tokens[0].Is(")") {
		return r.fault(r.tokens[0], "a closing parenthesis", nil)
	}
	r.tokens = r.tokens[1:]
	switch {
	case r.tokens[0].Is("*"):
		r.tokens = r.tokens[1:]
	case r.tokens[0].Is("/"): // exp(-T s)/(s + 1) is exp(-T s) 1/(s + 1)
		one, err := lex.Tokens("1")
		if err != nil {
			return err
		}
		one[0].Offset = r.tokens[0].Offset
		r.tokens = append(one[:1:1], r.tokens...)
	}
	t := new(big.Rat).SetFrac(num.Coefficient(1), f.Den().Coefficient(0))
	c.setDelay(t.Neg(t))
	return nil
}

// ratio reads the expression; what follows it stays in r.tokens. After a dead
// time it may be missing, which is 1.
func (r *reader) ratio(optional bool) (ratfun.Func, error) {
	end := 0
	for t := r.tokens[end]; t.Kind != lex.End && t.Offset < r.open && (t.Kind != lex.Name || t.Text != "every"); t = r.tokens[end] {
		if t.Kind == lex.Name && t.Text == "exp" {
			return ratfun.Func{}, r.fault(t, "a dead time exp(-T s) only once, at the beginning", nil)
		}
		end++
	}
	if end == 0 && optional {
		return unity, nil
	}
	expression := r.tokens[:end:end]
	if r.open < len(r.text) && (end == 0 || r.tokens[end-1].Offset < r.open) && r.tokens[end].Offset > r.open {
		expression = append(expression, lex.Token{Kind: lex.Operator, Text: "[", Offset: r.open})
	}
	expression = append(expression, lex.Token{Kind: lex.End, Offset: r.tokens[end].Offset})
	f, n, _, err := polytext.Expression(r.text, expression, r.variable)
	if err != nil {
		return ratfun.Func{}, err
	}
	if n != end {
		return ratfun.Func{}, r.fault(expression[n], "an operator or the end", nil)
	}
	r.tokens = r.tokens[end:]
	return f, nil
}

// signals reads what stands between the brackets.
func (r *reader) signals(c *core) error {
	inside := r.text[r.open+1 : r.close]
	for _, arrow := range []string{"->", "→"} {
		i := strings.Index(inside, arrow)
		if i < 0 {
			continue
		}
		var err error
		if c.input, err = r.signal(r.open+1, r.open+1+i); err != nil {
			return err
		}
		c.output, err = r.signal(r.open+1+i+len(arrow), r.close)
		return err
	}
	return lex.Fault(r.text, r.open, "brackets without an arrow", "[input unit -> output unit]", nil)
}

// signal reads a unit, or a name, a colon and a unit.
func (r *reader) signal(from, to int) (units.Signal, error) {
	var s units.Signal
	if i := strings.IndexByte(r.text[from:to], ':'); i >= 0 {
		s.Name = strings.TrimSpace(r.text[from : from+i])
		if err := checkName(s.Name); err != nil {
			return s, lex.Fault(r.text, from, "the name of a signal", "a name", err)
		}
		from += i + 1
	}
	u, err := units.Parse(strings.TrimSpace(r.text[from:to]))
	if err != nil {
		spaces := len(r.text[from:to]) - len(strings.TrimLeft(r.text[from:to], " \t\n\r"))
		return s, r.rebase(err, from+spaces)
	}
	s.Unit = u
	return s, nil
}

// every reads the sampling period of a function of z, and demands the end.
func (r *reader) every(c *core) error {
	t := r.tokens[0]
	isEvery := t.Kind == lex.Name && t.Text == "every" && (r.open == len(r.text) || t.Offset > r.close)
	switch {
	case r.variable == "z" && !isEvery:
		return r.fault(t, "a sampling period, as in every 0.01 s", nil)
	case r.variable == "z":
		from := t.Offset + len(t.Text)
		q, err := units.ParseQuantity(r.text[from:])
		if err != nil {
			return r.rebase(err, from)
		}
		period, err := seconds(q)
		if err != nil {
			return lex.Fault(r.text, from, "a sampling period of "+q.String(), "a time", err)
		}
		if period.Sign() <= 0 {
			return lex.Fault(r.text, from, "a sampling period of "+q.String(), "a time above 0", ErrPeriod)
		}
		c.setPeriod(period)
		return nil
	case isEvery:
		return r.fault(t, "the end; ParseDiscrete reads a function with a sampling period", nil)
	case t.Kind != lex.End:
		return r.fault(t, "the end", nil)
	}
	return nil
}
