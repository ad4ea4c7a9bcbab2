package algebraic

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// floats is an integer polynomial p in double-double: p(2^k·y) = 2^m·Σ
// (hi_i + lo_i)·y^i·(1 + ε_i) with |ε_i| ≤ 2^-105. size is at least |hi + lo|,
// and so much larger than 0 that a multiple of it covers every underflow.
type floats struct {
	hi, lo, size []float64
	k            int
	logs         []float64 // about log2|hi_i|, logOfZero for 0
}

// tiny exceeds every rounding error of an operation that underflows, 2^-1075,
// by more than all factors 2^-106 and n² that a bound multiplies it with.
const tiny = 0x1p-900

// mostLog bounds log2 of the terms of a polynomial in float64, so that values
// can be squared.
const mostLog = 450

// newFloats scales p so that the first and the last coefficient have about the
// same size. It reports false when the coefficients or the terms at the roots
// span too many decades for float64. The buffer has room for 4·(n+1) numbers.
func newFloats(p intpoly.Poly, buffer []float64) (f floats, ok bool) {
	n := p.Degree()
	f = floats{
		hi: buffer[0 : n+1 : n+1], lo: buffer[n+1 : 2*n+2 : 2*n+2],
		size: buffer[2*n+2 : 3*n+3 : 3*n+3], logs: buffer[3*n+3 : 4*n+4],
	}
	first, last := p.BitLen(0), p.BitLen(n)
	f.k = (first - last) / n
	m := 0
	if f.k != 0 || max(first, last) > 64 {
		m = (first + last + n*f.k) / 2
	}
	for i := range n + 1 {
		e := i*f.k - m
		var hi, lo float64
		if v, ok := p.Int64(i); ok && -1<<53 <= v && v <= 1<<53 && max(e, -e) < mostLog {
			if hi = float64(v); e != 0 {
				hi = math.Ldexp(hi, e)
			}
		} else {
			if b := p.BitLen(i) + e; b > mostLog || b < -mostLog {
				return f, false
			}
			hi, lo = doubleDouble(p.Coefficient(i), e)
		}
		size := math.Abs(hi)
		f.hi[i], f.lo[i], f.size[i] = hi, lo, size*(1+0x1p-50)+tiny
		f.logs[i] = roughLog2(size)
	}
	return f, true
}

// doubleDouble returns hi + lo = c·2^e, truncated to 106 bits.
func doubleDouble(c *big.Int, e int) (hi, lo float64) {
	var t big.Int
	drop := c.BitLen() - 53
	if drop <= 0 {
		return math.Ldexp(float64(c.Int64()), e), 0
	}
	// Quo truncates towards 0: the parts have the sign of c.
	t.Quo(c, new(big.Int).Lsh(big.NewInt(1), uint(drop)))
	hi = math.Ldexp(float64(t.Int64()), e+drop)
	t.Sub(c, t.Lsh(&t, uint(drop)))
	if more := drop - 53; more > 0 {
		t.Quo(&t, new(big.Int).Lsh(big.NewInt(1), uint(more)))
		return hi, math.Ldexp(float64(t.Int64()), e+more)
	}
	return hi, math.Ldexp(float64(t.Int64()), e)
}

// place writes the starting points, or reports false where the terms at the
// roots would leave the range of float64.
func (f *floats) place(re, im []float64) bool {
	n := len(f.hi) - 1
	var buffer [smallDegree + 1]int
	hull := convexHull(f.logs, buffer[:0])
	// Roots may be twice as large as the radii of the starting points, but
	// hardly are; if values overflow, no bound holds and nothing is proved.
	most := (f.logs[hull[len(hull)-2]] - f.logs[n]) / float64(n-hull[len(hull)-2])
	least := (f.logs[0] - f.logs[hull[1]]) / float64(hull[1])
	if most > mostLog || least < -mostLog {
		return false
	}
	for _, i := range hull {
		if f.logs[i]+float64(i)*max(0, most) > mostLog {
			return false
		}
	}
	at := 0
	for h := 1; h < len(hull); h++ {
		a, b := hull[h-1], hull[h]
		r := roughExp2((f.logs[a] - f.logs[b]) / float64(b-a))
		sin, cos := math.Sincos(2*math.Pi*float64(h)/float64(n) + 0.7)
		stepSin, stepCos := 0.0, -1.0
		if b-a > 2 {
			stepSin, stepCos = math.Sincos(2 * math.Pi / float64(b-a))
		}
		for range b - a {
			re[at], im[at] = r*cos, r*sin
			at++
			sin, cos = sin*stepCos+cos*stepSin, cos*stepCos-sin*stepSin
		}
	}
	return true
}

