package algebraic

import (
	"math"

	"github.com/qofs/qofs/internal/intpoly"
)

// Sweeps of the iteration in float64, and one more for every 16 degrees. Simple
// roots take 5 to 12; multiple roots, on which the iteration is slow, are left
// to the exact decomposition.
const (
	firstSweeps = 16
	maxSweeps   = 32
)

// smallDegree is the largest degree for which the workspace is on the stack.
const smallDegree = 16

// triage finds the roots on and above the real axis in float64 and
// double-double. It reports false unless disjoint discs prove that every root
// is simple and isolated; where a component is not determined to the last bit,
// the number says so.
func triage(p intpoly.Poly, w *work) ([]Number, bool) {
	n := p.Degree()
	var small [6 * (smallDegree + 1)]float64
	buffer := small[:]
	if n > smallDegree {
		buffer = make([]float64, 6*(n+1))
	}
	re, im := buffer[:n:n], buffer[n:2*n:2*n]
	f, ok := newFloats(p, buffer[2*n:])
	if !ok || !f.place(re, im) {
		return triageDecades(p, w)
	}
	var room [smallDegree]candidate
	found := room[:]
	if n > smallDegree {
		found = make([]candidate, n)
	}
	if f.approximate(re, im, firstSweeps+n/16) {
		if found, ok := f.candidates(found, re, im); ok && f.refineAll(found) && separate(found, n) {
			return certified(found, &factor{poly: p, degree: n}, w), true
		}
	}
	if overflown(re, im) {
		return triageDecades(p, w)
	}
	if !provedSquareFree(p) {
		return nil, false
	}
	f.place(re, im)
	f.approximate(re, im, maxSweeps+n/16)
	if !f.approximateCompensated(re, im) {
		return nil, false
	}
	found, ok = f.candidates(found, re, im)
	for i := range found {
		f.weierstrass(found, i)
	}
	if !ok || !separate(found, n) {
		return nil, false
	}
	return certified(found, &factor{poly: p, degree: n}, w), true
}

// overflown reports whether an approximation is infinite or not a number.
func overflown(re, im []float64) bool {
	for i := range re {
		if d := (re[i] - re[i]) + (im[i] - im[i]); d != 0 {
			return true
		}
	}
	return false
}

// candidates returns the approximations on and above the real axis.
func (f *floats) candidates(found []candidate, re, im []float64) ([]candidate, bool) {
	m, ok := foldConjugates(re, im, nil)
	found = found[:m]
	for i := range found {
		found[i] = candidate{x: re[i], y: im[i], k: f.k}
	}
	return found, ok
}

func (f *floats) refineAll(found []candidate) bool {
	for i := range found {
		if !f.refine(&found[i]) {
			return false
		}
	}
	return true
}

// certified returns the numbers of separated candidates, with room for their
// mirror images in the same allocation.
func certified(found []candidate, f *factor, w *work) []Number {
	n := len(found)
	numbers := make([]Number, n, f.degree)
	images := numbers[n:f.degree]
	for i := range numbers {
		x := &numbers[i]
		found[i].number(x, f)
		w.count(x)
		if !x.real {
			x.pair, images = &images[0], images[1:]
		}
	}
	return numbers
}

// candidate is an approximation x + i·y, y ≥ 0, with Newton's correction there,
// all in units of 2^k.
type candidate struct {
	x, y       float64
	k          int
	cr, ci     float64 // N = p/p'
	size, err  float64 // |N| from above, bound on the error of N
	inclusion  float64 // n·|p/p'| from above: within this distance is a root
	separation float64
	radius     float64 // of the disc around x + i·y − N that holds the root
}

// foldConjugates keeps the approximations on and above the real axis, and puts
// those on it that are no half of a pair. It reports false when the number of
// the dropped ones is not that of the kept pairs. (Only a guess: the discs
// prove it.) The units are 2^exps[i], or the same for all where exps is nil.
func foldConjugates(re, im []float64, exps []int) (m int, ok bool) {
	n := len(re)
	var buffer [64]bool
	flat := buffer[:]
	if n > len(flat) {
		flat = make([]bool, n)
	}
	for i := range re {
		x, y := re[i], im[i]
		if math.Abs(y) > 0x1p-20*math.Abs(x) {
			continue
		}
		// Real, if nothing is nearer to the mirror image than this one.
		flat[i] = true
		for k := range re {
			u := 1.0
			if exps != nil {
				u = unitRatio(exps[k], exps[i])
			}
			dx, dy := u*re[k]-x, u*im[k]+y
			if k != i && dx*dx+dy*dy < 4*y*y {
				flat[i] = false
				break
			}
		}
	}
	reals, below := 0, 0
	for i := range re {
		if exps != nil {
			exps[m] = exps[i]
		}
		switch {
		case flat[i]:
			reals++
			re[m], im[m] = re[i], 0
		case im[i] > 0:
			re[m], im[m] = re[i], im[i]
		default:
			below++
			continue
		}
		m++
	}
	return m, m-reals == below
}

