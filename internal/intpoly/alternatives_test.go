package intpoly

import (
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"
)

// Methods that were measured against those in use and are slower at every size
// that matters. They serve as oracles, and BenchmarkAlternatives repeats the
// measurement.

// heuristicGCD is the method of Char, Geddes and Gonnet (1989): the greatest common
// divisor of the values at one large integer has the coefficients of that of the
// polynomials for its digits, as trial divisions confirm; ok is false after six
// points.
func heuristicGCD(p, q Poly) (g Poly, ok bool) {
	p, q = p.primitive(), q.primitive()
	x := new(big.Int).Lsh(big.NewInt(1), uint(min(p.MaxBitLen(), q.MaxBitLen())+2))
	x.Add(x, big.NewInt(29))
	for range 6 {
		v := new(big.Int).GCD(nil, nil, new(big.Int).Abs(p.AtInt(x)), new(big.Int).Abs(q.AtInt(x)))
		g := digits(v, x).primitive()
		if _, ok := p.QuoExact(g); ok {
			if _, ok := q.QuoExact(g); ok {
				return g, true
			}
		}
		x.Mul(x, big.NewInt(73794))
		x.Quo(x, big.NewInt(27011))
	}
	return Poly{}, false
}

// digits returns the polynomial with v = p(x) and coefficients between −x/2 and x/2.
func digits(v, x *big.Int) Poly {
	half := new(big.Int).Rsh(x, 1)
	var c []*big.Int
	for v.Sign() != 0 {
		d := new(big.Int)
		v, d = new(big.Int).DivMod(v, x, d)
		if d.Cmp(half) > 0 {
			d.Sub(d, x)
			v.Add(v, big.NewInt(1))
		}
		c = append(c, d)
	}
	return FromBigs(c...)
}

// karatsuba multiplies by the method of Karatsuba and Ofman (1962) over the
// coefficients, down to factors of some terms.
func karatsuba(p, q Poly, least int) Poly {
	if min(p.terms(), q.terms()) <= least {
		return direct(p, q)
	}
	m := (max(p.terms(), q.terms()) + 1) / 2
	low := func(p Poly) Poly { return p.slice(0, min(m, p.terms())) }
	high := func(p Poly) Poly { return p.slice(min(m, p.terms()), p.terms()) }
	a, b, c, d := high(p), low(p), high(q), low(q)
	top, bottom := karatsuba(a, c, least), karatsuba(b, d, least)
	middle := karatsuba(a.Add(b), c.Add(d), least).Sub(top).Sub(bottom)
	return top.MulPower(2 * m).Add(middle.MulPower(m)).Add(bottom)
}

// direct multiplies term by term.
func direct(p, q Poly) Poly {
	if p.IsZero() || q.IsZero() {
		return Poly{}
	}
	terms, n := p.terms()+q.terms()-1, limbsFor(p.span()+q.span()+12)
	w := make([]uint64, terms*n)
	if p.n == 1 && q.n == 1 && n == 2 {
		addFloatSums(w, p, q, 1)
	} else {
		wideSums(w, n, p, q, Poly{}, Poly{}, 1)
	}
	return trim(w, n)
}

func randomTerms(r *rand.Rand, terms int, width uint) Poly {
	c := make([]*big.Int, terms)
	legacy := newLegacy(r)
	for i := range c {
		c[i] = new(big.Int).Rand(legacy, one(width))
		if r.IntN(2) == 0 {
			c[i].Neg(c[i])
		}
	}
	return FromBigs(c...)
}

func TestAlternatives(t *testing.T) {
	r := rand.New(rand.NewPCG(81, 82))
	for range 400 {
		p, q, common := FromBigs(coefficients(r, 1+r.IntN(9))...), FromBigs(coefficients(r, 1+r.IntN(9))...), FromBigs(coefficients(r, 1+r.IntN(5))...)
		p, q = p.Mul(common), q.Mul(common)
		if p.IsZero() || q.IsZero() {
			continue
		}
		if g, ok := heuristicGCD(p, q); ok && !g.Equal(p.GCD(q)) {
			t.Fatalf("gcd of %v and %v: %v", p.bigs(), q.bigs(), g.bigs())
		}
	}
	for range 100 {
		width := uint(1 + r.IntN(40))
		p, q := randomTerms(r, 1+r.IntN(60), width), randomTerms(r, 1+r.IntN(60), width)
		if !karatsuba(p, q, 8).Equal(p.Mul(q)) {
			t.Fatalf("product of %v and %v", p.bigs(), q.bigs())
		}
	}
}

func BenchmarkAlternatives(b *testing.B) {
	for _, width := range []uint{32, 256} {
		for _, degree := range []int{2, 4, 8, 16, 32, 64} {
			r := rand.New(rand.NewPCG(91, 92))
			p, q, common := randomTerms(r, degree+1, width), randomTerms(r, degree+1, width), randomTerms(r, degree+1, width)
			x, y := p.Mul(common), q.Mul(common)
			name := func(kind string) string { return fmt.Sprintf("width=%d/degree=%d/%s", width, degree, kind) }
			b.Run(name("gcd"), func(b *testing.B) {
				for b.Loop() {
					x.GCD(y)
				}
			})
			b.Run(name("gcd-heuristic"), func(b *testing.B) {
				for b.Loop() {
					if _, ok := heuristicGCD(x, y); !ok {
						b.Fatal("no gcd")
					}
				}
			})
			if degree < 16 {
				continue
			}
			b.Run(name("product"), func(b *testing.B) {
				for b.Loop() {
					p.Mul(q)
				}
			})
			b.Run(name("product-karatsuba"), func(b *testing.B) {
				for b.Loop() {
					karatsuba(p, q, (degree+2)/2)
				}
			})
		}
	}
}
