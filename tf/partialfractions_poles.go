package tf

import (
	"fmt"
	"math/big"
	"slices"
	"sync"

	"github.com/qofs/qofs/internal/algebraic"
	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// The working precisions of the certified tier: rung i computes with
// firstPrecision·2^i bits. Past the last rung the answer is ErrLimit.
const (
	firstPrecision = 128
	rungs          = 10 // up to 65536 bits
)

// expansion is a strictly proper function num/den in lowest terms with the
// roots of den. What is derived from them is computed once, on demand.
type expansion struct {
	num, den intpoly.Poly
	roots    []algebraic.Root

	ladder  [rungs]rung
	divide  sync.Once
	factors []factor
	failure error

	bounded sync.Once
	growth  growth

	stage sync.Once
	quick *quick
}

// newExpansion finds the roots of den; num/den must be in lowest terms and
// strictly proper.
func newExpansion(num, den intpoly.Poly) (*expansion, error) {
	e := &expansion{num: num, den: den}
	if den.Degree() < 1 {
		return e, nil
	}
	roots, err := algebraic.Roots(den)
	if err != nil {
		return nil, fmt.Errorf("tf: poles: %w", err)
	}
	e.roots = roots
	return e, nil
}

// rung is what is known at one working precision: the principal parts, and the
// Markov parameters. Of a conjugate pair
// only the upper pole is kept.
type rung struct {
	once  sync.Once
	parts []principal
	err   error

	mutex sync.Mutex
	mu    []ball.Real // Markov parameters, as many as were asked for
}

// principal is the principal part at one pole: coefficients[j] belongs to
// 1/(s−pole)^(j+1). pair tells that it stands for a conjugate pair.
type principal struct {
	root         *algebraic.Number
	pole         ball.Complex
	coefficients []ball.Complex
	pair         bool
}

// principals returns the principal parts with poles of 128·2^i bits.
func (e *expansion) principals(i int) ([]principal, error) {
	r := &e.ladder[i]
	r.once.Do(func() {
		prec := uint(firstPrecision) << i
		for j := 0; j < len(e.roots); j++ {
			root := e.roots[j]
			if !root.Number.IsReal() {
				j++ // the conjugate follows
			}
			p, err := e.principal(root, prec)
			if err != nil {
				r.err = err
				return
			}
			r.parts = append(r.parts, p)
		}
	})
	return r.parts, r.err
}

// principal computes one principal part. Where prec bits do not tell the
// derivative of the denominator from zero, the coefficients are indeterminate
// and a higher rung decides.
func (e *expansion) principal(root algebraic.Root, prec uint) (principal, error) {
	pole, err := enclosure(root.Number, prec)
	if err != nil {
		return principal{}, fmt.Errorf("tf: poles: %w", err)
	}
	// Guard bits for the growth of rounding errors along the Horner chains.
	f := balls{prec + 32}
	c, ok := expand(f, e.num, e.den, pole, root.Multiplicity)
	if !ok {
		c = make([]ball.Complex, root.Multiplicity)
		for i := range c {
			c[i] = ball.NewComplex(ball.Indeterminate(), ball.Indeterminate())
		}
	}
	if root.Number.IsReal() {
		for i := range c {
			c[i] = ball.NewComplex(c[i].Re, ball.FromInt64(0))
		}
	}
	return principal{root: root.Number, pole: pole, coefficients: c, pair: !root.Number.IsReal()}, nil
}

// enclosure returns a ball around x whose components are known to prec bits
// each, an exact zero exactly.
func enclosure(x *algebraic.Number, prec uint) (ball.Complex, error) {
	re, im, err := x.Rounded(prec + 2)
	if err != nil {
		return ball.Complex{}, err
	}
	around := func(mid *big.Float) ball.Real {
		if mid.Sign() == 0 {
			return ball.Real{}
		}
		return ball.NewReal(mid, new(big.Float).SetMantExp(big.NewFloat(1), mid.MantExp(nil)-int(prec)-2))
	}
	return ball.NewComplex(around(re), around(im)), nil
}

// factor is a factor of the denominator over ℚ: linear or quadratic, or what
// is left of the roots of one multiplicity.
type factor struct {
	q            intpoly.Poly // square-free, primitive, with a positive leading coefficient
	multiplicity int
	roots        []*algebraic.Number
}

// factorize divides the denominator into factors over ℚ, in the order of their
// first roots.
func (e *expansion) factorize() ([]factor, error) {
	e.divide.Do(func() { e.factors, e.failure = e.splitFactors() })
	return e.factors, e.failure
}

func (e *expansion) splitFactors() ([]factor, error) {
	var out []factor
	place := map[*algebraic.Number]int{}
	rest := map[int][]*algebraic.Number{} // by multiplicity
	for i, root := range e.roots {
		place[root.Number] = i
		if r, ok := root.Number.Rat(); ok {
			q := intpoly.FromBigs(new(big.Int).Neg(r.Num()), r.Denom())
			out = append(out, factor{q, root.Multiplicity, []*algebraic.Number{root.Number}})
			continue
		}
		rest[root.Multiplicity] = append(rest[root.Multiplicity], root.Number)
	}
	if len(rest) > 0 {
		for _, f := range e.den.SquareFree() {
			q := f.Poly
			for _, linear := range out {
				if linear.multiplicity == f.Multiplicity && linear.q.Degree() == 1 {
					q, _ = q.QuoExact(linear.q)
				}
			}
			found, left, q, err := splitQuadratics(q, rest[f.Multiplicity])
			if err != nil {
				return nil, err
			}
			if len(left) > 0 {
				found = append(found, factor{q: q, roots: left})
			}
			for i := range found {
				found[i].multiplicity = f.Multiplicity
			}
			out = append(out, found...)
		}
	}
	slices.SortFunc(out, func(a, b factor) int { return place[a.roots[0]] - place[b.roots[0]] })
	return out, nil
}

// splitQuadratics finds the quadratic factors of q over ℚ among the given
// irrational roots, and returns them, the roots left and the cofactor.
//
// A primitive factor has a leading coefficient that divides that of q (Gauss),
// so L·(x−a)(x−b) with L the leading coefficient of q has integer
// coefficients; enclosures narrower than 1 leave one candidate, and exact
// division decides.
func splitQuadratics(q intpoly.Poly, roots []*algebraic.Number) (found []factor, left []*algebraic.Number, cofactor intpoly.Poly, err error) {
	used := make([]bool, len(roots))
	lead := q.Leading()
	var enclosures []ball.Complex
	prec := uint(lead.BitLen() + 64)
	for _, x := range roots {
		b, err := enclosure(x, prec+2*exponentAbove(x.Value()))
		if err != nil {
			return nil, nil, q, fmt.Errorf("tf: rational factors: %w", err)
		}
		enclosures = append(enclosures, b)
	}
	for i, x := range roots {
		if used[i] {
			continue
		}
		for j := i + 1; j < len(roots); j++ {
			// The partner of a complex root is its conjugate, which follows it.
			if used[j] || x.IsReal() != roots[j].IsReal() || !x.IsReal() && j > i+1 {
				continue
			}
			c, ok := quadraticCandidate(lead, enclosures[i], enclosures[j], prec)
			if !ok {
				continue
			}
			if quo, ok := q.QuoExact(c); ok {
				q = quo
				used[i], used[j] = true, true
				found = append(found, factor{q: c, roots: []*algebraic.Number{x, roots[j]}})
				break
			}
		}
	}
	for i, x := range roots {
		if !used[i] {
			left = append(left, x)
		}
	}
	return found, left, q, nil
}

// exponentAbove returns n ≥ 0 with |x| < 2^n.
func exponentAbove(x complex128) uint {
	n := 0
	for _, v := range []float64{real(x), imag(x)} {
		n = max(n, new(big.Float).SetFloat64(v).MantExp(nil)+1)
	}
	return uint(n)
}

// quadraticCandidate returns the one quadratic that may have the roots a and b.
func quadraticCandidate(lead *big.Int, a, b ball.Complex, prec uint) (intpoly.Poly, bool) {
	prec *= 2
	l := ball.FromInt(lead)
	c1, ok1 := integerIn(a.Re.Add(b.Re, prec).Mul(l, prec).Neg())
	c0, ok0 := integerIn(a.Mul(b, prec).Re.Mul(l, prec))
	if !ok0 || !ok1 {
		return intpoly.Poly{}, false
	}
	_, q := intpoly.FromBigs(c0, c1, lead).Primitive()
	return q, true
}

// integerIn returns the integer that x contains, where it contains just one.
func integerIn(x ball.Real) (*big.Int, bool) {
	if !x.IsFinite() || x.Radius().Cmp(big.NewFloat(0.25)) > 0 {
		return nil, false
	}
	mid := x.Mid()
	half := big.NewFloat(0.5)
	if mid.Sign() < 0 {
		half.Neg(half)
	}
	sum := new(big.Float).SetPrec(mid.Prec()+2).Add(mid, half)
	n, _ := sum.Int(nil)
	return n, x.ContainsRat(new(big.Rat).SetInt(n))
}

// squareFree returns the product of the factors s−p over the poles p ≠ 0 of
// multiplicity m.
func (e *expansion) squareFree(m int) intpoly.Poly {
	for _, f := range e.den.SquareFree() {
		if f.Multiplicity == m {
			return f.Poly.QuoPower(f.Poly.Valuation())
		}
	}
	return intpoly.FromInt64s(1)
}

var errUndecided = fmt.Errorf("tf: the digits are undecided at %d bits: %w", firstPrecision<<(rungs-1), fault.ErrLimit)
