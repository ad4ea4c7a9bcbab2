package tf

import (
	"fmt"
	"math"
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/dd"
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
		return dd.Pair(h, 0)
	}
	l, _ := new(big.Rat).Sub(r, new(big.Rat).SetFloat64(h)).Float64()
	return dd.Pair(h, l)
}

// sampler evaluates on a grid. With t = anchor + j·dt every function
// t^k e^(σt) cos ωt is a sum of products of a number that belongs to the anchor
// and one that belongs to j; these are tabulated, so that a sample costs one
// product for each pole.
//
// The products are done in slices: a number is a1 + a2, where a1 is a multiple of
// 2^−slice of the largest, and the products of two such slices and their sum
// over all poles are exact in float64. What is left is 2^−slice smaller, and
// plain float64 suffices for it.
type sampler struct {
	e      *expansion
	dt     float64
	offset double   // time at sample first
	first  int      // the first sample after the dead time
	exact  *big.Rat // the dead time; nil is 0

	order   int
	block   int
	slice   int
	table   [3][]float64 // order columns of block entries, scaled to at most 1: b, b1 and b2
	sums    [2][]float64 // of one block: exact, and what is left
	scales  []float64    // the powers of 2 by which the columns were divided
	slack   []float64    // what the table neglects, times 1/quickError
	anchor  []part
	anchors []double
}

// part is an entry of the anchor.
type part struct{ a1, a2 float64 }

