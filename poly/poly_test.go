package poly

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

func randomPoly(random *rand.Rand, degree int) Poly {
	c := make([]*big.Rat, degree+1)
	for i := range c {
		c[i] = big.NewRat(random.Int64N(2001)-1000, 1+random.Int64N(30))
	}
	return FromRats(c...)
}

func TestRingLaws(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for range 300 {
		p, q, r := randomPoly(random, random.IntN(8)), randomPoly(random, random.IntN(8)), randomPoly(random, random.IntN(8))
		x := big.NewRat(random.Int64N(99)-49, 1+random.Int64N(9))
		for name, pair := range map[string][2]Poly{
			"associative":  {p.Mul(q).Mul(r), p.Mul(q.Mul(r))},
			"commutative":  {p.Mul(q), q.Mul(p)},
			"distributive": {p.Mul(q.Add(r)), p.Mul(q).Add(p.Mul(r))},
			"difference":   {p.Sub(q).Add(q), p},
			"product rule": {p.Mul(q).Derivative(), p.Derivative().Mul(q).Add(p.Mul(q.Derivative()))},
			"integral":     {p.Integral().Derivative(), p},
			"text":         {MustParse("0 x + (" + p.String() + ")"), p},
		} {
			if !pair[0].Equal(pair[1]) {
				t.Fatalf("%s: %v and %v (p = %v, q = %v)", name, pair[0], pair[1], p, q)
			}
		}
		at := func(p Poly, x *big.Rat) *big.Rat {
			v, err := p.AtRat(x)
			if err != nil {
				t.Fatal(err)
			}
			return v
		}
		product := new(big.Rat).Mul(at(p, x), at(q, x))
		if at(p.Mul(q), x).Cmp(product) != 0 {
			t.Fatalf("value of a product: p = %v, q = %v, x = %v", p, q, x)
		}
		composed, err := p.Compose(q)
		if err != nil || at(composed, x).Cmp(at(p, at(q, x))) != 0 {
			t.Fatalf("value of a composition: p = %v, q = %v, x = %v, %v", p, q, x, err)
		}
	}
}

func TestDivision(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 10))
	for range 200 {
		p, q, common := randomPoly(random, random.IntN(7)), randomPoly(random, random.IntN(5)), randomPoly(random, random.IntN(4))
		if p.IsZero() || q.IsZero() || common.IsZero() {
			continue
		}
		quo, rem, err := p.QuoRem(q)
		if err != nil || !quo.Mul(q).Add(rem).Equal(p) || rem.Degree() >= q.Degree() {
			t.Fatalf("%v over %v is %v, remainder %v, %v", p, q, quo, rem, err)
		}
		a, b := p.Mul(common), q.Mul(common)
		g, u, v, err := a.ExtendedGCD(b)
		plain, err2 := a.GCD(b)
		if err != nil || err2 != nil || !g.Equal(plain) || !u.Mul(a).Add(v.Mul(b)).Equal(g) {
			t.Fatalf("gcd of %v and %v is %v or %v; %v, %v", a, b, g, plain, err, err2)
		}
		if h, w, x := euclid(a, b); !h.Equal(g) || a.Degree() > g.Degree() && b.Degree() > g.Degree() && (!w.Equal(u) || !x.Equal(v)) {
			t.Fatalf("cofactors of %v and %v are %v and %v, Euclid's are %v and %v", a, b, u, v, w, x)
		}
		if _, rem, _ := g.QuoRem(common); !rem.IsZero() {
			t.Fatalf("gcd %v misses %v", g, common)
		}
		res, err := p.Resultant(q)
		if err != nil || (res.Sign() == 0) != (func() bool { h, _ := p.GCD(q); return h.Degree() > 0 }()) {
			t.Fatalf("resultant of %v and %v is %v, %v", p, q, res, err)
		}
	}
	if _, _, err := FromInts(1).QuoRem(Poly{}); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("over 0: %v", err)
	}
}

// euclid is the extended algorithm over the rationals: the oracle.
func euclid(p, q Poly) (g, u, v Poly) {
	one := FromInts(1)
	a, ua, va := p, one, Poly{}
	b, ub, vb := q, Poly{}, one
	for !b.IsZero() {
		t, r, _ := a.QuoRem(b)
		a, ua, va, b, ub, vb = b, ub, vb, r, ua.Sub(t.Mul(ub)), va.Sub(t.Mul(vb))
	}
	k := a.Coefficient(a.Degree())
	k.Inv(k)
	return a.Scale(k), ua.Scale(k), va.Scale(k)
}

