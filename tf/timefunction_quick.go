package tf

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/dd"
)

// The first stage: the same sum as in the certified stage, in double-double
// with a rigorous bound of the error. It answers where the bound leaves one
// float64, which is nearly always; else the certified stage does.
//
// Errors, relative to Σ|c_k|t^k·e^(σt) of a mode: poles and coefficients are
// stored to 2^−104, so the exponent σt, at most 600, is known to 2^−93 and
// the angle ωt, at most 2^20, to 2^−82; the exponential is within 2^−81, sine
// and cosine within 2^−79, products and sums within 2^−98. Together that is
// less than 2^−78.
const (
	quickError = 0x1p-77
	smallest   = 0x1p-800 // of results that the bound covers
	largest    = 0x1p+1000
	negligible = 0x1p-860 // above e^−600
)

// double is the sum of two float64.
type double = dd.DD

// quick is what the first stage needs of an expansion. Everything is multiplied
// by a power of 2, and results by scale, its inverse; it differs from 1 where
// the coefficients are very large or small.
type quick struct {
	modes  []mode
	order  int
	scale  float64
	taylor taylorSeries
}

// mode is the part of one pole or of a cluster of poles:
// e^(σt)·Σ t^k (a_k cos ωt + b_k sin ωt).
type mode struct {
	sigma, omega double
	amplitudes   []amplitude
	pair         bool
	tail         tail // what the sum leaves out for a cluster
}

type amplitude struct {
	a, b      double
	magnitude float64 // at least |a| + |b|
}

// doubled returns the double nearest to the midpoint of x, and whether its
// error is at most 2^−104·scale; it fails outside a range in which products
// do not overflow, and underflow by less than 2^−1000.
func doubled(x ball.Real, scale float64) (double, bool) {
	if x.IsZero() {
		return double{}, true
	}
	mid := x.Mid()
	h, _ := mid.Float64()
	l, _ := new(big.Float).Sub(mid, new(big.Float).SetFloat64(h)).Float64()
	radius, _ := x.Radius().Float64()
	ok := math.Abs(h) < 0x1p300 && scale > 0x1p-900 && radius <= scale*0x1p-106
	return dd.Pair(h, l), ok
}

// prepare derives the first stage from the lowest rung that suffices; nil
// where none does.
func (e *expansion) prepare() *quick {
	e.stage.Do(func() {
		for i := range 4 {
			parts, err := e.principals(i)
			if err != nil {
				return
			}
			if q, ok := newQuick(parts); ok {
				q.taylor.until, q.taylor.scale = e.seriesRange()
				e.quick = q
				return
			}
		}
	})
	return e.quick
}

func newQuick(parts []principal) (*quick, bool) {
	q := &quick{modes: make([]mode, len(parts)), scale: 1}
	up := 0
	if top := largestExponent(parts); top < -200 || top > 200 {
		if top < -1000 || top > 1000 {
			return nil, false
		}
		up, q.scale = -top, math.Ldexp(1, top)
	}
	q.modes = q.modes[:0]
	for _, group := range clusters(parts) {
		var m mode
		var ok bool
		if len(group) == 1 && !nearAxis(group[0].root.Value()) {
			m, ok = newMode(group[0], up)
		} else {
			m, ok = newCluster(group, up)
		}
		if !ok || !inRange(m.sigma.Hi) || !inRange(m.omega.Hi) {
			return nil, false
		}
		q.order += len(m.amplitudes) * m.width()
		q.modes = append(q.modes, m)
	}
	return q, true
}

// newMode returns the mode of one pole, its coefficients times 2^up.
func newMode(p principal, up int) (m mode, ok bool) {
	m.pair = p.pair
	var ok1, ok2 bool
	// Each component to its own relative precision, as enclosure gives them.
	m.sigma, ok1 = doubled(p.pole.Re, midpoint(p.pole.Re))
	m.omega, ok2 = doubled(p.pole.Im, midpoint(p.pole.Im))
	if !ok1 || !ok2 {
		return m, false
	}
	m.amplitudes = make([]amplitude, len(p.coefficients))
	factorial := big.NewRat(1, 1)
	if p.pair {
		factorial.SetInt64(2)
	}
	for k, c := range p.coefficients {
		if k > 0 {
			factorial.Quo(factorial, big.NewRat(int64(k), 1))
		}
		scale := ball.FromRat(factorial, 256)
		re, im := c.Re.Mul(scale, 256).MulPow2(up), c.Im.Mul(scale, 256).MulPow2(up).Neg()
		size := max(midpoint(re), midpoint(im))
		var a amplitude
		a.a, ok1 = doubled(re, size)
		a.b, ok2 = doubled(im, size)
		a.magnitude = (math.Abs(a.a.Hi) + math.Abs(a.b.Hi)) * (1 + 0x1p-50)
		if !ok1 || !ok2 {
			return m, false
		}
		m.amplitudes[k] = a
	}
	return m, true
}