func (s *sampler) fill(y []float64) error {
	count := len(y) - s.first
	q := s.e.prepare()
	if q == nil || count < 8 || q.order > 256 || q.longest() > maxMoments || !s.tabulate(q, count) {
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
			decided = s.rows(out, bound)
			if q.scale != 1 {
				decided = q.unscaleAll(out)
			}
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

// longest is the largest number of powers of t in a mode; binomials are exact
// up to maxMoments.
func (q *quick) longest() int {
	n := 0
	for i := range q.modes {
		n = max(n, len(q.modes[i].amplitudes))
	}
	return n
}

// time returns offset + k·dt with a relative error below 2^−104.
func (s *sampler) time(k int) double {
	p := float64(float64(k) * s.dt)
	return s.offset.AddLoose(dd.Pair(p, math.FMA(float64(k), s.dt, -p)))
}

// one evaluates a single sample.
func (s *sampler) one(y []float64, k int) error {
	t := s.time(k - s.first)
	v, ok := s.quickly(t)
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

// quickly is quickAt with the series first: what the table left undecided
// cancels.
func (s *sampler) quickly(t double) (float64, bool) {
	if q := s.e.prepare(); q != nil && t.Hi < q.taylor.until && t.Hi > 0x1p-300 {
		if v, ok := q.near(s.e, t.Hi, t.Lo); ok {
			return v, true
		}
	}
	return s.e.quickAt(t.Hi, t.Lo)
}

// fine is the number of rows of the table whose exponentials are computed;
// the others are products of one of these and one of every fine-th.
const fine = 8

// tabulate fills the table; it fails where the functions leave the range of
// the first stage within a block.
func (s *sampler) tabulate(q *quick, count int) bool {
	s.order = q.order
	s.slice = (52 - bits.Len(uint(s.order))) / 2
	s.block = min(max(1<<(bits.Len(uint(count))/2+1), fine), 256)
	for i := range s.table {
		s.table[i] = make([]float64, s.block*s.order)
	}
	for i := range s.sums {
		s.sums[i] = make([]float64, s.block)
	}
	s.scales, s.slack = make([]float64, s.order), make([]float64, s.order)
	s.anchor, s.anchors = make([]part, s.order), make([]double, s.order)
	values := make([]double, s.block*s.order)
	column := 0
	for i := range q.modes {
		m := &q.modes[i]
		if !s.columns(m, values, column) {
			return false
		}
		column += m.width() * len(m.amplitudes)
	}
	round := math.Ldexp(1.5, 52-s.slice)
	for l := range s.scales {
		size := s.scales[l]
		if !(size < 0x1p300 && s.slack[l] < 0x1p300) {
			return false
		}
		_, exponent := math.Frexp(max(size, 0x1p-300))
		s.scales[l] = math.Ldexp(1, exponent)
		down := math.Ldexp(1, -exponent)
		b, b1, b2 := s.column(l, s.block)
		for j, v := range values[l*s.block:][:s.block] {
			h := float64(v.Hi * down)
			slice := (h + round) - round
			b[j], b1[j], b2[j] = h+float64(v.Lo*down), slice, (h-slice)+float64(v.Lo*down)
		}
	}
	return true
}

// columns fills the columns of one mode: for each power k those of
// τ^k e^(στ) cos ωτ and τ^k e^(στ) sin ωτ at τ = j·dt. An exponential below
// e^−600 is 0 there; slack keeps what it may be.
func (s *sampler) columns(m *mode, values []double, column int) bool {
	var near [fine]sliced
	for j := range near {
		c, d, ok := m.exponential(s.step(j))
		if !ok {
			return false
		}
		near[j] = sliceOf(c, d, s.slice)
	}
	var base sliced
	for j := range s.block {
		tau := s.step(j)
		if !(tau.Hi == 0 || tau.Hi > 0x1p-300 && tau.Hi < 0x1p300) {
			return false
		}
		c, d, ok := double{}, double{}, true
		if j%fine == 0 {
			if c, d, ok = m.exponential(tau); !ok {
				return false
			}
			base = sliceOf(c, d, s.slice)
		} else if m.pair {
			c, d = base.rotate(&near[j%fine])
		} else {
			c = base.times(&near[j%fine])
		}
		power := 1.0
		for k := range m.amplitudes {
			if k > 0 {
				c = c.Mul(tau)
				d = d.Mul(tau)
				power *= tau.Hi
			}
			l := column + k*m.width()
			values[l*s.block+j] = c
			s.scales[l] = max(s.scales[l], math.Abs(c.Hi)+math.Abs(d.Hi))
			s.slack[l] = max(s.slack[l], float64(power*negligible)/quickError)
			if m.pair {
				values[(l+1)*s.block+j] = d
				s.scales[l+1] = s.scales[l]
			}
		}
	}
	return true
}

// step returns j·dt.
func (s *sampler) step(j int) double {
	p := float64(float64(j) * s.dt)
	return dd.Pair(p, math.FMA(float64(j), s.dt, -p))
}

// width is how many columns belong to each power of t.
func (m *mode) width() int {
	if m.pair {
		return 2
	}
	return 1
}

// exponential returns e^(σt)·cos ωt and e^(σt)·sin ωt; below e^−600 they are 0.
func (m *mode) exponential(t double) (c, d double, ok bool) {
	x := m.sigma.Mul(t)
	if x.Hi < -dd.MaxExp {
		return double{}, double{}, true
	}
	if x.Hi > dd.MaxExp {
		return double{}, double{}, false
	}
	c = dd.Exp(x)
	if !m.pair {
		return c, double{}, true
	}
	y := m.omega.Mul(t)
	if y.Hi > dd.MaxAngle {
		return double{}, double{}, false
	}
	sin, cos := dd.SinCos(y)
	sh, sl, ch, cl := sin.Hi, sin.Lo, cos.Hi, cos.Lo
	return c.Mul(dd.Pair(ch, cl)), c.Mul(dd.Pair(sh, sl)), true
}

// anchorAt fills the anchor for the time t and returns a bound of the error of
// a row. It fails outside the range of the first stage.
//
// The polynomial Σ c_k (t+τ)^k of a mode is Σ d_k τ^k. With
// c = e^(σt) cos ωt and d = e^(σt) sin ωt, a cos ω(t+τ) + b sin ω(t+τ) takes
// a·c + b·d times the column of cos ωτ, and b·c − a·d times that of sin ωτ.
//
// The anchor is within 2^−77 of its size, as At is, and the table within 2^−74.5
// of the scales, which bound |cos| + |sin|; 4 scales allow for both. The slices leave 2^−(slice+53) of the largest anchor for each
// of three products, sums included 4·order times as much.
func (s *sampler) anchorAt(q *quick, t double) (bound float64, ok bool) {
	if !(t.Hi >= 0 && t.Hi < 0x1p300) {
		return 0, false
	}
	column := 0
	for i := range q.modes {
		m := &q.modes[i]
		c, d, ok := m.exponential(t)
		if !ok {
			return 0, false
		}
		size := math.Abs(c.Hi) + math.Abs(d.Hi) + negligible/quickError
		for k := range m.amplitudes {
			a, b, magnitude := m.shifted(k, t)
			if k == 0 && m.tail.until > 0 {
				magnitude += m.tail.at(t.Hi + float64(float64(s.block)*s.dt))
			}
			scale, slack := s.scales[column], s.slack[column]
			bound += magnitude * (size*(4*scale+slack) + 4*scale*(negligible/quickError))
			s.anchors[column] = a.Mul(c)
			if m.pair {
				bound += magnitude * size * 4 * s.scales[column+1]
				s.anchors[column] = s.anchors[column].AddLoose(b.Mul(d))
				s.anchors[column+1] = b.Mul(c).AddLoose(dd.Pair(-a.Hi, -a.Lo).Mul(d))
			}
			column += m.width()
		}
	}
	largest := 0.0
	for l, v := range s.anchors {
		largest = max(largest, float64(math.Abs(v.Hi)*s.scales[l]))
	}
	if !(largest > 0x1p-600 && largest < 0x1p600) {
		return 0, false
	}
	_, exponent := math.Frexp(largest)
	round := math.Ldexp(1.5, 52-s.slice+exponent)
	for l, v := range s.anchors {
		h := float64(v.Hi * s.scales[l])
		a1 := (h + round) - round
		s.anchor[l] = part{a1, (h - a1) + float64(v.Lo*s.scales[l])}
	}
	return 8*bound*quickError + math.Ldexp(float64(8*s.order), exponent-s.slice-53), true
}

// shifted returns the coefficient of τ^k in Σ c_j (t+τ)^j, which is
// Σ_j C(j,k) t^(j−k) c_j, and a bound of the sum of absolute values.
func (m *mode) shifted(k int, t double) (a, b double, magnitude float64) {
	n := len(m.amplitudes)
	if n == 1 {
		c := &m.amplitudes[0]
		return c.a, c.b, c.magnitude
	}
	// Horner in t with the binomials C(j,k), exact below 2^53.
	binomials := make([]float64, n)
	binomials[k] = 1
	for j := k + 1; j < n; j++ {
		binomials[j] = binomials[j-1] * float64(j) / float64(j-k)
	}
	for j := n - 1; j >= k; j-- {
		c := &m.amplitudes[j]
		a = a.Mul(t).AddLoose(c.a.Mul(dd.Pair(binomials[j], 0)))
		b = b.Mul(t).AddLoose(c.b.Mul(dd.Pair(binomials[j], 0)))
		magnitude = (float64(magnitude*t.Hi) + float64(c.magnitude*binomials[j])) * (1 + 0x1p-40)
	}
	return a, b, magnitude
}

// unscaleAll scales the decided values and returns how many stay decided.
func (q *quick) unscaleAll(out []float64) (decided int) {
	for k, v := range out {
		v, ok := scaledBack(v, v != 0, q.scale)
		if !ok {
			v = 0
		} else {
			decided++
		}
		out[k] = v
	}
	return decided
}