// refine corrects the approximation until the correction is small.
func (f *floats) refine(a *candidate) bool {
	n := float64(len(f.hi) - 1)
	for range 6 {
		s := f.at(a.x, a.y)
		cr, ci, err, ok := s.newton()
		if !ok {
			return false
		}
		z := max(math.Abs(a.x), a.y)
		step := math.Abs(cr) + math.Abs(ci)
		if step > 0x1p-46*z && step > 4*err {
			flat := a.y == 0
			a.x, a.y = a.x-cr, a.y-ci
			if !flat && !(a.y > 0) {
				return false
			}
			continue
		}
		a.cr, a.ci, a.size, a.err = cr, ci, step*(1+0x1p-50), err
		a.inclusion = n * (a.size + err) * (1 + 0x1p-30)
		return a.inclusion < 0x1p-8*z
	}
	return false
}

// weierstrass bounds the distance to a root without the derivative: every root
// of p is in the union of the discs around the n points z_i of radius
// n·|p(z_i)/(c_n·Π(z_i − z_k))|, and a disc that meets no other holds one (Smith
// 1970). The points are the candidates and the mirror images of those above the
// real axis.
func (f *floats) weierstrass(found []candidate, i int) {
	a := &found[i]
	n := len(f.hi) - 1
	s := f.at(a.x, a.y)
	value := math.Hypot(s.pr, s.pi)*(1+0x1p-50) + s.errValue
	log := math.Log2(value) - math.Log2(math.Abs(f.hi[n]))
	if a.y != 0 {
		log -= math.Log2(2 * a.y)
	}
	for k := range found {
		b := &found[k]
		if k == i {
			continue
		}
		dx, dy := a.x-b.x, a.y-b.y
		norm := dx*dx + dy*dy
		if b.y != 0 {
			dy = a.y + b.y
			norm *= dx*dx + dy*dy
		}
		log -= math.Log2(norm) / 2
	}
	// The logarithms err by less than 2^-40 together; NaN and Inf prove nothing.
	a.cr, a.ci, a.size, a.err = 0, 0, 0, float64(n)*math.Exp2(log)*1.01+tiny
	a.inclusion = a.err
	if !(a.y >= 0) {
		a.inclusion = math.Inf(1)
	}
}

// separate proves that the discs of radius inclusion are disjoint and far from
// each other, so that each holds one root: n disjoint discs that hold at least
// one of n roots hold one each. The disc of a candidate on the real axis is its
// own mirror image, and so is its root. The others do not reach the axis,
// because they are far from their mirror images.
//
// With m the smallest distance of a center to another and every inclusion
// below m·2^-10/n, every other root is farther away than m(1 − 2^-9).
func separate(found []candidate, degree int) bool {
	n := float64(degree)
	for i := range found {
		a := &found[i]
		nearest := math.Inf(1)
		if a.y != 0 {
			nearest = 4 * a.y * a.y
		}
		for k := range found {
			if k != i {
				b := &found[k]
				u := 1.0
				if a.k != b.k {
					u = unitRatio(b.k, a.k)
				}
				dx, dy := a.x-u*b.x, a.y-u*b.y
				nearest = min(nearest, dx*dx+dy*dy)
			}
		}
		if degree == 1 {
			nearest = a.x * a.x
		}
		separation := math.Sqrt(nearest) * (1 - 0x1p-9)
		if !(a.inclusion*n*0x1p10 < separation) || nearest < 0x1p-900 {
			return false
		}
		// See Number.disc: |t − N| ≤ N²B/(1 − |N|B).
		total := a.size + a.err
		nb := total * (n - 1) / separation
		a.radius = (a.err + total*nb/(1-nb)) * (1 + 0x1p-30)
		a.separation = separation * (1 - 0x1p-9) // around x + i·y − N
	}
	return true
}

// number writes the certified number.
func (a *candidate) number(x *Number, f *factor) {
	k := a.k
	x.factor, x.k = f, k
	radius := a.radius
	x.re, radius = add2(a.x, -a.cr, radius)
	x.real = a.y == 0
	if !x.real {
		x.im, radius = add2(a.y, -a.ci, radius)
	}
	x.radius = newScaled(radius, k)
	x.separation = newScaled(a.separation, k)
	re, reOK := x.re.rounded(radius, k)
	im, imOK := 0.0, true
	if !x.real {
		im, imOK = x.im.rounded(radius, k)
	}
	x.value = complex(re, im)
	x.openRe, x.openIm = !reOK, !imOK
}

// double is an unevaluated sum hi + lo with |lo| at most half a unit in the
// last place of hi.
type double struct{ hi, lo float64 }

// add2 returns a + b exactly; a low part that would make the number needlessly
// long is counted in the radius instead.
func add2(a, b, radius float64) (double, float64) {
	s := a + b
	z := s - a
	lo := (a - (s - z)) + (b - z)
	if math.Abs(lo) < 0x1p-160*math.Abs(s) {
		radius, lo = radius+math.Abs(lo), 0
	}
	return double{s, lo}, radius * (1 + 0x1p-50)
}

// rounded returns 2^k·v rounded to a float64, and whether it is the same for
// all numbers within the radius.
func (v double) rounded(radius float64, k int) (float64, bool) {
	r := radius*(1+0x1p-30) + 0x1p-52*math.Abs(v.lo)
	a, b := v.hi+(v.lo-r), v.hi+(v.lo+r)
	if k == 0 {
		return a, a == b && math.Abs(a) > 0x1p-1000
	}
	s := math.Ldexp(a, k)
	return s, a == b && math.Abs(s) > 0x1p-1000 && !math.IsInf(s, 0)
}
