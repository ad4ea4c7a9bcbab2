package identify

import "math"

// lag is the unit-gain second-order lag a2·x” + a1·x' + x = u, of first order
// where a2 is 0, with its two numbers for a step of the exponential kept, because
// the steps of a record are mostly equal.
type lag struct {
	a1, a2 float64
	h      [2]float64    // the last two lengths of a step
	phi    [2][4]float64 // and the transition matrices
	next   int
}

// transition returns the matrix by which x and x' of the free motion go on after
// h.
func (l *lag) transition(h float64) *[4]float64 {
	for k := range l.h {
		if l.h[k] == h {
			return &l.phi[k]
		}
	}
	k := l.next
	l.next = 1 - k
	l.h[k] = h
	if l.a2 == 0 {
		l.phi[k] = [4]float64{math.Exp(-h / l.a1)}
		return &l.phi[k]
	}
	// e^(A h) = e^(−m h)·(c(h)·I + s(h)·(A + m·I)) for the mean m of the poles and
	// d = m² − 1/a2, where c is cosh(√d h) and s sinh(√d h)/√d, or cos and sin.
	m := l.a1 / (2 * l.a2)
	d := m*m - 1/l.a2
	var c, s float64
	switch root := math.Sqrt(math.Abs(d)); {
	case root*h < 1e-4: // between the two
		c, s = math.Exp(-m*h)*(1+d*h*h/2), math.Exp(-m*h)*h*(1+d*h*h/6)
	case d > 0:
		fast, slow := math.Exp(-(m+root)*h), math.Exp(-h/(l.a2*(m+root))) // the product of the poles is 1/a2
		c, s = (slow+fast)/2, (slow-fast)/(2*root)
	default:
		e := math.Exp(-m * h)
		c, s = e*math.Cos(root*h), e*math.Sin(root*h)/root
	}
	l.phi[k] = [4]float64{c + m*s, s, -s / l.a2, c - m*s}
	return &l.phi[k]
}

// step takes x and x' over h while the input runs from u along a slope.
func (l *lag) step(x, v, u, slope, h float64) (float64, float64) {
	if h == 0 {
		return x, v
	}
	p := l.transition(h)
	// The particular solution is u(t) − a1·slope.
	x -= u - l.a1*slope
	end := u + slope*h - l.a1*slope
	if l.a2 == 0 {
		return p[0]*x + end, 0
	}
	v -= slope
	return p[0]*x + p[1]*v + end, p[2]*x + p[3]*v + slope
}

// respond writes the response of a unit-gain lag with dead time to the input of
// the record less its first value, at the instants of the record, exactly but for
// float64: the steps end wherever an instant or a delayed change of the input
// lies.
func (r Record) respond(out []float64, l *lag, delay float64) {
	r.walk(out, delay, func(x, v, u, slope, h float64) (float64, float64) { return l.step(x, v, u, slope, h) })
}

// integrate is respond for a unit integrator.
func (r Record) integrate(out []float64, delay float64) {
	r.walk(out, delay, func(x, v, u, slope, h float64) (float64, float64) { return x + h*(u+slope*h/2), 0 })
}

// walk takes a system through the delayed input.
func (r Record) walk(out []float64, delay float64, step func(x, v, u, slope, h float64) (float64, float64)) {
	var x, v, u, slope float64 // u: the delayed input at the instant now
	now := r.time[0]
	next := 0 // the row whose delayed input comes next
	for i, t := range r.time {
		for next < len(r.time) && r.time[next]+delay <= t {
			at := r.time[next] + delay
			h := max(0, at-now)
			x, v = step(x, v, u, slope, h)
			now = max(now, at)
			u, slope = r.u[next]-r.u[0], 0
			if r.joined && next+1 < len(r.time) {
				if d := r.time[next+1] - r.time[next]; d > 0 {
					slope = (r.u[next+1] - r.u[next]) / d
				}
			}
			next++
		}
		h := t - now
		x, v = step(x, v, u, slope, h)
		u, now = u+slope*h, t
		out[i] = x
	}
}
