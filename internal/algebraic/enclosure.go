package algebraic

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
)

// Rounded returns the components correctly rounded to the given number of
// bits (at least 2), to nearest, ties to even, with an unbounded exponent. A
// component is 0 if and only if it is exactly 0.
func (x *Number) Rounded(bits uint) (re, im *big.Float, err error) {
	if bits > MaxPrecision {
		return nil, nil, fmt.Errorf("enclosure of %d bits, at most %d: %w", bits, MaxPrecision, fault.ErrLimit)
	}
	bits = max(bits, 2)
	w := &work{left: maxWork}
	if re, err = x.rounded(false, bits, w); err != nil {
		return nil, nil, err
	}
	if im, err = x.rounded(true, bits, w); err != nil {
		return nil, nil, err
	}
	if x.below {
		im.Neg(im)
	}
	return re, im, nil
}

// Equal reports whether x and y are the same number, also when they are known
// as roots of different polynomials. It is false where the test would pass the
// limits of the package.
func (x *Number) Equal(y *Number) bool {
	if x.value != y.value || x.real != y.real || x.imaginary != y.imaginary {
		return false
	}
	if x.IsZero() {
		return true
	}
	common := x.factor.poly.GCD(y.factor.poly)
	if common.Degree() < 1 {
		return false
	}
	w := &work{left: maxWork}
	numbers, err := simpleRoots(common, w)
	if err != nil {
		return false
	}
	for i := range numbers {
		u := &numbers[i]
		at := func(bits uint) (disc, error) { return u.disc(bits, w) }
		if same, err := x.isAt(w, at); err != nil || !same {
			continue
		}
		same, err := y.isAt(w, at)
		return same && err == nil
	}
	return false
}

// Enclosure returns a ball that contains the number, with a radius of at most
// 2^-prec times its absolute value in each component. A component that is
// exactly 0 is exact. What is enclosed is the same on every machine; the
// midpoint need not be.
func (x *Number) Enclosure(prec uint) (ball.Complex, error) {
	if prec > MaxPrecision {
		return ball.Complex{}, fmt.Errorf("enclosure of %d bits, at most %d: %w", prec, MaxPrecision, fault.ErrLimit)
	}
	d, err := x.disc(prec+2, &work{left: maxWork})
	if err != nil {
		return ball.Complex{}, err
	}
	var re, im ball.Real
	if !x.imaginary {
		re = ball.NewReal(exactFloat(&d.re, d.e), d.radius.float())
	}
	if !x.real {
		im = ball.NewReal(exactFloat(&d.im, d.e), d.radius.float())
	}
	if x.below {
		im = im.Neg()
	}
	return ball.NewComplex(re, im), nil
}
