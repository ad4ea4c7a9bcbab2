// Package lex splits the text forms of the library (polynomials, units,
// transfer functions, equations) into tokens, and bounds hostile text before
// arithmetic sees it.
//
// A token is a number, a name, an operator character, a superscript or the end
// of the text. White space separates tokens and is dropped; Token.Spaced tells
// that it was there.
package lex

import (
	"fmt"
	"math/big"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/qofs/qofs/internal/fault"
)

// Bounds on text, checked before any arithmetic.
const (
	MaxLength   = 1 << 20 // bytes of text
	MaxNesting  = 100     // depth of parentheses
	MaxExponent = 4096    // decimal exponent of a literal, absolute
	MaxDigits   = 4096    // digits of a literal
	MaxDegree   = 4096    // exponent of a power
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError struct {
	Text   string // the text that was read, shortened around the fault when it is long
	Offset int    // byte offset in the text that was read
	Found  string // what stands there
	Want   string // what was expected there, or what to write instead
	Err    error  // the sentinel behind the fault, or nil
}

// Error gives the fault with its place in words.
func (e *SyntaxError) Error() string {
	s := fmt.Sprintf("at offset %d of %q: found %s", e.Offset, e.Text, e.Found)
	if e.Want != "" {
		s += ", want " + e.Want
	}
	if e.Err != nil {
		s += ": " + e.Err.Error()
	}
	return s
}

// Unwrap returns the sentinel behind the fault.
func (e *SyntaxError) Unwrap() error { return e.Err }

// Kind is the kind of a token.
type Kind uint8

// The kinds of tokens.
const (
	End         Kind = iota
	Number           // an unsigned decimal literal; Value holds it exactly
	Name             // letters, digits and underscores, first a letter or underscore
	Superscript      // a run of ⁰…⁹ with an optional ⁻; Text holds it in ASCII
	Operator         // any other single character
)

// Token is one token.
type Token struct {
	Kind   Kind
	Text   string // as written (a superscript: translated to ASCII)
	Offset int    // where it begins, in bytes
	Length int    // how many bytes it takes
	Spaced bool   // white space came before it
	value  *big.Rat
}

// Value is the exact value of a Number token; the caller may keep it.
func (t Token) Value() *big.Rat {
	if t.value == nil {
		return new(big.Rat)
	}
	return new(big.Rat).Set(t.value)
}

// Is reports whether the token is the operator op.
func (t Token) Is(op string) bool { return t.Kind == Operator && t.Text == op }

// Describe names the token for an error message.
func (t Token) Describe() string {
	if t.Kind == End {
		return "the end"
	}
	return fmt.Sprintf("%q", t.Text)
}

// Fault makes the SyntaxError for text at a byte offset.
func Fault(text string, offset int, found, want string, err error) *SyntaxError {
	return &SyntaxError{Text: Excerpt(text, offset), Offset: offset, Found: found, Want: want, Err: err}
}

// Excerpt shortens a text to 40 bytes on each side of an offset.
func Excerpt(text string, offset int) string {
	const side = 40
	offset = max(0, min(offset, len(text)))
	from, to := max(0, offset-side), min(len(text), offset+side)
	// Whole characters, where there are any: text may be no UTF-8 at all.
	for range utf8.UTFMax - 1 {
		if from > 0 && !utf8.RuneStart(text[from]) {
			from--
		}
		if to < len(text) && !utf8.RuneStart(text[to]) {
			to++
		}
	}
	s := text[from:to]
	if from > 0 {
		s = "…" + s
	}
	if to < len(text) {
		s += "…"
	}
	return s
}

// Tokens splits a text. The last token is End. The error is a *SyntaxError.
func Tokens(text string) ([]Token, error) {
	if len(text) > MaxLength {
		return nil, Fault(text, MaxLength, fmt.Sprintf("a text of %d bytes", len(text)),
			fmt.Sprintf("at most %d", MaxLength), fault.ErrLimit)
	}
	var out []Token
	depth, spaced := 0, false
	for i := 0; i < len(text); {
		r, n := utf8.DecodeRuneInString(text[i:])
		t := Token{Offset: i, Spaced: spaced}
		switch {
		case r == utf8.RuneError && n <= 1:
			return nil, Fault(text, i, "a byte that is not UTF-8", "text in UTF-8", nil)
		case unicode.IsSpace(r):
			spaced = true
			i += n
			continue
		case r >= '0' && r <= '9', r == '.' && i+1 < len(text) && isDigit(text[i+1]):
			v, end, err := number(text, i)
			if err != nil {
				return nil, err
			}
			t.Kind, t.Text, t.value, n = Number, text[i:end], v, end-i
		case isSuperscript(r):
			var b strings.Builder
			j := i
			for j < len(text) {
				r, m := utf8.DecodeRuneInString(text[j:])
				if !isSuperscript(r) {
					break
				}
				b.WriteByte(superscripts[r])
				j += m
			}
			t.Kind, t.Text, n = Superscript, b.String(), j-i
		case r == '_' || unicode.IsLetter(r):
			j := i
			for j < len(text) {
				r, m := utf8.DecodeRuneInString(text[j:])
				if r != '_' && !unicode.IsLetter(r) && !unicode.IsDigit(r) {
					break
				}
				j += m
			}
			t.Kind, t.Text, n = Name, text[i:j], j-i
		default:
			t.Kind, t.Text = Operator, text[i:i+n]
			switch r {
			case '(', '[':
				if depth++; depth > MaxNesting {
					return nil, Fault(text, i, "a parenthesis", fmt.Sprintf("nesting of at most %d", MaxNesting), fault.ErrLimit)
				}
			case ')', ']':
				depth--
			case '−', '–':
				t.Text = "-"
			case '·', '×', '⋅':
				t.Text = "*"
			}
		}
		t.Length = n
		out = append(out, t)
		spaced = false
		i += n
	}
	return append(out, Token{Kind: End, Offset: len(text), Spaced: spaced}), nil
}

var superscripts = map[rune]byte{'⁰': '0', '¹': '1', '²': '2', '³': '3', '⁴': '4', '⁵': '5', '⁶': '6', '⁷': '7', '⁸': '8', '⁹': '9', '⁻': '-', '⁺': '+'}

func isSuperscript(r rune) bool { _, ok := superscripts[r]; return ok }
func isDigit(c byte) bool       { return c >= '0' && c <= '9' }

// number reads digits[.digits][(e|E)[sign]digits] at offset i. An e that no
// digits follow is left for the next token.
func number(text string, i int) (*big.Rat, int, error) {
	j, digits := i, 0
	for ; j < len(text) && isDigit(text[j]); j++ {
		digits++
	}
	if j+1 < len(text) && text[j] == '.' && isDigit(text[j+1]) {
		for j++; j < len(text) && isDigit(text[j]); j++ {
			digits++
		}
	}
	if digits > MaxDigits {
		return nil, 0, Fault(text, i, fmt.Sprintf("a number of %d digits", digits), fmt.Sprintf("at most %d", MaxDigits), fault.ErrLimit)
	}
	if j < len(text) && (text[j] == 'e' || text[j] == 'E') {
		k := j + 1
		if k < len(text) && (text[k] == '+' || text[k] == '-') {
			k++
		}
		if k < len(text) && isDigit(text[k]) {
			first, e := k, 0
			for ; k < len(text) && isDigit(text[k]); k++ {
				if e = 10*e + int(text[k]-'0'); e > MaxExponent {
					return nil, 0, Fault(text, first, "a decimal exponent beyond its bound", fmt.Sprintf("at most %d", MaxExponent), fault.ErrLimit)
				}
			}
			j = k
		}
	}
	v, ok := new(big.Rat).SetString(text[i:j])
	if !ok {
		return nil, 0, Fault(text, i, fmt.Sprintf("%q", text[i:j]), "a decimal number", nil)
	}
	return v, j, nil
}
