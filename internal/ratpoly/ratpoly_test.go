package ratpoly

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

func random(r *rand.Rand) []*big.Rat {
	c := make([]*big.Rat, r.IntN(6))
	for i := range c {
		if r.IntN(5) > 0 { // else nil, which reads as 0
			c[i] = big.NewRat(r.Int64N(41)-20, 1+r.Int64N(12))
		}
	}
	return c
}

func coefficient(c []*big.Rat, i int) *big.Rat {
	if i < len(c) && c[i] != nil {
		return c[i]
	}
	return new(big.Rat)
}

// Coefficients computed one by one are the oracle; the representation must be
// the smallest.
func TestArithmetic(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		a, b, k := random(r), random(r), big.NewRat(r.Int64N(21)-10, 1+r.Int64N(9))
		p, q := FromRats(a...), FromRats(b...)
		sum, product, scaled := p.Add(q), p.Mul(q), p.Scale(k)
		for i := range 12 {
			if s := new(big.Rat).Add(coefficient(a, i), coefficient(b, i)); sum.Coefficient(i).Cmp(s) != 0 {
				t.Fatalf("sum of %v and %v at %d: %v", a, b, i, sum.Coefficient(i))
			}
			if s := new(big.Rat).Mul(coefficient(a, i), k); scaled.Coefficient(i).Cmp(s) != 0 {
				t.Fatalf("%v times %v at %d: %v", a, k, i, scaled.Coefficient(i))
			}
			s := new(big.Rat)
			for j := 0; j <= i; j++ {
				s.Add(s, new(big.Rat).Mul(coefficient(a, j), coefficient(b, i-j)))
			}
			if product.Coefficient(i).Cmp(s) != 0 {
				t.Fatalf("product of %v and %v at %d: %v", a, b, i, product.Coefficient(i))
			}
		}
		for _, x := range []Poly{p, q, sum, product, scaled, p.Neg()} {
			g := new(big.Int).GCD(nil, nil, x.Integer().Content(), x.Denominator())
			if !x.Integer().IsZero() && g.Cmp(big.NewInt(1)) != 0 || x.Denominator().Sign() <= 0 {
				t.Fatalf("content and denominator share %v", g)
			}
		}
		if !sum.Add(q.Neg()).Equal(p) {
			t.Fatalf("%v + %v − %v", a, b, b)
		}
	}
}

func TestNewNormalises(t *testing.T) {
	p := New(intpoly.FromInt64s(-6, 4), big.NewInt(-10))
	if !p.Equal(FromRats(big.NewRat(3, 5), big.NewRat(-2, 5))) || p.Denominator().Cmp(big.NewInt(5)) != 0 {
		t.Errorf("(−6 + 4x)/(−10) has the denominator %v", p.Denominator())
	}
	if q := New(intpoly.Poly{}, big.NewInt(7)); !q.Equal(Poly{}) || q.Denominator().Cmp(big.NewInt(1)) != 0 {
		t.Error("0/7 is not 0")
	}
}
