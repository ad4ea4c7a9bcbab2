package dd

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/qofs/qofs/internal/ball"
)

func exact(x DD) *big.Float {
	z := new(big.Float).SetPrec(2200).SetFloat64(x.Hi)
	return z.Add(z, big.NewFloat(x.Lo))
}

// relative returns |got/want - 1| in u².
func relative(got DD, want *big.Float) float64 {
	d := new(big.Float).SetPrec(2200).Sub(exact(got), want)
	f, _ := d.Quo(d, want).Float64()
	return math.Abs(f) * 0x1p106
}

func random(r *rand.Rand, span int) DD {
	h := math.Ldexp(r.Float64()-0.5, r.IntN(2*span+1)-span)
	if r.IntN(4) == 0 { // few bits: ties and cancellation
		h = math.Ldexp(float64(r.IntN(17)-8), r.IntN(5))
	}
	return fastTwoSum(h, h*(r.Float64()-0.5)*math.Ldexp(1, -53-r.IntN(60)))
}

// The bounds of the arithmetic, against math/big at 2200 bits.
func TestArithmeticBounds(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	big2 := func() *big.Float { return new(big.Float).SetPrec(2200) }
	worst := map[string]float64{}
	for range 40000 {
		x, y := random(r, 60), random(r, 60)
		if r.IntN(3) == 0 { // near cancellation
			y = fastTwoSum(-x.Hi, x.Hi*(r.Float64()-0.5)*0x1p-52)
		}
		if x.Hi == 0 || y.Hi == 0 {
			continue
		}
		see := func(name string, got DD, want *big.Float, bound float64) {
			if want.Sign() == 0 {
				if got != (DD{}) {
					t.Fatalf("%s(%v, %v) = %v, want 0", name, x, y, got)
				}
				return
			}
			e := relative(got, want)
			worst[name] = max(worst[name], e)
			if !(e <= bound) {
				t.Fatalf("%s(%v, %v): error %g u², bound %g", name, x, y, e, bound)
			}
		}
		see("Add", x.Add(y), big2().Add(exact(x), exact(y)), 3.0001)
		sizes := big2().Add(new(big.Float).Abs(exact(x)), new(big.Float).Abs(exact(y)))
		loose := big2().Sub(exact(x.AddLoose(y)), big2().Add(exact(x), exact(y)))
		off, _ := loose.Quo(loose, sizes).Float64()
		if worst["AddLoose"] = max(worst["AddLoose"], math.Abs(off)*0x1p106); math.Abs(off) > 0x1p-103 {
			t.Fatalf("AddLoose(%v, %v) is off by %g of the absolute values", x, y, off)
		}
		see("AddFloat", x.AddFloat(y.Hi), big2().Add(exact(x), exact(From(y.Hi))), 2.0001)
		see("Mul", x.Mul(y), big2().Mul(exact(x), exact(y)), 5)
		see("MulFloat", x.MulFloat(y.Hi), big2().Mul(exact(x), exact(From(y.Hi))), 2.0001)
		see("Div", x.Div(y), big2().Quo(exact(x), exact(y)), 15.0001)
		if x.Hi > 0 {
			see("Sqrt", x.Sqrt(), big2().Sqrt(exact(x)), 3.125)
		}
	}
	t.Log("worst errors in u²:", worst)
}

func ballOf(x DD) ball.Real {
	return ball.FromFloat64(x.Hi).Add(ball.FromFloat64(x.Lo), 3000)
}

