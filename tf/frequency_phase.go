package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
)

// rootAngles are the roots whose angles add up to the phase.
type rootAngles struct {
	quarters int // phase for ω → 0+, in quarter turns: roots at 0 and the sign
	zeros    []poly.Root
	poles    []poly.Root
}

// newRootAngles finds zeros and poles.
func (f *frequencyFunction) newRootAngles() (*rootAngles, error) {
	num, den := f.c.f.Num(), f.c.f.Den()
	low, below := num.Valuation(), den.Valuation()
	r := &rootAngles{quarters: low - below}
	if num.Sign(low) != den.Sign(below) {
		r.quarters -= 2
	}
	var err error
	if r.zeros, err = asPoly(num.QuoPower(low)).Roots(); err != nil {
		return nil, err
	}
	r.poles, err = asPoly(den.QuoPower(below)).Roots()
	return r, err
}

// Phase returns the phase of g(jω) in radians, dead time included, correctly
// rounded. It is not reduced to one turn: it is the sum of the angles of the
// factors, which makes it continuous along ω except at zeros and poles on the
// axis, and these rules fix it:
//   - a factor 1 − s/z has the angle 0 at ω = 0;
//   - a factor s has π/2, and where the function, without the factors s, is
//     negative at ω = 0, the phase starts with −π more;
//   - passing a zero on the axis upwards adds π for each time that it occurs,
//     as if it lay a little to the left of the axis; passing a pole takes π off;
//   - dead time takes off ω·T;
//   - the phase at −ω is that at ω with the other sign.
//
// The errors are those of Continuous.At, ErrZeroValue where the value is 0, and
// those of Poles and Zeros.
func (f FrequencyFunction) Phase(omega float64) (float64, error) {
	if omega < 0 {
		v, err := f.Phase(-omega)
		return 0 - v, err
	}
	d := f.data()
	v, err := d.sidesAt(omega, "Phase")
	if err != nil {
		return 0, err
	}
	if v.isZero() {
		return 0, fmt.Errorf("tf: Phase at the frequency %v: %w", omega, ErrZeroValue)
	}
	angles, err := d.angles()
	if err != nil {
		return 0, err
	}
	q := v.quotient()
	turns, err := angles.turns(omega, &q)
	if err != nil {
		return 0, err
	}
	lag := exactFloat(omega)
	lag.Mul(lag, d.c.delaySeconds())
	if q.im.Sign() == 0 && q.re.Sign() > 0 && turns == 0 { // a rational phase
		v, _ := new(big.Rat).Neg(lag).Float64()
		if math.IsInf(v, 0) {
			return 0, fmt.Errorf("tf: Phase at the frequency %v: %w", omega, fault.ErrRange)
		}
		return v + 0, nil
	}
	// The angle of a number with rational components is 0 or transcendental
	// (Lindemann 1882), and lag is rational, so that the loop ends.
	return ball.Round(frequencyStartBits, frequencyLimitBits, func(prec uint) (ball.Real, error) {
		phase := q.angle(prec)
		if turns != 0 {
			phase = phase.Add(ball.Pi(prec).Mul(ball.FromInt64(2*int64(turns)), prec), prec)
		}
		return phase.Sub(ball.FromRat(lag, prec), prec), nil
	})
}

// angle is the angle of the quotient in (−π, π].
func (q *complexQuotient) angle(prec uint) ball.Real {
	return ball.Atan2(ball.FromInt(q.im).Round(prec), ball.FromInt(q.re).Round(prec), prec)
}

// turns is the whole number of turns between the sum of the angles of the
// factors and the angle of the value q.
func (r *rootAngles) turns(omega float64, q *complexQuotient) (int, error) {
	for prec := uint(64); prec <= frequencyLimitBits; prec *= 2 {
		sum := ball.Pi(prec).Mul(ball.FromInt64(int64(r.quarters)), prec).MulPow2(-1)
		if omega != 0 {
			zeros, err := sumAngles(r.zeros, omega, prec)
			if err != nil {
				return 0, err
			}
			poles, err := sumAngles(r.poles, omega, prec)
			if err != nil {
				return 0, err
			}
			sum = sum.Add(zeros, prec).Sub(poles, prec)
		}
		n := sum.Sub(q.angle(prec), prec).Div(ball.Pi(prec).MulPow2(1), prec)
		if n.IsFinite() && n.Radius().Cmp(big.NewFloat(0.25)) < 0 {
			v, _ := n.Mid().Float64()
			return int(math.Round(v)), nil
		}
	}
	return 0, fmt.Errorf("tf: Phase at the frequency %v: %w", omega, fault.ErrLimit)
}

// sumAngles adds the angles of the factors 1 − jω/z, ω > 0.
func sumAngles(roots []poly.Root, omega float64, prec uint) (ball.Real, error) {
	var sum ball.Real
	w := ball.FromFloat64(omega)
	for _, root := range roots {
		disc, err := root.Enclosure(prec)
		if err != nil {
			return sum, err
		}
		sigma, nu := ball.NewReal(disc.Real, disc.Radius), ball.NewReal(disc.Imaginary, disc.Radius)
		var angle ball.Real
		if root.IsImaginary() {
			switch s, ok := w.Sub(nu, prec).Sign(); {
			case !ok:
				return ball.Indeterminate(), nil
			case s > 0 && imag(root.Value) > 0:
				angle = ball.Pi(prec)
			}
		} else {
			// −z turns to jω − z along a line parallel to the axis
			angle = w.Sub(nu, prec).Div(sigma, prec).Atan(prec).Add(nu.Div(sigma, prec).Atan(prec), prec).Neg()
		}
		sum = sum.Add(angle.Mul(ball.FromInt64(int64(root.Multiplicity)), prec), prec)
	}
	return sum, nil
}
