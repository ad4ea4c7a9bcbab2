package tf

import (
	"bufio"
	"errors"
	"math"
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
)

// valueCase is a line of testdata/values.txt.
type valueCase struct {
	g     Continuous
	point complex128
	want  complex128
}

func readValues(t testing.TB) []valueCase {
	file, err := os.Open("testdata/values.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	var out []valueCase
	for lines := bufio.NewScanner(file); lines.Scan(); {
		part := strings.Split(lines.Text(), "; ")
		g := Must(New(rationalPoly(t, part[0]), rationalPoly(t, part[1])))
		delay, _ := new(big.Rat).SetString(part[2])
		g.c.setDelay(delay)
		out = append(out, valueCase{g, hexComplex(t, part[3]), hexComplex(t, part[4])})
	}
	return out
}

func rationalPoly(t testing.TB, text string) poly.Poly {
	var c []*big.Rat
	for _, word := range strings.Fields(text) {
		r, ok := new(big.Rat).SetString(word)
		if !ok {
			t.Fatalf("%q is no rational number", word)
		}
		c = append(c, r)
	}
	return poly.FromRats(c...)
}

func hexComplex(t testing.TB, text string) complex128 {
	re, im, _ := strings.Cut(text, " ")
	x, err := strconv.ParseFloat(re, 64)
	if err != nil {
		t.Fatal(err)
	}
	y, err := strconv.ParseFloat(im, 64)
	if err != nil {
		t.Fatal(err)
	}
	return complex(x, y)
}

// TestAtReference compares values bit for bit with those of
// testdata/generate_values.py: fractions and mpmath at 1400 bits.
func TestAtReference(t *testing.T) {
	cases := readValues(t)
	if len(cases) < 300 {
		t.Fatalf("%d cases, want 300", len(cases))
	}
	for _, c := range cases {
		got, err := c.g.At(c.point)
		if math.IsInf(real(c.want), 0) || math.IsInf(imag(c.want), 0) {
			if !errors.Is(err, ErrRange) {
				t.Errorf("%v at %v: %v, %v, want ErrRange", c.g, c.point, got, err)
			}
			continue
		}
		if err != nil || got != c.want {
			t.Errorf("%v at %v: %v, %v, want %v", c.g, c.point, got, err, c.want)
		}
	}
}

// TestAtWithDeadTime takes exp(−j) from table 4.6 of Abramowitz & Stegun (cos 1
// and sin 1), exp(−1) from table 4.4, and the ends of the range of a float64.
func TestAtWithDeadTime(t *testing.T) {
	delay := MustParse("exp(-s)")
	for _, c := range []struct{ s, want complex128 }{
		{1i, complex(0.5403023058681397174, -0.8414709848078965067)},
		{-1i, complex(0.5403023058681397174, 0.8414709848078965067)},
		{1, 0.36787944117144232160},
		{0, 1},
		{1e300, 0},
		{complex(1e9, 3), 0},
		{745, 5e-324},
		{746, 0},
		{complex(0, 1e300), complex(-0.5753861119575490466882, 0.8178819121159085970459)}, // mpmath at 3000 bits
	} {
		got, err := delay.At(c.s)
		if err != nil || got != c.want {
			t.Errorf("exp(-s) at %v: %v, %v, want %v", c.s, got, err, c.want)
		}
	}
	for _, s := range []complex128{-710, -1e300, complex(-1e9, 1)} {
		if got, err := delay.At(s); !errors.Is(err, ErrRange) {
			t.Errorf("exp(-s) at %v: %v, %v, want ErrRange", s, got, err)
		}
	}
}

func TestAtRat(t *testing.T) {
	g := Must(New(ints(1, 2), ints(9, 0, 1))) // (2 s + 1)/(s² + 9)
	for _, c := range []struct{ x, want *big.Rat }{
		{nil, big.NewRat(1, 9)},
		{big.NewRat(1, 2), big.NewRat(8, 37)}, // 2/(37/4)
		{big.NewRat(-1, 2), new(big.Rat)},
		{big.NewRat(3, 1), big.NewRat(7, 18)},
	} {
		got, err := g.AtRat(c.x)
		if err != nil || got.Cmp(c.want) != 0 {
			t.Errorf("at %v: %v, %v, want %v", c.x, got, err, c.want)
		}
	}
	improper := Must(Inverse(g))
	if v, err := improper.AtRat(big.NewRat(1, 2)); err != nil || v.Cmp(big.NewRat(37, 8)) != 0 {
		t.Errorf("inverse at 1/2: %v, %v", v, err)
	}
}

func TestValuesAtPoles(t *testing.T) {
	g := Must(New(ints(0, 1), ints(0, 4, 0, 1))) // s/(s (s² + 4))
	var pole *PoleError
	if _, err := g.At(2i); !errors.As(err, &pole) || pole.Shared || !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("at 2i: %v", err)
	}
	if _, err := g.At(0); !errors.As(err, &pole) || !pole.Shared {
		t.Errorf("at 0: %v", err)
	}
	if _, err := g.StaticGain(); !errors.As(err, &pole) || !pole.Shared {
		t.Errorf("static gain: %v", err)
	}
	reduced, factor := g.LowestTerms()
	if !factor.Equal(ints(0, 1)) || !reduced.Equal(Must(New(ints(1), ints(4, 0, 1)))) {
		t.Errorf("lowest terms %v, cancelled %v", reduced, factor)
	}
	for _, s := range []complex128{complex(math.NaN(), 0), complex(0, math.Inf(1))} {
		if _, err := g.At(s); !errors.Is(err, ErrNotFinite) {
			t.Errorf("at %v: %v, want ErrNotFinite", s, err)
		}
	}
	high := Must(New(ints(1), ints(append(make([]int64, 2000), 1)...)))
	if _, err := high.At(complex(1e-300, 1e300)); !errors.Is(err, ErrLimit) {
		t.Errorf("degree 2000 at 1e300i: %v, want ErrLimit", err)
	}
}