func TestExtendedGCDOfZeroes(t *testing.T) {
	p := MustParse("2 x - 1/3")
	for _, c := range []struct{ p, q Poly }{{p, Poly{}}, {Poly{}, p}, {p, p}, {p, FromInts(5)}, {FromInts(5), FromInts(7)}, {Poly{}, Poly{}}} {
		g, u, v, err := c.p.ExtendedGCD(c.q)
		if err != nil || !u.Mul(c.p).Add(v.Mul(c.q)).Equal(g) {
			t.Errorf("%v and %v: %v, %v, %v, %v", c.p, c.q, g, u, v, err)
		}
	}
}

// The resultant is lc(p)^deg q · lc(q)^deg p · Π (a − b) over the roots.
func TestResultantOfKnownRoots(t *testing.T) {
	p := MustParse("3 (x - 1) (x + 2)")
	q := MustParse("5 (x - 4) (x - 1/2) (x + 3)")
	want := big.NewRat(9*9*9, 9*9*9)
	want.SetInt64(27 * 25)
	for _, a := range []*big.Rat{big.NewRat(1, 1), big.NewRat(-2, 1)} {
		for _, b := range []*big.Rat{big.NewRat(4, 1), big.NewRat(1, 2), big.NewRat(-3, 1)} {
			want.Mul(want, new(big.Rat).Sub(a, b))
		}
	}
	if got, err := p.Resultant(q); err != nil || got.Cmp(want) != 0 {
		t.Errorf("resultant %v, %v, want %v", got, err, want)
	}
}

func TestSquareFree(t *testing.T) {
	fs, err := MustParse("-4 (s + 1)^5 (s^2 + 2 s + 5)^3 (s - 1/3)").SquareFree()
	if err != nil || len(fs) != 3 {
		t.Fatalf("%v, %v", fs, err)
	}
	for i, want := range []string{"s - 1/3", "s^2 + 2 s + 5", "s + 1"} {
		if !fs[i].Poly.Equal(MustParse(want)) || fs[i].Multiplicity != 2*i+1 {
			t.Errorf("factor %d is %v, %d times", i, fs[i].Poly, fs[i].Multiplicity)
		}
	}
}

func TestAtAgainstComplexArithmetic(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 12))
	for range 2000 {
		p := randomPoly(random, random.IntN(12))
		x := complex(random.NormFloat64(), random.NormFloat64())
		got, err := p.At(x)
		if err != nil {
			t.Fatal(err)
		}
		var want complex128
		size := 0.0
		for i := p.Degree(); i >= 0; i-- {
			c, _ := p.Coefficient(i).Float64()
			want = want*x + complex(c, 0)
			size = size*cmplx.Abs(x) + math.Abs(c)
		}
		if cmplx.Abs(got-want) > 1e-13*size {
			t.Fatalf("%v at %v is %v, want about %v", p, x, got, want)
		}
	}
	// (x − 1)^20 at 1 + 2^−30 is 2^−600, of which Horner's rule in float64 keeps
	// no digit.
	p, _ := MustParse("x - 1").Pow(20)
	if got, err := p.At(complex(1+math.Ldexp(1, -30), 0)); err != nil || got != complex(math.Ldexp(1, -600), 0) {
		t.Errorf("near a root of multiplicity 20: %v, %v", got, err)
	}
	for x, want := range map[complex128]error{complex(math.NaN(), 0): ErrNotFinite, complex(0, math.Inf(1)): ErrNotFinite, complex(1e300, 0): ErrRange} {
		if _, err := p.At(x); !errors.Is(err, want) {
			t.Errorf("at %v: %v, want %v", x, err, want)
		}
	}
}

func TestFloatsAndDecimals(t *testing.T) {
	p, err := FromDecimals(0.1, -2.5e-3)
	if err != nil || !p.Equal(MustParse("0.1 - 0.0025 x")) {
		t.Errorf("FromDecimals: %v, %v", p, err)
	}
	q, err := FromFloats(0.1)
	if err != nil || q.Coefficient(0).Cmp(new(big.Rat).SetFloat64(0.1)) != 0 {
		t.Errorf("FromFloats: %v, %v", q, err)
	}
	if _, err := FromFloats(math.NaN()); !errors.Is(err, ErrNotFinite) {
		t.Errorf("NaN: %v", err)
	}
}

