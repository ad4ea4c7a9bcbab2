// Package ratfun holds the rational function that Continuous and Discrete
// transfer functions share.
//
// A Func is a quotient of two integer polynomials with no common integer
// factor and a denominator with a positive leading coefficient. Polynomial
// factors that numerator and denominator have in common stay until LowestTerms
// is asked to remove them. The zero value is 0/1.
//
// The contents of numerator and denominator are kept where they are known. By
// Gauss's lemma the content of a product is the product of the contents, so
// that most compositions need no greatest common divisor of coefficients.
package ratfun

import (
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/intpoly"
)

// Func is a quotient of two integer polynomials. It is immutable.
type Func struct {
	_        [0]func()
	num, den intpoly.Poly // den zero stands for 1
	// contents of num and den where they are known and fit a word, else 0
	numContent, denContent uint64
}

// New returns num/den without cancelling; ok is false where den is 0.
func New(num, den intpoly.Poly) (f Func, ok bool) {
	if den.IsZero() {
		return Func{}, false
	}
	if den.Sign(den.Degree()) < 0 {
		num, den = num.Neg(), den.Neg()
	}
	return reduce(num, den, num.WordContent(), den.WordContent()), true
}

// NewScaled returns k·num/den as New does. The contents of num and den, which are
// shorter than those of their products with k, tell what cancels.
func NewScaled(k *big.Rat, num, den intpoly.Poly) (f Func, ok bool) {
	if k.Num().IsInt64() && k.Denom().IsInt64() {
		return New(num.MulInt(k.Num()), den.MulInt(k.Denom()))
	}
	if den.IsZero() {
		return Func{}, false
	}
	// With num = cn·p and den = cd·q the constant is (k·cn)/cd over p/q.
	cn, p := num.Primitive()
	cd, q := den.Primitive()
	if p.IsZero() {
		return Func{den: q, denContent: 1}, true
	}
	c := new(big.Rat).SetFrac(cn, cd)
	c.Mul(c, k)
	f = Constant(c)
	f.num, f.den = p.MulInt(c.Num()), q.MulInt(c.Denom())
	return f, true
}

// Constant returns the number k, which is in lowest terms by itself; nil reads as 0.
func Constant(k *big.Rat) Func {
	if k == nil || k.Sign() == 0 {
		return Func{}
	}
	num, den := intpoly.FromBigs(k.Num()), intpoly.FromBigs(k.Denom())
	return Func{num: num, den: den, numContent: num.WordContent(), denContent: den.WordContent()}
}

// reduce removes the common integer factor of num and den, whose contents are
// given where they are known, else 0. The leading coefficient of den is
// positive.
func reduce(num, den intpoly.Poly, numContent, denContent uint64) Func {
	if num.IsZero() {
		_, den = den.Primitive()
		return Func{den: den, denContent: 1}
	}
	var g uint64
	switch {
	case numContent == 1 || denContent == 1:
		g = 1
	case numContent != 0 && denContent != 0:
		g = gcd(numContent, denContent)
	case numContent != 0:
		g = den.CommonWord(numContent)
	case denContent != 0:
		g = num.CommonWord(denContent)
	default:
		numContent, denContent = num.WordContent(), den.WordContent()
		if numContent == 0 && denContent == 0 { // both longer than a word
			return reduceLong(num, den)
		}
		return reduce(num, den, numContent, denContent)
	}
	if g != 1 {
		num, den = num.QuoWord(g), den.QuoWord(g)
		numContent, denContent = numContent/g, denContent/g
	}
	return Func{num: num, den: den, numContent: numContent, denContent: denContent}
}

func reduceLong(num, den intpoly.Poly) Func {
	g := new(big.Int).GCD(nil, nil, num.Content(), den.Content())
	num, den = num.QuoInt(g), den.QuoInt(g)
	return Func{num: num, den: den, numContent: num.WordContent(), denContent: den.WordContent()}
}

