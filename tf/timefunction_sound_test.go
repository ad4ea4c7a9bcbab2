package tf

import (
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/poly"
)

// TestQuickStageIsSound: the true value lies within the bound that the
// double-double sum claims, whether or not it decides the rounding.
func TestQuickStageIsSound(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	functions, times := 60, 60
	if testing.Short() {
		functions = 15
	}
	decided, total, limits := 0, 0, 0
	tightest := math.Inf(1)
	for range functions {
		f := randomDifficult(r)
		e, err := newExpansion(f.Num(), f.Den())
		if err != nil {
			t.Fatal(err)
		}
		q := e.prepare()
		if q == nil {
			t.Fatalf("no first stage for %v/%v", f.Num(), f.Den())
		}
		for range times {
			x := math.Exp2(16*r.Float64() - 12)
			total++
			exact := new(big.Rat).SetFloat64(x)
			want, err := e.at(exact)
			switch {
			case errors.Is(err, fault.ErrRange):
				continue
			case err != nil:
				limits++
				t.Error(err)
				continue
			}
			if v, ok := e.quickAt(x, 0); ok {
				decided++
				if math.Float64bits(v) != math.Float64bits(want) {
					t.Errorf("%v/%v at %x: first stage %x, certified %x", f.Num(), f.Den(), x, v, want)
				}
			}
			y, err := e.enclosure(exact, 2, e.nearZero(exact))
			if err != nil {
				t.Fatal(err)
			}
			check := func(sum double, bound, scale float64, stage string) {
				v := ball.FromFloat64(sum.Hi).Add(ball.FromFloat64(sum.Lo), 300).Mul(ball.FromFloat64(scale), 300).Sub(y, 300).Abs()
				bound *= scale
				if lo, _ := v.Lower().Float64(); lo > bound {
					t.Errorf("%v/%v at %x: %s is off by %g, claims %g", f.Num(), f.Den(), x, stage, lo, bound)
				} else if lo > 0 {
					tightest = min(tightest, bound/lo)
				}
			}
			sum, bound, _ := q.far(x, 0)
			check(sum, bound, q.scale, "the sum of modes")
			if x < q.taylor.until {
				sum, bound := e.series(q).at(x, 0)
				check(sum, bound, q.taylor.scale, "the series")
			}
		}
	}
	t.Logf("%d of %d values decided by the first stage; bound at least %.1f times the error; ErrLimit %d", decided, total, tightest, limits)
	if decided < total/2 {
		t.Error("the first stage decides too little")
	}
}

// randomDifficult returns a strictly proper function, in turn at random, scaled by
// powers of 2, and with clusters of poles on and beside the real axis.
func randomDifficult(r *rand.Rand) ratfun.Func {
	f := randomProper(r, 1+r.IntN(8))
	switch r.IntN(3) {
	case 1:
		scale := new(big.Int).Lsh(big.NewInt(1), uint(200+r.IntN(400)))
		if r.IntN(2) == 0 {
			return f.Scale(new(big.Rat).SetInt(scale))
		}
		return f.Scale(new(big.Rat).SetFrac(big.NewInt(1), scale))
	case 2:
		return randomCluster(r)
	}
	if r.IntN(6) == 0 {
		return randomProper(r, 12+r.IntN(20))
	}
	return f
}

// randomCluster returns a function whose poles, simple or repeated, are
// 10^−6 to 10^−15 apart.
func randomCluster(r *rand.Rand) ratfun.Func {
	close := new(big.Rat).SetFrac(big.NewInt(1), new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(6+r.IntN(10))), nil))
	one := big.NewRat(1, 1)
	base := big.NewRat(int64(1+r.IntN(40)), int64(1+r.IntN(9)))
	den := poly.FromInts(int64(r.IntN(9)), 1)
	for k := range int64(1 + r.IntN(4)) {
		apart := new(big.Rat).Mul(close, big.NewRat(k+1, 1))
		center := new(big.Rat).Add(base, apart)
		var factor poly.Poly
		switch r.IntN(3) {
		case 0: // real
			factor = poly.FromRats(center, one)
		case 1: // beside the axis: (s + base)² + apart²
			factor = poly.FromRats(new(big.Rat).Add(new(big.Rat).Mul(base, base), new(big.Rat).Mul(apart, apart)), new(big.Rat).Add(base, base), one)
		default: // far from it: s² + s + base + apart
			factor = poly.FromRats(new(big.Rat).Add(center, one), one, one)
		}
		for range 1 + r.IntN(2) {
			den = den.Mul(factor)
		}
	}
	c := make([]int64, 1+r.IntN(den.Degree()))
	for i := range c {
		c[i] = int64(r.IntN(99) - 49)
	}
	c[0] |= 1
	f, _ := quotient(poly.FromInts(c...), den)
	f, _, _ = f.LowestTerms()
	return f
}

