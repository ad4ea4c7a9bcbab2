package impedance

import (
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Receptance returns the position of a mechanical one-port over the force on it,
// in m over N: the impedance, integrated once, as vibration engineers measure
// it. That of a spring is 1/k, and tf.Inverse of it is the dynamic stiffness.
// Powers of s that the position and the force have in common are left out, as in
// Impedance. The error is a *DomainError for a one-port that is not mechanical.
func (z OnePort) Receptance() (tf.Continuous, error) {
	if _, err := commonDomain("Receptance", Translational, z); err != nil {
		return tf.Continuous{}, err
	}
	p := z.port()
	return integrated(p.num, p.den), nil
}

// TransferReceptance returns the position at the output of a mechanical chain
// over the force into its input, in m over N, with nothing to push against at the
// output. Powers of s that both have in common are left out. The errors are a
// *DomainError for a chain that is not mechanical, and that of TransferImpedance.
func (l Ladder) TransferReceptance() (tf.Continuous, error) {
	if l.domain != 0 && l.domain != Translational {
		return tf.Continuous{}, &DomainError{Operation: "TransferReceptance", Found: l.domain, Want: Translational}
	}
	if _, err := l.TransferImpedance(); err != nil {
		return tf.Continuous{}, err
	}
	m := l.matrix()
	return integrated(m.over, m.c), nil
}

// integrated is num/(s den) as position over force.
func integrated(num, den poly.Poly) tf.Continuous {
	num, den = withoutTrapped(num, den.Mul(poly.FromInts(0, 1)))
	return ratio(num, den, Translational.Through(), metre)
}

var metre = units.MustParse("m")