func TestText(t *testing.T) {
	for _, c := range []struct{ in, out string }{
		{"0.02 s^2 + 0.4 s + 9", "0.02 s^2 + 0.4 s + 9"}, {"3/4 z² − 1/3", "0.75 s^2 - 1/3"}, {"0", "0"}, {"-s", "-s"}, {"x^10 1000000000", "1e9 s^10"},
	} {
		p, err := Parse(c.in)
		if c.in == "x^10 1000000000" {
			p, err = Parse("1000000000 x^10")
		}
		if err != nil || p.Text("s") != c.out {
			t.Errorf("%q is %q, %v, want %q", c.in, p.Text("s"), err, c.out)
		}
	}
	p := MustParse("0.02 s^2 - s/3 + 9e-12")
	for format, want := range map[string]string{"%v": "0.02 x^2 - 1/3 x + 9e-12", "%.3g": "0.02 x^2 - 0.333 x + 9e-12", "%d": "%!d(poly.Poly=0.02 x^2 - 1/3 x + 9e-12)"} {
		if got := fmt.Sprintf(format, p); got != want {
			t.Errorf("%s is %q, want %q", format, got, want)
		}
	}
	if got, want := p.LaTeX("s"), `0.02 \, s^{2} - \frac{1}{3} \, s + 9 \cdot 10^{-12}`; got != want {
		t.Errorf("LaTeX %q, want %q", got, want)
	}
	if got := p.MathML("s"); !strings.Contains(got, "<msup><mi>s</mi><mn>2</mn></msup>") || strings.Count(got, "<m") != strings.Count(got, "</m") {
		t.Errorf("MathML %q", got)
	}
}

func TestRefusals(t *testing.T) {
	for text, want := range map[string]error{"1/0": ErrDivisionByZero, "s^1000000": ErrLimit, "1e999999999": ErrLimit, strings.Repeat("(", 10<<20): ErrLimit} {
		var syntax *SyntaxError
		if _, err := Parse(text); !errors.Is(err, want) || !errors.As(err, &syntax) {
			t.Errorf("Parse(%.20q): %v, want %v", text, err, want)
		}
	}
	for _, text := range []string{"", "1/s", "s + t", "NaN", "s +"} {
		var syntax *SyntaxError
		if _, err := Parse(text); !errors.As(err, &syntax) {
			t.Errorf("Parse(%q): %v", text, err)
		}
	}
	x := FromInts(0, 1)
	if _, err := x.Pow(-1); !errors.Is(err, ErrLimit) {
		t.Errorf("x^-1: %v", err)
	}
	if _, err := x.Pow(MaxDegree + 1); !errors.Is(err, ErrLimit) {
		t.Errorf("x^%d: %v", MaxDegree+1, err)
	}
	if p, err := MustParse("x + 1").Pow(MaxDegree); err != nil || p.Degree() != MaxDegree {
		t.Errorf("(x + 1)^%d: %v", MaxDegree, err)
	}
	heavy := make([]*big.Rat, 65)
	for i := range heavy {
		heavy[i] = new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(3), 4000))
	}
	if _, err := FromRats(heavy...).Pow(60); !errors.Is(err, ErrLimit) {
		t.Errorf("a power of 30 MiB: %v", err)
	}
	if _, err := FromRats(heavy...).Compose(FromRats(heavy[:60]...)); !errors.Is(err, ErrLimit) {
		t.Errorf("a composition of 100 MiB: %v", err)
	}
	big64, _ := x.Pow(100)
	if _, err := big64.Compose(big64); !errors.Is(err, ErrLimit) {
		t.Errorf("degree 10000: %v", err)
	}
	if _, err := (Poly{}).HalfPlane(); !errors.Is(err, ErrZeroPolynomial) {
		t.Errorf("HalfPlane of 0: %v", err)
	}
	long := make([]int64, 700)
	for i := range long {
		long[i] = int64(i*i%97) - 50
	}
	wide := FromInts(long...)
	for name, err := range map[string]error{
		"HalfPlane":      func() error { _, err := wide.HalfPlane(); return err }(),
		"UnitCircle":     func() error { _, err := FromInts(long[:500]...).UnitCircle(); return err }(),
		"CountRealRoots": func() error { _, err := wide.CountRealRoots(nil, nil); return err }(),
		"ExtendedGCD":    func() error { _, _, _, err := wide.ExtendedGCD(wide.Derivative()); return err }(),
	} {
		if !errors.Is(err, ErrLimit) {
			t.Errorf("%s of degree 699: %v", name, err)
		}
	}
	if p, err := FromInts(2).Pow(MaxBits + 1); !errors.Is(err, ErrLimit) {
		t.Errorf("2^%d: degree %d, %v", MaxBits+1, p.Degree(), err)
	}
}

// naiveCompose is Horner's rule.
func naiveCompose(p, q Poly) Poly {
	var v Poly
	for i := p.Degree(); i >= 0; i-- {
		v = v.Mul(q).Add(FromRats(p.Coefficient(i)))
	}
	return v
}

