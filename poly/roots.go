package poly

import (
	"math/big"
	"strconv"

	"github.com/qofs/qofs/internal/algebraic"
	"github.com/qofs/qofs/internal/ratpoly"
)

// ErrZeroPolynomial is the error of Roots for the polynomial 0, of which every
// number is a root.
var ErrZeroPolynomial = algebraic.ErrZero

// Root is a root of a polynomial. It is an immutable value; the zero value is
// the number 0 with multiplicity 0.
type Root struct {
	_ [0]func()
	// Value is the root with each component correctly rounded to the nearest
	// float64, ties to even. The imaginary part of a real root and the real
	// part of an imaginary root are exactly 0, and conjugate roots have
	// exactly conjugate values.
	Value complex128
	// Multiplicity is how often the root occurs.
	Multiplicity int

	number *algebraic.Number
}

// Disc is a disc in the complex plane.
type Disc struct {
	_                       [0]func()
	Real, Imaginary, Radius *big.Float
}

// Roots returns the distinct complex roots of p with their multiplicities,
// which add up to the degree. A constant has none.
//
// Nothing is approximate about the result: multiplicities are exact, each
// component of a value is the true one correctly rounded, whether a root is
// real, imaginary or rational is proved, and the same polynomial gives the
// same bits on every machine. The roots ascend by real part, then by the
// absolute value of the imaginary part, both as rounded; roots whose values
// agree are ordered in the same way by further digits. Of a conjugate pair the
// root with the positive imaginary part comes first, followed by the other.
//
// Errors: ErrZeroPolynomial for 0; ErrRange when a component of a root is
// beyond the largest float64; ErrLimit for a degree above 1024, for a degree
// times bits of the largest integer coefficient above 4194304, and for
// polynomials below these bounds that would need more than 2^35
// multiplications of machine words.
//
// The method is the simultaneous iteration of Ehrlich (1967) and Aberth (1973)
// with a proof that each of n disjoint discs holds one root.
func (p Poly) Roots() ([]Root, error) {
	if err := p.Err(); err != nil {
		return nil, err
	}
	found, err := algebraic.Roots(ratpoly.Poly(p).Integer())
	if err != nil {
		return nil, err
	}
	roots := make([]Root, len(found))
	for i, r := range found {
		roots[i] = Root{Value: r.Number.Value(), Multiplicity: r.Multiplicity, number: r.Number}
	}
	return roots, nil
}

// RealRoots returns the real ones of Roots, in ascending order.
func (p Poly) RealRoots() ([]Root, error) {
	roots, err := p.Roots()
	if err != nil {
		return nil, err
	}
	out := roots[:0]
	for _, r := range roots {
		if r.IsReal() {
			out = append(out, r)
		}
	}
	return out, nil
}

// IsReal reports whether the root is a real number.
func (r Root) IsReal() bool { return r.number == nil || r.number.IsReal() }

// IsImaginary reports whether the real part of the root is 0; the number 0 is
// both real and imaginary.
func (r Root) IsImaginary() bool { return r.number == nil || r.number.IsImaginary() }

// Enclosure returns a disc that contains the root, with a radius of at most
// 2^-bits times its absolute value. The components of the center are those of
// the root correctly rounded to bits+2 binary digits; one that is exactly 0 is
// 0, and the radius of the root 0 is 0. The error is ErrLimit above 1048574
// bits or where the work limit of Roots is reached.
func (r Root) Enclosure(bits uint) (Disc, error) {
	if r.number == nil {
		return Disc{Real: new(big.Float), Imaginary: new(big.Float), Radius: new(big.Float)}, nil
	}
	re, im, err := r.number.Rounded(min(bits, 2*algebraic.MaxPrecision) + 2)
	if err != nil {
		return Disc{}, err
	}
	// Each component is within 2^-(bits+2) of its binary order, hence within
	// 2^-(bits+2) of the larger absolute value, and both within √2 times that.
	radius := new(big.Float)
	if e, ok := order(re, im); ok {
		radius.SetMantExp(big.NewFloat(1), e-1-int(bits))
	}
	return Disc{Real: re, Imaginary: im, Radius: radius}, nil
}

// order returns the larger k with 2^(k−1) ≤ |x| of the two, if one is not 0.
func order(a, b *big.Float) (k int, ok bool) {
	switch {
	case a.Sign() == 0 && b.Sign() == 0:
		return 0, false
	case a.Sign() == 0:
		return b.MantExp(nil), true
	case b.Sign() == 0:
		return a.MantExp(nil), true
	}
	return max(a.MantExp(nil), b.MantExp(nil)), true
}

// Rat returns the root as a fraction and true when it is rational.
func (r Root) Rat() (*big.Rat, bool) {
	if r.number == nil {
		return new(big.Rat), true
	}
	return r.number.Rat()
}

// Equal reports whether r and q are the same number, whatever their
// multiplicities and the polynomials that they are roots of.
func (r Root) Equal(q Root) bool {
	if r.number == nil || q.number == nil {
		return r.isZero() && q.isZero()
	}
	return r.number.Equal(q.number)
}

func (r Root) isZero() bool { return r.number == nil || r.number.IsZero() }

// String is the value with the shortest digits that tell it from every other
// float64, and the multiplicity of a multiple root: "-1+2i, 3 times".
func (r Root) String() string {
	s := strconv.FormatFloat(real(r.Value), 'g', -1, 64)
	if !r.IsReal() {
		im := strconv.FormatFloat(imag(r.Value), 'g', -1, 64) + "i"
		switch {
		case r.IsImaginary():
			s = im
		case im[0] == '-':
			s += im
		default:
			s += "+" + im
		}
	}
	if r.Multiplicity > 1 {
		s += ", " + strconv.Itoa(r.Multiplicity) + " times"
	}
	return s
}
