package algebraic

import (
	"math"
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// point is the complex number (re + i·im)·2^e, exactly.
type point struct {
	re, im big.Int
	e      int
}

func (z *point) set(w *point) {
	z.re.Set(&w.re)
	z.im.Set(&w.im)
	z.e = w.e
}

// exponentOfLargest returns k with |re|, |im| < 2^k for the smallest such k.
func (z *point) exponentOfLargest() int {
	return max(z.re.BitLen(), z.im.BitLen()) + z.e
}

// setDoubles sets z to (re + i·im)·2^k, exactly.
func (z *point) setDoubles(re, im double, k int) {
	low := math.MaxInt
	parts := [4]float64{re.hi, re.lo, im.hi, im.lo}
	var m [4]int64
	var e [4]int
	for i, v := range parts {
		if v != 0 {
			f, x := math.Frexp(v)
			m[i], e[i] = int64(f*0x1p53), x-53
			low = min(low, e[i])
		}
	}
	var t big.Int
	sum := func(z *big.Int, i int) {
		z.SetInt64(0)
		for ; m[i] != 0; i++ {
			z.Add(z, t.Lsh(t.SetInt64(m[i]), uint(e[i]-low)))
			if i%2 == 1 {
				break
			}
		}
	}
	sum(&z.re, 0)
	sum(&z.im, 2)
	z.e = low + k
}

// order returns e with |z| ≤ 2^e(1 − 2^-40), the smallest but for borderline
// cases. Too large an exponent would cost a bit for every degree in fixed.
func (z *point) order() int {
	k := z.exponentOfLargest()
	re, im := fromBig(&z.re, z.e-k), fromBig(&z.im, z.e-k)
	if math.Hypot(math.Ldexp(re.m, max(re.e, -2000)), math.Ldexp(im.m, max(im.e, -2000))) > 1-0x1p-39 {
		k++
	}
	return k
}

// rescale changes the exponent to e, dropping bits below it.
func (z *point) rescale(e int) {
	if e == z.e {
		return
	}
	shift(&z.re, &z.re, z.e-e)
	shift(&z.im, &z.im, z.e-e)
	z.e = e
}

// shift sets z to x·2^k rounded down.
func shift(z, x *big.Int, k int) {
	if k >= 0 {
		z.Lsh(x, uint(k))
	} else {
		z.Rsh(x, uint(-k))
	}
}

// difference returns a − b in floating point.
func difference(a, b *point) pair {
	var t big.Int
	sub := func(x, y *big.Int) scaled {
		switch k := a.e - b.e; {
		case k == 0:
			return fromBig(t.Sub(x, y), a.e)
		case k > 0:
			return fromBig(t.Sub(t.Lsh(x, uint(k)), y), b.e)
		default:
			return fromBig(t.Sub(x, t.Lsh(y, uint(-k))), a.e)
		}
	}
	re := sub(&a.re, &b.re)
	return newPair(re, sub(&a.im, &b.im))
}

// fixed is a polynomial p(2^e·y) = 2^m·Σ c_i·y^i in fixed point for |y| ≤ 1:
// c_i·2^-bits is at most 1 and within 2^-bits of the true coefficient.
type fixed struct {
	c    []big.Int
	bits uint
	e    int // of the argument
	m    int // of the value
}

func newFixed(p intpoly.Poly, e int, bits uint) *fixed {
	n := p.Degree()
	f := &fixed{c: make([]big.Int, n+1), bits: bits, e: e, m: p.BitLen(0)}
	for i := 1; i <= n; i++ {
		if p.Sign(i) != 0 {
			f.m = max(f.m, p.BitLen(i)+i*e)
		}
	}
	for i := range f.c {
		shift(&f.c[i], p.Coefficient(i), int(bits)+i*e-f.m)
	}
	return f
}

// evaluation holds p(z) = p·2^-bits and p'(z) = d·2^-bits of a fixed
// polynomial, by y, and the workspace to compute them.
type evaluation struct {
	pre, pim, dre, dim      big.Int
	t, m, b1, b2, d1, d2    big.Int
	u, v                    big.Int
	errValue, errDerivative scaled // bounds on |error|, in units of 2^-bits
}

// at computes the values for |z| ≤ 2^f.e, where z.e is f.e − f.bits.
//
// For complex z the quotient by the real quadratic x² − t·x + m with the
// roots z and z̄ gives both values in real arithmetic: p = quadratic·Q +
// b₁·x + r, p(z) = b₁·z + r and p'(z) = 2i·Im z·Q(z) + b₁.
//
// Error, in units of the last place, with K = (n+1)(n+2)/2 and |y| ≤ 1: the
// true b_k is at most K, one step of the recurrence errs by 1 for the
// coefficient, 1 for the shift and K for m, and errors grow by at most K
// through the recurrence: K(K+3) for b_k, hence at most 3K(K+3)+K+4 ≤ 4(K+3)²
// for p(z). The same argument for the recurrence of Q, whose true values are
// at most K², gives 2K²+3K+2 a step and at most 12(K+1)³ for p'(z). Horner's
// rule for real z stays below both.
func (ev *evaluation) at(f *fixed, z *point) {
	n := len(f.c) - 1
	k := float64(n+1) * float64(n+2) / 2
	ev.errValue = newScaled(4*(k+3)*(k+3), 0).up()
	ev.errDerivative = newScaled(12*(k+1)*(k+1)*(k+1), 0).up()
	if z.im.Sign() == 0 {
		ev.atReal(f, z)
		return
	}
	w := f.bits
	t, m := &ev.t, &ev.m
	t.Lsh(&z.re, 1)
	m.Mul(&z.re, &z.re)
	m.Add(m, ev.u.Mul(&z.im, &z.im))
	m.Rsh(m, w)
	b1, b2, d1, d2 := &ev.b1, &ev.b2, &ev.d1, &ev.d2
	b1.SetInt64(0)
	b2.SetInt64(0)
	d1.SetInt64(0)
	d2.SetInt64(0)
	step := func(x1, x2 *big.Int) *big.Int { // (t·x1 − m·x2) >> w
		ev.u.Mul(t, x1)
		ev.v.Mul(m, x2)
		ev.u.Sub(&ev.u, &ev.v)
		return ev.u.Rsh(&ev.u, w)
	}
	for k := n; k >= 1; k-- {
		b2.Add(step(b1, b2), &f.c[k])
		b1, b2 = b2, b1 // b_k, b_{k+1}
		if k >= 3 {
			d2.Add(step(d1, d2), b1)
			d1, d2 = d2, d1
		}
	}
	// p(z) = c_0 + z·b_1 − m·b_2
	ev.u.Mul(&z.re, b1)
	ev.v.Mul(m, b2)
	ev.u.Sub(&ev.u, &ev.v)
	ev.pre.Add(ev.u.Rsh(&ev.u, w), &f.c[0])
	ev.u.Mul(&z.im, b1)
	ev.pim.Rsh(&ev.u, w)
	// Q(z) = b_2 + z·d_3 − m·d_4, p'(z) = 2i·Im z·Q(z) + b_1
	ev.u.Mul(&z.re, d1)
	ev.v.Mul(m, d2)
	ev.u.Sub(&ev.u, &ev.v)
	qre := ev.u.Add(ev.u.Rsh(&ev.u, w), b2)
	ev.dim.Mul(&z.im, qre)
	ev.dim.Rsh(&ev.dim, w-1)
	ev.u.Mul(&z.im, d1)
	qim := ev.u.Rsh(&ev.u, w)
	ev.v.Mul(&z.im, qim)
	ev.v.Rsh(&ev.v, w-1)
	ev.dre.Sub(b1, &ev.v)
}

func (ev *evaluation) atReal(f *fixed, z *point) {
	n := len(f.c) - 1
	p, d := &ev.pre, &ev.dre
	p.Set(&f.c[n])
	d.SetInt64(0)
	ev.pim.SetInt64(0)
	ev.dim.SetInt64(0)
	for k := n - 1; k >= 0; k-- {
		ev.u.Mul(d, &z.re)
		d.Add(ev.u.Rsh(&ev.u, f.bits), p)
		ev.u.Mul(p, &z.re)
		p.Add(ev.u.Rsh(&ev.u, f.bits), &f.c[k])
	}
}

// value and derivative in floating point, in units of 2^-bits.
func (ev *evaluation) value() pair      { return newPair(fromBig(&ev.pre, 0), fromBig(&ev.pim, 0)) }
func (ev *evaluation) derivative() pair { return newPair(fromBig(&ev.dre, 0), fromBig(&ev.dim, 0)) }

// nearestRoot bounds the distance from y to the nearest root from above, in
// units of 2^f.e: n·|p|/|p'|; ok is false when p'(y) may be 0.
func (ev *evaluation) nearestRoot(n int) (r scaled, ok bool) {
	d := ev.derivative().abs().down().sub(ev.errDerivative)
	if d.m <= 0 {
		return scaled{}, false
	}
	return ev.value().abs().up().add(ev.errValue).div(d).times(float64(n)).up(), true
}