// settled is the square of the relative correction below which the next one,
// by the third order of the iteration, would be lost in the last place.
const settled = 0x1p-36

// approximate runs the simultaneous iteration in float64; it reports whether
// every approximation settled. Nothing that it computes is relied on for more
// than a good guess, so its rounding does not matter.
func (f *floats) approximate(re, im []float64, sweeps int) bool {
	n := len(re)
	var buffer [64]bool
	done := buffer[:]
	if n > len(done) {
		done = make([]bool, n)
	}
	left := n
	c := f.hi
	for range sweeps {
		for i := range re {
			if done[i] {
				continue
			}
			x, y := re[i], im[i]
			// The quotient by the quadratic with the roots x ± iy; see
			// evaluation.at.
			t, m := 2*x, x*x+y*y
			b1, b2, d1, d2 := c[n], 0.0, 0.0, 0.0
			for k := n - 1; k >= 2; k-- {
				d1, d2 = (b1-m*d2)+t*d1, d1 // d_{k+1}
				b1, b2 = (c[k]-m*b2)+t*b1, b1
			}
			if n >= 2 {
				b1, b2 = (c[1]-m*b2)+t*b1, b1
			}
			pr, pi := c[0]+x*b1-m*b2, y*b1
			dr, di := b1-2*y*(y*d1), 2*y*(b2+x*d1-m*d2)
			sr, si := sumOfInverses(re, im, i)
			dr, di = dr-(pr*sr-pi*si), di-(pr*si+pi*sr)
			q := 1 / (dr*dr + di*di)
			cr, ci := (pr*dr+pi*di)*q, (pi*dr-pr*di)*q
			re[i], im[i] = x-cr, y-ci
			if size := cr*cr + ci*ci; !(size > settled*m) {
				if size != size {
					return false
				}
				done[i] = true
				left--
			}
		}
		if left == 0 {
			return true
		}
	}
	return false
}

// approximateCompensated corrects by p(z_i)/(c_n·Π(z_i − z_k)) with compensated
// values (Weierstrass 1891): for ill-conditioned roots, where float64 tells
// neither the value nor the derivative from 0. It reports whether every
// approximation settled in a few sweeps.
func (f *floats) approximateCompensated(re, im []float64) bool {
	for range maxSweeps / 2 {
		active := false
		for i := range re {
			s := f.at(re[i], im[i])
			dr, di := f.hi[len(re)], 0.0
			for k := range re {
				if k != i {
					x, y := re[i]-re[k], im[i]-im[k]
					dr, di = dr*x-di*y, dr*y+di*x
				}
			}
			q := 1 / (dr*dr + di*di)
			cr, ci := (s.pr*dr+s.pi*di)*q, (s.pi*dr-s.pr*di)*q
			re[i], im[i] = re[i]-cr, im[i]-ci
			size := cr*cr + ci*ci
			if size != size {
				return false
			}
			active = active || size > settled*settled*(re[i]*re[i]+im[i]*im[i])
		}
		if !active {
			return true
		}
	}
	return false
}

// sumOfInverses returns Σ 1/(z_i − z_k) over k ≠ i.
func sumOfInverses(re, im []float64, i int) (sr, si float64) {
	x, y := re[i], im[i]
	im = im[:len(re)]
	for k, u := range re[:i] {
		dx, dy := x-u, y-im[k]
		q := 1 / (dx*dx + dy*dy)
		sr += dx * q
		si -= dy * q
	}
	for k := i + 1; k < len(re); k++ {
		dx, dy := x-re[k], y-im[k]
		q := 1 / (dx*dx + dy*dy)
		sr += dx * q
		si -= dy * q
	}
	return sr, si
}
