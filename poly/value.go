package poly

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ratpoly"
)

// At returns p(x) with each component correctly rounded: x is taken as the
// exact binary number that it is, p is evaluated exactly, and the result is
// rounded once. The errors are ErrNotFinite for a component of x that is
// infinite or not a number, ErrRange where a component of the result is beyond
// the largest float64, and ErrLimit where the degree times the bits that x
// needs as a fixed-point number pass 2^22.
func (p Poly) At(x complex128) (complex128, error) {
	if err := p.Err(); err != nil {
		return 0, err
	}
	re, errRe := fixedPoint(real(x))
	im, errIm := fixedPoint(imag(x))
	if errRe != nil || errIm != nil {
		return 0, ErrNotFinite
	}
	// x = (a + b i)/2^k with whole a and b.
	k := max(re.Denom().BitLen(), im.Denom().BitLen()) - 1
	one := big.NewInt(1)
	scale := new(big.Rat).SetInt(new(big.Int).Lsh(one, uint(k)))
	a, b := re.Mul(re, scale).Num(), im.Mul(im, scale).Num()
	n := max(p.Degree(), 0)
	if n*max(k, a.BitLen(), b.BitLen()) > 1<<22 {
		return 0, ErrLimit
	}
	u, v := p.horner(a, b, uint(k))
	den := new(big.Int).Lsh(p.rational().Denominator(), uint(k*n))
	valueRe, _ := new(big.Rat).SetFrac(u, den).Float64()
	valueIm, _ := new(big.Rat).SetFrac(v, den).Float64()
	if math.IsInf(valueRe, 0) || math.IsInf(valueIm, 0) {
		return 0, ErrRange
	}
	return complex(valueRe, valueIm), nil
}

// maxValueBits bounds the length of a value: the powers of the point take the
// square of it.
const maxValueBits = ratpoly.MaxBits

// AtRat returns p(x), exactly; nil reads as 0. The error is ErrLimit where the
// degree times the bits of x, and the bits of p, pass 2^19.
func (p Poly) AtRat(x *big.Rat) (*big.Rat, error) {
	if err := p.Err(); err != nil {
		return nil, err
	}
	if x == nil {
		x = new(big.Rat)
	}
	n, bits := max(p.Degree(), 0), max(x.Num().BitLen(), x.Denom().BitLen())
	if x.Sign() == 0 {
		return p.Coefficient(0), nil
	}
	if float64(n)*float64(bits)+float64(p.bits()) > maxValueBits {
		return nil, fmt.Errorf("poly: value at a point of %d bits of a polynomial of degree %d: %w", bits, n, ErrLimit)
	}
	den := new(big.Int).Exp(x.Denom(), big.NewInt(int64(n)), nil)
	return new(big.Rat).SetFrac(p.integer().AtRat(x.Num(), x.Denom()), den.Mul(den, p.rational().Denominator())), nil
}

func fixedPoint(x float64) (*big.Rat, error) {
	if r := new(big.Rat).SetFloat64(x); r != nil {
		return r, nil
	}
	return nil, ErrNotFinite
}

// horner returns 2^(k n)·P((a + b i)/2^k) for the integer polynomial P.
func (p Poly) horner(a, b *big.Int, k uint) (re, im *big.Int) {
	re, im = new(big.Int), new(big.Int)
	var s, t, c big.Int
	q, n := p.integer(), p.Degree()
	for i := n; i >= 0; i-- {
		// (re + im i)(a + b i) + c·2^(k (n − i))
		s.Mul(re, b)
		t.Mul(im, b)
		re.Sub(re.Mul(re, a), &t)
		im.Add(im.Mul(im, a), &s)
		re.Add(re, c.Lsh(q.Coefficient(i), k*uint(n-i)))
	}
	return re, im
}
