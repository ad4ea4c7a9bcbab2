package algebraic

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
)

// settle decides whether the number is imaginary and rounds its components.
func (x *Number) settle(w *work) error {
	if x.IsZero() {
		return nil
	}
	re, im := real(x.value), imag(x.value)
	var err error
	if x.openRe {
		if re, err = x.component(false, w); err != nil {
			return err
		}
	}
	if x.openIm {
		if im, err = x.component(true, w); err != nil {
			return err
		}
	}
	x.value, x.openRe, x.openIm = complex(re, im), false, false
	return nil
}

// component returns the real or the imaginary part rounded to a float64.
func (x *Number) component(imaginary bool, w *work) (float64, error) {
	v, err := x.rounded(imaginary, 0, w)
	if err != nil {
		return 0, err
	}
	f, _ := v.Float64()
	if math.IsInf(f, 0) {
		return 0, fmt.Errorf("roots: a root near %.3g: %w", v, fault.ErrRange)
	}
	return f, nil
}

// exactly is the precision in bits from which on the exact decision is cheaper
// than more digits, except for the question whether a component is 0, which
// comes first.
const exactly = 160

// rounded returns a component rounded to the given number of bits, and for 0
// bits rounded as a float64 is, with its range of exponents. It is 0 if and
// only if the component is 0 or rounds to 0 as a float64.
func (x *Number) rounded(imaginary bool, bits uint, w *work) (*big.Float, error) {
	if imaginary && x.real || !imaginary && x.imaginary {
		return new(big.Float), nil
	}
	decided := (*big.Rat)(nil)
	for precision := max(80, bits+32); ; precision *= 2 {
		d, err := x.disc(precision, w)
		if err != nil {
			return nil, err
		}
		lo, hi := d.interval(imaginary)
		a, b := roundTo(lo, bits), roundTo(hi, bits)
		if lo.Sign() == hi.Sign() && a.Cmp(b) == 0 {
			return a, nil
		}
		c := boundary(lo, hi, bits)
		if c == nil || c.Sign() != 0 && precision < exactly || decided != nil && decided.Cmp(c) == 0 {
			continue
		}
		equal, err := x.componentIs(imaginary, c, w)
		if err != nil {
			return nil, err
		}
		if equal {
			if c.Sign() == 0 {
				x.imaginary = true
				return new(big.Float), nil
			}
			f := new(big.Float).SetPrec(uint(c.Num().BitLen() + c.Denom().BitLen() + 2)).SetRat(c)
			return roundTo(f, bits), nil
		}
		decided = c
	}
}

// roundTo rounds to nearest even, to a float64 for 0 bits.
func roundTo(v *big.Float, bits uint) *big.Float {
	if bits > 0 {
		return new(big.Float).SetPrec(bits).SetMode(big.ToNearestEven).Set(v)
	}
	f, _ := v.Float64()
	if math.IsInf(f, 0) {
		return new(big.Float).SetInf(f < 0)
	}
	return big.NewFloat(f)
}

// boundary returns the number between lo and hi at which the rounding changes,
// or nil when there is more than one.
func boundary(lo, hi *big.Float, bits uint) *big.Rat {
	if lo.Sign() != hi.Sign() || lo.Sign() == 0 {
		return new(big.Rat)
	}
	if lo.Sign() < 0 {
		c := boundary(new(big.Float).Neg(hi), new(big.Float).Neg(lo), bits)
		if c != nil {
			c.Neg(c)
		}
		return c
	}
	// The neighbours differ by one unit in the last place of the lower.
	a, b := roundTo(lo, bits), roundTo(hi, bits)
	var next *big.Float
	switch {
	case bits > 0:
		next = new(big.Float).SetPrec(bits+2).SetMantExp(big.NewFloat(1), a.MantExp(nil)-int(bits))
		next.Add(next, a)
	default:
		f, _ := a.Float64()
		if f == math.MaxFloat64 {
			next = new(big.Float).SetMantExp(big.NewFloat(1), 1024)
		} else {
			next = big.NewFloat(math.Nextafter(f, math.Inf(1)))
		}
	}
	if next.Cmp(b) != 0 && !(b.IsInf() && next.MantExp(nil) > 1024) {
		return nil
	}
	ra, _ := a.Rat(nil)
	rb, _ := next.Rat(nil)
	c := ra.Add(ra, rb)
	return c.Mul(c, big.NewRat(1, 2))
}
