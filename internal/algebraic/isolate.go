package algebraic

import (
	"fmt"
	"math"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// unbounded is the exponent of a radius that is not known yet.
const unbounded = 1 << 28

// approximation is one root in the making.
type approximation struct {
	point
	radius scaled // bound on the distance to the nearest root, absolute
	done   bool   // isolated, or no better at this precision
	lone   bool   // seemed to be isolated when it was last looked at
}

// isolate is simpleRoots in fixed point of growing precision.
func isolate(p intpoly.Poly, w *work) ([]Number, error) {
	w.isolated++
	f := &factor{poly: p, degree: p.Degree()}
	starts := startingPoints(f.poly)
	roots := make([]approximation, len(starts))
	for i, s := range starts {
		roots[i].place(s)
	}
	// Two roots are farther apart than 2^-(n·(bits + 2·log n)) times the
	// largest (Mahler 1964), and an evaluation loses no more than that.
	n := float64(f.degree)
	limit := 8 * (n*(float64(f.poly.MaxBitLen())+2*math.Log2(n+1)) + 256)
	// Float64 has failed already: about a bit for every degree is lost.
	for bits := uint(128 + f.degree); float64(bits) <= limit; bits += bits / 2 {
		if err := improve(f, roots, bits, w); err != nil {
			return nil, err
		}
		separations, ok := separations(roots)
		if ok {
			return numbers(f, roots, separations), nil
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

// improve runs the iteration z_i −= N/(1 − N·Σ 1/(z_i − z_k)), N = p/p', until
// no value can be told from 0 at this precision.
func improve(f *factor, roots []approximation, bits uint, w *work) error {
	polys := map[int]*fixed{}
	var ev evaluation
	for sweep := 0; sweep < 40+4*len(roots); sweep++ {
		active := false
		for i := range roots {
			a := &roots[i]
			if a.done {
				continue
			}
			active = true
			e := a.order()
			a.rescale(e - int(bits))
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
	nearest, neighbour := scaled{0.5, a.exponentOfLargest() - 1}, i
	for k := range roots {
		if k == i {
			continue
		}
		if diff := difference(&a.point, &roots[k].point); !diff.isZero() {
			sum = sum.add(pair{1, 0, 0}.div(diff))
			if d := newScaled(max(math.Abs(diff.re), math.Abs(diff.im)), diff.e); d.less(nearest) {
				nearest, neighbour = d, k
			}
		}
	}
	const margin = 0x1p20
	a.lone = a.radius.times(float64(n) * margin).less(nearest)
	if b := &roots[neighbour]; b.lone && b.done && !b.radius.times(float64(n)*margin).less(nearest) {
		b.done, b.lone = false, false // no longer, with this one so near
	}
	if a.lone {
		a.done = true
		return
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

// separations returns for each disc how far other roots are from its center at
// least, and whether the discs prove that each holds exactly one root: n
// disjoint discs that hold at least one of n roots each hold exactly one.
// Approximations that are not isolated are set to go on.
func separations(roots []approximation) ([]scaled, bool) {
	n := len(roots)
	out := make([]scaled, n)
	proved := true
	for i := range roots {
		a := &roots[i]
		sep := scaled{0.5, a.exponentOfLargest() + 64}
		for k := range roots {
			if k != i {
				d := difference(&a.point, &roots[k].point).abs().down().sub(roots[k].radius)
				if d.less(sep) {
					sep = d
				}
			}
		}
		out[i] = sep.down()
		a.done = out[i].m > 0 && a.radius.times(float64(16*n)).less(out[i]) &&
			a.radius.times(16).less(scaled{0.5, a.exponentOfLargest()})
		proved = proved && a.done
	}
	return out, proved
}

// numbers returns the roots on and above the real axis. A disc that meets the
// axis, enlarged threefold, still holds one root and the mirror image of that
// root: the root is real.
func numbers(f *factor, roots []approximation, separations []scaled) []Number {
	var out []Number
	for i := range roots {
		a := &roots[i]
		im := fromBig(&a.im, a.e)
		height := newScaled(math.Abs(im.m), im.e).up()
		flat := height.sub(a.radius).m <= 0
		if !flat && im.m < 0 {
			continue
		}
		out = append(out, Number{factor: f, wide: new(point), radius: a.radius, separation: separations[i], openRe: true, openIm: !flat})
		x := &out[len(out)-1]
		x.wide.set(&a.point)
		if flat {
			x.real = true
			x.wide.im.SetInt64(0)
			x.radius = a.radius.add(height).up()
			x.separation = x.separation.sub(height).down()
		}
	}
	return out
}
