package ball

import (
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/internal/fault"
)

// inside returns a point of x at the fraction f of its radius, exactly (up to
// an inward rounding).
func inside(x Real, f float64) Real {
	if x.rad.m == 0 {
		return x
	}
	r := FromFloat(x.Radius()).Mul(FromFloat64(f), 64)
	r.rad = mag{}
	z := FromFloat(x.Mid()).Add(r, 6000)
	z.rad = mag{}
	return z
}

func randomBall(r *rand.Rand, span int) Real {
	x := FromFloat64(math.Ldexp(r.Float64()-0.5, r.IntN(2*span+1)-span))
	if r.IntN(8) == 0 {
		x = FromInt64(int64(r.IntN(9) - 4))
	}
	switch r.IntN(4) {
	case 0:
		return x
	case 1:
		return x.widen(magUp(big.NewFloat(math.Ldexp(r.Float64(), r.IntN(6)-4))))
	default:
		return x.widen(magPow2(-r.IntN(120)))
	}
}

// Every value at a point of the operands, computed at higher precision, lies in
// the ball that was computed at lower precision.
func TestSoundness(t *testing.T) {
	unary := map[string]func(Real, uint) Real{
		"Sqr": Real.Sqr, "Inv": Real.Inv, "Abs": func(x Real, _ uint) Real { return x.Abs() },
		"Round": Real.Round, "PowInt 7": func(x Real, p uint) Real { return x.PowInt(7, p) },
		"PowInt -4": func(x Real, p uint) Real { return x.PowInt(-4, p) },
	}
	for name, f := range functions {
		unary[name] = f
	}
	binary := map[string]func(x, y Real, p uint) Real{
		"Add": Real.Add, "Sub": Real.Sub, "Mul": Real.Mul, "Div": Real.Div, "Atan2": Atan2,
	}
	r := rand.New(rand.NewPCG(7, 8))
	finite := 0
	for range 1500 {
		x, y := randomBall(r, 12), randomBall(r, 12)
		prec := uint(8 + r.IntN(150))
		f, g := 2*r.Float64()-1, 2*r.Float64()-1
		if r.IntN(3) == 0 {
			f, g = math.Copysign(1, f), math.Copysign(1, g)
		}
		px, py := inside(x, f), inside(y, g)
		see := func(name string, got, want Real) {
			if !got.IsFinite() {
				return
			}
			finite++
			if !want.IsFinite() || !got.Sub(want, 8000).ContainsZero() {
				t.Fatalf("%s(%v, %v) at %d bits: %v does not contain %v", name, x, y, prec, got, want)
			}
		}
		for name, f := range unary {
			see(name, f(x, prec), f(px, 400))
		}
		for name, f := range binary {
			see(name, f(x, y, prec), f(px, py, 400))
		}
	}
	if finite < 15000 {
		t.Errorf("only %d finite results", finite)
	}
}

// Huge exponents, indeterminate balls and silly precisions neither panic nor
// take memory.
func TestExtremes(t *testing.T) {
	huge := FromFloat(new(big.Float).SetMantExp(big.NewFloat(1), maxExponent-1))
	tiny := FromFloat(new(big.Float).SetMantExp(big.NewFloat(-1), -maxExponent+1))
	wideBall := NewReal(nil, new(big.Float).SetMantExp(big.NewFloat(1), maxExponent))
	args := []Real{
		{}, FromInt64(1), FromInt64(-3), FromFloat64(1e300), FromFloat64(-1e9), FromFloat64(1e9), FromFloat64(5e-324),
		huge, huge.Neg(), tiny, tiny.Neg(), wideBall, Indeterminate(), FromFloat64(math.NaN()),
		FromInt64(1).widen(magPow2(-1 << 28)), tiny.widen(magPow2(1000)), huge.widen(magPow2(-maxExponent)),
		NewReal(big.NewFloat(1), big.NewFloat(1)), NewReal(big.NewFloat(2), big.NewFloat(-1)),
	}
	for _, x := range args {
		for _, prec := range []uint{0, 64} {
			for _, f := range functions {
				_ = f(x, prec).String()
			}
			for _, n := range []int{0, 1, -1, 2, 1000, math.MaxInt, math.MinInt} {
				x.PowInt(n, prec)
				NewComplex(x, x.Neg()).PowInt(n, prec)
				x.MulPow2(n)
			}
			x.Float64()
			x.IsBeyondRange()
			if lo, hi := x.Lower(), x.Upper(); lo.Cmp(hi) > 0 {
				t.Errorf("%v: lower %v above upper %v", x, lo, hi)
			}
			for _, y := range args {
				z := NewComplex(x, y)
				z.Exp(prec)
				z.Abs(prec)
				z.Arg(prec)
				z.Div(NewComplex(y, x), prec)
				x.Add(y, prec)
				x.Div(y, prec)
			}
		}
	}
	if e := FromFloat64(-1e9).Exp(64); !e.IsFinite() || !e.ContainsZero() {
		t.Errorf("exp(-1e9) = %v", e)
	}
	if v, ok := FromFloat64(-1e9).Exp(64).Float64(); v != 0 || !ok {
		t.Errorf("exp(-1e9) rounds to %v, %v", v, ok)
	}
}

