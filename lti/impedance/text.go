package impedance

import (
	"errors"
	"fmt"
	"strings"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/units"
)

// MaxText bounds the bytes of a text that is read as a one-port.
const MaxText = 1 << 16

// Parse reads a one-port:
//
//	10 kohm      50 kN/m || 640 N*s/m      2 ohm + (3 mH || 10 uF)      0
//
// + puts in series, || in parallel, and a quantity is the element that its
// dimension stands for; see Element. Mixtures need parentheses, because "a + b ||
// c" is read in two ways. 0 is the impedance 0.
//
// The error is a *SyntaxError with the offset; behind it stands the error of
// Element, Series or Parallel, or ErrLimit for a text beyond MaxText.
func Parse(text string) (OnePort, error) {
	if len(text) > MaxText {
		return OnePort{}, tooLong(text)
	}
	tokens, err := lex.Tokens(text)
	if err != nil {
		return OnePort{}, err
	}
	p := &parser{text: text, tokens: tokens}
	z, err := p.network()
	if err != nil {
		return OnePort{}, err
	}
	if p.peek().Kind != lex.End {
		return OnePort{}, p.fault("+, || or the end")
	}
	return z, nil
}

// MustParse is Parse for one-ports written down in a program; it panics on an
// error.
func MustParse(text string) OnePort {
	z, err := Parse(text)
	if err != nil {
		panic(err)
	}
	return z
}

type parser struct {
	text   string
	tokens []lex.Token
	next   int
}

func (p *parser) peek() lex.Token { return p.tokens[p.next] }

func (p *parser) fault(want string) *SyntaxError {
	return lex.Fault(p.text, p.peek().Offset, p.peek().Describe(), want, nil)
}

// operator reads + or || where one stands.
func (p *parser) operator() string {
	switch t := p.peek(); {
	case t.Is("+"):
		p.next++
		return "+"
	case t.Is("|") && p.tokens[p.next+1].Is("|"):
		p.next += 2
		return "||"
	}
	return ""
}

// network reads part { operator part } with one operator throughout.
func (p *parser) network() (OnePort, error) {
	start := p.peek().Offset
	var parts []OnePort
	operator := ""
	for {
		z, err := p.part()
		if err != nil {
			return OnePort{}, err
		}
		parts = append(parts, z)
		at := p.next
		o := p.operator()
		if o == "" {
			break
		}
		if operator != "" && o != operator {
			p.next = at
			return OnePort{}, p.fault("parentheses around what stands on one side of it, because + and || together are read in two ways")
		}
		operator = o
	}
	join := Series
	if operator == "||" {
		join = Parallel
	}
	z, err := join(parts...)
	if err != nil {
		return OnePort{}, lex.Fault(p.text, start, "a network that cannot be", "", err)
	}
	return z, nil
}

// part reads a network in parentheses or a quantity, which ends before an
// operator of networks or a parenthesis that it did not open.
func (p *parser) part() (OnePort, error) {
	t := p.peek()
	if t.Is("(") {
		p.next++
		z, err := p.network()
		if err != nil {
			return OnePort{}, err
		}
		if !p.peek().Is(")") {
			return OnePort{}, p.fault("a closing parenthesis")
		}
		p.next++
		return z, nil
	}
	depth := 0
	for first := true; p.peek().Kind != lex.End; first = false {
		u := p.peek()
		if u.Is("|") || u.Is("+") && !first || u.Is(")") && depth == 0 {
			break
		}
		if u.Is("(") {
			depth++
		} else if u.Is(")") {
			depth--
		}
		p.next++
	}
	written := p.text[t.Offset:p.peek().Offset]
	if strings.TrimSpace(written) == "0" {
		return OnePort{}, nil
	}
	q, err := units.ParseQuantity(written)
	var syntax *SyntaxError
	if errors.As(err, &syntax) {
		return OnePort{}, lex.Fault(p.text, t.Offset+syntax.Offset, syntax.Found, syntax.Want, syntax.Err)
	}
	if err != nil {
		return OnePort{}, err
	}
	z, err := Element(q)
	if err != nil {
		return OnePort{}, lex.Fault(p.text, t.Offset, fmt.Sprintf("%q", lex.Excerpt(strings.TrimSpace(written), 0)), "", err)
	}
	return z, nil
}

// String writes the network with the values and units as entered. Within the
// bounds on text Parse reads it back.
func (z OnePort) String() string {
	var b strings.Builder
	z.write(&b, element)
	return b.String()
}

func (z OnePort) write(b *strings.Builder, outer join) {
	p := z.port()
	if z.p == nil {
		b.WriteString("0")
		return
	}
	if p.join == element {
		b.WriteString(p.value.String())
		return
	}
	enclosed := outer != element && outer != p.join
	if enclosed {
		b.WriteString("(")
	}
	for i, part := range p.parts {
		if i > 0 {
			b.WriteString(map[join]string{inSeries: " + ", inParallel: " || "}[p.join])
		}
		part.write(b, p.join)
	}
	if enclosed {
		b.WriteString(")")
	}
}

// MarshalText is String, for encoding.TextMarshaler.
func (z OnePort) MarshalText() ([]byte, error) { return []byte(z.String()), nil }

// UnmarshalText is Parse, for encoding.TextUnmarshaler.
func (z *OnePort) UnmarshalText(text []byte) error {
	y, err := Parse(string(text))
	if err == nil {
		*z = y
	}
	return err
}
