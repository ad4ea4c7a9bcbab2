package units

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/qofs/qofs/internal/lex"
)

// Parse reads a unit in the notation of the SI Brochure:
//
//	mm    N*m/rad    kg·m²/s²    m^3/(s*mm)    1/s    rad s^-1    1
//
// A product is written with *, ·, × or a space, a quotient with one solidus. A
// product after a solidus stands in parentheses: "a/b c" and "a/b/c" are
// refused, because people read them in two ways. Powers are written ^2, ^-1 or
// as superscripts. The spelling is kept.
//
// The error is a *SyntaxError with the offset and, for an unknown symbol, a
// near one that exists.
func Parse(text string) (Unit, error) {
	return parseWith(text, symbols)
}

// MustParse is Parse for units written down in a program; it panics on an
// error.
func MustParse(text string) Unit {
	u, err := Parse(text)
	if err != nil {
		panic(err)
	}
	return u
}

func mustParseWith(text string, table map[string]*symbol) Unit {
	u, err := parseWith(text, table)
	if err != nil {
		panic(err)
	}
	return u
}

func parseWith(text string, table map[string]*symbol) (Unit, error) {
	p, err := newParser(text, table)
	if err != nil {
		return Unit{}, err
	}
	if p.peek().Kind == lex.End {
		return Unit{}, p.fault("a unit, or 1 for a pure number")
	}
	fs, err := p.product()
	if err != nil {
		return Unit{}, err
	}
	if p.peek().Kind != lex.End {
		return Unit{}, p.fault("the end of the unit")
	}
	return p.unit(fs, 0)
}

// MaxText bounds the bytes of a text that is read as a unit, a quantity or a
// signal.
const MaxText = 1 << 14

type parser struct {
	text   string
	tokens []lex.Token
	next   int
	table  map[string]*symbol
}

func newParser(text string, table map[string]*symbol) (*parser, error) {
	if len(text) > MaxText {
		return nil, lex.Fault(text, MaxText, fmt.Sprintf("a text of %d bytes", len(text)), fmt.Sprintf("at most %d", MaxText), ErrLimit)
	}
	tokens, err := lex.Tokens(text)
	if err != nil {
		return nil, err
	}
	return &parser{text: text, tokens: tokens, table: table}, nil
}

func (p *parser) peek() lex.Token { return p.tokens[p.next] }

func (p *parser) fault(want string) *SyntaxError {
	t := p.peek()
	return lex.Fault(p.text, t.Offset, t.Describe(), want, nil)
}

// unit makes the unit of the factors under the spelling that was read from the
// byte offset on.
func (p *parser) unit(fs []factor, offset int) (Unit, error) {
	u := fromFactors(fs)
	if u.beyond() {
		return Unit{}, lex.Fault(p.text, offset, "a unit past its bounds",
			fmt.Sprintf("at most %d symbols to at most the power %d", MaxSymbols, MaxPower), ErrLimit)
	}
	if u.d != nil {
		u.d.spelling = strings.Join(strings.Fields(p.text[offset:]), " ")
	}
	return u, nil
}

// product reads term { [*] term } [ / term ].
func (p *parser) product() ([]factor, error) {
	var out []factor
	for first := true; ; first = false {
		t := p.peek()
		switch {
		case first:
		case t.Is("*"):
			p.next++
		case t.Is("/"):
			p.next++
			fs, err := p.term()
			if err != nil {
				return nil, err
			}
			if t := p.peek(); t.Is("/") || t.Is("*") || p.startsTerm() {
				return nil, p.fault("parentheses around what stands below the solidus, as in m/(s*mm): " +
					"a/b c and a/b/c are read in two ways")
			}
			return appendFactors(out, fs, -1), nil
		case p.startsTerm():
		default:
			return out, nil
		}
		fs, err := p.term()
		if err != nil {
			return nil, err
		}
		out = appendFactors(out, fs, 1)
	}
}

func appendFactors(out, fs []factor, sign int) []factor {
	for _, f := range fs {
		f.exponent *= sign
		out = append(out, f)
	}
	return out
}