func TestComposeAgainstHorner(t *testing.T) {
	random := rand.New(rand.NewPCG(13, 14))
	for m := range 40 {
		for _, n := range []int{0, 1, 2, 5} {
			p, q := randomPoly(random, m), randomPoly(random, n)
			if got, err := p.Compose(q); err != nil || !got.Equal(naiveCompose(p, q)) {
				t.Fatalf("%v of %v is %v, %v", p, q, got, err)
			}
		}
	}
	for _, c := range []struct{ p, q, want Poly }{{Poly{}, FromInts(1, 2), Poly{}}, {FromInts(3), Poly{}, FromInts(3)}, {FromInts(3, 4), Poly{}, FromInts(3)}} {
		if got, err := c.p.Compose(c.q); err != nil || !got.Equal(c.want) {
			t.Errorf("%v of %v is %v, %v", c.p, c.q, got, err)
		}
	}
}

// The bounds are where the doc comments say, and each refusal comes at once.
func TestDocumentedBounds(t *testing.T) {
	of := func(degree, bits int) Poly {
		c := make([]*big.Rat, degree+1)
		for i := range c {
			v := new(big.Int).Lsh(big.NewInt(1), uint(bits-1))
			c[i] = new(big.Rat).SetInt(v.Add(v, big.NewInt(int64(i*i%89+1))))
		}
		return FromRats(c...)
	}
	extended := func(p Poly) bool { return p.integer().CofactorWork(p.integer()) <= intpoly.MaxCofactorWork }
	resultant := func(p Poly) bool { return p.integer().ResultantWork(p.integer()) <= intpoly.MaxResultantWork }
	gcd := func(p Poly) bool { return p.integer().GCDWork(p.integer()) <= intpoly.MaxGCDWork }
	for name, c := range map[string]struct {
		within bool
		beyond func() error
	}{
		"ExtendedGCD":          {extended(of(350, 32)), func() error { _, _, _, err := of(450, 32).ExtendedGCD(of(450, 31)); return err }},
		"Resultant":            {resultant(of(850, 32)), func() error { _, err := of(1000, 32).Resultant(of(1000, 31)); return err }},
		"Resultant, long":      {resultant(of(20, 20000)), func() error { _, err := of(20, 40000).Resultant(of(20, 39999)); return err }},
		"GCD, long":            {gcd(of(16, 480000)), func() error { _, err := of(60, 500000).GCD(of(60, 499999)); return err }},
		"GCD, of many terms":   {gcd(of(8000, 1900)) && gcd(of(1000, 45000)), func() error { _, err := of(60000, 62).GCD(of(60000, 61)); return err }},
		"QuoRem, many terms":   {true, func() error { _, _, err := of(4000, 32).QuoRem(of(2000, 32)); return err }},
		"Compose, many digits": {true, func() error { _, err := of(4000, 32).Compose(of(1, 32)); return err }},
	} {
		if !c.within {
			t.Errorf("%s within its bound", name)
		}
		if err := c.beyond(); !errors.Is(err, ErrLimit) {
			t.Errorf("%s beyond its bound: %v", name, err)
		}
	}
	if _, _, err := of(600, 200).QuoRem(of(300, 200)); err != nil {
		t.Errorf("QuoRem within its bound: %v", err)
	}
}

func FuzzText(f *testing.F) {
	for _, s := range []string{"0.02 s^2 + 0.4 s + 9", "3/4 z² − 1/3", "-x^3(x+1)^2", "1e-30"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		p, err := Parse(text)
		var syntax *SyntaxError
		if err != nil {
			if !errors.As(err, &syntax) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		if p.integer().MaxBitLen() > 4096 || p.rational().Denominator().BitLen() > 4096 {
			return // beyond what a literal may hold
		}
		q, err := Parse(p.Text("s"))
		if err != nil || !q.Equal(p) {
			t.Fatalf("%q is %q, which reads as %v, %v", text, p.Text("s"), q, err)
		}
	})
}

func ExampleParse() {
	p := MustParse("0.02 s^2 + 0.4 s + 9")
	fmt.Println(p.Text("s"))
	fmt.Println(p.Mul(p).Text("s"))
	// Output:
	// 0.02 s^2 + 0.4 s + 9
	// 0.0004 s^4 + 0.016 s^3 + 0.52 s^2 + 7.2 s + 81
}

func ExamplePoly_HalfPlane() {
	counts, err := MustParse("s^3 + 2 s^2 + 3 s + 10").HalfPlane()
	fmt.Println(counts.Inside, "stable,", counts.Outside, "unstable", err)
	// Output:
	// 1 stable, 2 unstable <nil>
}
