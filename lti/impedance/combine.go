package impedance

import (
	"slices"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// Series returns one-ports in series: what flows through one flows through
// all, and what is across them adds. The errors are *EmptyError, *DomainError
// for two domains, *GroundError where two of them have an end at the ground, and
// ErrLimit beyond the bounds of MaxElements.
func Series(parts ...OnePort) (OnePort, error) { return combine("Series", inSeries, parts) }

// Parallel returns one-ports in parallel: what is across one is across all, and
// what flows through them adds. One with the impedance 0 shorts the rest. The
// errors are *EmptyError, *DomainError, and ErrLimit beyond the bounds of
// MaxElements.
func Parallel(parts ...OnePort) (OnePort, error) { return combine("Parallel", inParallel, parts) }

func combine(operation string, how join, parts []OnePort) (OnePort, error) {
	domain, err := commonDomain(operation, 0, parts...)
	if err != nil {
		return OnePort{}, err
	}
	p := &port{domain: domain, join: how, parts: slices.Clone(parts)}
	for i, z := range parts {
		p.size = p.size.plus(z.size())
		if err := p.size.check(); err != nil {
			return OnePort{}, err
		}
		if z.port().grounded && p.grounded && how == inSeries {
			return OnePort{}, &GroundError{Operation: operation, Index: i, Found: z}
		}
		p.grounded = p.grounded || z.port().grounded
	}
	if len(parts) == 1 {
		return parts[0], nil
	}
	if how == inSeries {
		p.num, p.den = addRatios(parts, func(q *port) (num, den poly.Poly) { return q.num, q.den })
	} else {
		p.den, p.num = addRatios(parts, func(q *port) (num, den poly.Poly) { return q.den, q.num })
	}
	p.num, p.den = withoutTrapped(p.num, p.den)
	if p.den.IsZero() { // 0 in parallel with 0
		p.num, p.den = poly.Poly{}, onePoly
	}
	return OnePort{p: p}, nil
}

// commonDomain returns the domain of all parts; want is the domain that is
// needed, or none.
func commonDomain(operation string, want Domain, parts ...OnePort) (Domain, error) {
	if len(parts) == 0 {
		return 0, &EmptyError{Operation: operation}
	}
	for i, z := range parts {
		switch d := z.port().domain; {
		case want == 0:
			want = d
		case d != 0 && d != want:
			return 0, &DomainError{Operation: operation, Index: i, Found: d, Want: want}
		}
	}
	return want, nil
}

// addRatios returns the sum of ratios by halves, so that long sums are products
// of polynomials of equal length.
func addRatios(parts []OnePort, of func(*port) (num, den poly.Poly)) (num, den poly.Poly) {
	if len(parts) == 1 {
		return of(parts[0].port())
	}
	n1, d1 := addRatios(parts[:len(parts)/2], of)
	n2, d2 := addRatios(parts[len(parts)/2:], of)
	return n1.Mul(d2).Add(n2.Mul(d1)), d1.Mul(d2)
}

// withoutTrapped divides both by the power of s that they share; see
// OnePort.Impedance.
func withoutTrapped(num, den poly.Poly) (n, d poly.Poly) {
	if num.IsZero() || den.IsZero() || num.Coefficient(0).Sign() != 0 || den.Coefficient(0).Sign() != 0 {
		return num, den
	}
	a, b := num.Coefficients(), den.Coefficients()
	k := 0
	for a[k].Sign() == 0 && b[k].Sign() == 0 {
		k++
	}
	return poly.FromRats(a[k:]...), poly.FromRats(b[k:]...)
}

// Divider returns the quantity across the shunt element over the quantity
// across both, where the input feeds the series element and the shunt element
// leads from there to the ground:
//
//	in ──[ series ]──┬── out
//	              [ shunt ]
//	                 ┴
//
// Nothing is cancelled. It is a Ladder of two arms; the errors are those of
// NewLadder and Ladder.AcrossRatio.
func Divider(series, shunt OnePort) (tf.Continuous, error) { return divider("Divider", series, shunt) }

func divider(operation string, series, shunt OnePort) (tf.Continuous, error) {
	l, err := newLadder(operation, []Arm{SeriesArm(series), ShuntArm(shunt)})
	if err != nil {
		return tf.Continuous{}, err
	}
	return l.AcrossRatio()
}

// Transmissibility returns the motion of what a mount carries over the motion
// of the ground below it, in m over m: as a ratio it is the same for positions,
// velocities and accelerations, and, for a load that is pushed, for the force
// that reaches the ground over the force that pushes it. A load of several
// masses is a one-port like any other. (The motion at the top of a chain of
// mounts and masses is Ladder.AcrossRatio.)
//
// The errors are those of Divider, and a *DomainError for one-ports that are not
// mechanical.
func Transmissibility(mount, load OnePort) (tf.Continuous, error) {
	if _, err := commonDomain("Transmissibility", Translational, mount, load); err != nil {
		return tf.Continuous{}, err
	}
	g, err := divider("Transmissibility", mount, load)
	if err != nil {
		return tf.Continuous{}, err
	}
	if g, err = tf.New(g.Numerator(), g.Denominator()); err != nil {
		return tf.Continuous{}, err
	}
	return g.WithUnits(metre, metre)
}
