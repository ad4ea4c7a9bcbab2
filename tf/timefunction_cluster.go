package tf

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/dd"
)

// Poles that lie close together have large residues of opposite sign, whose
// terms cancel. The first stage takes such a cluster as one mode at a centre c:
// with δ_i = p_i − c,
//
//	Σ_i e^(p_i t)·Σ_j c_ij t^j/j! = e^(ct)·Σ_k t^k Σ_i Σ_j c_ij/j!·δ_i^(k−j)/(k−j)!
//
// where the moments, computed in balls, have cancelled before they are rounded.

const (
	clustering  = 0x1p-12 // relative distance of poles that form a cluster
	maxMoments  = 48
	leastMoment = 4
)

// tail bounds what the moments leave out: remainder·(t/until)^power for
// t ≤ until, times 1/quickError.
type tail struct {
	until, remainder float64
	power            int
}

func (r tail) at(t float64) float64 {
	u := t / r.until
	if !(u <= 1) {
		return math.Inf(1)
	}
	v := r.remainder
	for range r.power {
		v *= u
	}
	return v*(1+0x1p-40) + 0x1p-1000
}

// nearAxis reports whether a pole above the real axis forms a cluster with its
// conjugate.
func nearAxis(p complex128) bool { return imag(p) != 0 && 2*imag(p) <= clustering*math.Abs(real(p)) }

// clusters groups poles, each with all that are close to one of the group. Such
// a chain may be longer than the distance; the bound of the tail sees that.
func clusters(parts []principal) [][]principal {
	group := make([]int, len(parts))
	for i := range parts {
		group[i] = i
	}
	for i, p := range parts {
		for j, r := range parts[:i] {
			if !closeTogether(p.root.Value(), r.root.Value()) {
				continue
			}
			from, to := group[i], group[j]
			for k := range group {
				if group[k] == from {
					group[k] = to
				}
			}
		}
	}
	var out [][]principal
	for i := range parts {
		var members []principal
		for k, g := range group {
			if g == i {
				members = append(members, parts[k])
			}
		}
		if members != nil {
			out = append(out, members)
		}
	}
	return out
}

func closeTogether(p, q complex128) bool {
	d := p - q
	reach := clustering * max(math.Abs(real(p)), math.Abs(imag(p)))
	return math.Abs(real(d)) <= reach && math.Abs(imag(d)) <= reach
}

// newCluster returns the mode of several poles, their coefficients times 2^up.
// It fails where their precision does not suffice.
func newCluster(group []principal, up int) (m mode, ok bool) {
	const prec = 1024
	center := group[0].root.Value()
	m.pair = true
	for _, p := range group {
		if !p.pair || nearAxis(p.root.Value()) {
			m.pair = false
			center = complex(real(center), 0)
		}
	}
	m.sigma, m.omega = double{Hi: real(center)}, double{Hi: imag(center)}
	c := ball.FromComplex128(center)
	var reach float64
	var offsets []ball.Complex
	for _, p := range group {
		d := p.pole.Sub(c, prec)
		v, _ := d.Abs(64).Upper().Float64()
		reach = max(reach, v)
		offsets = append(offsets, d)
	}
	if !(reach > 0x1p-300) {
		return m, false
	}
	moments := make([]ball.Complex, maxMoments)
	weight := ball.Real{} // Σ|c_ij|/reach^j
	for i, p := range group {
		factor := 0
		if p.pair {
			factor = 1 // twice the real part
		}
		addMoments(moments, p.coefficients, offsets[i], up+factor)
		power := ball.FromInt64(1)
		for _, v := range p.coefficients {
			weight = weight.Add(v.Abs(64).MulPow2(up+factor).Div(power, 64), 64)
			power = power.Mul(ball.FromFloat64(reach), 64)
		}
	}
	return m, m.fill(moments, reach, weight)
}

// addMoments adds 2^up·Σ_j c_j/j!·δ^(k−j)/(k−j)! to the moments.
func addMoments(moments []ball.Complex, c []ball.Complex, delta ball.Complex, up int) {
	const prec = 1024
	powers := make([]ball.Complex, len(moments)) // δ^l/l!
	powers[0] = ball.FromComplex128(1)
	for l := 1; l < len(powers); l++ {
		powers[l] = powers[l-1].Mul(delta, prec).MulReal(ball.FromRat(big.NewRat(1, int64(l)), prec), prec)
	}
	factorial := new(big.Rat).SetInt64(1)
	for j, v := range c {
		if j > 0 {
			factorial.Quo(factorial, big.NewRat(int64(j), 1))
		}
		v = v.MulReal(ball.FromRat(factorial, prec), prec).MulPow2(up)
		for k := j; k < len(moments); k++ {
			moments[k] = moments[k].Add(v.Mul(powers[k-j], prec), prec)
		}
	}
}

// fill rounds the moments, as many as the tail asks for.
//
// With x = reach·t ≤ 1/2, Σ_{l≥L} x^l/l! ≤ 2·x^L/L!, so that K moments leave out at
// most 2·Σ|c_ij| t^j/j!·x^(K−j)/(K−j)! ≤ 2·weight·(2x)^K/K!.
func (m *mode) fill(moments []ball.Complex, reach float64, weight ball.Real) bool {
	w, _ := weight.Upper().Float64()
	until := 0.5 / reach * (1 - 0x1p-50)
	// The tail matters up to the end of the stage or of the mode.
	last := until
	if s := math.Abs(m.sigma.Hi); s > 0 {
		last = min(last, 600/s)
	}
	scale := last
	if size := max(math.Abs(m.sigma.Hi), m.omega.Hi); size > 0 {
		scale = min(scale, 1/size)
	}
	if !(w < 0x1p900) || until > 0x1p300 {
		return false
	}
	largest, power := 0.0, 1.0
	errors := make([]float64, len(moments))
	for k, v := range moments {
		if !m.pair {
			v.Im = ball.Real{}
		}
		v.Im = v.Im.Neg()
		a := amplitude{a: nearestDouble(v.Re), b: nearestDouble(v.Im)}
		above, _ := v.Re.Radius().Float64()
		beside, _ := v.Im.Radius().Float64()
		a.magnitude = (math.Abs(a.a.Hi) + math.Abs(a.b.Hi)) * (1 + 0x1p-50)
		errors[k] = above + beside
		if k > 0 {
			power *= scale
		}
		largest = max(largest, a.magnitude*power)
		m.amplitudes = append(m.amplitudes, a)
	}
	if !(largest > 0x1p-700 && largest < 0x1p300) {
		return false
	}
	power = 1
	remainder := 2 * w
	for k := range moments {
		if !(errors[k]*power <= largest*0x1p-106) {
			return false
		}
		m.amplitudes[k].magnitude += errors[k] / quickError
		power *= scale
		remainder /= float64(k + 1)
		m.tail = tail{until: until, remainder: remainder * (1 + 0x1p-40) / quickError, power: k + 1}
		if k+1 >= leastMoment && m.tail.at(last)*quickError <= largest*0x1p-90 {
			m.amplitudes = m.amplitudes[:k+1]
			return true
		}
	}
	return true
}

// nearestDouble returns the double nearest to the midpoint of x.
func nearestDouble(x ball.Real) double {
	mid := x.Mid()
	h, _ := mid.Float64()
	l, _ := new(big.Float).Sub(mid, new(big.Float).SetFloat64(h)).Float64()
	return dd.Pair(h, l)
}
