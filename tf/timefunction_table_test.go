package tf

import (
	"math"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/ratfun"
	"github.com/qofs/qofs/internal/ratpoly"
	"github.com/qofs/qofs/poly"
)

// tableReal is a ball with operators, for writing published formulas down.
type tableReal struct{ ball.Real }

const tablePrecision = 512

func tableRat(p, q int64) tableReal { return tableReal{ball.FromRat(big.NewRat(p, q), tablePrecision)} }
func tableInt(p int64) tableReal    { return tableRat(p, 1) }
func (x tableReal) plus(y tableReal) tableReal {
	return tableReal{x.Add(y.Real, tablePrecision)}
}
func (x tableReal) minus(y tableReal) tableReal { return tableReal{x.Sub(y.Real, tablePrecision)} }
func (x tableReal) times(y tableReal) tableReal { return tableReal{x.Mul(y.Real, tablePrecision)} }
func (x tableReal) over(y tableReal) tableReal  { return tableReal{x.Div(y.Real, tablePrecision)} }
func (x tableReal) exp() tableReal              { return tableReal{x.Exp(tablePrecision)} }
func (x tableReal) sin() tableReal              { return tableReal{x.Sin(tablePrecision)} }
func (x tableReal) cos() tableReal              { return tableReal{x.Cos(tablePrecision)} }
func (x tableReal) power(n int) tableReal       { return tableReal{x.PowInt(n, tablePrecision)} }
func (x tableReal) minusOf() tableReal          { return tableReal{x.Neg()} }
func (x tableReal) sinh() tableReal             { return x.exp().minus(x.minusOf().exp()).over(tableInt(2)) }
func (x tableReal) cosh() tableReal             { return x.exp().plus(x.minusOf().exp()).over(tableInt(2)) }

// laplacePair is a pair of the table for parameters a, b, c.
type laplacePair struct {
	name string
	g    func(a, b, c int64) (num, den poly.Poly)
	f    func(t, a, b, c tableReal) tableReal
}

