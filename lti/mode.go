package lti

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// Mode is a pole in s with what it does in time. The numbers are those of the
// exact pole, correctly rounded; one that lies half way between two float64 to
// 4096 bits counts as half way.
type Mode struct {
	Pole poly.Root // of conjugate pairs the upper one
	// TimeConstant is 1/|Re pole| in seconds, in which the mode falls to 1/e or
	// grows by e; it is 0 for a pole on the imaginary axis.
	TimeConstant float64
	// NaturalFrequency is |pole| in rad/s.
	NaturalFrequency float64
	// DampingRatio is −Re pole/|pole|: 1 for a real mode that decays, 0 for one
	// that neither decays nor grows, negative for one that grows.
	DampingRatio float64
	_            [0]func()
}

// modesOf returns the modes of some poles in their order.
func modesOf(poles []poly.Root) ([]Mode, error) {
	var out []Mode
	for _, p := range poles {
		if imag(p.Value) < 0 {
			continue
		}
		m, err := modeOf(p)
		if err != nil {
			return nil, err
		}
		out = append(out, m)
	}
	return out, nil
}

func modeOf(p poly.Root) (m Mode, err error) {
	m = Mode{Pole: p, NaturalFrequency: math.Abs(real(p.Value)) + math.Abs(imag(p.Value))}
	switch {
	case p.IsImaginary():
		return m, nil
	case p.IsReal():
		m.DampingRatio = math.Copysign(1, -real(p.Value))
		if r, ok := p.Rat(); ok {
			m.TimeConstant, _ = r.Inv(r.Abs(r)).Float64()
			if math.IsInf(m.TimeConstant, 0) {
				err = fault.ErrRange
			}
			return m, err
		}
	default:
		if m.NaturalFrequency, err = nearestOf(p, ball.Complex.Abs); err != nil {
			return m, err
		}
		if m.DampingRatio, err = nearestOf(p, func(z ball.Complex, prec uint) ball.Real { return z.Re.Neg().Div(z.Abs(prec), prec) }); err != nil {
			return m, err
		}
	}
	m.TimeConstant, err = nearestOf(p, func(z ball.Complex, prec uint) ball.Real { return z.Re.Abs().Inv(prec) })
	return m, err
}

// nearestOf returns the float64 nearest to a function of a root.
func nearestOf(p poly.Root, f func(z ball.Complex, prec uint) ball.Real) (float64, error) {
	at := func(prec uint) (ball.Real, error) {
		disc, err := p.Enclosure(prec)
		if err != nil {
			return ball.Real{}, err
		}
		// Each component is correctly rounded to prec + 2 bits.
		part := func(mid *big.Float) ball.Real {
			return ball.NewReal(mid, new(big.Float).SetMantExp(new(big.Float).Abs(mid), -int(prec)-2))
		}
		return f(ball.NewComplex(part(disc.Real), part(disc.Imaginary)), prec), nil
	}
	v, err := ball.Round(firstBits, lastBits, at)
	if !errors.Is(err, ErrLimit) {
		return v, err
	}
	x, err := at(lastBits)
	if err != nil {
		return 0, err
	}
	const half = 54 // one bit more than a float64: the point half way, and then to even
	v, _ = new(big.Float).SetPrec(half).Set(x.Mid()).Float64()
	return v, nil
}

// times writes a root with its unit and its multiplicity.
func times(r poly.Root, unit string) string {
	s := place(r) + unit
	if r.Multiplicity > 1 {
		s += fmt.Sprintf(", %d times", r.Multiplicity)
	}
	return s
}

// String is the mode in words, with four digits: "-0.5 ± 2i rad/s: natural
// frequency 2.062 rad/s, damping ratio 0.2425, decays with a time constant of
// 2 s".
func (m Mode) String() string {
	s := times(m.Pole, " rad/s") + ": "
	if !m.Pole.IsReal() {
		s += fmt.Sprintf("natural frequency %.4g rad/s, ", m.NaturalFrequency)
		if !m.Pole.IsImaginary() {
			s += fmt.Sprintf("damping ratio %.4g, ", m.DampingRatio)
		}
	}
	switch {
	case real(m.Pole.Value) < 0:
		return s + fmt.Sprintf("decays with a time constant of %.4g s", m.TimeConstant)
	case real(m.Pole.Value) > 0:
		return s + fmt.Sprintf("grows with a time constant of %.4g s", m.TimeConstant)
	case !m.Pole.IsReal():
		return s + "undamped"
	}
	return s + "integrates"
}

// Modes are modes of a diagram, as roots in s or in z by the kind of its blocks.
type Modes[G tf.Block[G]] []poly.Root

// String lists the modes with four digits, a conjugate pair as one and those in s
// in rad/s: "s = -0.5 rad/s, 2 times; s = -1 ± 2i rad/s", "z = 0.9", or "none".
func (m Modes[G]) String() string {
	variable, unit := "s", " rad/s"
	if _, discrete := any(*new(G)).(tf.Discrete); discrete {
		variable, unit = "z", ""
	}
	var texts []string
	for _, r := range m {
		if imag(r.Value) >= 0 {
			texts = append(texts, variable+" = "+times(r, unit))
		}
	}
	if len(texts) == 0 {
		return "none"
	}
	return strings.Join(texts, "; ")
}
