package algebraic

import (
	"fmt"
	"math"

	"github.com/qofs/qofs/internal/fault"
)

// unbounded is the exponent of a radius that is not known yet.
const unbounded = 1 << 28

// approximation is one root in the making.
type approximation struct {
	point
	radius scaled // bound on the distance to the nearest root, absolute
	done   bool   // no better at this precision
}

// isolate returns the numbers on and above the real axis of a square-free
// factor that has not the root 0.
func isolate(f *factor, w *work) ([]Number, error) {
	starts := startingPoints(f.poly)
	roots := make([]approximation, len(starts))
	for i, s := range starts {
		roots[i].place(s)
	}
	// Two roots are farther apart than 2^-(n·(bits + 2·log n)) times the
	// largest (Mahler 1964), and an evaluation loses no more than that.
	n := float64(f.degree)
	limit := 8 * (n*(float64(f.poly.MaxBitLen())+2*math.Log2(n+1)) + 256)
	for bits := uint(128); float64(bits) <= limit; bits *= 2 {
		if err := improve(f, roots, bits, w); err != nil {
			return nil, err
		}
		if numbers, ok := certify(f, roots); ok {
			return numbers, nil
		}
	}
	return nil, fmt.Errorf("roots: no isolating discs at %v bits: %w", limit, fault.ErrLimit)
}

// place sets the approximation to a starting point, with 53 bits.
func (a *approximation) place(s start) {
	e := math.Floor(s.logRadius)
	sin, cos := math.Sincos(s.angle)
	r := math.Exp2(s.logRadius-e) * 0x1p53
	a.re.SetInt64(int64(r * cos))
	a.im.SetInt64(int64(r * sin))
	a.e = int(e) - 53
}

// fit returns the exponent e with |z| ≤ 2^e and writes z in units of
// 2^(e−bits). It keeps an exponent that is at most two too large, so that
// the scaled polynomials can be shared.
func (a *approximation) fit(e int, bits uint) int {
	if k := a.exponentOfLargest() + 1; k > e || k < e-2 {
		e = k
	}
	a.rescale(e - int(bits))
	return e
}

// improve runs the iteration z_i −= N/(1 − N·Σ 1/(z_i − z_k)), N = p/p', until
// no value can be told from 0 at this precision.
func improve(f *factor, roots []approximation, bits uint, w *work) error {
	polys := map[int]*fixed{}
	exponents := make([]int, len(roots))
	for i := range roots {
		roots[i].done = false
		exponents[i] = math.MinInt32
	}
	var ev evaluation
	for sweep := 0; sweep < 40+4*len(roots); sweep++ {
		active := false
		for i := range roots {
			a := &roots[i]
			if a.done {
				continue
			}
			active = true
			e := a.fit(exponents[i], bits)
			exponents[i] = e
			p := polys[e]
			if p == nil {
				p = newFixed(f.poly, e, bits)
				polys[e] = p
			}
			if err := w.spend(4*f.degree, bits); err != nil {
				return err
			}
			ev.at(p, &a.point)
			a.step(roots, i, e, &ev)
		}
		if !active {
			return nil
		}
	}
	for i := range roots {
		if !roots[i].done {
			roots[i].radius = scaled{0.5, unbounded}
		}
	}
	return nil
}

// step corrects approximation i by one step of the iteration.
func (a *approximation) step(roots []approximation, i, e int, ev *evaluation) {
	n := len(roots)
	value := ev.value()
	r, ok := ev.nearestRoot(n)
	a.radius = r.shift(e)
	if !ok {
		a.radius = scaled{0.5, unbounded}
	}
	if value.abs().sub(ev.errValue).m <= 0 {
		a.done = true
		return
	}
	d := ev.derivative()
	if d.isZero() {
		d = pair{1, 0, 0}
	}
	newton := value.div(d)
	newton.e += e
	var sum pair
	for k := range roots {
		if k == i {
			continue
		}
		if diff := difference(&a.point, &roots[k].point); !diff.isZero() {
			sum = sum.add(pair{1, 0, 0}.div(diff))
		}
	}
	q := pair{1, 0, 0}.add(newton.mul(sum).neg())
	if !q.isZero() {
		newton = newton.div(q)
	}
	a.move(newton)
}

// move subtracts a correction; one below the last place ends the iteration.
func (a *approximation) move(c pair) {
	if c.abs().e < a.e {
		a.done = true
		return
	}
	apply := func(x float64) int64 { return int64(x * 0x1p60) }
	if c.abs().e > a.exponentOfLargest()+40 { // keep wild steps bounded
		c.e = a.exponentOfLargest() + 40
	}
	var d point
	d.re.SetInt64(apply(c.re))
	d.im.SetInt64(apply(c.im))
	d.e = c.e - 60
	d.rescale(a.e)
	a.re.Sub(&a.re, &d.re)
	a.im.Sub(&a.im, &d.im)
}

// certify turns approximations into numbers when their discs prove that each
// holds exactly one root. n disjoint discs that hold at least one of n roots
// each hold exactly one. A disc that meets the real axis, enlarged threefold,
// still holds one root and the mirror image of that root: the root is real.
func certify(f *factor, roots []approximation) ([]Number, bool) {
	n := len(roots)
	separations := make([]scaled, n)
	for i := range roots {
		sep := scaled{0.5, unbounded}
		for k := range roots {
			if k != i {
				d := difference(&roots[i].point, &roots[k].point).abs().down().sub(roots[k].radius)
				if d.less(sep) {
					sep = d
				}
			}
		}
		if n == 1 {
			sep = scaled{0.5, roots[i].radius.e + 64}
		}
		sep = sep.down()
		if sep.m <= 0 || !roots[i].radius.times(float64(16*n)).less(sep) {
			return nil, false
		}
		if size := roots[i].radius.times(16); !size.less(scaled{0.5, roots[i].exponentOfLargest()}) {
			return nil, false
		}
		separations[i] = sep
	}
	var out []Number
	for i := range roots {
		a := &roots[i]
		im := fromBig(&a.im, a.e)
		height := newScaled(math.Abs(im.m), im.e).up()
		flat := height.sub(a.radius).m <= 0
		if !flat && im.m < 0 {
			continue
		}
		out = append(out, Number{factor: f, wide: new(point), radius: a.radius, separation: separations[i], open: true})
		x := &out[len(out)-1]
		x.wide.set(&a.point)
		if flat {
			x.real = true
			x.wide.im.SetInt64(0)
			x.radius = a.radius.add(height).up()
			x.separation = x.separation.sub(height).down()
		}
	}
	return out, true
}