// The bounds of the elementary functions, against balls of 200 bits.
func TestElementaryBounds(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	var worstExp, worstTrig float64
	for i := range 20000 {
		x := fastTwoSum((r.Float64()-0.5)*2*MaxExp, 0)
		switch i % 4 {
		case 1:
			x = random(r, 5)
		case 2: // near a change of k
			x = From((float64(r.IntN(800)-400) + 0.5) * math.Ln2)
		case 3:
			x = From(math.Ldexp(r.Float64(), -r.IntN(300)))
		}
		x = fastTwoSum(x.Hi, x.Hi*(r.Float64()-0.5)*0x1p-53)
		want := ballOf(x).Exp(200).Mid()
		e := relative(Exp(x), want) * 0x1p-106
		worstExp = max(worstExp, e)
		if !(e <= ExpError) {
			t.Fatalf("Exp(%v): relative error %g", x, e)
		}
		y := x
		switch i % 3 {
		case 1:
			y = random(r, 20)
		case 2:
			h := math.Round(r.Float64()*1e6) * math.Pi / 4
			y = fastTwoSum(h, h*(r.Float64()-0.5)*0x1p-53)
		}
		s, c := SinCos(y)
		ws, wc := ballOf(y).SinCos(200)
		for _, p := range [][2]*big.Float{{exact(s), ws.Mid()}, {exact(c), wc.Mid()}} {
			d, _ := new(big.Float).Sub(p[0], p[1]).Float64()
			worstTrig = max(worstTrig, math.Abs(d))
			if !(math.Abs(d) <= SinCosError) {
				t.Fatalf("SinCos(%v): error %g", y, d)
			}
		}
	}
	t.Logf("worst errors: Exp 2^%.1f relative, SinCos 2^%.1f absolute", math.Log2(worstExp), math.Log2(worstTrig))
}

func TestOutOfRangeIsNaN(t *testing.T) {
	for _, v := range []float64{math.Inf(1), math.NaN(), 1e300, -1e9} {
		s, c := SinCos(From(v))
		if e := Exp(From(v)); e.Hi == e.Hi || s.Hi == s.Hi || c.Hi == c.Hi {
			t.Errorf("%g: %v %v %v, want NaN", v, e, s, c)
		}
		if _, ok := Exp(From(v)).Round(0); ok {
			t.Errorf("NaN rounds")
		}
	}
}

// The bound of Horner, against exact complex evaluation with big.Float.
func TestHornerBound(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 500 {
		n := 1 + r.IntN(20)
		c := make([]DD, n)
		for j := range c {
			c[j] = random(r, 10)
		}
		z := Complex{random(r, 3), random(r, 3)}
		v, bound := Horner(c, z)
		zb := ball.NewComplex(ballOf(z.Re), ballOf(z.Im))
		var want ball.Complex
		for j := n - 1; j >= 0; j-- {
			want = want.Mul(zb, 2000)
			want.Re = want.Re.Add(ballOf(c[j]), 2000)
		}
		d := want.Sub(ball.NewComplex(ballOf(v.Re), ballOf(v.Im)), 2000).Abs(64)
		if f, _ := d.Upper().Float64(); !(f <= bound*(1+1e-9)) {
			t.Fatalf("Horner degree %d: error %g, bound %g", n-1, f, bound)
		}
	}
}

// Sums and products of floats in the documented range are exact.
func FuzzErrorFree(f *testing.F) {
	f.Add(1.0, 0x1p-53)
	f.Add(-1e100, 3.7)
	f.Fuzz(func(t *testing.T, a, b float64) {
		for _, v := range []float64{a, b} {
			if m := math.Abs(v); !(m >= MinMagnitude && m <= MaxMagnitude) {
				t.Skip()
			}
		}
		x, y := exact(From(a)), exact(From(b))
		wide := func() *big.Float { return new(big.Float).SetPrec(2200) }
		if exact(TwoSum(a, b)).Cmp(wide().Add(x, y)) != 0 {
			t.Errorf("TwoSum(%g, %g) = %v", a, b, TwoSum(a, b))
		}
		if exact(TwoProduct(a, b)).Cmp(wide().Mul(x, y)) != 0 {
			t.Errorf("TwoProduct(%g, %g) = %v", a, b, TwoProduct(a, b))
		}
	})
}

var sinkDD DD

func BenchmarkAdd(b *testing.B) {
	x, y := Exp(From(0.3)), Exp(From(0.2))
	for b.Loop() {
		x = x.Add(y)
	}
	sinkDD = x
}

func BenchmarkMul(b *testing.B) {
	x, y := Exp(From(0.3)), DD{1, 0x1p-60}
	for b.Loop() {
		x = x.Mul(y)
	}
	sinkDD = x
}

func BenchmarkExp(b *testing.B) {
	for b.Loop() {
		sinkDD = Exp(DD{-3.7, 0x1p-60})
	}
}

func BenchmarkSinCos(b *testing.B) {
	for b.Loop() {
		sinkDD, _ = SinCos(DD{123.7, 0x1p-60})
	}
}