func gcd(a, b uint64) uint64 {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// times returns the content of a product, 0 where it is not known.
func times(a, b uint64) uint64 {
	hi, lo := bits.Mul64(a, b)
	if hi != 0 {
		return 0
	}
	return lo
}

// Size returns the degree and the words of a coefficient, the larger ones of
// numerator and denominator. Those of a product, a sum or a loop are at most the
// sums of those of the operands, but for a word.
func (f Func) Size() (degree, words int) {
	den := f.Den()
	return max(f.num.Degree(), den.Degree()), max(f.num.Words(), den.Words())
}

// Num returns the numerator.
func (f Func) Num() intpoly.Poly { return f.num }

// Den returns the denominator; it is never 0.
func (f Func) Den() intpoly.Poly {
	if f.den.IsZero() {
		return intpoly.FromInt64s(1)
	}
	return f.den
}

// settled returns f with a denominator that is not left out.
func (f Func) settled() Func {
	if f.den.IsZero() {
		f.den, f.denContent = intpoly.FromInt64s(1), 1
	}
	return f
}

// IsZero reports whether f is 0.
func (f Func) IsZero() bool { return f.num.IsZero() }

// Mul returns f·g.
func (f Func) Mul(g Func) Func {
	f, g = f.settled(), g.settled()
	return reduce(f.num.Mul(g.num), f.den.Mul(g.den), times(f.numContent, g.numContent), times(f.denContent, g.denContent))
}

// Add returns f + g over the product of the denominators, even where they are
// equal: two parallel blocks with the same poles hold each pole twice.
func (f Func) Add(g Func) Func {
	f, g = f.settled(), g.settled()
	num := intpoly.SumOfProducts(f.num, g.den, g.num, f.den, 1)
	return reduce(num, f.den.Mul(g.den), 0, times(f.denContent, g.denContent))
}

// Neg returns −f.
func (f Func) Neg() Func {
	f.num = f.num.Neg()
	return f
}

// Scale returns k·f.
func (f Func) Scale(k *big.Rat) Func {
	f = f.settled()
	return reduce(f.num.MulInt(k.Num()), f.den.MulInt(k.Denom()), 0, 0)
}

// Inverse returns 1/f; ok is false where f is 0.
func (f Func) Inverse() (Func, bool) {
	f = f.settled()
	if f.num.IsZero() {
		return Func{}, false
	}
	num, den := f.den, f.num
	if den.Sign(den.Degree()) < 0 {
		num, den = num.Neg(), den.Neg()
	}
	return Func{num: num, den: den, numContent: f.denContent, denContent: f.numContent}, true
}

// Feedback returns f/(1 + sign·f·g), sign = ±1: the loop with f forward and g
// back, with negative feedback for sign = 1. ok is false where 1 + sign·f·g is
// 0.
func (f Func) Feedback(g Func, sign int) (Func, bool) {
	f, g = f.settled(), g.settled()
	num, den := intpoly.Loop(f.num, f.den, g.num, g.den, sign)
	if den.IsZero() {
		return Func{}, false
	}
	return reduce(num, den, times(f.numContent, g.denContent), 0), true
}

// LowestTerms returns f with its common polynomial factor removed, and that
// factor: primitive, with a positive leading coefficient. ok is false beyond
// intpoly.MaxGCDWork.
func (f Func) LowestTerms() (reduced Func, g intpoly.Poly, ok bool) {
	if f.num.GCDWork(f.Den()) > intpoly.MaxGCDWork {
		return Func{}, intpoly.Poly{}, false
	}
	g = f.num.GCD(f.Den())
	if g.IsOne() {
		return f, g, true
	}
	num, _ := f.num.QuoExact(g)
	den, _ := f.Den().QuoExact(g)
	return reduce(num, den, f.numContent, f.denContent), g, true
}

// Equal reports whether f and g have the same numerator and denominator.
func (f Func) Equal(g Func) bool { return f.num.Equal(g.num) && f.Den().Equal(g.Den()) }

// Equivalent reports whether f and g are the same function.
func (f Func) Equivalent(g Func) bool {
	return intpoly.EqualProducts(f.num, g.Den(), g.num, f.Den())
}
