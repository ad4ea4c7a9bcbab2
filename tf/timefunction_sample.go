package tf

import (
	"fmt"
	"math"
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/exponential"
	"github.com/qofs/qofs/internal/fault"
)

// MaxSamples bounds what Sample returns.
const MaxSamples = 1 << 24

// Sample returns the n values at the exact products k·dt, k = 0 … n−1, each
// correctly rounded: not at the float64 next to them, so that Sample(0.1, 4)
// ends at three times the float64 0.1. dt is in seconds.
//
// The errors are those of At for the first value that has one, ErrNotFinite
// for a dt that is not a finite number or is negative, and ErrLimit for a
// negative n or more than MaxSamples values.
func (f TimeFunction) Sample(dt float64, n int) ([]float64, error) {
	if math.IsNaN(dt) || math.IsInf(dt, 0) || dt < 0 {
		return nil, fmt.Errorf("tf: sampling step %v, want a finite number ≥ 0: %w", dt, fault.ErrNotFinite)
	}
	if n < 0 || n > MaxSamples {
		return nil, fmt.Errorf("tf: %d samples, want 0 to %d: %w", n, MaxSamples, fault.ErrLimit)
	}
	y := make([]float64, n)
	if f.e == nil || n == 0 {
		return y, nil
	}
	first, offset := f.firstSample(dt, n)
	s := sampler{e: f.e, dt: dt, offset: offset, first: first, exact: f.delay}
	return y, s.fill(y)
}

// firstSample returns the first k with k·dt at or after the dead time, at most
// n, and how long after it that is.
func (f TimeFunction) firstSample(dt float64, n int) (int, double) {
	if f.delay == nil {
		return 0, double{}
	}
	step := new(big.Rat).SetFloat64(dt)
	if step.Sign() == 0 {
		return n, double{}
	}
	q := new(big.Rat).Quo(f.delay, step)
	k := new(big.Int).Quo(q.Num(), q.Denom())
	if !q.IsInt() {
		k.Add(k, big.NewInt(1))
	}
	if !k.IsInt64() || k.Int64() >= int64(n) {
		return n, double{}
	}
	offset := new(big.Rat).Mul(new(big.Rat).SetInt(k), step)
	return int(k.Int64()), doubleOf(offset.Sub(offset, f.delay))
}

// doubleOf returns the nearest double-double.
func doubleOf(r *big.Rat) double {
	h, _ := r.Float64()
	if math.IsInf(h, 0) {
		return double{h, 0}
	}
	l, _ := new(big.Rat).Sub(r, new(big.Rat).SetFloat64(h)).Float64()
	return double{h, l}
}

// sampler evaluates on a grid. With t = anchor + j·dt every function
// t^k e^(σt) cos ωt is a sum of products of a number that belongs to the anchor
// and one that belongs to j; these are tabulated, so that a sample costs one
// double-double product for each pole.
type sampler struct {
	e      *expansion
	dt     float64
	offset double   // time at sample first
	first  int      // the first sample after the dead time
	exact  *big.Rat // the dead time; nil is 0

	order  int
	block  int
	table  []double  // block rows of order entries
	sizes  []float64 // bounds of the absolute values in each column of the table
	anchor []double
}

