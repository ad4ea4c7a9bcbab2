package algebraic

import (
	"math"

	"github.com/qofs/qofs/internal/intpoly"
)

// decades is a polynomial whose coefficients span more than float64 does: a
// mantissa and an exponent for each. For roots of one size, near 2^e, it is
// scaled to an ordinary polynomial in y = z/2^e; what underflows there is
// covered by the bounds of floats.
type decades struct {
	hi, lo []float64
	exp    []int
	sizes  map[int]*floats
}

func newDecades(p intpoly.Poly) *decades {
	n := p.Degree()
	d := &decades{hi: make([]float64, n+1), lo: make([]float64, n+1), exp: make([]int, n+1), sizes: map[int]*floats{}}
	for i := range d.hi {
		if p.Sign(i) != 0 {
			d.exp[i] = p.BitLen(i)
			d.hi[i], d.lo[i] = doubleDouble(p.Coefficient(i), -d.exp[i])
		}
	}
	return d
}

// near returns the polynomial for arguments near 2^e.
func (d *decades) near(e int) *floats {
	if f := d.sizes[e]; f != nil {
		return f
	}
	n := len(d.hi) - 1
	f := &floats{hi: make([]float64, n+1), lo: make([]float64, n+1), size: make([]float64, n+1), k: e}
	most := math.MinInt
	for i, v := range d.hi {
		if v != 0 {
			most = max(most, d.exp[i]+i*e)
		}
	}
	for i := range d.hi {
		f.hi[i] = math.Ldexp(d.hi[i], d.exp[i]+i*e-most)
		f.lo[i] = math.Ldexp(d.lo[i], d.exp[i]+i*e-most)
		f.size[i] = math.Abs(f.hi[i])*(1+0x1p-50) + tiny
	}
	d.sizes[e] = f
	return f
}

// triageDecades is triage for roots or coefficients of very different sizes:
// every approximation has its own exponent.
func triageDecades(p intpoly.Poly, w *work) ([]Number, bool) {
	n := p.Degree()
	d := newDecades(p)
	re, im, exps := make([]float64, n), make([]float64, n), make([]int, n)
	for i, s := range startingPoints(p) {
		e := math.Round(s.logRadius)
		sin, cos := math.Sincos(s.angle)
		r := roughExp2(s.logRadius - e)
		re[i], im[i], exps[i] = r*cos, r*sin, int(e)
	}
	if !d.approximate(re, im, exps) {
		return nil, false
	}
	m, ok := foldConjugates(re, im, exps)
	if !ok {
		return nil, false
	}
	found := make([]candidate, m)
	for i := range found {
		found[i] = candidate{x: re[i], y: im[i], k: exps[i]}
		if !d.near(exps[i]).refine(&found[i]) {
			return nil, false
		}
	}
	if !separate(found, n) {
		return nil, false
	}
	return certified(found, &factor{poly: p, degree: n}, w), true
}

// unitRatio returns 2^(from−to), the factor from units of 2^from to units of
// 2^to, limited to 2^±600: far beyond what a distance to a number of the size
// of 2^to depends on.
func unitRatio(from, to int) float64 {
	if from == to {
		return 1
	}
	return math.Ldexp(1, min(max(from-to, -600), 600))
}

// approximate is floats.approximate with an exponent for every root.
func (d *decades) approximate(re, im []float64, exps []int) bool {
	n := len(re)
	done := make([]bool, n)
	left := n
	for sweep := 0; sweep < maxSweeps+n/16 && left > 0; sweep++ {
		for i := range re {
			if done[i] {
				continue
			}
			x, y := re[i], im[i]
			f := d.near(exps[i])
			pr, pi, dr, di := f.horner(x, y)
			if size := max(math.Abs(dr), math.Abs(di)); size < 0x1p-400 || size > 0x1p400 {
				_, e := math.Frexp(size)
				pr, pi, dr, di = math.Ldexp(pr, -e), math.Ldexp(pi, -e), math.Ldexp(dr, -e), math.Ldexp(di, -e)
			}
			sr, si := 0.0, 0.0
			for k := range re {
				if k != i {
					u := unitRatio(exps[k], exps[i])
					dx, dy := x-u*re[k], y-u*im[k]
					q := 1 / (dx*dx + dy*dy)
					sr += dx * q
					si -= dy * q
				}
			}
			dr, di = dr-(pr*sr-pi*si), di-(pr*si+pi*sr)
			q := 1 / (dr*dr + di*di)
			cr, ci := (pr*dr+pi*di)*q, (pi*dr-pr*di)*q
			x, y = x-cr, y-ci
			size := x*x + y*y
			if !(size > 0) || size > math.MaxFloat64 {
				return false
			}
			if cr*cr+ci*ci <= settled*size {
				done[i] = true
				left--
			}
			// 1/2 ≤ |x + iy|² < 2, so that powers stay in range.
			if _, e := math.Frexp(size); e < 0 || e > 1 {
				e >>= 1
				x, y = math.Ldexp(x, -e), math.Ldexp(y, -e)
				exps[i] += e
			}
			re[i], im[i] = x, y
		}
	}
	return true
}

// horner returns p and p' at x + iy, rounded.
func (f *floats) horner(x, y float64) (pr, pi, dr, di float64) {
	for k := len(f.hi) - 1; k >= 0; k-- {
		dr, di = dr*x-di*y+pr, dr*y+di*x+pi
		pr, pi = pr*x-pi*y+f.hi[k], pr*y+pi*x
	}
	return pr, pi, dr, di
}
