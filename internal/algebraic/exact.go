package algebraic

import (
	"math/big"
	"sync"

	"github.com/qofs/qofs/internal/intpoly"
)

// exactCache keeps the answer to the question that is asked for all roots of
// a factor: which of them are imaginary.
type exactCache struct {
	once    sync.Once
	squares []*Number // −ω² for the imaginary roots ±iω
	err     error
}

// componentIs decides exactly whether a component of the number is c.
//
// Re x = c if and only if p(c + s) has a pair ±iω at x, and the imaginary
// roots of q = E(s²) + s·O(s²) come from the negative roots −ω² of gcd(E, O).
// Im x = c if and only if Re p(u + ic) and Im p(u + ic), polynomials in u, have
// a common real root at Re x. These candidates are roots of polynomials of
// their own; x is one of them when its isolating disc holds the candidate.
func (x *Number) componentIs(imaginary bool, c *big.Rat, w *work) (bool, error) {
	p := x.factor.poly
	w.decided++
	if x.real {
		return p.AtRat(c.Num(), c.Denom()).Sign() == 0, nil
	}
	if imaginary {
		candidates, err := commonRoots(horizontal(p, c))(w)
		if err != nil {
			return false, err
		}
		for _, u := range candidates {
			if same, err := x.isAt(w, func(bits uint) (disc, error) {
				d, err := u.disc(bits, w)
				if err == nil {
					d.rescale(min(d.e, x.exponent()-int(bits)))
					d.im.Set(roundRat(c, d.e))
					d.radius = d.radius.add(scaled{0.5, d.e + 1}).up()
				}
				return d, err
			}); same || err != nil {
				return same, err
			}
		}
		return false, nil
	}
	var squares []*Number
	var err error
	if c.Sign() == 0 {
		cache := &x.factor.exact
		cache.once.Do(func() { cache.squares, cache.err = commonRoots(p.EvenOdd())(w) })
		squares, err = cache.squares, cache.err
	} else {
		squares, err = commonRoots(shifted(p, c).EvenOdd())(w)
	}
	if err != nil {
		return false, err
	}
	for _, s := range squares {
		if s.center().re.Sign() > 0 {
			continue
		}
		if same, err := x.isAt(w, func(bits uint) (disc, error) { return vertical(s, c, bits, w) }); same || err != nil {
			return same, err
		}
	}
	return false, nil
}

// commonRoots returns the real roots of the greatest common divisor of p and q
// that are not 0, when called; p and q have only simple common roots.
func commonRoots(p, q intpoly.Poly) func(*work) ([]*Number, error) {
	return func(w *work) ([]*Number, error) {
		g := p.GCD(q)
		if g.Degree() < 1 {
			return nil, nil
		}
		var out []*Number
		if v := g.Valuation(); v > 0 {
			out = append(out, zero())
			if g = g.QuoPower(v); g.Degree() == 0 {
				return out, nil
			}
		}
		numbers, err := simpleRoots(g, w)
		for i := range numbers {
			if numbers[i].real {
				out = append(out, &numbers[i])
			}
		}
		return out, err
	}
}

// shifted returns den^n·p(c + s/den) as a polynomial in s, c = num/den: the
// shift by an integer of p with its argument scaled. Its imaginary roots are
// den·iω.
func shifted(p intpoly.Poly, c *big.Rat) intpoly.Poly {
	return p.ScaleArgument(big.NewInt(1), c.Denom()).TaylorShift(c.Num())
}

// horizontal returns the real and the imaginary part of den^n·p(u + i·c) as
// polynomials in u.
func horizontal(p intpoly.Poly, c *big.Rat) (re, im intpoly.Poly) {
	num, den := c.Num(), c.Denom()
	u := intpoly.FromBigs(nil, den)
	v := intpoly.FromBigs(num)
	scale := big.NewInt(1)
	for k := p.Degree(); k >= 0; k-- {
		// (re + i·im)·(den·u + i·num) + den^(n−k)·c_k
		re, im = re.Mul(u).Sub(im.Mul(v)), im.Mul(u).Add(re.Mul(v))
		re = re.Add(intpoly.FromBigs(new(big.Int).Mul(scale, p.Coefficient(k))))
		scale.Mul(scale, den)
	}
	return re, im
}

// vertical returns a disc around c + iω, where −(ω·den)² is s.
func vertical(s *Number, c *big.Rat, bits uint, w *work) (disc, error) {
	d, err := s.disc(2*bits+8, w)
	if err != nil {
		return d, err
	}
	// ω·den between the roots of the ends of the interval, in units of 2^e.
	lo, hi := d.interval(false)
	lo.Neg(lo)
	hi.Neg(hi) // now hi ≤ −s ≤ lo, hi > 0
	if hi.Sign() < 0 {
		hi.SetInt64(0)
	}
	e := lo.MantExp(nil)/2 - int(bits) - 4
	den := c.Denom()
	e -= den.BitLen()
	root := func(v *big.Float) *big.Int {
		t, _ := new(big.Float).SetMantExp(v, -2*e).Int(nil)
		t.Sqrt(t)
		return t.Quo(t, den)
	}
	low, high := root(hi), root(lo)
	var out disc
	out.e = e
	out.im.Set(low)
	out.re.Set(roundRat(c, e))
	width := new(big.Int).Sub(high, low)
	out.radius = fromBig(width.Add(width, big.NewInt(3)), e).up()
	return out, nil
}

// roundRat returns c/2^e, within one.
func roundRat(c *big.Rat, e int) *big.Int {
	num, den := c.Num(), c.Denom()
	if e < 0 {
		num = new(big.Int).Lsh(num, uint(-e))
	} else {
		den = new(big.Int).Lsh(den, uint(e))
	}
	return new(big.Int).Quo(num, den)
}

// isAt decides whether a root of x's polynomial, given by discs of growing
// precision, is x: it is when it lies in the isolating disc, which holds no
// other root.
func (x *Number) isAt(w *work, candidate func(bits uint) (disc, error)) (bool, error) {
	for bits := uint(16); ; bits *= 2 {
		d, err := candidate(bits)
		if err != nil {
			return false, err
		}
		distance := difference(&d.point, x.center()).abs()
		if distance.up().add(d.radius).up().less(x.separation.down()) {
			return true, nil
		}
		if x.radius.add(d.radius).up().less(distance.down()) {
			return false, nil
		}
		if err := w.spend(x.factor.degree, bits); err != nil {
			return false, err
		}
	}
}
