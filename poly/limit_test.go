package poly

import (
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"
)

// onePerPrime has a prime denominator of its own for every term, so that the
// common denominator is as long as all of them together.
func onePerPrime(terms int) []*big.Rat {
	c := make([]*big.Rat, terms)
	p := big.NewInt(1 << 26)
	for i := range c {
		for p.Add(p, big.NewInt(1)); !p.ProbablyPrime(0); p.Add(p, big.NewInt(1)) {
		}
		c[i] = new(big.Rat).SetFrac(big.NewInt(1), p)
	}
	return c
}

func longNumber(bits uint) *big.Rat {
	v := new(big.Int).Lsh(big.NewInt(1), bits-1)
	return new(big.Rat).SetInt(v.Add(v, big.NewInt(1)))
}

// What would take too much is not formed, and says so from then on.
func TestTooLong(t *testing.T) {
	many := make([]int64, 40000)
	for i := range many {
		many[i] = int64(i%9 + 1)
	}
	terms, long := FromInts(many...), FromRats(longNumber(1<<15), longNumber(1<<15))
	for name, p := range map[string]Poly{
		"many denominators":  FromRats(onePerPrime(10000)...),
		"a long numerator":   FromRats(longNumber(1<<19 + 1)),
		"a long denominator": FromRats(new(big.Rat).Inv(longNumber(1<<19 + 1))),
		"one long among many": FromRats(append([]*big.Rat{longNumber(1 << 18)},
			FromInts(many...).Coefficients()...)...),
		"product": terms.Mul(long),
		"sum":     terms.Add(FromRats(longNumber(1 << 18))),
		"scaled":  terms.Scale(longNumber(1 << 18)),
		"chain":   FromInts(1, 1).Mul(terms.Mul(long)).Sub(FromInts(1)).Scale(big.NewRat(1, 3)).Derivative().Integral().Monic().Neg(),
		"times 0": Poly{}.Mul(terms.Mul(long)),
	} {
		checkTooLong(t, name, p)
	}
	for name, p := range map[string]Poly{"terms": terms, "long": long, "at the bound": FromRats(longNumber(1 << 19)),
		"few denominators": FromRats(onePerPrime(1000)...)} {
		if p.Err() != nil || p.Degree() < 0 || !p.Equal(p) {
			t.Errorf("%s: %v", name, p.Err())
		}
	}
}

func checkTooLong(t *testing.T, name string, p Poly) {
	t.Helper()
	x := FromInts(1, 1)
	second := func(_ any, err error) error { return err }
	_, _, quoRem := x.QuoRem(p)
	_, _, _, extended := p.ExtendedGCD(x)
	for operation, err := range map[string]error{
		"Err": p.Err(), "Pow": second(p.Pow(2)), "Compose": second(x.Compose(p)), "QuoRem": quoRem, "GCD": second(x.GCD(p)),
		"ExtendedGCD": extended, "Resultant": second(p.Resultant(x)), "SquareFree": second(p.SquareFree()),
		"HalfPlane": second(p.HalfPlane()), "UnitCircle": second(p.UnitCircle()), "CountRealRoots": second(p.CountRealRoots(nil, nil)),
		"Roots": second(p.Roots()), "RealRoots": second(p.RealRoots()), "At": second(p.At(1)), "AtRat": second(p.AtRat(nil)),
		"MarshalText": second(p.MarshalText()),
	} {
		if !errors.Is(err, ErrLimit) {
			t.Errorf("%s: %s: %v", name, operation, err)
		}
	}
	if p.Degree() != -1 || p.IsZero() || p.Equal(p) || p.Equal(Poly{}) || p.Coefficient(0) != nil || len(p.Coefficients()) != 0 {
		t.Errorf("%s reads as a number", name)
	}
	for _, text := range []string{p.String(), fmt.Sprintf("%g", p), p.LaTeX("s"), p.MathML("s")} {
		if !strings.Contains(text, "(too long)") {
			t.Errorf("%s is written as %.40q", name, text)
		}
	}
	if _, err := Parse(p.String()); err == nil {
		t.Errorf("%s can be read", name)
	}
}

// A constructor and sums over the smallest common denominator, coefficient by
// coefficient in big.Rat.
func TestDenominators(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 32))
	for range 500 {
		a, b := make([]*big.Rat, 1+r.IntN(6)), make([]*big.Rat, 6)
		for i := range a {
			a[i] = big.NewRat(r.Int64N(9)-4, 1+r.Int64N(60))
		}
		for i := range b {
			b[i] = big.NewRat(r.Int64N(9)-4, 1+r.Int64N(60))
		}
		sum := FromRats(a...).Add(FromRats(b...))
		den := big.NewInt(1)
		for i := range b {
			want := new(big.Rat).Set(b[i])
			if i < len(a) {
				want.Add(want, a[i])
			}
			if sum.Coefficient(i).Cmp(want) != 0 {
				t.Fatalf("coefficient %d of %v + %v is %v", i, a, b, sum.Coefficient(i))
			}
			g := new(big.Int).GCD(nil, nil, den, want.Denom())
			den.Mul(den, new(big.Int).Quo(want.Denom(), g))
		}
		if got := sum.rational().Denominator(); got.Cmp(den) != 0 {
			t.Fatalf("%v + %v over %v, want %v", a, b, got, den)
		}
	}
}
