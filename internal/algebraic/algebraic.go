// Package algebraic finds the complex roots of integer polynomials and proves
// them: exact multiplicities, isolating discs, enclosures of any precision and
// correctly rounded float64 values.
//
// A Number is one root: the square-free integer polynomial that it satisfies
// and a disc that contains this root and no other. Everything else about it is
// computed on demand and is a function of the number alone, so that the same
// question has the same answer on every machine.
//
// Roots works in stages; a later one runs only for what an earlier one leaves
// open, and work counts how often each was needed:
//
//	triage      float64 approximations (float.go), one compensated value a root
//	            (compensated.go), disjoint discs (triage.go); with an exponent
//	            for every root where sizes span too many decades (decades.go)
//	decomposed  exact square-free decomposition, unless a gcd modulo a prime
//	            shows that there is nothing to decompose (squarefree.go)
//	isolated    the iteration in fixed point of growing precision (isolate.go)
//	refined     Newton steps in fixed point from an isolating disc, until a
//	            component rounds unambiguously (refine.go, round.go)
//	decided     algebra, where a component may lie exactly on a rounding
//	            boundary or be 0 (exact.go)
//
// No stage depends on how the machine rounds a product and a sum together:
// guesses are proved, and bounds hold for fused and separate operations.
package algebraic

