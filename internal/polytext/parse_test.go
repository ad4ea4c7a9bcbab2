package polytext

import (
	"errors"
	"fmt"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/lex"
)

func TestParse(t *testing.T) {
	for _, c := range []struct {
		text     string
		num, den []int64 // ascending
	}{
		{"0.02 s^2 + 0.4 s + 9", []int64{450, 20, 1}, []int64{50}},
		{"(2 s + 1)/(s^2 + 0.4 s + 9)", []int64{5, 10}, []int64{45, 2, 5}},
		{"400 + 400/(1500 s)", []int64{4, 6000}, []int64{0, 15}},
		{"(s + 1)/(s + 1)", []int64{1, 1}, []int64{1, 1}},
		{"3/4 s² − 1/3", []int64{-4, 0, 9}, []int64{12}},
		{"2s(s+1)^2", []int64{0, 2, 4, 2}, []int64{1}},
		{"-s^-2", []int64{-1}, []int64{0, 0, 1}},
		{"1/2/s", []int64{1}, []int64{0, 2}},
		{"s·3·(1 - s)", []int64{0, 3, -3}, []int64{1}},
		{"0 s", nil, []int64{1}},
		{"2e3 s", []int64{0, 2000}, []int64{1}},
	} {
		f, _, err := Parse(c.text, "s")
		if err != nil {
			t.Errorf("Parse(%q): %v", c.text, err)
			continue
		}
		if !f.Num().Equal(intpoly.FromInt64s(c.num...)) || !f.Den().Equal(intpoly.FromInt64s(c.den...)) {
			t.Errorf("Parse(%q) has %d and %d coefficients, want %v over %v", c.text, f.Num().Degree()+1, f.Den().Degree()+1, c.num, c.den)
		}
	}
}

func TestRefusals(t *testing.T) {
	for _, c := range []struct {
		text string
		is   error
		says string
	}{
		{"", nil, "a number, a variable"}, {"1/0", fault.ErrDivisionByZero, ""}, {"0/0", fault.ErrDivisionByZero, ""}, {"0^-1", fault.ErrDivisionByZero, ""},
		{"s^1000000", fault.ErrLimit, ""}, {"s^99999999999999999999", fault.ErrLimit, ""}, {"(s^100)^100", fault.ErrLimit, ""}, {"1e999999999", fault.ErrLimit, ""},
		{strings.Repeat("(", 10<<20), fault.ErrLimit, ""}, {"(1e4000 s)^4000", fault.ErrLimit, ""}, {strings.Repeat("(s+1)^4000+", 1000) + "1", nil, ""},
		{"1/s (s + 1)", nil, "read in two ways"}, {"s + ", nil, "a number"}, {"s + x", nil, `the variable "s"`}, {"(s", nil, "closing"}, {"s)", nil, "the end"},
		{"2 3", nil, "the end"}, {"s^1.5", nil, "whole"}, {"s^s", nil, "whole"}, {"NaN", fault.ErrNotFinite, "finite"}, {"s + Inf", fault.ErrNotFinite, "finite"}, {"\xff", nil, "UTF-8"},
		{strings.Repeat("1/(s+1)^40+", 1000) + "1", fault.ErrLimit, ""}, {differentFractions(), fault.ErrLimit, "too large"},
	} {
		if strings.HasPrefix(c.text, "(s+1)^4000") { // a valid text at the bounds: it must only end soon
			_, _, _ = Parse(c.text, "s")
			continue
		}
		_, _, err := Parse(c.text, "s")
		var syntax *lex.SyntaxError
		if !errors.As(err, &syntax) || !strings.Contains(err.Error(), c.says) || c.is != nil && !errors.Is(err, c.is) {
			t.Errorf("Parse(%.20q) = %v, want a SyntaxError that is %v and says %q", c.text, err, c.is, c.says)
		}
	}
}

// differentFractions is a sum whose common denominator grows with every term.
func differentFractions() string {
	var b strings.Builder
	for i := range 4000 {
		fmt.Fprintf(&b, "s/%s%d1+", strings.Repeat("7", 200), i)
	}
	return b.String() + "1"
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"0.02 s^2 + 0.4 s + 9", "(2 s + 1)/(s^2 + 0.4 s + 9)", "3/4 s² − 1/3", "1/(s", "s^-2(s+1)^3"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		g, _, err := Parse(text, "s")
		var syntax *lex.SyntaxError
		if err != nil && !errors.As(err, &syntax) {
			t.Fatalf("untyped error %v", err)
		}
		if err == nil && g.Den().IsZero() {
			t.Fatal("a zero denominator")
		}
	})
}
