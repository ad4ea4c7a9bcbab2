package lti

import (
	"errors"
	"fmt"
	"math/big"
	"strings"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// Inspection is what there is to know about a transfer function before it is
// trusted; Inspect makes one, and String says it in words.
type Inspection struct {
	Function tf.Continuous // as it was given
	Reduced  tf.Continuous // in lowest terms
	// Hidden is the factor that numerator and denominator share, 1 where there
	// is none. Its roots are modes that the input does not reach or the output
	// does not show.
	Hidden      poly.Poly
	HiddenModes poly.Counts        // the roots of Hidden
	Poles       poly.Counts        // the poles in lowest terms
	Modes       []Mode             // these poles one by one, in the order of poly.Poly.Roots
	Near        []NearCancellation // by pole, in the order of poly.Poly.Roots
}

// NearCancellation is a pole that a zero nearly cancels: in the real machine,
// with its tolerances, it is there. Of conjugate pairs the upper one is told.
type NearCancellation struct {
	Pole, Zero poly.Root
	// Distance is |pole − zero| as a fraction of the larger of |pole| and
	// |zero|, rounded to a float64 from more than 60 bits.
	Distance float64
	_        [0]func()
}

// Inspect examines a transfer function: its order, the modes that it hides,
// exactly and with their stability, what each of the others does in time (Mode),
// and the poles to which a zero comes closer than a stated fraction of the larger
// magnitude of the two, with the nearest zero. That is decided on enclosures of
// both as narrow as it takes, so that it is the same on every machine; two that
// are at the fraction to 4096 bits count as not closer. A fraction of nil or 0
// looks for none.
//
// The errors are those of poly.Poly.Roots for a function beyond its limits, and
// units.ErrRange for a time constant beyond the largest float64.
func Inspect(g tf.Continuous, fraction *big.Rat) (Inspection, error) {
	x := Inspection{Function: g}
	x.Reduced, x.Hidden = g.LowestTerms()
	var err error
	if x.HiddenModes, err = sides(x.Hidden); err != nil {
		return Inspection{}, fmt.Errorf("lti: hidden modes: %w", err)
	}
	if x.Poles, err = sides(x.Reduced.Denominator()); err != nil {
		return Inspection{}, fmt.Errorf("lti: poles: %w", err)
	}
	poles, err := x.Reduced.Poles()
	if err != nil {
		return Inspection{}, fmt.Errorf("lti: poles: %w", err)
	}
	if x.Modes, err = modesOf(poles); err != nil {
		return Inspection{}, fmt.Errorf("lti: modes: %w", err)
	}
	if fraction == nil || fraction.Sign() <= 0 || x.Reduced.Numerator().IsZero() {
		return x, nil
	}
	zeros, err := x.Reduced.Zeros()
	if err != nil {
		return Inspection{}, fmt.Errorf("lti: zeros: %w", err)
	}
	for _, pole := range poles {
		if imag(pole.Value) < 0 {
			continue
		}
		near, found, err := nearest(pole, zeros, fraction)
		if err != nil {
			return Inspection{}, err
		}
		if found {
			x.Near = append(x.Near, near)
		}
	}
	return x, nil
}

// sides counts roots by the side of the imaginary axis that they lie on, exactly.
func sides(p poly.Poly) (c poly.Counts, err error) {
	if c, err = p.HalfPlane(); !errors.Is(err, ErrLimit) {
		return c, err
	}
	roots, err := p.Roots() // goes further
	if err != nil {
		return poly.Counts{}, err
	}
	c = poly.Counts{}
	for _, r := range roots {
		switch {
		case r.IsImaginary():
			c.On += r.Multiplicity
		case real(r.Value) < 0:
			c.Inside += r.Multiplicity
		case real(r.Value) > 0:
			c.Outside += r.Multiplicity
		default: // too small for a float64
			return poly.Counts{}, ErrLimit
		}
	}
	return c, nil
}

// nearest returns the zero that is nearest to a pole, if one is closer than the
// fraction.
func nearest(pole poly.Root, zeros []poly.Root, fraction *big.Rat) (best NearCancellation, found bool, err error) {
	for _, zero := range zeros {
		if imag(zero.Value) < 0 {
			continue // its conjugate is nearer, or as near
		}
		distance, closer, err := closeness(pole, zero, fraction)
		if err != nil {
			return best, false, err
		}
		if closer && (!found || distance < best.Distance) {
			best, found = NearCancellation{Pole: pole, Zero: zero, Distance: distance}, true
		}
	}
	return best, found, nil
}

const (
	firstBits = 128
	lastBits  = 4096
)

// closeness returns the distance of two different numbers as a fraction of the
// larger magnitude, where it is below the given fraction.
func closeness(p, q poly.Root, fraction *big.Rat) (distance float64, closer bool, err error) {
	for bits := uint(firstBits); bits <= lastBits; bits *= 2 {
		a, err := p.Enclosure(bits)
		if err != nil {
			return 0, false, err
		}
		b, err := q.Enclosure(bits)
		if err != nil {
			return 0, false, err
		}
		prec := bits + 64
		float := func() *big.Float { return new(big.Float).SetPrec(prec) }
		magnitude := func(re, im *big.Float) *big.Float {
			return float().Sqrt(float().Add(float().Mul(re, re), float().Mul(im, im)))
		}
		larger := magnitude(a.Real, a.Imaginary)
		if m := magnitude(b.Real, b.Imaginary); m.Cmp(larger) > 0 {
			larger = m
		}
		apart := magnitude(float().Sub(a.Real, b.Real), float().Sub(a.Imaginary, b.Imaginary))
		bound := float().Mul(larger, float().SetRat(fraction))
		// Both centres are within 2^−bits of their magnitudes, and the arithmetic
		// adds far less.
		slack := float().SetMantExp(larger, 3-int(bits))
		switch width := float().Mul(slack, float().Add(float().SetInt64(1), float().SetRat(fraction))); {
		case float().Sub(apart, width).Cmp(bound) >= 0:
			return 0, false, nil
		case float().Add(apart, width).Cmp(bound) < 0 && float().SetMantExp(slack, 60).Cmp(apart) < 0:
			distance, _ = float().Quo(apart, larger).Float64()
			return distance, true, nil
		}
	}
	return 0, false, nil
}

const maxModeLines = 12 // in String

// String says all of it in words, a line for each item, for twelve modes at most.
func (x Inspection) String() string {
	g := x.Function
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	line("from %s to %s, %s", g.Input(), g.Output(), inUnit(g.Output().Unit.Div(g.Input().Unit)))
	degree := x.Reduced.Denominator().Degree()
	line("order %d, with %s in lowest terms", degree, counted(max(0, x.Reduced.Numerator().Degree()), "zero"))
	if !x.Reduced.IsProper() {
		line("the output follows derivatives of the input: the numerator's degree is higher by %d", -x.Reduced.RelativeDegree())
	}
	if t := g.DeadTime(); t.Sign() != 0 {
		line("dead time %s", t)
	}
	line("poles: %s", judged(x.Poles))
	for i, m := range x.Modes {
		if i == maxModeLines {
			line("and %s more", counted(len(x.Modes)-i, "mode"))
			break
		}
		line("mode at %s", m)
	}
	if x.Hidden.Degree() > 0 {
		factor := x.Hidden.Text("s")
		if len(factor) > 80 {
			factor = fmt.Sprintf("a factor of degree %d", x.Hidden.Degree())
		}
		line("hidden: %s cancels; %s", factor, judged(x.HiddenModes))
	} else {
		line("hidden: nothing cancels")
	}
	for _, n := range x.Near {
		line("nearly cancelled: the pole at %s rad/s by the zero at %s rad/s, which is off by %.2g %%", place(n.Pole), place(n.Zero), 100*n.Distance)
	}
	return strings.TrimSuffix(b.String(), "\n")
}

// judged says where the roots lie and what that means.
func judged(c poly.Counts) string {
	switch {
	case c.Outside > 0:
		return fmt.Sprintf("unstable, %d of %d to the right of the imaginary axis", c.Outside, c.Inside+c.On+c.Outside)
	case c.On > 0:
		return fmt.Sprintf("not asymptotically stable, %d of %d on the imaginary axis", c.On, c.Inside+c.On)
	case c.Inside == 0:
		return "none"
	}
	return fmt.Sprintf("stable, all %d to the left of the imaginary axis", c.Inside)
}

// place writes a root to four digits, a conjugate pair as one.
func place(r poly.Root) string {
	if r.IsReal() {
		return fmt.Sprintf("%.4g", real(r.Value))
	}
	return fmt.Sprintf("%.4g ± %.4gi", real(r.Value), imag(r.Value))
}
