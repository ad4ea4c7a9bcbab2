package algebraic

import (
	"math"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

// stream is the generator splitmix64 (Steele, Lea & Flood 2014).
type stream uint64

func (s *stream) next() uint64 {
	*s += 0x9e3779b97f4a7c15
	z := uint64(*s)
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return z ^ z>>31
}

// below returns a number from 0 to n−1.
func (s *stream) below(n int) int { return int(s.next() % uint64(n)) }

// signed returns a number of at most the given number of bits.
func (s *stream) signed(bits int) int64 {
	v := int64(s.next() >> (64 - bits))
	if s.next()&1 == 1 {
		return -v
	}
	return v
}

func (s *stream) poly(degree, bits int) intpoly.Poly {
	c := make([]*big.Int, degree+1)
	for i := range c {
		c[i] = big.NewInt(s.signed(62))
		shift(c[i], c[i], bits-62)
	}
	c[0].Add(c[0], big.NewInt(1))
	c[degree].SetBit(c[degree].Abs(c[degree]), 0, 1)
	return intpoly.FromBigs(c...)
}

const plenty = 6000 // bits in which the tests compute without rounding

func number(v float64) *big.Float { return new(big.Float).SetPrec(plenty).SetFloat64(v) }

// exactValue returns 2^-m·p(2^k·z), z = x + iw, without rounding.
func exactValue(p intpoly.Poly, k, m int, x, w *big.Float) (re, im *big.Float) {
	re, im = number(0), number(0)
	t := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(plenty).Mul(a, b) }
	for i := p.Degree(); i >= 0; i-- {
		u := t(re, x)
		u.Sub(u, t(im, w))
		v := t(re, w)
		im = v.Add(v, t(im, x))
		c := new(big.Float).SetPrec(plenty).SetInt(p.Coefficient(i))
		c.SetMantExp(c, i*k-m)
		re = u.Add(u, c)
	}
	return re, im
}

// distance returns |re − a + i(im − b)| rounded up.
func distance(re, im *big.Float, a, b float64) float64 {
	u := new(big.Float).Sub(re, number(a))
	v := new(big.Float).Sub(im, number(b))
	u.Mul(u, u)
	v.Mul(v, v)
	f, _ := u.Add(u, v).Sqrt(u).Float64()
	return math.Nextafter(f, math.Inf(1))
}

// TestCompensatedBounds compares compensated values and derivatives with exact
// arithmetic, at random points and next to roots.
func TestCompensatedBounds(t *testing.T) {
	s := stream(1)
	cases := 3000
	if testing.Short() {
		cases = 300
	}
	worst := 0.0
	for range cases {
		n, bits := 1+s.below(12), 10+s.below(300)
		p := s.poly(n, bits)
		f, ok := newFloats(p, make([]float64, 4*(n+1)))
		if !ok {
			t.Fatalf("%d bits do not fit", bits)
		}
		// The scaling of newFloats, read off the leading coefficient.
		lead := fromBig(p.Leading(), n*f.k)
		_, e := math.Frexp(f.hi[n])
		m := lead.e - e
		x, w := float64(s.signed(53))*0x1p-53, float64(s.signed(53))*0x1p-53
		switch s.below(4) {
		case 0:
			w = 0
		case 1: // next to a root
			re, im := make([]float64, n), make([]float64, n)
			f.place(re, im)
			f.approximate(re, im, maxSweeps)
			x, w = re[0], im[0]
		}
		v := f.at(x, w)
		re, im := exactValue(p, f.k, m, number(x), number(w))
		err := distance(re, im, v.pr, v.pi)
		if allowed := v.errValue + 2*unit*math.Hypot(v.pr, v.pi); !(err <= allowed) {
			t.Fatalf("degree %d at %v+%vi: value off by %g, bound %g", n, x, w, err, allowed)
		}
		worst = max(worst, (err-unit*math.Hypot(v.pr, v.pi))/v.errValue)
		re, im = exactValue(p.Derivative(), f.k, m-f.k, number(x), number(w))
		if err := distance(re, im, v.dr, v.di); !(err <= v.errDeriv) {
			t.Fatalf("degree %d at %v+%vi: derivative off by %g, bound %g", n, x, w, err, v.errDeriv)
		}
	}
	t.Logf("largest error of a value is %.3g of its bound", worst)
}

