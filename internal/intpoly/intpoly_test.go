package intpoly

import (
	"fmt"
	"math/big"
	legacy "math/rand"
	"math/rand/v2"
	"testing"
)

func one(k uint) *big.Int { return new(big.Int).Lsh(big.NewInt(1), k) }

// edge returns a number near the border of a limb, or any other.
func edge(r *rand.Rand) *big.Int {
	k := []uint{0, 1, 31, 32, 62, 63, 64, 65, 127, 128, 191, 192, 255, 256, 320}[r.IntN(15)]
	v := one(k)
	switch r.IntN(6) {
	case 0:
		v.Sub(v, big.NewInt(1))
	case 1:
		v.Add(v, big.NewInt(1))
	case 2:
		v = new(big.Int).Rand(newLegacy(r), one(k+1))
	case 3:
		v.SetInt64(0)
	}
	if r.IntN(2) == 0 {
		v.Neg(v)
	}
	return v
}

// coefficients returns random coefficients: small ones, ones at the borders of
// limbs, sparse ones.
func coefficients(r *rand.Rand, terms int) []*big.Int {
	c := make([]*big.Int, terms)
	kind := r.IntN(4)
	for i := range c {
		switch kind {
		case 0:
			c[i] = big.NewInt(r.Int64N(2001) - 1000)
		case 1:
			c[i] = big.NewInt(int64(r.Uint64()))
		case 2:
			c[i] = edge(r)
		default:
			c[i] = new(big.Int)
			if r.IntN(4) == 0 {
				c[i] = edge(r)
			}
		}
	}
	return c
}

func same(p Poly, q naive) bool {
	if p.Degree() != q.Degree() {
		return false
	}
	for i := range q.c {
		if p.Coefficient(i).Cmp(q.c[i]) != 0 {
			return false
		}
	}
	// the representation must be the smallest
	return p.Words() == limbsNeeded(q)
}

func limbsNeeded(q naive) int {
	n := 0
	for _, c := range q.c {
		x := c
		if c.Sign() < 0 {
			x = new(big.Int).Not(c)
		}
		n = max(n, x.BitLen()/64+1)
	}
	return n
}

// pair is a polynomial in both representations.
type pair struct {
	p Poly
	q naive
}

func newPair(c []*big.Int) pair { return pair{FromBigs(c...), naiveBigs(c...)} }

func checkPair(t *testing.T, a, b pair, k *big.Int) {
	t.Helper()
	for name, x := range map[string]struct {
		got  Poly
		want naive
	}{
		"Add": {a.p.Add(b.p), a.q.Add(b.q)}, "Sub": {a.p.Sub(b.p), a.q.Sub(b.q)}, "Neg": {a.p.Neg(), a.q.Neg()},
		"Mul": {a.p.Mul(b.p), a.q.Mul(b.q)}, "Square": {a.p.Mul(a.p), a.q.Mul(a.q)}, "MulInt": {a.p.MulInt(k), a.q.MulInt(k)},
		"Derivative": {a.p.Derivative(), a.q.Derivative()}, "Reverse": {a.p.Reverse(), a.q.Reverse()},
		"SumOfProducts":        {SumOfProducts(a.p, b.p, b.p, b.p, 1), a.q.Mul(b.q).Add(b.q.Mul(b.q))},
		"DifferenceOfProducts": {SumOfProducts(a.p, a.p, b.p, a.p, -1), a.q.Mul(a.q).Sub(b.q.Mul(a.q))},
		"MulPower":             {a.p.MulPower(3), a.q.MulPower(3)}, "QuoPower": {a.p.QuoPower(a.p.Valuation()), a.q.QuoPower(a.q.Valuation())},
		"zero sum": {a.p.Sub(a.p), naive{}}, "QuoInt": {a.p.MulInt(big.NewInt(-12)).QuoInt(big.NewInt(-12)), a.q},
	} {
		if !same(x.got, x.want) {
			t.Fatalf("%s of %v and %v (k = %v): %v", name, a.q.c, b.q.c, k, x.got.bigs())
		}
	}
	even, odd := a.p.EvenOdd()
	evenWant, oddWant := a.q.EvenOdd()
	content, primitive := a.p.Primitive()
	contentWant, primitiveWant := a.q.Primitive()
	if !same(even, evenWant) || !same(odd, oddWant) || content.Cmp(contentWant) != 0 || !same(primitive, primitiveWant) {
		t.Fatalf("parts of %v", a.q.c)
	}
	if a.p.AtInt(k).Cmp(a.q.AtInt(k)) != 0 || a.p.AtRat(k, big.NewInt(7)).Cmp(a.q.AtRat(k, big.NewInt(7))) != 0 || a.p.MaxBitLen() != a.q.MaxBitLen() {
		t.Fatalf("value or size of %v", a.q.c)
	}
	for i := -1; i <= a.q.Degree()+1; i++ {
		v, ok := a.p.Int64(i)
		c := a.q.Coefficient(i)
		if a.p.Sign(i) != a.q.Sign(i) || a.p.BitLen(i) != a.q.BitLen(i) || ok != c.IsInt64() || ok && v != c.Int64() {
			t.Fatalf("coefficient %d of %v", i, a.q.c)
		}
	}
	if a.p.Equal(b.p) != a.q.Equal(b.q) || a.p.ContentIsOne() != (contentWant.CmpAbs(big.NewInt(1)) == 0) {
		t.Fatalf("comparison of %v and %v", a.q.c, b.q.c)
	}
	if g := a.p.CommonWord(720720); !a.p.IsZero() && new(big.Int).GCD(nil, nil, big.NewInt(720720), a.q.Content()).Cmp(new(big.Int).SetUint64(g)) != 0 {
		t.Fatalf("common divisor %d of %v", g, a.q.c)
	}
}

func TestAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 3000 {
		a, b := newPair(coefficients(r, r.IntN(9))), newPair(coefficients(r, r.IntN(9)))
		before := FromBigs(a.q.c...)
		checkPair(t, a, b, edge(r))
		if !a.p.Equal(before) {
			t.Fatal("an operand was changed")
		}
	}
}

// A square takes ways of its own, for every width and length.
func TestSquares(t *testing.T) {
	r := rand.New(rand.NewPCG(61, 62))
	for _, width := range []uint{20, 40, 50, 62, 100, 128, 190, 256, 300, 600} {
		for _, terms := range []int{1, 2, 3, 7, 8, 20, 21, 70, 200} {
			c := make([]*big.Int, terms)
			for i := range c {
				c[i] = new(big.Int).Rand(newLegacy(r), one(width))
				if r.IntN(2) == 0 {
					c[i].Neg(c[i])
				}
			}
			p := newPair(c)
			if !same(p.p.Mul(p.p), p.q.Mul(p.q)) {
				t.Fatalf("%d terms of %d bits", terms, width)
			}
			copied := newPair(c)
			if want := p.q.Mul(p.q); !same(SumOfProducts(p.p, p.p, copied.p, p.p, -1), want.Sub(want)) {
				t.Fatalf("the square of %d terms of %d bits less itself", terms, width)
			}
		}
	}
}

// Long shifts and divisions go other ways than short ones.
func TestLongShiftsAndDivisions(t *testing.T) {
	r := rand.New(rand.NewPCG(71, 72))
	for _, terms := range []int{60, 64, 65, 66, 127, 130, 257} {
		p := newPair(coefficients(r, terms))
		for _, a := range []*big.Int{big.NewInt(0), big.NewInt(1), big.NewInt(-1), big.NewInt(-3), one(70)} {
			if !same(p.p.TaylorShift(a), p.q.TaylorShift(a)) {
				t.Fatalf("%d terms shifted by %v", terms, a)
			}
		}
		q := newPair(coefficients(r, 1+r.IntN(terms)))
		if q.p.IsZero() {
			continue
		}
		quo, rem, k := p.p.PseudoQuoRem(q.p)
		wantQuo, wantRem, wantK := p.q.PseudoQuoRem(q.q)
		if !same(quo, wantQuo) || !same(rem, wantRem) || k != wantK {
			t.Fatalf("%d terms over %d", terms, q.p.terms())
		}
	}
}

// Products are compared as products are: also where they are long enough for a
// common factor to leave first.
func TestEqualProducts(t *testing.T) {
	r := rand.New(rand.NewPCG(41, 42))
	for range 3000 {
		p := func() Poly { return FromBigs(coefficients(r, r.IntN(5))...) }
		a, b, c, d := p(), p(), p(), p()
		if r.IntN(2) == 0 { // equal by construction
			e, f, g, h := p(), p(), p(), p()
			a, b, c, d = e.Mul(f), g.Mul(h), g.Mul(f), h.Mul(e)
		}
		if got, want := EqualProducts(a, b, c, d), a.Mul(b).Equal(c.Mul(d)); got != want {
			t.Fatalf("%v·%v = %v·%v: %v", a.bigs(), b.bigs(), c.bigs(), d.bigs(), got)
		}
	}
	// Many short terms against few long ones.
	many := make([]int64, 9001)
	for i := range many {
		many[i] = r.Int64N(2001) - 1000
	}
	short, long := FromInt64s(many...), FromBigs(one(60000), big.NewInt(3), one(59000))
	x, y := FromInt64s(1, 2), FromInt64s(-5, 0, 7)
	a, b, c, d := short.Mul(x), long.Mul(y), long.Mul(x), short.Mul(y)
	if !EqualProducts(a, b, c, d) || !EqualProducts(b, a, c, d) || !EqualProducts(a, b, d, c) || !EqualProducts(c, d, b, a) {
		t.Error("equal products are said to differ")
	}
	if EqualProducts(a, b, c, d.Add(FromInt64s(0, 1))) || EqualProducts(a, b, c.Neg(), d) {
		t.Error("different products are said to be equal")
	}
}