// inRange reports whether x is 0 or products with a time in the range of the
// stage are far from overflow and underflow.
func inRange(x float64) bool {
	x = math.Abs(x)
	return x == 0 || x > 0x1p-300 && x < 0x1p300
}

// largestExponent returns n such that the largest coefficient is near 2^n.
func largestExponent(parts []principal) int {
	n := math.MinInt32
	for _, p := range parts {
		for _, c := range p.coefficients {
			for _, v := range []ball.Real{c.Re, c.Im} {
				if mid := v.Mid(); mid.Sign() != 0 {
					n = max(n, mid.MantExp(nil))
				}
			}
		}
	}
	return n
}

// midpoint returns |mid x| as a float64.
func midpoint(x ball.Real) float64 {
	v, _ := x.Mid().Float64()
	return math.Abs(v)
}

// quickAt returns the value at th + tl > 0 where the first stage decides it.
// The time may have a relative error of 2^−104.
func (e *expansion) quickAt(th, tl float64) (float64, bool) {
	if !(th > 0x1p-300 && th < 0x1p300) {
		return 0, false
	}
	q := e.prepare()
	if q == nil {
		return 0, false
	}
	if th < q.taylor.until/16 {
		if v, ok := q.near(e, th, tl); ok {
			return v, true
		}
	}
	sum, bound, isZero := q.far(th, tl)
	if isZero && q.scale <= 1 {
		return 0, true
	}
	if v, ok := settle(sum, bound, q.scale); ok {
		return v, true
	}
	if th < q.taylor.until {
		return q.near(e, th, tl)
	}
	return 0, false
}

// far returns the sum of the modes and a bound of its error, +Inf where the
// stage does not reach; isZero tells that the sum is below half the smallest
// subnormal number.
func (q *quick) far(th, tl float64) (sum double, bound float64, isZero bool) {
	top := math.Inf(-1) // log2 of the modes, where all are below e^−600
	for i := range q.modes {
		m := &q.modes[i]
		a, b, magnitude := m.amplitudesAt(th, tl)
		if m.tail.until > 0 {
			magnitude += m.tail.at(th)
		}
		x := m.sigma.Mul(dd.Pair(th, tl))
		if x.Hi < -dd.MaxExp {
			bound += magnitude * (negligible / quickError)
			top = max(top, 1.44*x.Hi+math.Log2(magnitude)+1)
			continue
		}
		if x.Hi > dd.MaxExp {
			return double{}, math.Inf(1), false
		}
		top = math.Inf(1)
		decay := dd.Exp(x)
		if m.pair {
			y := m.omega.Mul(dd.Pair(th, tl))
			if y.Hi > dd.MaxAngle {
				return double{}, math.Inf(1), false
			}
			sin, cos := dd.SinCos(y)
			sh, sl, ch, cl := sin.Hi, sin.Lo, cos.Hi, cos.Lo
			a = a.Mul(dd.Pair(ch, cl)).AddLoose(b.Mul(dd.Pair(sh, sl)))
		}
		sum = sum.AddLoose(a.Mul(decay))
		bound += magnitude * decay.Hi
	}
	return sum, bound * quickError, top+float64(len(q.modes)) < -1080
}

// amplitudesAt returns Σ t^k a_k and Σ t^k b_k and a bound of Σ t^k(|a_k|+|b_k|).
func (m *mode) amplitudesAt(th, tl float64) (a, b double, magnitude float64) {
	last := len(m.amplitudes) - 1
	a, b, magnitude = m.amplitudes[last].a, m.amplitudes[last].b, m.amplitudes[last].magnitude
	for k := last - 1; k >= 0; k-- {
		c := &m.amplitudes[k]
		a = a.Mul(dd.Pair(th, tl)).AddLoose(c.a)
		if m.pair {
			b = b.Mul(dd.Pair(th, tl)).AddLoose(c.b)
		}
		magnitude = float64(magnitude*th)*(1+0x1p-50) + c.magnitude
	}
	return a, b, magnitude
}

// near returns the value of the series where that decides it.
func (q *quick) near(e *expansion, th, tl float64) (float64, bool) {
	s := e.series(q)
	return s.settle(s.at(th, tl))
}

// settle rounds sum, times scale, where every number within bound of it rounds
// alike.
func settle(sum double, bound, scale float64) (float64, bool) {
	size := math.Abs(sum.Hi)
	if !(size > smallest && size < largest) {
		return 0, false
	}
	bound += size * 0x1p-100
	v := sum.Hi + (sum.Lo - bound)
	ok := v == sum.Hi+(sum.Lo+bound)
	if scale != 1 {
		return scaledBack(v, ok, scale)
	}
	return v, ok
}

// scaledBack returns v times the scale; it fails where that is no normal number,
// because it would be rounded again.
func scaledBack(v float64, ok bool, scale float64) (float64, bool) {
	v *= scale
	size := math.Abs(v)
	return v, ok && size > 0x1p-1020 && size < largest
}
