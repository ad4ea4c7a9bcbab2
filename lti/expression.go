package lti

import (
	"fmt"
	"slices"
	"strconv"

	"github.com/qofs/qofs/internal/lex"
)

// An equation is parsed once into a tree of nodes; a System evaluates the tree
// with its constants.
type node struct {
	kind     nodeKind
	from, to int    // byte offsets in the equation
	name     string // of a name or a function
	number   lex.Token
	order    int // of a derivative, or the exponent of a power
	a, b     *node
}

type nodeKind uint8

const (
	isNumber     nodeKind = iota
	isName                // a signal or a constant
	isSum                 // a + b
	isDifference          // a − b
	isNegative            // −a
	isProduct             // a·b
	isQuotient            // a/b
	isPower               // a^order
	isDerivative          // a with order primes
	isIntegral            // the integral of a by time
	isCall                // name(a), which is refused later with a reason
)

// Bounds on one equation.
const (
	maxPrimes        = 16 // of a derivative, and the depth of nested integrals
	maxConstantPower = 64
	maxTokens        = 10000
)

type equation struct {
	text        string
	left, right *node
}

// parseEquation reads expression = expression.
//
//	expression  [+ -] term { (+ -) term }
//	term        factor { [*] factor | / factor }
//	factor      (number | name | ["integral"] "(" expression ")") {'} [^integer]
func parseEquation(text string) (equation, error) {
	tokens, err := lex.Tokens(text)
	if err != nil {
		return equation{}, err
	}
	if len(tokens) > maxTokens {
		return equation{}, lex.Fault(text, 0, fmt.Sprintf("an equation of %d parts", len(tokens)), fmt.Sprintf("at most %d", maxTokens), ErrLimit)
	}
	p := &parser{text: text, tokens: tokens}
	left, err := p.expression()
	if err != nil {
		return equation{}, err
	}
	if !p.peek().Is("=") {
		return equation{}, p.fault("= or an operator")
	}
	p.next++
	right, err := p.expression()
	if err != nil {
		return equation{}, err
	}
	if p.peek().Kind != lex.End {
		return equation{}, p.fault("an operator or the end of the equation")
	}
	return equation{text, left, right}, nil
}

type parser struct {
	text   string
	tokens []lex.Token
	next   int
}

func (p *parser) peek() lex.Token { return p.tokens[p.next] }

func (p *parser) fault(want string) error {
	t := p.peek()
	switch {
	case t.Is("\"") || t.Is("″"):
		want = "two primes '' for a second derivative"
	case t.Is(",") && p.next > 0 && p.tokens[p.next-1].Kind == lex.Number:
		want = "a point in decimal numbers, as in 0.5"
	case t.Is("<") || t.Is(">") || t.Is("≤") || t.Is("≥"):
		want += "; limits and inequalities are not linear and have no place here"
	}
	return lex.Fault(p.text, t.Offset, t.Describe(), want, nil)
}

// end is the offset after the last token taken.
func (p *parser) end() int {
	t := p.tokens[p.next-1]
	return t.Offset + t.Length
}

func (p *parser) expression() (*node, error) {
	start := p.peek()
	if start.Is("-") || start.Is("+") {
		p.next++
	}
	sum, err := p.term()
	if err != nil {
		return nil, err
	}
	if start.Is("-") {
		sum = &node{kind: isNegative, from: start.Offset, to: sum.to, a: sum}
	}
	for {
		t := p.peek()
		kind := isSum
		switch {
		case t.Is("-"):
			kind = isDifference
		case !t.Is("+"):
			return sum, nil
		}
		p.next++
		b, err := p.term()
		if err != nil {
			return nil, err
		}
		sum = &node{kind: kind, from: sum.from, to: b.to, a: sum, b: b}
	}
}

