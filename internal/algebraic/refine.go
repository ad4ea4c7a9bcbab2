package algebraic

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
)

// disc is a point and a radius within which the number lies.
type disc struct {
	point
	radius scaled
}

// disc returns an enclosure with a radius of at most 2^-bits, in units of a
// power of two between |x|/4 and 4·|x|. It describes the mirror image above
// the real axis.
//
// With t = z − x, N = p(z)/p'(z) and S = Σ 1/(z − x_k) over the other roots,
// p'/p = 1/t + S, hence t − N = N²·S/(1 − N·S), and |S| ≤ B = (n−1)/(separation
// − 4·radius) within two radii of the isolating disc. Newton's step z − N is therefore
// off by at most |N|²B/(1 − |N|B), and it converges quadratically from the
// center, because the separation is at least 4·n radii.
func (x *Number) disc(bits uint, w *work) (disc, error) {
	if x.IsZero() {
		return disc{}, nil
	}
	d := disc{radius: x.radius}
	d.set(x.center())
	n := x.factor.degree
	bound := scaled{}
	if n > 1 {
		bound = newScaled(float64(n-1), 0).div(x.separation.sub(x.radius.times(4)).down()).up()
	}
	e := d.order()
	target := e - int(bits)
	// A step doubles the digits and loses some to rounding; a point rounded to
	// the working precision stays within two radii.
	known := e - d.radius.e
	working := uint(max(128, known+18, min(2*known, int(bits))+64))
	var ev evaluation
	for d.radius.m != 0 && d.radius.e > target {
		if working > 16*(MaxPrecision+MaxBits) {
			return disc{}, fmt.Errorf("roots: precision of %d bits: %w", working, fault.ErrLimit)
		}
		if err := w.spend(6*n, working); err != nil {
			return disc{}, err
		}
		before := d.radius.e
		if next, ok := d.newton(x, working, bound, &ev); ok && next.radius.less(d.radius) {
			d = next
		}
		if before-d.radius.e < 8 { // held up by the rounding errors
			working *= 2
		} else {
			working = max(working, min(uint(2*(e-d.radius.e)), bits)+64)
		}
	}
	return d, nil
}

// newton returns the disc after one step at the given precision.
func (d *disc) newton(x *Number, bits uint, bound scaled, ev *evaluation) (disc, bool) {
	var z disc
	z.set(&d.point)
	e := z.order()
	z.rescale(e - int(bits))
	f := newFixed(x.factor.poly, e, bits)
	ev.at(f, &z.point)
	// N = p/p' in units of 2^-bits: (p·d̄)·2^bits / |d|².
	var norm, re, im, t big.Int
	norm.Mul(&ev.dre, &ev.dre)
	norm.Add(&norm, t.Mul(&ev.dim, &ev.dim))
	low := ev.derivative().abs().down().sub(ev.errDerivative)
	if low.m <= 0 || norm.Sign() == 0 {
		return z, false
	}
	re.Mul(&ev.pre, &ev.dre)
	re.Add(&re, t.Mul(&ev.pim, &ev.dim))
	im.Mul(&ev.pim, &ev.dre)
	im.Sub(&im, t.Mul(&ev.pre, &ev.dim))
	re.Quo(re.Lsh(&re, bits), &norm)
	im.Quo(im.Lsh(&im, bits), &norm)
	// |N − N*| ≤ (errValue + |N|·errDerivative)/|d| + 2 units.
	size := newPair(fromBig(&re, -int(bits)), fromBig(&im, -int(bits))).abs().up()
	err := ev.errValue.add(size.mul(ev.errDerivative)).div(low).shift(e).up()
	err = err.add(scaled{0.5, e - int(bits) + 2}).up()
	total := size.shift(e).add(err).up()
	nb := total.mul(bound).up()
	rest := scaled{0.5, 1}.sub(nb).down()
	if rest.m <= 0 {
		return z, false
	}
	z.re.Sub(&z.re, &re)
	z.im.Sub(&z.im, &im)
	z.radius = err.add(total.mul(nb).div(rest)).up()
	return z, true
}

// interval returns bounds of one component of the point, exactly.
func (d *disc) interval(imaginary bool) (lo, hi *big.Float) {
	c := &d.re
	if imaginary {
		c = &d.im
	}
	r := d.radius.float()
	lo, hi = exactFloat(c, d.e), exactFloat(c, d.e)
	return sumFloat(lo, r.Neg(r)), sumFloat(hi, d.radius.float())
}

// exactFloat returns c·2^e.
func exactFloat(c *big.Int, e int) *big.Float {
	f := new(big.Float).SetPrec(uint(max(1, c.BitLen()))).SetInt(c)
	return f.SetMantExp(f, e)
}

// sumFloat returns a + b exactly.
func sumFloat(a, b *big.Float) *big.Float {
	if a.Sign() == 0 {
		return b
	}
	if b.Sign() == 0 {
		return a
	}
	top := max(a.MantExp(nil), b.MantExp(nil)) + 1
	low := min(a.MantExp(nil)-int(a.Prec()), b.MantExp(nil)-int(b.Prec()))
	return new(big.Float).SetPrec(uint(top-low)).Add(a, b)
}

// nearestInteger returns the integer nearest to lc·re and whether it is within
// the disc; the radius must be below 1/(2·lc).
func (d *disc) nearestInteger(lc *big.Int) (*big.Int, bool) {
	var t big.Int
	t.Mul(&d.re, lc)
	t.Add(shift2(&t, 1+d.e), big.NewInt(1))
	t.Rsh(&t, 1)
	diff := new(big.Int).Mul(&d.re, lc)
	u := new(big.Int).Set(&t)
	if d.e < 0 {
		u.Lsh(u, uint(-d.e))
	} else {
		diff.Lsh(diff, uint(d.e))
	}
	gap := fromBig(diff.Sub(diff, u).Abs(diff), min(d.e, 0))
	return &t, !d.radius.mul(fromBig(lc, 0)).up().less(gap.down())
}

func shift2(x *big.Int, k int) *big.Int {
	shift(x, x, k)
	return x
}