func (s *sampler) fill(y []float64) error {
	count := len(y) - s.first
	q := s.e.prepare()
	if q == nil || count < 8 || !s.tabulate(q, count) {
		for k := s.first; k < len(y); k++ {
			if err := s.one(y, k); err != nil {
				return err
			}
		}
		return nil
	}
	for start := 0; start < count; start += s.block {
		m := min(s.block, count-start)
		out := y[s.first+start:][:m]
		decided := 0
		if bound, ok := s.anchorAt(q, s.time(start)); ok {
			decided = s.rows(out, bound*quickError)
		}
		if decided == m {
			continue
		}
		for k := range out {
			if out[k] == 0 { // undecided
				if err := s.one(y, s.first+start+k); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// time returns offset + k·dt with a relative error below 2^−104.
func (s *sampler) time(k int) double {
	p := float64(float64(k) * s.dt)
	return s.offset.plus(double{p, math.FMA(float64(k), s.dt, -p)})
}

// one evaluates a single sample.
func (s *sampler) one(y []float64, k int) error {
	t := s.time(k - s.first)
	v, ok := s.e.quickAt(t.h, t.l)
	if !ok {
		x := new(big.Rat).SetFloat64(s.dt)
		x.Mul(x, big.NewRat(int64(k), 1))
		if s.exact != nil {
			x.Sub(x, s.exact)
		}
		var err error
		if v, err = s.e.at(x); err != nil {
			return err
		}
	}
	y[k] = v
	return nil
}

// tabulate fills the table; it fails where the functions leave the range of
// the first stage within a block.
func (s *sampler) tabulate(q *quick, count int) bool {
	s.order = q.order
	s.block = 1 << ((bits.Len(uint(count)) + 1) / 2)
	s.block = min(max(s.block, 8), 256)
	s.table = make([]double, s.block*s.order)
	s.sizes = make([]float64, s.order)
	s.anchor = make([]double, s.order)
	column := 0
	for i := range q.modes {
		m := &q.modes[i]
		for j := range s.block {
			row := s.table[j*s.order+column:]
			p := float64(float64(j) * s.dt)
			tau := double{p, math.FMA(float64(j), s.dt, -p)}
			if !(tau.h == 0 || tau.h > 0x1p-300 && tau.h < 0x1p300) {
				return false
			}
			c, d, ok := m.exponential(tau)
			if !ok {
				return false
			}
			for k := range m.amplitudes {
				if k > 0 {
					c = product2(c, tau.h, tau.l)
					d = product2(d, tau.h, tau.l)
				}
				if m.pair {
					row[2*k], row[2*k+1] = c, d
				} else {
					row[k] = c
				}
			}
			s.measure(row, column, m, tau.h)
		}
		column += m.width() * len(m.amplitudes)
	}
	for _, v := range s.sizes {
		if !(v < 0x1p300) {
			return false
		}
	}
	return true
}

// measure raises the sizes to those of a row. An exponential below e^−600 is
// 0 in the table; its true size counts so much that the bound, a
// quickError-th of it, covers it.
func (s *sampler) measure(row []double, column int, m *mode, tau float64) {
	power := 1.0
	for k := range m.amplitudes {
		neglected := float64(power*negligible) / quickError
		power *= tau
		for i := k * m.width(); i < (k+1)*m.width(); i++ {
			s.sizes[column+i] = max(s.sizes[column+i], math.Abs(row[i].h), neglected)
		}
	}
}

// width is how many columns belong to each power of t.
func (m *mode) width() int {
	if m.pair {
		return 2
	}
	return 1
}

// exponential returns e^(σt)·cos ωt and e^(σt)·sin ωt. Below e^−600 they are 0,
// which the bound of anchorAt covers.
func (m *mode) exponential(t double) (c, d double, ok bool) {
	x := product2(m.sigma, t.h, t.l)
	if x.h < -exponential.MaxExp {
		return double{}, double{}, true
	}
	if x.h > exponential.MaxExp {
		return double{}, double{}, false
	}
	c.h, c.l = exponential.Exp(x.h, x.l)
	if !m.pair {
		return c, double{}, true
	}
	y := product2(m.omega, t.h, t.l)
	if y.h > exponential.MaxAngle {
		return double{}, double{}, false
	}
	sh, sl, ch, cl := exponential.SinCos(y.h, y.l)
	return product2(c, ch, cl), product2(c, sh, sl), true
}

// anchorAt fills the anchor for the time t and returns a bound of
// Σ|anchor|·|table| over the block, with the share of what was neglected.
//
// The polynomial Σ c_k (t+τ)^k of a mode is Σ d_k τ^k, by repeated synthetic
// division. With c = e^(σt) cos ωt and d = e^(σt) sin ωt, a cos ω(t+τ) + b sin ω(t+τ)
// takes a·c + b·d times the column of cos ωτ, and b·c − a·d times that of sin ωτ.
func (s *sampler) anchorAt(q *quick, t double) (bound float64, ok bool) {
	if !(t.h >= 0 && t.h < 0x1p300) {
		return 0, false
	}
	column := 0
	for i := range q.modes {
		m := &q.modes[i]
		c, d, ok := m.exponential(t)
		if !ok {
			return 0, false
		}
		size := (math.Abs(c.h) + math.Abs(d.h)) * (1 + 0x1p-40)
		n := len(m.amplitudes)
		for k := range n {
			a, b, magnitude := m.shifted(k, t)
			sizes := s.sizes[column:]
			if m.pair {
				s.anchor[column] = product2(a, c.h, c.l).plus(product2(b, d.h, d.l))
				s.anchor[column+1] = product2(b, c.h, c.l).plus(product2(double{-a.h, -a.l}, d.h, d.l))
				bound += magnitude*size*(sizes[0]+sizes[1]) + magnitude*(1+sizes[0]+sizes[1])*(negligible/quickError)
				column += 2
			} else {
				s.anchor[column] = product2(a, c.h, c.l)
				bound += magnitude*size*sizes[0] + magnitude*(1+sizes[0])*(negligible/quickError)
				column++
			}
		}
	}
	return bound * (1 + 0x1p-40), true
}

// shifted returns the coefficient of τ^k in Σ c_j (t+τ)^j, which is
// Σ_j C(j,k) t^(j−k) c_j, and a bound of the sum of absolute values.
func (m *mode) shifted(k int, t double) (a, b double, magnitude float64) {
	n := len(m.amplitudes)
	if n == 1 {
		c := &m.amplitudes[0]
		return c.a, c.b, c.magnitude
	}
	// Horner in t with the binomials C(j,k) by exact recurrence.
	binomials := make([]float64, n)
	binomials[k] = 1
	for j := k + 1; j < n; j++ {
		binomials[j] = binomials[j-1] * float64(j) / float64(j-k)
	}
	for j := n - 1; j >= k; j-- {
		c := &m.amplitudes[j]
		a = product2(a, t.h, t.l).plus(product2(c.a, binomials[j], 0))
		b = product2(b, t.h, t.l).plus(product2(c.b, binomials[j], 0))
		magnitude = (float64(magnitude*t.h) + float64(c.magnitude*binomials[j])) * (1 + 0x1p-40)
	}
	return a, b, magnitude
}

// rows multiplies the table by the anchor and rounds; it returns how many
// values are decided and leaves 0 in the others.
func (s *sampler) rows(out []float64, bound float64) (decided int) {
	anchor := s.anchor
	n := len(anchor)
	for j := range out {
		row := s.table[j*n:][:n]
		var h, l float64
		for i, a := range anchor {
			b := row[i]
			p := float64(a.h * b.h)
			e := math.FMA(a.h, b.h, -p)
			e = math.FMA(a.h, b.l, math.FMA(a.l, b.h, e))
			sum := h + p
			t := sum - h
			l += ((h - (sum - t)) + (p - t)) + e
			h = sum
		}
		v := h + (l - bound)
		if size := math.Abs(v); v == h+(l+bound) && size > smallest && size < largest {
			out[j] = v
			decided++
		}
	}
	return decided
}
