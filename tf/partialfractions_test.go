package tf

import (
	"bufio"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
)

// total adds the polynomial and the rational fractions up again.
func total(p PartialFractions) ratfun.Func {
	of := func(n, d poly.Poly) ratfun.Func {
		a, b := ratpoly.Poly(n), ratpoly.Poly(d)
		f, _ := ratfun.New(a.Integer().MulInt(b.Denominator()), b.Integer().MulInt(a.Denominator()))
		return f
	}
	sum := of(p.Polynomial(), poly.FromInts(1))
	for _, f := range p.Rational() {
		den := poly.FromInts(1)
		for range f.Power {
			den = den.Mul(f.Factor)
		}
		sum, _, _ = sum.Add(of(f.Numerator, den)).LowestTerms()
	}
	return sum
}

// TestPartialFractionsReference compares with SymPy's apart and, bit for bit,
// with mpmath (testdata/generate_partial.py).
func TestPartialFractionsReference(t *testing.T) {
	file, err := os.Open("testdata/partialfractions.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	var num []*big.Rat
	var p PartialFractions
	rational, poles, cubic := 0, 0, 0
	for scanner := bufio.NewScanner(file); scanner.Scan(); {
		head, rest, _ := strings.Cut(scanner.Text(), " ")
		switch head {
		case "num":
			num = rationalsOf(t, rest)
		case "den":
			g := Must(New(poly.FromRats(num...), poly.FromRats(rationalsOf(t, rest)...)))
			if p, err = g.PartialFractions(); err != nil {
				t.Fatal(err)
			}
			if !total(p).Equivalent(g.c.f) {
				t.Errorf("%v: the rational fractions of %v / %s do not add up to it", p.Rational(), num, rest)
			}
		case "rational":
			fields := strings.Split(rest, "|")
			power, _ := strconv.Atoi(strings.TrimSpace(fields[0]))
			factor := poly.FromRats(rationalsOf(t, fields[1])...)
			numerator := poly.FromRats(rationalsOf(t, fields[2])...)
			if factor.Degree() > 2 {
				cubic++ // one factor here may be a product of several there
				continue
			}
			rational++
			found := false
			for _, f := range p.Rational() {
				found = found || f.Power == power && f.Factor.Equal(factor) && f.Numerator.Equal(numerator)
			}
			if !found {
				t.Errorf("%v / %v ^%d is not among the fractions", fields[2], fields[1], power)
			}
		case "pole":
			var v [5]float64
			for i, field := range strings.Fields(rest) {
				if v[i], err = strconv.ParseFloat(field, 64); err != nil {
					t.Fatal(err)
				}
			}
			found := v[3] == 0 && v[4] == 0
			for _, term := range p.Terms() {
				found = found || term.Power == int(v[2]) && same(term.Pole, v[0], v[1]) && same(term.Coefficient, v[3], v[4])
			}
			if !found {
				t.Errorf("pole %v: coefficient %v of power %v is not among the terms of %v", v[:2], v[3:], v[2], num)
			}
			poles++
		}
	}
	t.Logf("%d rational fractions, %d terms compared; %d fractions over factors of higher degree not compared", rational, poles, cubic)
	if rational < 60 || poles < 200 {
		t.Error("the file holds too little")
	}
}

func same(z complex128, re, im float64) bool {
	return math.Float64bits(real(z)) == math.Float64bits(re) && math.Float64bits(imag(z)) == math.Float64bits(im)
}

// TestPartialFractionsEnclosures checks at rational points that the terms add
// up to the function within their enclosures.
func TestPartialFractionsEnclosures(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 60 {
		n := 1 + r.IntN(9)
		f := randomProper(r, n)
		e, err := newExpansion(f.Num(), f.Den())
		if err != nil {
			t.Fatal(err)
		}
		factors, err := e.factorize()
		if err != nil {
			t.Fatal(err)
		}
		const prec = 256
		at := big.NewRat(int64(r.IntN(1000)+1), 77)
		x := ball.NewComplex(ball.FromRat(at, prec), ball.FromInt64(0))
		var sum ball.Complex
		for _, f := range factors {
			for i := 0; i < len(f.roots); i++ {
				c, err := e.coefficients(f, f.roots[i], unscaled)
				if err != nil {
					t.Fatal(err)
				}
				pole, err := enclosure(f.roots[i], prec)
				if err != nil {
					t.Fatal(err)
				}
				for k, v := range c {
					z, err := v.enclose(prec)
					if err != nil {
						t.Fatal(err)
					}
					term := z.Div(x.Sub(pole, prec).PowInt(k+1, prec), prec)
					sum = sum.Add(term, prec)
					if !f.roots[i].IsReal() {
						sum = sum.Add(term.Conj(), prec)
					}
				}
				if !f.roots[i].IsReal() {
					i++
				}
			}
		}
		want := new(big.Rat).SetFrac(f.Num().AtRat(at.Num(), at.Denom()), f.Den().AtRat(at.Num(), at.Denom()))
		for range f.Den().Degree() - f.Num().Degree() {
			want.Mul(want, new(big.Rat).SetInt(at.Denom()))
		}
		if !sum.Re.ContainsRat(want) || sum.Re.RelativeBits() < 100 {
			t.Errorf("%v/%v at %v: terms add up to %v, want %v", f.Num(), f.Den(), at, sum.Re, want)
		}
	}
}

// randomProper returns a strictly proper function of order n in lowest terms
// with factors of degree 1 to 5, some of them repeated.
func randomProper(r *rand.Rand, n int) ratfun.Func {
	den := poly.FromInts(1)
	for den.Degree() < n {
		c := make([]int64, 2+r.IntN(5))
		for i := range c {
			c[i] = int64(1 + r.IntN(40))
		}
		for range 1 + r.IntN(3) {
			den = den.Mul(poly.FromInts(c...))
		}
	}
	c := make([]int64, 1+r.IntN(den.Degree()))
	for i := range c {
		c[i] = int64(r.IntN(99) - 49)
	}
	c[0] |= 1
	f, _ := ratfun.New(ratpoly.Poly(poly.FromInts(c...)).Integer(), ratpoly.Poly(den).Integer())
	f, _, _ = f.LowestTerms()
	return f
}

func TestPartialFractionsText(t *testing.T) {
	for _, c := range []struct{ g, want, poles string }{
		{"0", "0", "0"},
		{"s^2 + 1", "s^2 + 1", "s^2 + 1"},
		{"1/(s (s + 3))", "-1/(3 (s + 3)) + 1/(3 s)", "-0.333333/(s + 3) + 0.333333/s"},
		{"(s^3 + 2)/(s + 1)^2", "s - 2 + 3/(s + 1) + 1/(s + 1)^2", "s - 2 + 3/(s + 1) + 1/(s + 1)^2"},
		{"(s + 7)/((s^2 + 2 s + 5) (s + 2))", "1/(s + 2) - (s - 1)/(s^2 + 2 s + 5)", ""},
		{"1.12/(1493 s + 1)", "1.12/(1493 s + 1)", "0.000750167/(s + 0.000669792)"},
		{"1/(s^4 + s + 1)", "1/(s^4 + s + 1)", ""},
		{"(s + 1)/(s^2 + 4)", "(s + 1)/(s^2 + 4)", "(0.5 - 0.25j)/(s - 2j) + (0.5 + 0.25j)/(s + 2j)"},
		{"2/(s^2 + 1)", "2/(s^2 + 1)", "-j/(s - j) + j/(s + j)"},
	} {
		g := MustParse(c.g)
		p := Must(g.PartialFractions())
		if got := p.String(); got != c.want {
			t.Errorf("%s: %q, want %q", c.g, got, c.want)
		}
		if got := fmt.Sprintf("%g", p); c.poles != "" && got != c.poles {
			t.Errorf("%s over the poles: %q, want %q", c.g, got, c.poles)
		}
		if back, err := Parse(p.String()); err != nil || !back.Equivalent(g) {
			t.Errorf("%q does not read back as %s: %v", p, c.g, err)
		}
	}
}

// TestExactResidues: D'/D has the residue 1 at every pole of an irreducible D,
// and (1 + 2^−53)·D'/D the tie between two float64.
func TestExactResidues(t *testing.T) {
	for _, den := range []string{"s^3 + s + 1", "s^4 + 2 s^3 + 3 s + 7", "s^5 - s - 1", "s^6 + s + 3"} {
		d := poly.MustParse(den)
		for _, scale := range []*big.Rat{big.NewRat(1, 1), big.NewRat(1<<53+1, 1<<53)} {
			p := Must(Must(New(d.Derivative().Scale(scale), d)).PartialFractions())
			if len(p.Terms()) != d.Degree() {
				t.Fatalf("%s: %d terms", den, len(p.Terms()))
			}
			for _, term := range p.Terms() {
				if term.Coefficient != 1 {
					t.Errorf("%s: residue %v at %v, want 1", den, term.Coefficient, term.Pole)
				}
			}
		}
	}
}
