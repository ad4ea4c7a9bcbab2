package impedance

import (
	"fmt"
	"slices"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Arm is an element of a Ladder: SeriesArm or ShuntArm makes one. The zero value
// is a series arm with the impedance 0.
type Arm struct {
	_     [0]func()
	z     OnePort
	shunt bool
}

// SeriesArm returns z as a series arm, through which the input feeds what comes
// after.
func SeriesArm(z OnePort) Arm { return Arm{z: z} }

// ShuntArm returns z as a shunt arm, which leads from the line to the ground.
func ShuntArm(z OnePort) Arm { return Arm{z: z, shunt: true} }

// Ladder is a chain of series and shunt arms from an input port to an output
// port:
//
//	in ──[ series ]──┬──[ series ]──┬── out
//	              [ shunt ]      [ shunt ]
//	                 ┴              ┴
//
// A load at the output is one more shunt arm, a source that gives way one more
// series arm (or, for a source of current, force or heat, a shunt arm) in front.
// It is an immutable value, safe to share; the zero value connects the input to
// the output.
//
// With each arm as num/den, the ladder is a product of matrices of the trade's
// a, b, c, d (across in = a·across out + b·through out, through in = c·across out
// + d·through out) over the product of the den of series arms and the num of
// shunt arms. a, b, c, d are continuants (Muir 1882), which are multiplied up by
// halves. They hold no common factor but those that the arms bring: for arms
// that are single elements the order of a result is the number of storing and
// inert elements at most. Nothing is cancelled: an arm that the input moves and
// that the output does not show leaves a common factor.
type Ladder struct {
	_          [0]func()
	arms       []Arm
	domain     Domain
	a, b, c, d poly.Poly // all 0 for the zero value
	over       poly.Poly
}

// NewLadder returns the chain of arms, the one at the input first. The errors
// are *DomainError for arms of two domains, *GroundError for a series arm with
// an end at the ground, and ErrLimit beyond the bounds of MaxElements.
func NewLadder(arms ...Arm) (Ladder, error) { return newLadder("NewLadder", arms) }

func newLadder(operation string, arms []Arm) (Ladder, error) {
	if len(arms) == 0 {
		return Ladder{}, nil
	}
	ports := make([]OnePort, len(arms))
	var total size
	for i, a := range arms {
		ports[i] = a.z
		total = total.plus(a.z.size())
		if err := total.check(); err != nil {
			return Ladder{}, err
		}
		if a.z.port().grounded && !a.shunt {
			return Ladder{}, &GroundError{Operation: operation, Index: i, Found: a.z}
		}
	}
	domain, err := commonDomain(operation, 0, ports...)
	if err != nil {
		return Ladder{}, err
	}
	l := chain(arms)
	l.arms, l.domain = slices.Clone(arms), domain
	return l, nil
}

// chain multiplies the matrices of at least one arm by halves.
func chain(arms []Arm) Ladder {
	if len(arms) == 1 {
		p := arms[0].z.port()
		if arms[0].shunt {
			return Ladder{a: p.num, c: p.den, d: p.num, over: p.num}
		}
		return Ladder{a: p.den, b: p.num, d: p.den, over: p.den}
	}
	l, r := chain(arms[:len(arms)/2]), chain(arms[len(arms)/2:])
	return Ladder{
		a:    l.a.Mul(r.a).Add(l.b.Mul(r.c)),
		b:    l.a.Mul(r.b).Add(l.b.Mul(r.d)),
		c:    l.c.Mul(r.a).Add(l.d.Mul(r.c)),
		d:    l.c.Mul(r.b).Add(l.d.Mul(r.d)),
		over: l.over.Mul(r.over),
	}
}

// Arms returns the arms, the one at the input first.
func (l Ladder) Arms() []Arm { return slices.Clone(l.arms) }

// Domain returns the domain of the arms.
func (l Ladder) Domain() Domain { return l.domain }

// matrix returns the ladder as its matrix, which for no arms is the identity.
func (l Ladder) matrix() Ladder {
	if len(l.arms) == 0 {
		return Ladder{a: onePoly, d: onePoly, over: onePoly}
	}
	return l
}

// AcrossRatio returns the quantity across the output over that across the
// input, with nothing flowing out of the output: V over V, and for a mechanical
// chain the velocity at its top over the velocity of the ground below, which is
// the ratio of positions too (WithUnits of m and m is allowed). The error is
// ErrDivisionByZero where arms of impedance 0 short the input.
func (l Ladder) AcrossRatio() (tf.Continuous, error) {
	m := l.matrix()
	return quotient("AcrossRatio", m.over, m.a, l.domain.Across(), l.domain.Across())
}

// ThroughRatio returns the quantity that flows through a shorted output (one
// that is held, for a mechanical chain) over that which flows into the input. The
// error is ErrDivisionByZero where nothing but an arm of impedance 0 takes what
// flows in.
func (l Ladder) ThroughRatio() (tf.Continuous, error) {
	m := l.matrix()
	return quotient("ThroughRatio", m.over, m.d, l.domain.Through(), l.domain.Through())
}

// TransferImpedance returns the quantity across the output over that which
// flows into the input, with nothing flowing out of the output: the temperature
// of the load of a furnace over the heat into its element. The error is
// ErrDivisionByZero where no shunt arm takes what flows in.
func (l Ladder) TransferImpedance() (tf.Continuous, error) {
	m := l.matrix()
	return quotient("TransferImpedance", m.over, m.c, l.domain.Through(), l.domain.Across())
}

// TransferAdmittance returns the quantity that flows through a shorted output
// over that across the input. The error is ErrDivisionByZero where no series arm
// parts the two.
func (l Ladder) TransferAdmittance() (tf.Continuous, error) {
	m := l.matrix()
	return quotient("TransferAdmittance", m.over, m.b, l.domain.Across(), l.domain.Through())
}

// InputImpedance returns the quantity across the input over that which flows
// into it, with nothing flowing out of the output. The error is
// ErrDivisionByZero where no shunt arm takes what flows in.
func (l Ladder) InputImpedance() (tf.Continuous, error) {
	m := l.matrix()
	return quotient("InputImpedance", m.a, m.c, l.domain.Through(), l.domain.Across())
}

func quotient(operation string, over, under poly.Poly, in, out units.Unit) (tf.Continuous, error) {
	if under.IsZero() {
		return tf.Continuous{}, fmt.Errorf("impedance: %s: the input is shorted, or nothing can flow into it: %w", operation, ErrDivisionByZero)
	}
	return ratio(over, under, in, out), nil
}