// startsTerm reports whether the next token can begin a term.
func (p *parser) startsTerm() bool {
	t := p.peek()
	_, known := p.table[t.Text] // %, °, ′
	return t.Kind == lex.Name || t.Is("(") || t.Kind == lex.Operator && known
}

// term reads a symbol, a 1 or a parenthesis, and the power after it.
func (p *parser) term() ([]factor, error) {
	start, t := p.next, p.peek()
	var fs []factor
	switch {
	case t.Is("("):
		p.next++
		inner, err := p.product()
		if err != nil {
			return nil, err
		}
		if !p.peek().Is(")") {
			return nil, p.fault("a closing parenthesis")
		}
		p.next++
		fs = inner
	case t.Kind == lex.Number && t.Text == "1":
		p.next++
	case p.startsTerm():
		f, err := p.symbol()
		if err != nil {
			return nil, err
		}
		fs = []factor{f}
	default:
		return nil, p.fault("the symbol of a unit")
	}
	n, err := p.power()
	if err != nil {
		return nil, err
	}
	for i := range fs {
		fs[i].exponent *= n
		if e := fs[i].exponent; e > MaxPower || e < -MaxPower {
			return nil, lex.Fault(p.text, p.tokens[start].Offset, "the power "+strconv.Itoa(e),
				fmt.Sprintf("at most %d", MaxPower), ErrLimit)
		}
	}
	return fs, nil
}

// power reads ^n, ^-n, ^(-n) or a superscript; without one it is 1.
func (p *parser) power() (int, error) {
	t := p.peek()
	if t.Kind == lex.Superscript {
		n, err := strconv.Atoi(t.Text)
		if err != nil || n > MaxPower || n < -MaxPower {
			return 0, p.fault(fmt.Sprintf("a power of at most %d", MaxPower))
		}
		p.next++
		return n, nil
	}
	if !t.Is("^") {
		return 1, nil
	}
	p.next++
	parenthesis, sign := p.peek().Is("("), 1
	if parenthesis {
		p.next++
	}
	if p.peek().Is("-") {
		p.next++
		sign = -1
	}
	t = p.peek()
	n, err := strconv.Atoi(t.Text)
	if t.Kind != lex.Number || err != nil || n > MaxPower {
		return 0, p.fault(fmt.Sprintf("a whole number of at most %d", MaxPower))
	}
	p.next++
	if parenthesis {
		if !p.peek().Is(")") {
			return 0, p.fault("a closing parenthesis")
		}
		p.next++
	}
	return sign * n, nil
}

// symbol reads one symbol, its prefix included.
func (p *parser) symbol() (factor, error) {
	t := p.peek()
	name := t.Text
	if t.Is("°") { // a degree sign, or the beginning of °C and °F
		if u := p.tokens[p.next+1]; u.Kind == lex.Name && !u.Spaced && (u.Text == "C" || u.Text == "F") {
			p.next++
			name += u.Text
		}
	}
	if f, ok := lookUp(name, p.table); ok {
		p.next++
		return f, nil
	}
	return factor{}, lex.Fault(p.text, t.Offset, fmt.Sprintf("the unknown unit %q", lex.Excerpt(name, 0)), suggest(name, p.table), nil)
}

// lookUp finds a symbol, alone or with a prefix. A symbol of its own wins: ft
// is a foot, min a minute.
func lookUp(name string, table map[string]*symbol) (factor, bool) {
	if s, ok := table[name]; ok {
		return factor{name, s, s.scale, 1}, true
	}
	if reason, ok := refused[name]; ok && reason != "" {
		return factor{}, false
	}
	_, n := utf8.DecodeRuneInString(name)
	for _, cut := range []int{2, n} { // "da" is the one prefix of two letters
		if cut >= len(name) {
			continue
		}
		e, ok := prefixes[name[:cut]]
		if !ok {
			continue
		}
		if s, ok := table[name[cut:]]; ok && s.prefixes && (e > 0 || !s.large) {
			return factor{name, s, new(big.Rat).Mul(s.scale, power(big.NewRat(10, 1), e)), 1}, true
		}
	}
	return factor{}, false
}

// symbolFactor returns the factor of a symbol that is known to exist.
func symbolFactor(name string) factor {
	f, _ := lookUp(name, symbols)
	return f
}