// laplaceTable holds the rational pairs of table 29.3 of Abramowitz & Stegun,
// Handbook of Mathematical Functions (1964), written down from memory.
var laplaceTable = []laplacePair{
	{"29.3.1", func(_, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(0, 1) },
		func(t, _, _, _ tableReal) tableReal { return tableInt(1) }},
	{"29.3.2", func(_, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(0, 0, 1) },
		func(t, _, _, _ tableReal) tableReal { return t }},
	{"29.3.3, n = 5", func(_, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(0, 0, 0, 0, 0, 1) },
		func(t, _, _, _ tableReal) tableReal { return t.power(4).over(tableInt(24)) }},
	{"29.3.8", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(a, 1) },
		func(t, a, _, _ tableReal) tableReal { return a.times(t).minusOf().exp() }},
	{"29.3.9", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(a*a, 2*a, 1) },
		func(t, a, _, _ tableReal) tableReal { return t.times(a.times(t).minusOf().exp()) }},
	{"29.3.10, n = 4", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(1), productOf(poly.FromInts(a, 1), poly.FromInts(a, 1), poly.FromInts(a, 1), poly.FromInts(a, 1))
	}, func(t, a, _, _ tableReal) tableReal {
		return t.power(3).times(a.times(t).minusOf().exp()).over(tableInt(6))
	}},
	{"29.3.12", func(a, b, _ int64) (n, d poly.Poly) {
		return poly.FromInts(1), productOf(poly.FromInts(a, 1), poly.FromInts(b, 1))
	}, func(t, a, b, _ tableReal) tableReal {
		return a.times(t).minusOf().exp().minus(b.times(t).minusOf().exp()).over(b.minus(a))
	}},
	{"29.3.13", func(a, b, _ int64) (n, d poly.Poly) {
		return poly.FromInts(0, 1), productOf(poly.FromInts(a, 1), poly.FromInts(b, 1))
	}, func(t, a, b, _ tableReal) tableReal {
		return a.times(a.times(t).minusOf().exp()).minus(b.times(b.times(t).minusOf().exp())).over(a.minus(b))
	}},
	{"29.3.14", func(a, b, c int64) (n, d poly.Poly) {
		return poly.FromInts(1), productOf(poly.FromInts(a, 1), poly.FromInts(b, 1), poly.FromInts(c, 1))
	}, func(t, a, b, c tableReal) tableReal {
		sum := b.minus(c).times(a.times(t).minusOf().exp())
		sum = sum.plus(c.minus(a).times(b.times(t).minusOf().exp()))
		sum = sum.plus(a.minus(b).times(c.times(t).minusOf().exp()))
		return sum.minusOf().over(a.minus(b).times(b.minus(c)).times(c.minus(a)))
	}},
	{"29.3.15", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(a*a, 0, 1) },
		func(t, a, _, _ tableReal) tableReal { return a.times(t).sin().over(a) }},
	{"29.3.16", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(0, 1), poly.FromInts(a*a, 0, 1) },
		func(t, a, _, _ tableReal) tableReal { return a.times(t).cos() }},
	{"29.3.17", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(-a*a, 0, 1) },
		func(t, a, _, _ tableReal) tableReal { return a.times(t).sinh().over(a) }},
	{"29.3.18", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(0, 1), poly.FromInts(-a*a, 0, 1) },
		func(t, a, _, _ tableReal) tableReal { return a.times(t).cosh() }},
	{"29.3.19", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(0, a*a, 0, 1) },
		func(t, a, _, _ tableReal) tableReal { return tableInt(1).minus(a.times(t).cos()).over(a.power(2)) }},
	{"29.3.20", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(0, 0, a*a, 0, 1) },
		func(t, a, _, _ tableReal) tableReal { return a.times(t).minus(a.times(t).sin()).over(a.power(3)) }},
	{"29.3.21", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(1), productOf(poly.FromInts(a*a, 0, 1), poly.FromInts(a*a, 0, 1))
	}, func(t, a, _, _ tableReal) tableReal {
		at := a.times(t)
		return at.sin().minus(at.times(at.cos())).over(tableInt(2).times(a.power(3)))
	}},
	{"29.3.22", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(0, 1), productOf(poly.FromInts(a*a, 0, 1), poly.FromInts(a*a, 0, 1))
	}, func(t, a, _, _ tableReal) tableReal { return t.times(a.times(t).sin()).over(tableInt(2).times(a)) }},
	{"29.3.23", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(0, 0, 1), productOf(poly.FromInts(a*a, 0, 1), poly.FromInts(a*a, 0, 1))
	}, func(t, a, _, _ tableReal) tableReal {
		at := a.times(t)
		return at.sin().plus(at.times(at.cos())).over(tableInt(2).times(a))
	}},
	{"29.3.24", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(-a*a, 0, 1), productOf(poly.FromInts(a*a, 0, 1), poly.FromInts(a*a, 0, 1))
	}, func(t, a, _, _ tableReal) tableReal { return t.times(a.times(t).cos()) }},
	{"29.3.25", func(a, b, _ int64) (n, d poly.Poly) {
		return poly.FromInts(0, 1), productOf(poly.FromInts(a*a, 0, 1), poly.FromInts(b*b, 0, 1))
	}, func(t, a, b, _ tableReal) tableReal {
		return a.times(t).cos().minus(b.times(t).cos()).over(b.power(2).minus(a.power(2)))
	}},
	{"29.3.26", func(a, b, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(a*a+b*b, 2*a, 1) },
		func(t, a, b, _ tableReal) tableReal {
			return a.times(t).minusOf().exp().times(b.times(t).sin()).over(b)
		}},
	{"29.3.27", func(a, b, _ int64) (n, d poly.Poly) { return poly.FromInts(a, 1), poly.FromInts(a*a+b*b, 2*a, 1) },
		func(t, a, b, _ tableReal) tableReal { return a.times(t).minusOf().exp().times(b.times(t).cos()) }},
	{"29.3.28", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(3 * a * a), poly.FromInts(a*a*a, 0, 0, 1) },
		func(t, a, _, _ tableReal) tableReal {
			root := tableReal{tableInt(3).Sqrt(tablePrecision)}
			half := a.times(t).over(tableInt(2))
			angle := root.times(half)
			return a.times(t).minusOf().exp().minus(half.exp().times(angle.cos().minus(root.times(angle.sin()))))
		}},
	{"29.3.29", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(4 * a * a * a), poly.FromInts(4*a*a*a*a, 0, 0, 0, 1)
	}, func(t, a, _, _ tableReal) tableReal {
		at := a.times(t)
		return at.sin().times(at.cosh()).minus(at.cos().times(at.sinh()))
	}},
	{"29.3.30", func(a, _, _ int64) (n, d poly.Poly) {
		return poly.FromInts(0, 1), poly.FromInts(4*a*a*a*a, 0, 0, 0, 1)
	}, func(t, a, _, _ tableReal) tableReal {
		at := a.times(t)
		return at.sin().times(at.sinh()).over(tableInt(2).times(a.power(2)))
	}},
	{"29.3.31", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(1), poly.FromInts(-a*a*a*a, 0, 0, 0, 1) },
		func(t, a, _, _ tableReal) tableReal {
			return a.times(t).sinh().minus(a.times(t).sin()).over(tableInt(2).times(a.power(3)))
		}},
	{"29.3.32", func(a, _, _ int64) (n, d poly.Poly) { return poly.FromInts(0, 1), poly.FromInts(-a*a*a*a, 0, 0, 0, 1) },
		func(t, a, _, _ tableReal) tableReal {
			return a.times(t).cosh().minus(a.times(t).cos()).over(tableInt(2).times(a.power(2)))
		}},
	{"29.3.33", func(a, _, _ int64) (n, d poly.Poly) {
		q := poly.FromInts(a*a, 0, 1)
		return poly.FromInts(0, 0, 8*a*a*a), productOf(q, q, q)
	}, func(t, a, _, _ tableReal) tableReal {
		at := a.times(t)
		return tableInt(1).plus(at.power(2)).times(at.sin()).minus(at.times(at.cos()))
	}},
	{"29.3.34, n = 3", func(_, _, _ int64) (n, d poly.Poly) {
		q := poly.FromInts(-1, 1)
		return productOf(q, q, q), poly.FromInts(0, 0, 0, 0, 1)
	}, func(t, _, _, _ tableReal) tableReal { // the Laguerre polynomial L_3
		return tableInt(1).minus(tableInt(3).times(t)).plus(tableRat(3, 2).times(t.power(2))).minus(t.power(3).over(tableInt(6)))
	}},
}