func (p *parser) term() (*node, error) {
	product, err := p.factor()
	if err != nil {
		return nil, err
	}
	plain, divided := product.kind == isNumber, false
	for {
		t := p.peek()
		kind := isProduct
		implicit := t.Kind == lex.Name || t.Is("(")
		switch {
		case t.Is("*"):
			p.next++
			divided = false
		case t.Is("/"):
			p.next++
			kind = isQuotient
		case implicit && divided && !plain:
			return nil, p.fault("* or parentheses: what follows a division is read in two ways")
		case !implicit:
			return product, nil
		}
		b, err := p.factor()
		if err != nil {
			return nil, err
		}
		plain = plain && b.kind == isNumber
		divided = divided || kind == isQuotient
		product = &node{kind: kind, from: product.from, to: b.to, a: product, b: b}
	}
}

// functions are names that a user may write as a function of a signal.
var functions = []string{"sin", "cos", "tan", "asin", "acos", "atan", "sinh", "cosh", "tanh", "exp", "log", "ln", "sqrt", "abs", "sign", "min", "max", "sat"}

// integralWord cannot be the name of a signal or a constant.
const integralWord = "integral"

func (p *parser) factor() (*node, error) {
	t := p.peek()
	var n *node
	switch {
	case t.Kind == lex.Number:
		n = &node{kind: isNumber, number: t}
		p.next++
	case t.Kind == lex.Name:
		n = &node{kind: isName, name: t.Text}
		p.next++
		integral := t.Text == integralWord
		if integral && !p.peek().Is("(") {
			return nil, p.fault("a parenthesis: integral(x) is the integral of x by time")
		}
		var err error
		switch {
		case integral:
			n.kind = isIntegral
			n.a, err = p.parenthesis()
		case slices.Contains(functions, t.Text) && p.peek().Is("(") && !p.peek().Spaced:
			n.kind = isCall
			n.a, err = p.arguments()
		}
		if err != nil {
			return nil, err
		}
	case t.Is("("):
		inner, err := p.parenthesis()
		if err != nil {
			return nil, err
		}
		n = inner
	default:
		return nil, p.fault("a name, a number or a parenthesis")
	}
	n.from, n.to = t.Offset, p.end()
	n, err := p.primes(n)
	if err != nil {
		return nil, err
	}
	return p.power(n)
}

func (p *parser) parenthesis() (*node, error) {
	p.next++
	inner, err := p.expression()
	if err != nil {
		return nil, err
	}
	return inner, p.closing()
}

// arguments reads those of a function and returns the first one; the call is
// refused later, with a reason.
func (p *parser) arguments() (*node, error) {
	p.next++
	first, err := p.expression()
	for err == nil && p.peek().Is(",") {
		p.next++
		_, err = p.expression()
	}
	if err != nil {
		return nil, err
	}
	return first, p.closing()
}

func (p *parser) closing() error {
	if !p.peek().Is(")") {
		return p.fault("a closing parenthesis or an operator")
	}
	p.next++
	return nil
}

func isPrime(t lex.Token) bool { return t.Is("'") || t.Is("′") || t.Is("’") }

func (p *parser) primes(n *node) (*node, error) {
	order := 0
	for isPrime(p.peek()) {
		order++
		p.next++
	}
	if order == 0 {
		return n, nil
	}
	if order > maxPrimes {
		return nil, lex.Fault(p.text, n.to, fmt.Sprintf("a derivative of order %d", order), fmt.Sprintf("at most %d", maxPrimes), ErrLimit)
	}
	return &node{kind: isDerivative, from: n.from, to: p.end(), a: n, order: order}, nil
}

func (p *parser) power(n *node) (*node, error) {
	t := p.peek()
	digits := t.Text
	switch {
	case t.Kind == lex.Superscript:
		p.next++
	case t.Is("^"):
		p.next++
		sign := ""
		if p.peek().Is("-") {
			p.next++
			sign = "-"
		}
		t = p.peek()
		if t.Kind != lex.Number {
			return nil, p.fault("a whole exponent")
		}
		digits = sign + t.Text
		p.next++
	default:
		return n, nil
	}
	e, err := strconv.Atoi(digits)
	if err != nil || e > maxConstantPower || e < -maxConstantPower {
		return nil, lex.Fault(p.text, t.Offset, fmt.Sprintf("the exponent %s", lex.Excerpt(digits, 0)),
			fmt.Sprintf("a whole number of at most %d", maxConstantPower), nil)
	}
	return &node{kind: isPower, from: n.from, to: p.end(), a: n, order: e}, nil
}
