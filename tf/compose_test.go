package tf

import (
	"errors"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

func longRat(bits uint) *big.Rat {
	v := new(big.Int).Lsh(big.NewInt(1), bits-1)
	return new(big.Rat).SetInt(v.Add(v, big.NewInt(1)))
}

// manyTerms has that many coefficients, all small.
func manyTerms(n int) poly.Poly {
	c := make([]int64, n)
	for i := range c {
		c[i] = int64(i%7 + 1)
	}
	return poly.FromInts(c...)
}

// What is beyond all use is refused at once, by name.
func TestHostileSizes(t *testing.T) {
	linear := poly.FromInts(1, 1)
	long := poly.FromRats(longRat(1<<18), longRat(1<<18))
	g, h := Must(New(long, linear)), Must(New(poly.FromInts(1), manyTerms(100001)))
	ratio := Must(New(manyTerms(90001), manyTerms(100001)))
	wide := Must(New(linear, manyTerms(601)))
	second := func(_ any, err error) error { return err }
	for name, err := range map[string]error{
		"Series":             second(Series(g, h)),
		"Series: of":         second(Series(Gain(units.NewQuantity(longRat(1<<19), units.Unit{})), Gain(units.NewQuantity(longRat(1<<19), units.Unit{})), g)),
		"Parallel":           second(Parallel(g, h)),
		"Feedback":           second(Feedback(g, h)),
		"Scale":              second(Scale(h, longRat(1<<18))),
		"a polynomial takes": second(New(long.Mul(manyTerms(100001)), linear)),
		"partial fractions":  second(wide.PartialFractions()),
		"time function":      second(wide.InverseLaplace()),
		"FinalValue":         second(ratio.FinalValue()),
		"PartialFractions":   second(ratio.PartialFractions()),
		"inverse transform":  second(ratio.InverseLaplace()),
	} {
		name, _, _ = strings.Cut(name, ":")
		if !errors.Is(err, ErrLimit) || !strings.Contains(err.Error(), name) {
			t.Errorf("%s: %v", name, err)
		}
	}
	same, cancelled := ratio.LowestTerms()
	if !errors.Is(cancelled.Err(), ErrLimit) || !same.Equal(ratio) {
		t.Errorf("lowest terms: %v", cancelled.Err())
	}
}

// Short and long ones are compared without their products.
func TestEquivalentOfUnequalShapes(t *testing.T) {
	x, y := poly.FromInts(1, 2), poly.FromInts(-5, 0, 7)
	short, long := manyTerms(501), poly.FromRats(longRat(20000), big.NewRat(3, 1), longRat(19000))
	g, h := Must(New(short.Mul(x), short.Mul(y))), Must(New(long.Mul(x), long.Mul(y)))
	if !g.Equivalent(h) || !h.Equivalent(g) {
		t.Error("not equivalent")
	}
	if g.Equivalent(Must(New(long.Mul(x), long.Mul(y).Add(poly.FromInts(1))))) {
		t.Error("equivalent to another one")
	}
	// x over itself is real on the axis, and x over its mirror image is not.
	if f := Must(New(short.Mul(long), long.Mul(short))).FrequencyFunction().data(); !f.isReal || f.isImaginary {
		t.Error("1 is not real on the axis")
	}
}

// A fraction of polynomials that are too long is written as such.
func TestTextOfTooLong(t *testing.T) {
	long := manyTerms(100001).Mul(poly.FromRats(longRat(1<<18), longRat(1<<18)))
	for _, f := range []RationalFraction{{Numerator: long, Factor: poly.FromInts(1, 1), Power: 1}, {Numerator: poly.FromInts(1), Factor: long, Power: 2}} {
		if text := f.Text("s"); !strings.Contains(text, "(too long)") {
			t.Errorf("%.60q", text)
		}
	}
}