func productOf(factors ...poly.Poly) poly.Poly {
	p := poly.FromInts(1)
	for _, f := range factors {
		p = p.Mul(f)
	}
	return p
}

// TestLaplaceTable checks each pair both ways: the values of the inverse
// transform against the published formula, bit for bit, and the transforms of
// the terms, by 29.3.10, 26 and 27, against the function.
func TestLaplaceTable(t *testing.T) {
	for _, pair := range laplaceTable {
		for _, p := range [][3]int64{{1, 2, 3}, {5, 3, 7}, {2, 11, 4}} {
			num, den := pair.g(p[0], p[1], p[2])
			g := Must(New(num, den))
			f, err := g.InverseLaplace()
			if err != nil {
				t.Fatal(err)
			}
			for _, x := range []float64{0x1p-30, 0.01, 0.3, 1, 2.75, 10} {
				want, ok := pair.f(tableReal{ball.FromFloat64(x)}, tableInt(p[0]), tableInt(p[1]), tableInt(p[2])).Float64()
				got, err := f.At(x)
				if !ok || err != nil || math.Float64bits(got) != math.Float64bits(want) {
					t.Errorf("%s with %v at %v: %x, %v, want %x", pair.name, p, x, got, err, want)
				}
			}
			if back, exact := transformOfTerms(t, f); exact {
				if !back.Equivalent(g.c.f) {
					t.Errorf("%s with %v: the terms %v transform to %v/%v", pair.name, p, f, back.Num(), back.Den())
				}
			} else if pair.name != "29.3.28" {
				t.Errorf("%s with %v: %v is not exact", pair.name, p, f)
			}
			if !f.Laplace().c.f.Equivalent(g.c.f) {
				t.Errorf("%s with %v: Laplace does not return the function", pair.name, p)
			}
		}
	}
}

// transformOfTerms adds up the transforms of the terms: with the Cosine C and the
// Sine S, t^k e^(σt)(C cos ωt + S sin ωt) becomes the real part, for real s, of
// (C − jS)·k!·(s−σ+jω)^(k+1) over ((s−σ)² + ω²)^(k+1).
func transformOfTerms(t *testing.T, f TimeFunction) (ratfun.Func, bool) {
	sum := ratfun.Constant(f.impulse)
	for _, term := range Must(f.Terms()) {
		decay, frequency, cosine, sine := term.Exact()
		if decay == nil || frequency == nil || cosine == nil || sine == nil {
			return sum, false
		}
		shifted := poly.FromRats(new(big.Rat).Neg(decay), big.NewRat(1, 1))
		re, im := poly.FromRats(cosine), poly.FromRats(new(big.Rat).Neg(sine))
		den := poly.FromInts(1)
		factorial := new(big.Rat).SetInt(new(big.Int).MulRange(1, int64(term.Power)))
		for range term.Power + 1 {
			re, im = re.Mul(shifted).Sub(im.Scale(frequency)), im.Mul(shifted).Add(re.Scale(frequency))
			den = den.Mul(shifted.Mul(shifted).Add(poly.FromRats(new(big.Rat).Mul(frequency, frequency))))
		}
		re = re.Scale(factorial)
		a, b := ratpoly.Poly(re), ratpoly.Poly(den)
		h, _ := ratfun.New(a.Integer().MulInt(b.Denominator()), b.Integer().MulInt(a.Denominator()))
		sum, _, _ = sum.Add(h).LowestTerms()
	}
	return sum, true
}