// Long factors, of equal and of very unequal length, are packed.
func TestLongProducts(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	rounds := 30
	if testing.Short() {
		rounds = 6
	}
	for range rounds {
		m, n := 1+r.IntN(700), 1+r.IntN(700)
		if r.IntN(2) == 0 {
			m, n = 1+r.IntN(80), 1+r.IntN(80)
		}
		a, b := newPair(coefficients(r, m)), newPair(coefficients(r, n))
		if !same(a.p.Mul(b.p), a.q.Mul(b.q)) {
			t.Fatalf("product of %d and %d terms", m, n)
		}
		if !same(SumOfProducts(a.p, b.p, a.p, a.p, -1), a.q.Mul(b.q).Sub(a.q.Mul(a.q))) {
			t.Fatalf("difference of products of %d and %d terms", m, n)
		}
	}
}

func TestTransformAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(17, 18))
	for range 200 {
		a, b := newPair(coefficients(r, 1+r.IntN(100))), newPair(coefficients(r, 1+r.IntN(100)))
		if a.p.IsZero() || b.p.IsZero() {
			continue
		}
		span := a.p.span() + b.p.span() + 7
		if got := transformSum(a.p, b.p, Poly{}, Poly{}, span, 1); !same(got, a.q.Mul(b.q)) {
			t.Fatalf("product of %d and %d terms", a.p.terms(), b.p.terms())
		}
		span = max(span, 2*b.p.span()+7) + 1
		if got := transformSum(a.p, b.p, b.p, b.p, span, -1); !same(got, a.q.Mul(b.q).Sub(b.q.Mul(b.q))) {
			t.Fatalf("difference of products of %d and %d terms", a.p.terms(), b.p.terms())
		}
	}
}

// Products of integers, of equal and of very unequal length, of random bits and of
// ones alone, are those of math/big.
func TestLongIntegers(t *testing.T) {
	r := newLegacy(rand.New(rand.NewPCG(19, 20)))
	for _, c := range [][2]uint{{1, 1}, {1, 64}, {64, 64}, {65, 6400}, {5000, 5000}, {4096 * 64, 4096 * 64}, {64 * 2049, 64 * 2048}, {64 * 100, 64 * 5003}, {64 * 129, 64 * 640}} {
		for k := range 4 {
			x, y := new(big.Int).Rand(r, one(c[0])), new(big.Int).Rand(r, one(c[1]))
			if k == 0 { // all ones
				x, y = new(big.Int).Sub(one(c[0]), one(0)), new(big.Int).Sub(one(c[1]), one(0))
			}
			if x.Sign() == 0 || y.Sign() == 0 {
				continue
			}
			a, b := limbsOf(x), limbsOf(y)
			if len(a) > len(b) {
				a, b = b, a
			}
			want := new(big.Int).Mul(x, y)
			if got := fromLimbs(multiplyLimbs(a, b)); got.Cmp(want) != 0 {
				t.Fatalf("product of %d and %d bits", c[0], c[1])
			}
			x.Neg(x)
			if got := product(x, y); got.Cmp(want.Neg(want)) != 0 {
				t.Fatalf("product of −%d and %d bits", c[0], c[1])
			}
		}
	}
}

func TestDivisionAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 1500 {
		a, b := newPair(coefficients(r, 1+r.IntN(7))), newPair(coefficients(r, 1+r.IntN(7)))
		if b.p.IsZero() {
			continue
		}
		quo, rem, k := a.p.PseudoQuoRem(b.p)
		quoWant, remWant, kWant := a.q.PseudoQuoRem(b.q)
		if !same(quo, quoWant) || !same(rem, remWant) || k != kWant {
			t.Fatalf("pseudo-division of %v by %v", a.q.c, b.q.c)
		}
		product := a.p.Mul(b.p)
		if q, ok := product.QuoExact(b.p); !ok || !q.Equal(a.p) {
			t.Fatalf("%v times %v over %v is %v, %v", a.q.c, b.q.c, b.q.c, q.bigs(), ok)
		}
		spoiled := product.Add(FromInt64s(0, 1))
		q, ok := spoiled.QuoExact(b.p)
		qWant, okWant := naiveBigs(spoiled.bigs()...).QuoExact(b.q)
		if ok != okWant || ok && !same(q, qWant) {
			t.Fatalf("%v over %v is %v, %v", spoiled.bigs(), b.q.c, q.bigs(), ok)
		}
	}
	if _, ok := FromInt64s(1, 1).QuoExact(Poly{}); ok {
		t.Error("a division by 0")
	}
	// Both ends even: the leading and the lowest coefficient have no inverse
	// modulo a power of two.
	a, b := FromInt64s(4, 3, 2), FromInt64s(6, 1, 8)
	if q, ok := a.Mul(b).QuoExact(b); !ok || !q.Equal(a) {
		t.Errorf("even ends: %v, %v", q.bigs(), ok)
	}
}

func TestGCDAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	prime := new(big.Int).Sub(one(62), big.NewInt(57)) // the first one used
	for i := range 600 {
		a, b := newPair(coefficients(r, 1+r.IntN(6))), newPair(coefficients(r, 1+r.IntN(6)))
		c := newPair(coefficients(r, 1+r.IntN(4)))
		if i%5 == 0 { // leading coefficients that the prime divides
			c = newPair(append(coefficients(r, 2), prime))
		}
		for _, d := range []pair{{a.p, a.q}, {c.p, c.q}} {
			p, q := pair{a.p.Mul(d.p), a.q.Mul(d.q)}, pair{b.p.Mul(d.p), b.q.Mul(d.q)}
			if got, want := p.p.GCD(q.p), p.q.GCD(q.q); !same(got, want) {
				t.Fatalf("gcd of %v and %v is %v, want %v", p.q.c, q.q.c, got.bigs(), want.c)
			}
		}
		got, want := a.p.Mul(c.p).Mul(c.p).SquareFree(), a.q.Mul(c.q).Mul(c.q).SquareFree()
		if len(got) != len(want) {
			t.Fatalf("square-free factors of %v", a.q.Mul(c.q).Mul(c.q).c)
		}
		for k := range got {
			if !same(got[k].Poly, want[k].Poly) || got[k].Multiplicity != want[k].Multiplicity {
				t.Fatalf("square-free factor %d of %v", k, a.q.Mul(c.q).Mul(c.q).c)
			}
		}
	}
	// x + P and x share a root modulo the first prime P, but not in truth.
	if g := FromBigs(prime, big.NewInt(1)).Mul(FromInt64s(1, 1)).GCD(FromInt64s(0, 1).Mul(FromInt64s(1, 1))); !g.Equal(FromInt64s(1, 1)) {
		t.Errorf("an unlucky prime: %v", g.bigs())
	}
}

func TestSubstitutionsAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	for range 300 {
		a, b := newPair(coefficients(r, r.IntN(6))), newPair(coefficients(r, r.IntN(4)))
		k, d := edge(r), big.NewInt(1+r.Int64N(50))
		if !same(a.p.TaylorShift(k), a.q.TaylorShift(k)) || !same(a.p.ScaleArgument(k, d), a.q.ScaleArgument(k, d)) ||
			!same(a.p.Compose(b.p), a.q.Compose(b.q)) || !same(b.p.Pow(5), b.q.Pow(5)) || a.p.Resultant(b.p).Cmp(a.q.Resultant(b.q)) != 0 {
			t.Fatalf("substitution in %v: %v, %v, %v", a.q.c, b.q.c, k, d)
		}
	}
}

func TestCofactors(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	found := 0
	for range 400 {
		a, b := FromBigs(coefficients(r, 2+r.IntN(6))...), FromBigs(coefficients(r, 2+r.IntN(6))...)
		u, v, c, ok := a.Cofactors(b)
		coprime := a.Degree() > 0 && b.Degree() > 0 && a.GCD(b).IsOne()
		if ok != coprime {
			t.Fatalf("%v and %v: %v", a.bigs(), b.bigs(), ok)
		}
		if !ok {
			continue
		}
		found++
		if !u.Mul(a).Add(v.Mul(b)).Equal(FromBigs(c)) || c.Sign() <= 0 || u.Degree() >= b.Degree() || v.Degree() >= a.Degree() {
			t.Fatalf("%v and %v: %v, %v, %v", a.bigs(), b.bigs(), u.bigs(), v.bigs(), c)
		}
	}
	if found < 100 {
		t.Errorf("only %d coprime pairs", found)
	}
}

