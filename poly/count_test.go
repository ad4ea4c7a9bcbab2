package poly

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// fromRoots multiplies random factors whose roots lie where the counts say.
func randomWithCounts(random *rand.Rand, onCircle bool) (Poly, Counts) {
	p, want := FromInts(1), Counts{}
	small := func() int64 { return 1 + random.Int64N(9) }
	for range 1 + random.IntN(5) {
		m := 1 + random.IntN(3)
		var f Poly
		a, b := small(), small()
		kind := random.IntN(6)
		if onCircle {
			switch kind {
			case 0: // a/(a+b) inside
				f, want.Inside = FromInts(-a, a+b), want.Inside+m
			case 1: // −(a+b)/a outside
				f, want.Outside = FromInts(a+b, a), want.Outside+m
			case 2:
				f, want.On = FromInts(1, 1), want.On+m
			case 3:
				f, want.On = FromInts(-1, 1), want.On+m
			case 4: // z² + (a/(a+b)) z·2 + 1: |half coefficient| < 1, so both on the circle
				f, want.On = FromInts(a+b, 2*a, a+b), want.On+2*m
			case 5: // z² + b/(a+b+1) : inside
				f, want.Inside = FromInts(b, 0, a+b+1), want.Inside+2*m
			}
		} else {
			switch kind {
			case 0:
				f, want.Inside = FromInts(a, b), want.Inside+m
			case 1:
				f, want.Outside = FromInts(-a, b), want.Outside+m
			case 2:
				f, want.On = FromInts(0, 1), want.On+m
			case 3:
				f, want.On = FromInts(a, 0, b), want.On+2*m
			case 4: // (s + a)² + b
				f, want.Inside = FromInts(a*a+b, 2*a, 1), want.Inside+2*m
			case 5: // s⁴ + 4a⁴ has two roots on each side
				f, want.Inside, want.Outside = FromInts(4*a*a*a*a, 0, 0, 0, 1), want.Inside+2*m, want.Outside+2*m
			}
		}
		for range m {
			p = p.Mul(f)
		}
	}
	return p.Scale(big.NewRat(-7, 3)), want
}

func TestCountsOfKnownRoots(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	for range 400 {
		p, want := randomWithCounts(random, false)
		got, err := p.HalfPlane()
		if diff := cmp.Diff(want, got); err != nil || diff != "" {
			t.Fatalf("HalfPlane of %v, %v:\n%s", p, err, diff)
		}
		p, want = randomWithCounts(random, true)
		if got, err := p.UnitCircle(); err != nil || got != want {
			t.Fatalf("UnitCircle of %v = %+v, %v, want %+v", p, got, err, want)
		}
	}
}

// The certified roots are an independent path to the counts.
func TestCountsAgainstRoots(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	for range 300 {
		c := make([]int64, 2+random.IntN(9))
		for i := range c {
			c[i] = random.Int64N(41) - 20
		}
		p := FromInts(c...)
		if p.Degree() < 1 {
			continue
		}
		roots, err := p.Roots()
		if err != nil {
			t.Fatal(err)
		}
		var want Counts
		distinct := 0
		for _, r := range roots {
			switch {
			case real(r.Value) < 0:
				want.Inside += r.Multiplicity
			case real(r.Value) > 0:
				want.Outside += r.Multiplicity
			default:
				want.On += r.Multiplicity
			}
			if r.IsReal() {
				distinct++
			}
		}
		if got, err := p.HalfPlane(); err != nil || got != want {
			t.Fatalf("HalfPlane of %v = %+v, %v, roots say %+v", p, got, err, want)
		}
		if got, err := p.CountRealRoots(nil, nil); err != nil || got != distinct {
			t.Fatalf("CountRealRoots of %v = %d, %v, roots say %d", p, got, err, distinct)
		}
	}
}

// Published cases. Butterworth: Weinberg, Network Analysis and Synthesis,
// 1962. Bessel: Thomson, Proc. IEE 1949. Both families lie to the left.
func TestHalfPlaneOfFilters(t *testing.T) {
	for _, text := range []string{
		"s^3 + 2 s^2 + 2 s + 1", "s^4 + 2.6131 s^3 + 3.4142 s^2 + 2.6131 s + 1",
		"s^5 + 3.2361 s^4 + 5.2361 s^3 + 5.2361 s^2 + 3.2361 s + 1",
		"s^3 + 6 s^2 + 15 s + 15", "s^4 + 10 s^3 + 45 s^2 + 105 s + 105", "s^5 + 15 s^4 + 105 s^3 + 420 s^2 + 945 s + 945",
	} {
		p := MustParse(text)
		if got, err := p.HalfPlane(); err != nil || got != (Counts{Inside: p.Degree()}) {
			t.Errorf("HalfPlane of %s = %+v, %v", text, got, err)
		}
	}
	// Graham & Lathrop, AIEE Trans. 1953, fourth order, and the same with the
	// damping taken out, which Routh's array meets with a row of zeros.
	for text, want := range map[string]Counts{
		"s^4 + 2.1 s^3 + 3.4 s^2 + 2.7 s + 1": {Inside: 4},
		"s^4 + 3 s^2 + 2":                     {On: 4},
		"s^4 - 1":                             {Inside: 1, On: 2, Outside: 1},
		"7":                                   {},
		"s^3":                                 {On: 3},
	} {
		if got, err := MustParse(text).HalfPlane(); err != nil || got != want {
			t.Errorf("HalfPlane of %s = %+v, %v, want %+v", text, got, err, want)
		}
	}
}

func TestCountRealRootsInIntervals(t *testing.T) {
	p := MustParse("(x - 1)^3 (x - 2) (x + 1/2)^2 (x^2 + 1)")
	for _, c := range []struct {
		lower, upper *big.Rat
		want         int
	}{
		{nil, nil, 3}, {big.NewRat(1, 1), nil, 1}, {nil, big.NewRat(1, 1), 2}, {big.NewRat(-1, 2), big.NewRat(3, 2), 1},
		{big.NewRat(0, 1), big.NewRat(2, 1), 2}, {big.NewRat(3, 1), big.NewRat(2, 1), 0},
	} {
		if got, err := p.CountRealRoots(c.lower, c.upper); err != nil || got != c.want {
			t.Errorf("between %v and %v: %d, %v, want %d", c.lower, c.upper, got, err, c.want)
		}
	}
}