// TestFixedBounds compares values in fixed point with exact arithmetic.
func TestFixedBounds(t *testing.T) {
	s := stream(2)
	for range 1000 {
		n, bits := 1+s.below(12), 10+s.below(300)
		p := s.poly(n, bits)
		z := point{e: -53 - s.below(3)}
		z.re.SetInt64(s.signed(53))
		z.im.SetInt64(s.signed(53) * int64(s.below(2)))
		e := z.order()
		z.rescale(e - 128)
		f := newFixed(p, e, 128)
		var ev evaluation
		ev.at(f, &z)
		x, w := exactFloat(&z.re, z.e), exactFloat(&z.im, z.e)
		check := func(what string, p intpoly.Poly, m int, a, b *big.Int, bound scaled) {
			t.Helper()
			re, im := exactValue(p, 0, m-128, x, w)
			re.Sub(re, exactFloat(a, 0))
			im.Sub(im, exactFloat(b, 0))
			if err := distance(re, im, 0, 0); err > math.Ldexp(bound.m, bound.e) {
				t.Fatalf("%s of degree %d: error %g, bound %v", what, n, err, bound)
			}
		}
		check("value", p, f.m, &ev.pre, &ev.pim, ev.errValue)
		check("derivative", p.Derivative(), f.m-e, &ev.dre, &ev.dim, ev.errDerivative)
	}
}

// TestDiscsHoldKnownRoots multiplies factors with known roots a ± ib, a and b
// dyadic, and asks every stage for discs that contain them, exactly.
func TestDiscsHoldKnownRoots(t *testing.T) {
	s := stream(3)
	cases := 4000
	if testing.Short() {
		cases = 300
	}
	checked := 0
	for i := range cases {
		p := intpoly.FromInt64s(1)
		type gaussian struct {
			a, b int64
			e    int // of the unit
		}
		var known []gaussian
		for range 1 + s.below(4) {
			g := gaussian{s.signed(21), s.signed(21), -20}
			if i%4 == 0 { // sizes beyond float64
				g.e += 150*s.below(7) - 450
			}
			if s.below(3) == 0 {
				g.b = 0
			}
			if g.a == 0 && g.b == 0 {
				continue
			}
			g.b = max(g.b, -g.b)
			known = append(known, g)
			factor := intpoly.FromInt64s(-g.a, 1)
			if g.b != 0 {
				factor = factor.Mul(factor).Add(intpoly.FromInt64s(g.b * g.b))
			}
			unit := new(big.Int).Lsh(big.NewInt(1), uint(max(g.e, -g.e)))
			if g.e > 0 {
				factor = factor.ScaleArgument(big.NewInt(1), unit)
			} else {
				factor = factor.ScaleArgument(unit, big.NewInt(1))
			}
			p = p.Mul(factor)
		}
		if p.Degree() == 0 {
			continue
		}
		w := &work{left: maxWork}
		roots, err := find(p, w)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range roots {
			x := r.Number
			if x.below {
				continue
			}
			holding := func(center *point, radius scaled) bool {
				for _, g := range known {
					a := new(big.Float).SetMantExp(number(float64(g.a)), g.e)
					b := new(big.Float).SetMantExp(number(float64(g.b)), g.e)
					a.Sub(a, exactFloat(&center.re, center.e))
					b.Sub(b, exactFloat(&center.im, center.e))
					a.Mul(a, a)
					b.Mul(b, b)
					q := radius.float()
					if a.Add(a, b).Cmp(new(big.Float).SetPrec(200).Mul(q, q)) <= 0 {
						return true
					}
				}
				return false
			}
			if !holding(x.center(), x.radius) {
				t.Fatalf("%v: the isolating disc of %v holds no root", p, x.Value())
			}
			checked++
			d, err := x.disc(uint(60+s.below(400)), w)
			if err != nil || !holding(&d.point, d.radius) {
				t.Fatalf("%v: the disc of %v holds no root, error %v", p, x.Value(), err)
			}
		}
	}
	t.Logf("%d roots checked", checked)
}

// TestRealRootsChangeSign evaluates polynomials exactly at both ends of the
// enclosures of simple real roots.
func TestRealRootsChangeSign(t *testing.T) {
	s := stream(4)
	cases := 3000
	if testing.Short() {
		cases = 300
	}
	for range cases {
		p := s.poly(1+s.below(10), 8+s.below(80))
		w := &work{left: maxWork}
		roots, err := find(p, w)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range roots {
			if !r.Number.IsReal() || r.Number.IsZero() || r.Multiplicity > 1 {
				continue
			}
			d, err := r.Number.disc(uint(30+s.below(200)), w)
			if err != nil {
				t.Fatal(err)
			}
			lo, hi := d.interval(false)
			a, _ := lo.Rat(nil)
			b, _ := hi.Rat(nil)
			if p.AtRat(a.Num(), a.Denom()).Sign()*p.AtRat(b.Num(), b.Denom()).Sign() > 0 {
				t.Fatalf("no change of sign between %v and %v", lo, hi)
			}
		}
	}
}