func FuzzArithmetic(f *testing.F) {
	f.Add(uint64(1), uint8(3), uint8(4))
	f.Fuzz(func(t *testing.T, seed uint64, m, n uint8) {
		r := rand.New(rand.NewPCG(seed, 1))
		a, b := newPair(coefficients(r, int(m%40))), newPair(coefficients(r, int(n%40)))
		checkPair(t, a, b, edge(r))
		if m%40 < 8 && n%40 < 8 {
			if !same(a.p.GCD(b.p), a.q.GCD(b.q)) {
				t.Fatalf("gcd of %v and %v", a.q.c, b.q.c)
			}
		}
		if !b.p.IsZero() {
			if q, ok := a.p.Mul(b.p).QuoExact(b.p); !ok || !q.Equal(a.p) {
				t.Fatalf("%v times and over %v", a.q.c, b.q.c)
			}
		}
	})
}

// newLegacy adapts the source for big.Int.Rand.
func newLegacy(r *rand.Rand) *legacy.Rand { return legacy.New(legacy.NewSource(r.Int64())) }

// The float64 way of multiplying is exact up to its documented span, whatever
// the signs and however long the factors.
func TestFloatSumsAtTheirBound(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for i := range 400 {
		m, n := minFloatTerms+r.IntN(100), minFloatTerms+r.IntN(100)
		width := uint(maxFloatSpan-10) / 2
		fill := func(terms int) []*big.Int {
			c := make([]*big.Int, terms)
			for j := range c {
				c[j] = big.NewInt(int64(1)<<width - 1 - r.Int64N(3))
				if i%3 == 1 && j%2 == 1 || i%3 == 2 && r.IntN(2) == 0 {
					c[j].Neg(c[j])
				}
			}
			return c
		}
		a, b := newPair(fill(m)), newPair(fill(n))
		if !same(a.p.Mul(b.p), a.q.Mul(b.q)) || !same(SumOfProducts(a.p, b.p, b.p, b.p, -1), a.q.Mul(b.q).Sub(b.q.Mul(b.q))) {
			t.Fatalf("%d by %d terms", m, n)
		}
	}
}

func BenchmarkThresholds(b *testing.B) {
	for _, width := range []uint{32, 50, 100, 128, 192, 256, 320, 512} {
		for _, terms := range []int{8, 16, 24, 32, 64, 128, 192, 256, 384, 1024} {
			r := rand.New(rand.NewPCG(13, 14))
			c, d := make([]*big.Int, terms), make([]*big.Int, terms)
			for i := range c {
				c[i], d[i] = new(big.Int).Rand(newLegacy(r), one(width)), new(big.Int).Rand(newLegacy(r), one(width))
			}
			p, q := FromBigs(c...), FromBigs(d...)
			n := limbsFor(p.span() + q.span() + 10)
			b.Run(fmt.Sprintf("width=%d/terms=%d/limbs=%d/direct", width, terms, n*terms), func(b *testing.B) {
				for b.Loop() {
					w := make([]uint64, (2*terms-1)*n)
					if p.n == 1 {
						addFloatSums(w, p, q, 1)
					} else {
						wideSums(w, n, p, q, Poly{}, Poly{}, 1)
					}
				}
			})
			b.Run(fmt.Sprintf("width=%d/terms=%d/limbs=%d/packed", width, terms, n*terms), func(b *testing.B) {
				for b.Loop() {
					longSum(p, q, Poly{}, Poly{}, n, 1)
				}
			})
			if terms < 24 {
				continue
			}
			b.Run(fmt.Sprintf("width=%d/terms=%d/limbs=%d/transform", width, terms, n*terms), func(b *testing.B) {
				for b.Loop() {
					transformSum(p, q, Poly{}, Poly{}, p.span()+q.span()+10, 1)
				}
			})
		}
	}
}

func BenchmarkIntegers(b *testing.B) {
	r := newLegacy(rand.New(rand.NewPCG(19, 20)))
	for _, n := range []uint{1000, 2000, 4000, 16000, 64000} {
		x, y := new(big.Int).Rand(r, one(64*n)), new(big.Int).Rand(r, one(64*n))
		b.Run(fmt.Sprintf("limbs=%d/transform", n), func(b *testing.B) {
			for b.Loop() {
				fromLimbs(multiplyLimbs(limbsOf(x), limbsOf(y)))
			}
		})
		b.Run(fmt.Sprintf("limbs=%d/karatsuba", n), func(b *testing.B) {
			for b.Loop() {
				new(big.Int).Mul(x, y)
			}
		})
	}
}