import (
	"errors"
	"fmt"
	"math/big"
	"slices"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// Limits of Roots and of the methods of Number. Past them the answer is
// fault.ErrLimit.
const (
	// MaxDegree is the largest degree of a polynomial.
	MaxDegree = 1024
	// MaxBits bounds the degree times the bit length of the largest
	// coefficient.
	MaxBits = 1 << 22
	// MaxPrecision is the largest precision of an enclosure in bits.
	MaxPrecision = 1 << 20
	// maxWork bounds the multiplications of machine words in one call.
	maxWork = 1 << 35
)

// Number is a complex root of an integer polynomial. It is immutable and safe
// to share between goroutines.
type Number struct {
	_ [0]func()

	factor *factor
	// The center, (re + i·im)·2^k or wide if that is not nil, has no other
	// root than this one in the disc of radius separation around it, and this
	// one within radius; 4·n·radius is at most separation, n the degree of the
	// factor. The center of a real number is real. For a number below the real
	// axis the three describe its mirror image above.
	re, im     double
	k          int
	wide       *point
	radius     scaled
	separation scaled

	pair *Number // the mirror image; nil until Roots returns, and if real

	real      bool // proved real
	imaginary bool // proved to have the real part 0
	below     bool // has a negative imaginary part
	openRe    bool // components of value that are not rounded yet
	openIm    bool
	value     complex128
}

// Root is a root and its multiplicity.
type Root struct {
	Number       *Number
	Multiplicity int
}

// factor is what the roots of one square-free polynomial share.
type factor struct {
	poly   intpoly.Poly
	degree int
	exact  exactCache
}

// Roots returns the distinct roots of p with their multiplicities. It fails
// with fault.ErrLimit past the limits of the package and with fault.ErrRange
// when a component of a root does not fit a float64; the polynomial 0, of which
// every number is a root, is an error too.
//
// The order depends on the roots alone: ascending by real part, then by the
// absolute value of the imaginary part, each rounded to float64; roots that
// agree in both are ordered in the same way by more and more digits. Of a
// conjugate pair the root above the real axis comes first, and the other one
// follows it.
//
// The approximations are those of the simultaneous iteration of Ehrlich (1967)
// and Aberth (1973) from starting points on the Newton polygon (Bini 1996). A
// disc around the point z of radius n·|p(z)/p'(z)| holds at least one of the n
// roots (Laguerre); n disjoint discs hold one each.
func Roots(p intpoly.Poly) ([]Root, error) {
	if p.IsZero() {
		return nil, fmt.Errorf("roots: every number is one: %w", ErrZero)
	}
	n := p.Degree()
	if n > MaxDegree {
		return nil, fmt.Errorf("roots: degree %d, at most %d: %w", n, MaxDegree, fault.ErrLimit)
	}
	if n*p.MaxBitLen() > MaxBits {
		return nil, fmt.Errorf("roots: degree times bits of a coefficient is %d, at most %d: %w",
			n*p.MaxBitLen(), MaxBits, fault.ErrLimit)
	}
	return find(p, &work{left: maxWork})
}

// find is Roots within the limits, on an account of its own.
func find(p intpoly.Poly, w *work) ([]Root, error) {
	n := p.Degree()
	roots := make([]Root, 0, n)
	if v := p.Valuation(); v > 0 {
		roots = append(roots, Root{zero(), v})
		p = p.QuoPower(v)
	}
	var err error
	if p.Degree() > 0 {
		if roots, err = appendNonzero(roots, p, w); err != nil {
			return nil, err
		}
	}
	for _, r := range roots {
		if r.Number.openRe || r.Number.openIm {
			if err := r.Number.settle(w); err != nil {
				return nil, err
			}
		}
	}
	if err := sortRoots(roots, w); err != nil {
		return nil, err
	}
	return withConjugates(roots), nil
}

// appendNonzero appends the roots on and above the real axis of p, p(0) ≠ 0, in
// stages: float64 and double-double for the whole polynomial, which prove that
// it has no multiple root where they succeed; then the same for its square-free
// factors; then fixed point of growing precision.
func appendNonzero(roots []Root, p intpoly.Poly, w *work) ([]Root, error) {
	if numbers, ok := triage(p, w); ok {
		return appendNumbers(roots, numbers, 1), nil
	}
	if provedSquareFree(p) {
		numbers, err := isolate(p, w)
		return appendNumbers(roots, numbers, 1), err
	}
	w.decomposed++
	for _, f := range p.SquareFree() {
		find := simpleRoots
		if f.Poly.Degree() == p.Degree() {
			find = isolate // float64 has failed already
		}
		numbers, err := find(f.Poly, w)
		if err != nil {
			return nil, err
		}
		roots = appendNumbers(roots, numbers, f.Multiplicity)
	}
	return roots, nil
}

// simpleRoots returns the roots on and above the real axis of a square-free
// polynomial without the root 0.
func simpleRoots(p intpoly.Poly, w *work) ([]Number, error) {
	if numbers, ok := triage(p, w); ok {
		return numbers, nil
	}
	return isolate(p, w)
}

func appendNumbers(roots []Root, numbers []Number, multiplicity int) []Root {
	for i := range numbers {
		roots = append(roots, Root{&numbers[i], multiplicity})
	}
	return roots
}

// ErrZero is the error for the polynomial 0.
var ErrZero = errors.New("zero polynomial")

// zero is the number 0.
func zero() *Number {
	f := &factor{poly: intpoly.FromInt64s(0, 1), degree: 1}
	return &Number{factor: f, real: true, imaginary: true, separation: scaled{1, 1}}
}

// withConjugates adds the mirror image of every root above the real axis
// behind it.
func withConjugates(roots []Root) []Root {
	pairs := 0
	for _, r := range roots {
		if !r.Number.real {
			pairs++
		}
	}
	to := len(roots) + pairs
	from := len(roots) - 1
	roots = slices.Grow(roots, pairs)[:to]
	for ; from < to-1; from-- { // the ones before are real
		r := roots[from]
		if !r.Number.real {
			to--
			roots[to] = Root{r.Number.pairUp(), r.Multiplicity}
		}
		to--
		roots[to] = r
	}
	return roots
}

// pairUp makes the mirror image the pair of x.
func (x *Number) pairUp() *Number {
	if x.pair == nil {
		x.pair = new(Number)
	}
	*x.pair = *x
	x.pair.pair = x
	x.pair.below = !x.below
	x.pair.value = complex(real(x.value), -imag(x.value))
	return x.pair
}

// Value is the number, each component correctly rounded to nearest, ties to
// even. A component that is exactly 0 is +0.
func (x *Number) Value() complex128 { return x.value }

// IsReal reports whether the number is real.
func (x *Number) IsReal() bool { return x.real }

// IsImaginary reports whether the real part is 0, which includes the number 0.
func (x *Number) IsImaginary() bool { return x.imaginary }

// IsZero reports whether the number is 0.
func (x *Number) IsZero() bool { return x.real && x.imaginary }

// Factor is a square-free integer polynomial of which the number is a root:
// primitive, with a positive leading coefficient, and without the root 0 unless
// the number is 0.
func (x *Number) Factor() intpoly.Poly {
	_, p := x.factor.poly.Primitive()
	return p
}

// Conjugate is the mirror image in the real axis; a real number is its own.
func (x *Number) Conjugate() *Number {
	if x.real {
		return x
	}
	return x.pair
}

// Rat returns the number and true when it is rational, and nil and false
// otherwise, also when the test would pass the limits of the package.
func (x *Number) Rat() (*big.Rat, bool) {
	if !x.real {
		return nil, false
	}
	if x.imaginary {
		return new(big.Rat), true
	}
	// A rational root is an integer over the leading coefficient, and no
	// other such fraction is within half a unit of it.
	lc := x.factor.poly.Leading()
	f := x.factor.poly
	if f.Degree() == 1 {
		return new(big.Rat).SetFrac(new(big.Int).Neg(f.Coefficient(0)), lc), true
	}
	bits := lc.BitLen() + 4 + max(0, x.exponent())
	d, err := x.disc(uint(bits), &work{left: maxWork})
	if err != nil {
		return nil, false
	}
	num, ok := d.nearestInteger(lc)
	if !ok || f.AtRat(num, lc).Sign() != 0 {
		return nil, false
	}
	return new(big.Rat).SetFrac(num, lc), true
}

// center returns the center of the isolating disc.
func (x *Number) center() *point {
	if x.wide != nil {
		return x.wide
	}
	z := new(point)
	z.setDoubles(x.re, x.im, x.k)
	return z
}

// exponent returns k with |re|, |im| < 2^k at the center, at most one too large.
func (x *Number) exponent() int { return x.center().exponentOfLargest() }

// work is the account of one call: what is left of the allowed effort, and how
// often the stages were needed.
type work struct {
	left       int64
	triaged    int // numbers from float64 and double-double
	decomposed int // polynomials decomposed into square-free factors
	isolated   int // factors isolated in fixed point
	refined    int // components that needed more than double-double
	decided    int // exact decisions of a component
}

func (w *work) count(x *Number) {
	w.triaged++
	if x.openRe {
		w.refined++
	}
	if x.openIm {
		w.refined++
	}
}

// spend takes n multiplications of words of the given number of bits.
func (w *work) spend(n int, bits uint) error {
	words := int64(bits/64 + 1)
	w.left -= int64(n) * (words*words + 8)
	if w.left < 0 {
		return fmt.Errorf("roots: more than %d multiplications of words: %w", int64(maxWork), fault.ErrLimit)
	}
	return nil
}
