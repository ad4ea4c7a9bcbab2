package algebraic

import "math"

// sample is a value of a polynomial and its derivative at a point, with
// bounds.
type sample struct {
	pr, pi   float64 // value, rounded from double-double
	dr, di   float64 // derivative
	errValue float64 // bound on |error| of the value before the last rounding
	errDeriv float64 // bound on |error| of the derivative
}

// unit is the unit roundoff of float64.
const unit = 0x1p-53

// at evaluates at y = x + i·w: Horner's rule with every rounding error
// collected by a second one (Graillat & Ménissier-Morain 2012). It is sound
// with and without fused multiply-add.
//
// Error: b_k = y·b_{k+1} + c_k commits the errors of four products and three
// sums, together λ_k with |λ_k| ≤ u(4|y||b_{k+1}| + |b_k|)(1+4u) + u|c_k| ≤
// 6.1u·B_k, where B_k = Σ_{j≥k} |c_j||y|^{j−k}, the last term for the low half
// of the coefficient. So p(y) = b_0 + Σ λ_k y^k exactly, up to 2^-105·B_0 for
// what the coefficient lost. The sum is evaluated with a relative error below
// 2(7n+8)u of Σ|λ_k||y|^k ≤ 6.1u(n+1)·B_0: together below 128(n+2)²u²·B_0. The
// derivative by Horner's rule errs by less than 16(n+1)u·Σ j|c_j||y|^{j−1}.
// Underflow is covered by the amounts that size adds to every |c_j|.
func (f *floats) at(x, w float64) (s sample) {
	if w == 0 {
		return f.atReal(x)
	}
	n := len(f.hi) - 1
	hi, size := f.hi, f.size[:n+1]
	r := math.Sqrt(x*x+w*w) * (1 + 0x1p-50)
	br, bi := hi[n], 0.0
	er, ei := f.lo[n], 0.0
	dr, di := 0.0, 0.0
	bound, slope := size[n], 0.0
	for k := n - 1; k >= 0; k-- {
		slope = slope*r + bound
		bound = bound*r + size[k]
		dr, di = (dr*x-di*w)+br, (dr*w+di*x)+bi
		p1 := float64(br * x)
		e1 := math.FMA(br, x, -p1)
		p2 := float64(bi * w)
		e2 := math.FMA(bi, w, -p2)
		p3 := float64(br * w)
		e3 := math.FMA(br, w, -p3)
		p4 := float64(bi * x)
		e4 := math.FMA(bi, x, -p4)
		s1 := p1 - p2
		z := s1 - p1
		f1 := (p1 - (s1 - z)) - (p2 + z)
		c := hi[k]
		s2 := s1 + c
		z = s2 - s1
		f2 := (s1 - (s2 - z)) + (c - z)
		s3 := p3 + p4
		z = s3 - p3
		f3 := (p3 - (s3 - z)) + (p4 - z)
		br, bi = s2, s3
		er, ei = (er*x-ei*w)+((e1-e2)+(f1+f2)+f.lo[k]), (er*w+ei*x)+((e3+e4)+f3)
	}
	s.pr, s.pi, s.dr, s.di = br+er, bi+ei, dr, di
	s.bounds(n, bound, slope)
	return s
}

// atReal is at for w = 0.
func (f *floats) atReal(x float64) (s sample) {
	n := len(f.hi) - 1
	hi, size := f.hi, f.size[:n+1]
	r := math.Abs(x)
	b, e, d := hi[n], f.lo[n], 0.0
	bound, slope := size[n], 0.0
	for k := n - 1; k >= 0; k-- {
		slope = slope*r + bound
		bound = bound*r + size[k]
		d = d*x + b
		p := float64(b * x)
		e1 := math.FMA(b, x, -p)
		c := hi[k]
		t := p + c
		z := t - p
		f1 := (p - (t - z)) + (c - z)
		b = t
		e = e*x + (e1 + f1 + f.lo[k])
	}
	s.pr, s.dr = b+e, d
	s.bounds(n, bound, slope)
	return s
}

func (s *sample) bounds(n int, bound, slope float64) {
	h := float64(n + 2)
	const safe = 1 + 0x1p-30 // the bounds themselves are rounded
	s.errValue = 128 * safe * unit * unit * h * h * bound
	s.errDeriv = 16 * safe * unit * h * slope
}

// newton returns N = p/p' and a bound on its error, and false where p' may be
// 0.
//
// Rounding the value costs u|p|, the quotient at most 12u, and the bounds
// themselves the rest of 16u.
func (s *sample) newton() (re, im, err float64, ok bool) {
	if size := max(math.Abs(s.dr), math.Abs(s.di)); size < 0x1p-400 || size > 0x1p400 {
		_, e := math.Frexp(size) // a power of two, so that squares stay in range
		for _, v := range []*float64{&s.pr, &s.pi, &s.dr, &s.di, &s.errValue, &s.errDeriv} {
			*v = math.Ldexp(*v, -e)
		}
		s.errValue += tiny // for what that loses
		s.errDeriv += tiny
	}
	q := s.dr*s.dr + s.di*s.di
	d := math.Sqrt(q)*(1-0x1p-50) - s.errDeriv
	if !(q > 0x1p-900 && q < 0x1p900 && d > 0) {
		return 0, 0, 0, false
	}
	re, im = (s.pr*s.dr+s.pi*s.di)/q, (s.pi*s.dr-s.pr*s.di)/q
	size := math.Abs(re) + math.Abs(im)
	err = ((s.errValue+size*s.errDeriv)/d + 16*unit*size) * (1 + 0x1p-30)
	return re, im, err + tiny, true
}
