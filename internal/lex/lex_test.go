package lex

import (
	"errors"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/fault"
)

func TestTokens(t *testing.T) {
	tokens, err := Tokens("12.5e-3 x_1''·(µm) s⁻² − 2e 3E+2 .5")
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, x := range tokens {
		s := x.Text
		if x.Kind == Number {
			s = x.Value().RatString()
		}
		if x.Spaced {
			s = " " + s
		}
		got = append(got, s)
	}
	want := "1/80| x_1|'|'|*|(|µm|)| s|-2| -| 2|e| 300| 1/2|"
	if strings.Join(got, "|") != want {
		t.Errorf("tokens %q, want %q", strings.Join(got, "|"), want)
	}
}

func TestRefusals(t *testing.T) {
	for _, c := range []struct {
		text   string
		offset int
		limit  bool
	}{
		{"ab\xffc", 2, false}, {strings.Repeat("x", MaxLength+1), MaxLength, true}, {"x " + strings.Repeat("(", MaxNesting+1), MaxNesting + 2, true},
		{"x 1e5000", 4, true}, {"1e-5000", 3, true}, {strings.Repeat("7", MaxDigits+1), 0, true}, {"1e99999999999999999999", 2, true},
	} {
		_, err := Tokens(c.text)
		var syntax *SyntaxError
		if !errors.As(err, &syntax) || syntax.Offset != c.offset || errors.Is(err, fault.ErrLimit) != c.limit {
			t.Errorf("Tokens(%.12q): %v, want a SyntaxError at %d, limit %v", c.text, err, c.offset, c.limit)
		}
	}
	if _, err := Tokens(strings.Repeat("()", 1000)); err != nil {
		t.Errorf("parentheses side by side: %v", err)
	}
}

func FuzzTokens(f *testing.F) {
	for _, s := range []string{"0.02 s^2 + 0.4 s + 9", "kg·m²/s⁻²", "x'' = -1e3", "°C %"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		tokens, err := Tokens(text)
		var syntax *SyntaxError
		if err != nil {
			if !errors.As(err, &syntax) || len(err.Error()) > 1000 {
				t.Fatalf("error %v", err)
			}
			return
		}
		// Tokens cover the text but for white space, in order.
		end := 0
		for _, x := range tokens {
			if x.Offset < end || strings.TrimSpace(text[end:x.Offset]) != "" {
				t.Fatalf("%q: token %+v after offset %d", text, x, end)
			}
			end = x.Offset + x.Length
		}
		if end != len(text) {
			t.Fatalf("%q: tokens end at %d", text, end)
		}
	})
}
