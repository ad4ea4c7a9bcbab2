package ratfun

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

func random(r *rand.Rand) intpoly.Poly {
	c := make([]int64, r.IntN(5))
	factor := 1 + r.Int64N(6)
	for i := range c {
		c[i] = factor * (r.Int64N(41) - 20)
	}
	return intpoly.FromInt64s(c...)
}

func randomFunc(r *rand.Rand) Func {
	for {
		if f, ok := New(random(r), random(r)); ok {
			return f
		}
	}
}

// at is the value at x, by rational arithmetic alone.
func (f Func) at(x int64) (v *big.Rat, ok bool) {
	d := f.Den().AtInt(big.NewInt(x))
	if d.Sign() == 0 {
		return nil, false
	}
	return new(big.Rat).SetFrac(f.Num().AtInt(big.NewInt(x)), d), true
}

// lawful fails where the representation is not the documented one.
func (f Func) lawful(t *testing.T, name string) {
	t.Helper()
	num, den := f.Num().Content(), f.Den().Content()
	g := new(big.Int).GCD(nil, nil, num, den)
	switch {
	case f.Den().IsZero(), f.Den().Sign(f.Den().Degree()) < 0, g.Cmp(big.NewInt(1)) != 0:
		t.Fatalf("%s: contents %v and %v", name, num, den)
	case f.numContent != 0 && num.Cmp(new(big.Int).SetUint64(f.numContent)) != 0,
		f.denContent != 0 && den.Cmp(new(big.Int).SetUint64(f.denContent)) != 0:
		t.Fatalf("%s: contents %v and %v, kept as %d and %d", name, num, den, f.numContent, f.denContent)
	}
}

// The oracle is the value at points, computed from the values of the operands.
func TestOperationsByValue(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 3000 {
		checkOperations(t, r)
	}
}

// checkOperations checks one random case.
// A constant longer than a word cancels as one does that is multiplied in.
func TestNewScaled(t *testing.T) {
	r := rand.New(rand.NewPCG(51, 52))
	for range 2000 {
		f := randomFunc(r)
		num, den := f.Num().MulInt(big.NewInt(r.Int64N(30)-15)), f.Den().MulInt(big.NewInt(r.Int64N(15)+1))
		k := big.NewRat(r.Int64N(99)-49, 1+r.Int64N(99))
		for range r.IntN(3) * 5 {
			k.Mul(k, big.NewRat(1+r.Int64N(1<<20), 1+r.Int64N(1<<20)))
		}
		got, ok := NewScaled(k, num, den)
		want, _ := New(num.MulInt(k.Num()), den.MulInt(k.Denom()))
		if !ok || !got.Equal(want) {
			t.Fatalf("%v of (%v)/(%v) is %v", k, num, den, got)
		}
		got.lawful(t, "scaled")
	}
	if _, ok := NewScaled(new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), 99)), intpoly.FromInt64s(1), intpoly.Poly{}); ok {
		t.Error("a denominator of 0")
	}
}

func checkOperations(t *testing.T, r *rand.Rand) {
	t.Helper()
	one := big.NewRat(1, 1)
	f, g := randomFunc(r), randomFunc(r)
	k := big.NewRat(r.Int64N(41)-20, 1+r.Int64N(12))
	product, sum, scaled, negative := f.Mul(g), f.Add(g), f.Scale(k), f.Neg()
	inverse, invertible := f.Inverse()
	loop, closed := f.Feedback(g, 1)
	positive, closedPositive := f.Feedback(g, -1)
	reduced, cancelled, _ := f.LowestTerms()
	for name, h := range map[string]Func{"product": product, "sum": sum, "scaled": scaled, "negative": negative, "inverse": inverse,
		"loop": loop, "positive loop": positive, "reduced": reduced} {
		h.lawful(t, name)
	}
	if f.Num().GCD(f.Den()).Degree() != cancelled.Degree() || reduced.Num().GCD(reduced.Den()).Degree() > 0 {
		t.Fatal("lowest terms")
	}
	if !sum.Add(g.Neg()).Equivalent(f) || invertible != !f.IsZero() {
		t.Fatal("sum or inverse")
	}
	for x := int64(-4); x < 5; x++ {
		a, ok1 := f.at(x)
		b, ok2 := g.at(x)
		if !ok1 || !ok2 {
			continue
		}
		ab := new(big.Rat).Mul(a, b)
		check := func(name string, h Func, want *big.Rat) {
			if v, ok := h.at(x); !ok || v.Cmp(want) != 0 {
				t.Fatalf("%s at %d: %v, want %v", name, x, v, want)
			}
		}
		check("product", product, ab)
		check("sum", sum, new(big.Rat).Add(a, b))
		check("scaled", scaled, new(big.Rat).Mul(a, k))
		check("reduced", reduced, a)
		if invertible && a.Sign() != 0 {
			check("inverse", inverse, new(big.Rat).Inv(a))
		}
		if d := new(big.Rat).Add(one, ab); closed && d.Sign() != 0 {
			check("loop", loop, new(big.Rat).Quo(a, d))
		}
		if d := new(big.Rat).Sub(one, ab); closedPositive && d.Sign() != 0 {
			check("positive loop", positive, new(big.Rat).Quo(a, d))
		}
	}
}

// Long chains keep the contents and the degrees that the laws ask for.
func TestChainKeepsRepresentation(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	f := randomFunc(r)
	for range 60 {
		if g, ok := f.Feedback(randomFunc(r), 1); ok && !g.IsZero() {
			f = g
		}
		f = f.Add(randomFunc(r))
		f.lawful(t, "chain")
	}
}

func TestZeroes(t *testing.T) {
	var zero Func
	if _, ok := zero.Inverse(); ok {
		t.Error("0 has an inverse")
	}
	if _, ok := New(intpoly.FromInt64s(1), intpoly.Poly{}); ok {
		t.Error("a zero denominator was taken")
	}
	minusOne, _ := New(intpoly.FromInt64s(-1), intpoly.FromInt64s(1))
	one, _ := New(intpoly.FromInt64s(1), intpoly.FromInt64s(1))
	if _, ok := one.Feedback(minusOne, 1); ok {
		t.Error("1/(1 − 1) was taken")
	}
	if f := zero.Add(one); !f.Equal(one) || !zero.Mul(one).IsZero() {
		t.Error("arithmetic with the zero value")
	}
}

func FuzzOperations(f *testing.F) {
	f.Add(uint64(1))
	f.Fuzz(func(t *testing.T, seed uint64) { checkOperations(t, rand.New(rand.NewPCG(seed, 1))) })
}
