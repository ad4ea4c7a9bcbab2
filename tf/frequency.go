package tf

import (
	"fmt"
	"math"
	"sync"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/units"
)

// FrequencyFunction is a transfer function on the imaginary axis, g(jω), ready
// to be evaluated at many frequencies. ω is in rad/s, of either sign. It is
// immutable and safe to share; the zero value is 0.
//
// Every result is the value of the exact function at the exact number that the
// float64 ω is, correctly rounded, or an error. It comes in two stages. The
// first one evaluates the even and the odd parts of numerator and denominator
// by the compensated Horner scheme in float64 with a proven error bound, and
// decides nearly every case; where the bound does not settle the rounding, the
// exact stage computes with integers.
//
//	f := g.FrequencyFunction()
//	v, err := f.At(0.0024) // 2.4 mrad/s
type FrequencyFunction struct {
	_ [0]func()
	p *frequencyFunction // nil is the function 0
}

// frequencyFunction is what a FrequencyFunction points to; it never changes.
type frequencyFunction struct {
	c    core
	fast *axisRatio // of the rational part; nil where float64 does not reach

	isReal, isImaginary bool // of the rational part, for all ω

	delayShape func() (*delayShape, error) // see GroupDelay; computed once
	angles     func() (*rootAngles, error) // see Phase; computed once
}

var zeroOnAxis = Continuous{}.FrequencyFunction().p

// data is what f points to.
func (f FrequencyFunction) data() *frequencyFunction {
	if f.p == nil {
		return zeroOnAxis
	}
	return f.p
}

// FrequencyFunction returns g on the imaginary axis.
func (g Continuous) FrequencyFunction() FrequencyFunction {
	f := &frequencyFunction{c: g.c}
	f.fast, _ = newAxisRatio(g.c.f)
	// num·conj(den) = (E O' − E' O)·jω + (E E' + ω² O O') with E(−ω²) and so on
	e, o := g.c.f.Num().EvenOdd()
	e2, o2 := g.c.f.Den().EvenOdd()
	f.isReal = intpoly.EqualProducts(o, e2, e, o2)
	f.isImaginary = intpoly.EqualProducts(e, e2, o.MulPower(1), o2)
	f.delayShape = sync.OnceValues(f.newDelayShape)
	f.angles = sync.OnceValues(f.newRootAngles)
	return FrequencyFunction{p: f}
}

// Unit is the unit of the values: output over input.
func (f FrequencyFunction) Unit() units.Unit { return f.data().c.gainUnit() }

// At returns g(jω), each component correctly rounded, dead time included. A
// component that is 0 for all ω is exactly 0. The errors are those of
// Continuous.At.
func (f FrequencyFunction) At(omega float64) (complex128, error) {
	if f.p != nil && f.p.fast != nil && f.p.c.delay == nil {
		v, reOK, imOK := f.p.fast.value(omega)
		if reOK && imOK {
			return v, nil
		}
		if reOK && f.p.isReal {
			return complex(real(v), 0), nil
		}
		if imOK && f.p.isImaginary {
			return complex(0, imag(v)), nil
		}
	}
	return f.data().exactAt(omega)
}

func (f *frequencyFunction) exactAt(omega float64) (complex128, error) {
	if math.IsNaN(omega - omega) {
		return 0, fmt.Errorf("tf: value at the frequency %v: %w", omega, fault.ErrNotFinite)
	}
	return valueAt(&f.c, complex(0, omega), "s")
}