// Float64 on ties, subnormals, zero and overflow: decisions by IEEE 754.
func TestFloat64(t *testing.T) {
	pow := func(e int) *big.Float { return new(big.Float).SetMantExp(big.NewFloat(1), e) }
	sum := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(3000).Add(a, b) }
	small := pow(-1200)
	for _, c := range []struct {
		mid, rad *big.Float
		want     float64
		ok       bool
	}{
		{sum(pow(0), pow(-53)), nil, 1, true},    // tie to even
		{sum(pow(0), pow(-53)), small, 0, false}, // about a tie
		{sum(sum(pow(0), pow(-53)), pow(-900)), small, 1 + 0x1p-52, true},
		{pow(-1074), nil, 5e-324, true},
		{pow(-1075), nil, 0, true}, // tie to even
		{pow(-1075), small, 0, false},
		{sum(pow(-1075), pow(-1100)), small, 5e-324, true},
		{sum(pow(-1074), pow(-1075)), nil, 1e-323, true}, // tie between 1 and 2 quanta
		{nil, small, 0, true},                            // both signs, but below half a quantum
		{new(big.Float).Neg(small), nil, 0, true},
		{pow(1024), nil, math.Inf(1), false},
		{sum(pow(1024), new(big.Float).Neg(pow(970))), nil, math.Inf(1), false}, // tie to even overflows
		{sum(pow(1024), new(big.Float).Neg(pow(970))), small, 0, false},
		{sum(pow(1024), new(big.Float).Neg(sum(pow(970), pow(900)))), small, math.MaxFloat64, true},
	} {
		v, ok := NewReal(c.mid, c.rad).Float64()
		if ok != c.ok || ok && (v != c.want || math.Signbit(v)) {
			t.Errorf("%v ± %v: %g %t, want %g %t", c.mid, c.rad, v, ok, c.want, c.ok)
		}
	}
	if !NewReal(pow(1024), small).IsBeyondRange() || NewReal(pow(1023), small).IsBeyondRange() {
		t.Error("IsBeyondRange")
	}
}

// The quick decision of Float64 agrees with the ends wherever it decides.
func TestFloat64AgreesWithEnds(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	decided, refused := 0, 0
	for range 20000 {
		m := math.Ldexp(float64(r.Uint64()>>11), r.IntN(1900)-1000)
		x := FromFloat64(m).Add(FromFloat64(m*math.Ldexp(float64(r.IntN(5)-2), -54)), 200)
		x = x.Add(FromFloat64(m*(r.Float64()-0.5)*math.Ldexp(1, -r.IntN(90))), 200)
		x = x.widen(magUp(big.NewFloat(m)).mulPow2(-50 - r.IntN(60)))
		v, ok := x.clearFloat64()
		if !ok {
			refused++
			continue
		}
		decided++
		if lo, hi := x.ends(); lo != hi || v != lo {
			t.Fatalf("%v rounds to %g, its ends to %g and %g", x, v, lo, hi)
		}
	}
	if decided < 2000 || refused < 2000 {
		t.Errorf("%d decided, %d refused", decided, refused)
	}
}

// The float64 starting values are as good as their comments say.
func TestApproximations(t *testing.T) {
	for i := range 1000 {
		f, a := 0.7+0.72*float64(i)/999, float64(i)/999
		if f != 1 && math.Abs(logApproximation(f)-math.Log(f)) > 0x1p-40 {
			t.Errorf("log %g", f)
		}
		if math.Abs(atanApproximation(a)-math.Atan(a)) > 0x1p-40 {
			t.Errorf("atan %g", a)
		}
	}
}

func TestRound(t *testing.T) {
	v, err := Round(64, 4096, func(p uint) (Real, error) { // cos 1e-60 - 1 needs 400 bits
		return FromFloat64(1e-60).Cos(p).Sub(FromInt64(1), p), nil
	})
	if err != nil || v != -5e-121 {
		t.Errorf("cos(1e-60) - 1 = %v, %v", v, err)
	}
	if _, err = Round(64, 512, func(p uint) (Real, error) { return Pi(p).Sub(Pi(p), p), nil }); !errors.Is(err, fault.ErrLimit) {
		t.Errorf("π - π: %v", err)
	}
	if _, err = Round(64, 512, func(p uint) (Real, error) { return FromInt64(1000).Exp(p), nil }); !errors.Is(err, fault.ErrRange) {
		t.Errorf("e^1000: %v", err)
	}
}

func TestComplex(t *testing.T) {
	z := FromComplex128(complex(0.3, -2))
	w := z.Exp(300)
	if d := w.Abs(300).Sub(FromFloat64(0.3).Exp(300), 300); !d.ContainsZero() {
		t.Errorf("|e^z| differs by %v", d)
	}
	if d := w.Arg(300).Sub(FromInt64(-2), 300); !d.ContainsZero() || w.Arg(300).RelativeBits() < 290 {
		t.Errorf("arg e^z differs by %v", d)
	}
	q := z.PowInt(-5, 300).Mul(z.PowInt(5, 300), 300).Sub(NewComplex(FromInt64(1), Real{}), 300)
	if !q.ContainsZero() {
		t.Errorf("z^-5 z^5 - 1 = %v", q)
	}
	if q = z.Div(w, 300).Mul(w, 300).Sub(z, 300); !q.ContainsZero() {
		t.Errorf("z/w·w - z = %v", q)
	}
}

func FuzzFunctions(f *testing.F) {
	f.Add(1.5, 0.25, uint16(64))
	f.Add(-1e300, 1e-30, uint16(200))
	f.Fuzz(func(t *testing.T, m, rad float64, prec uint16) {
		p := uint(prec % 400)
		x := FromFloat64(m)
		if rad > 0 && !math.IsInf(rad, 0) {
			x = x.widen(magUp(big.NewFloat(rad)))
		}
		point := inside(x, 0.75)
		for name, g := range functions {
			got, want := g(x, p), g(point, p+200)
			if got.IsFinite() && want.IsFinite() && !got.Sub(want, 4000).ContainsZero() {
				t.Fatalf("%s(%v) at %d bits: %v, but %v at an inner point", name, x, p, got, want)
			}
		}
	})
}