// FuzzTimeFunction compares the stages, and checks that nothing panics.
func FuzzTimeFunction(f *testing.F) {
	f.Add([]byte{1}, []byte{5, 2, 1}, 0.5)
	f.Add([]byte{0, 1}, []byte{1, 2, 1}, 1.0)
	f.Add([]byte{1, 1}, []byte{0, 0, 1, 3, 3, 1}, 1e-300)
	f.Add([]byte{3}, []byte{0, 0, 0, 255}, 1e300)
	f.Fuzz(func(t *testing.T, num, den []byte, x float64) {
		if len(num) > 12 || len(den) > 10 {
			return
		}
		g, err := New(fuzzPoly(num), fuzzPoly(den))
		if err != nil {
			return
		}
		h, err := g.InverseLaplace()
		if err != nil {
			if !errors.Is(err, ErrImpulseDerivative) {
				t.Fatal(err)
			}
			return
		}
		y, err := h.At(x)
		if err != nil {
			if !errors.Is(err, fault.ErrRange) && !errors.Is(err, fault.ErrNotFinite) {
				t.Fatalf("%v at %v: %v", h, x, err)
			}
			return
		}
		if h.e != nil && x >= 0 {
			want, err := h.e.at(new(big.Rat).SetFloat64(x))
			if err != nil || math.Float64bits(y) != math.Float64bits(want) {
				t.Fatalf("%v at %x: %x, certified %x, %v", h, x, y, want, err)
			}
			samples, err := h.Sample(x, 12)
			if err == nil && math.Float64bits(samples[1]) != math.Float64bits(y) {
				t.Fatalf("%v: sample %x, value %x", h, samples[1], y)
			}
		}
		if h.String() == "" {
			t.Fatal("no text")
		}
	})
}

func fuzzPoly(b []byte) poly.Poly {
	c := make([]int64, len(b))
	for i, v := range b {
		c[i] = int64(int8(v))
	}
	return poly.FromInts(c...)
}

// FuzzPartialFractions: the rational fractions add up to the function.
func FuzzPartialFractions(f *testing.F) {
	f.Add([]byte{1}, []byte{5, 2, 1})
	f.Add([]byte{1, 2, 3, 4}, []byte{1, 2, 1})
	f.Fuzz(func(t *testing.T, num, den []byte) {
		if len(num) > 10 || len(den) > 9 {
			return
		}
		g, err := New(fuzzPoly(num), fuzzPoly(den))
		if err != nil {
			return
		}
		p, err := g.PartialFractions()
		if err != nil {
			t.Fatal(err)
		}
		if !total(p).Equivalent(g.c.f) {
			t.Fatalf("%v/%v: the fractions do not add up", g.c.f.Num(), g.c.f.Den())
		}
	})
}

// TestTimeFunctionLaws: linearity in the transform, the shift by a dead time,
// and the response as a product of transforms.
func TestTimeFunctionLaws(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	for range 20 {
		g := Continuous{c: core{f: randomProper(r, 1+r.IntN(4))}}
		h := Continuous{c: core{f: randomProper(r, 1+r.IntN(4))}}
		f := Must(h.InverseLaplace())
		f.signal = g.c.input
		if y := Must(g.Response(f)); !y.transform().Equivalent(g.c.f.Mul(h.c.f)) {
			t.Errorf("response of %v to %v is %v", g, f, y)
		}
		delayed := g
		delayed.c.setDelay(big.NewRat(3, 4))
		a, b := Must(g.InverseLaplace()), Must(delayed.InverseLaplace())
		for _, x := range []float64{0.5, 0.75, 1, 3.25} {
			want := 0.0
			if x >= 0.75 {
				want = Must(a.At(x - 0.75))
			}
			if got := Must(b.At(x)); got != want {
				t.Errorf("%v at %v is %v, want %v", b, x, got, want)
			}
		}
	}
}
