package intpoly

import "math/bits"

// magnitudes holds the absolute values of the coefficients, each in n limbs,
// and their signs as masks, 0 or all ones.
type magnitudes struct {
	w    []uint64
	sign []uint64
	n    int
}

// room is what a caller's stack holds of magnitudes.
const (
	roomLimbs = 72
	roomTerms = 18
)

type room struct {
	w    [roomLimbs]uint64
	sign [roomTerms]uint64
}

// magnitudeLimbs is how many limbs hold the magnitudes of p.
func magnitudeLimbs(p Poly) int {
	if p.span() <= 64*(p.n-1) && !p.hasMinimum() {
		return p.n - 1 // the top limbs are signs
	}
	return p.n
}

// hasMinimum reports whether a coefficient is −2^(64 (n − 1)), whose magnitude
// takes a limb more than those of its neighbours.
func (p Poly) hasMinimum() bool {
	for i := range p.terms() {
		c := p.at(i)
		if c[p.n-1] == ^uint64(0) && isZero(c[:p.n-1]) {
			return true
		}
	}
	return false
}

// magnitudesOf returns the magnitudes of p in n limbs each, in r where they fit;
// in descending order for step = −1.
func magnitudesOf(p Poly, n, step int, r *room) magnitudes {
	terms := p.terms()
	m := magnitudes{n: n}
	if terms*n <= roomLimbs && terms <= roomTerms {
		m.w, m.sign = r.w[:terms*n], r.sign[:terms]
	} else {
		m.w, m.sign = make([]uint64, terms*n), make([]uint64, terms)
	}
	k, to := min(n, p.n), 0
	if step < 0 {
		to = terms - 1
	}
	for i := 0; i < len(p.w); i += p.n {
		c, x := m.w[to*n:(to+1)*n], p.w[i:i+p.n]
		sign := signOf(x[len(x)-1])
		m.sign[to] = sign
		to += step
		carry := sign & 1
		for j, v := range x[:k] {
			c[j], carry = bits.Add64(v^sign, 0, carry)
		}
		clear(c[k:])
	}
	return m
}

// wideSums computes a·b + sign·c·d into w, n limbs to a coefficient.
func wideSums(w []uint64, n int, a, b, c, d Poly, sign int) {
	addProducts(w, n, a, b, 0)
	if !c.IsZero() {
		addProducts(w, n, c, d, uint64(sign>>1))
	}
}

// maxUnrolled is up to how many limbs rows are unrolled.
const maxUnrolled = 4

// addProducts adds a·b to w, or subtracts it where flip is all ones.
func addProducts(w []uint64, n int, a, b Poly, flip uint64) {
	var ra, rb room
	la, lb := magnitudeLimbs(a), magnitudeLimbs(b)
	if max(la, lb) <= maxUnrolled {
		la = max(la, lb, 2)
		lb = la
	}
	x, y := magnitudesOf(a, la, 1, &ra), magnitudesOf(b, lb, -1, &rb)
	// One limb for the carries of a sum.
	var store [2*maxUnrolled + 1]uint64
	sum := store[:]
	if la+lb+1 > len(sum) {
		sum = make([]uint64, la+lb+1)
	} else {
		sum = sum[:la+lb+1]
	}
	var apart []uint64 // for addRow
	if la > maxUnrolled || lb > maxUnrolled {
		apart = make([]uint64, 2*(la+lb+1))
	}
	square := a.shares(b)
	for k := range len(x.sign) + len(y.sign) - 1 {
		c := w[k*n : (k+1)*n]
		clear(sum)
		from, to := max(0, k-len(y.sign)+1), min(k, len(x.sign)-1)+1
		at := len(y.sign) - 1 - k + from
		if !square {
			addRows(sum, apart, &x, &y, from, to, at, flip)
		} else {
			half := (to - from) / 2 // the products of different coefficients come twice
			addRows(sum, apart, &x, &y, from, from+half, at, flip)
			double(sum)
			if k%2 == 0 {
				addRows(sum, apart, &x, &y, from+half, from+half+1, at+half, flip)
			}
		}
		accumulate(c, cut(sum, n), 0)
	}
}

// double doubles a number in two's complement that has room for it.
func double(x []uint64) {
	var low uint64
	for k, v := range x {
		x[k], low = v<<1|low, v>>63
	}
}

// addRows adds to sum the products of the coefficients from … to − 1 of x and those
// of y from at on.
func addRows(sum, apart []uint64, x, y *magnitudes, from, to, at int, flip uint64) {
	xs, ys := x.sign[from:to], y.sign[at:]
	xw, yw := x.w[from*x.n:to*x.n], y.w[at*y.n:]
	switch {
	case apart != nil:
		addRow(sum, apart, xw, yw, xs, ys, x.n, y.n, flip)
	case x.n == 2:
		addRow2((*[5]uint64)(sum), xw, yw, xs, ys, flip)
	case x.n == 3:
		addRow3((*[7]uint64)(sum), xw, yw, xs, ys, flip)
	default:
		addRow4((*[9]uint64)(sum), xw, yw, xs, ys, flip)
	}
}

// addRow adds the products of the coefficients of x and y, m and n limbs each,
// to sum. Those with a plus and those with a minus are added up for themselves, in
// room, which holds zeros before and after.
func addRow(sum, room, xw, yw, xs, ys []uint64, m, n int, flip uint64) {
	size := m + n + 1
	ys = ys[:len(xs)]
	for i, s := range xs {
		sign := int((s ^ ys[i] ^ flip) & 1)
		multiplyAdd(room[sign*size:(sign+1)*size], xw[i*m:(i+1)*m], yw[i*n:(i+1)*n])
	}
	plus, minus := room[:size], room[size:2*size]
	sum = sum[:size]
	var carry, borrow uint64
	for k, v := range sum {
		v, carry = bits.Add64(v, plus[k], carry)
		sum[k], borrow = bits.Sub64(v, minus[k], borrow)
	}
	clear(room)
}

// multiplyAdd adds x·y to acc, which has a limb more than both.
func multiplyAdd(acc, x, y []uint64) {
	if len(x) > len(y) {
		x, y = y, x
	}
	for i, v := range x {
		carry := addProduct(acc[i:], y, v)
		for k := i + len(y); carry != 0; k++ {
			acc[k], carry = bits.Add64(acc[k], carry, 0)
		}
	}
}

// addRow2 is addRow for coefficients of two limbs.
func addRow2(sum *[5]uint64, xw, yw, xs, ys []uint64, flip uint64) {
	s0, s1, s2, s3, s4 := sum[0], sum[1], sum[2], sum[3], sum[4]
	ys = ys[:len(xs)]
	for i, s := range xs {
		x, y := (*[2]uint64)(xw[2*i:]), (*[2]uint64)(yw[2*i:])
		mask := s ^ ys[i] ^ flip
		var c uint64
		p1, p0 := bits.Mul64(x[0], y[0])
		p3, p2 := bits.Mul64(x[1], y[1])
		h, l := bits.Mul64(x[0], y[1])
		p1, c = bits.Add64(p1, l, 0)
		p2, c = bits.Add64(p2, h, c)
		p3 += c
		h, l = bits.Mul64(x[1], y[0])
		p1, c = bits.Add64(p1, l, 0)
		p2, c = bits.Add64(p2, h, c)
		p3 += c
		s0, c = bits.Add64(s0, p0^mask, mask&1)
		s1, c = bits.Add64(s1, p1^mask, c)
		s2, c = bits.Add64(s2, p2^mask, c)
		s3, c = bits.Add64(s3, p3^mask, c)
		s4, _ = bits.Add64(s4, mask, c)
	}
	*sum = [5]uint64{s0, s1, s2, s3, s4}
}

// addRow3 is addRow for coefficients of three limbs.
func addRow3(sum *[7]uint64, xw, yw, xs, ys []uint64, flip uint64) {
	ys = ys[:len(xs)]
	for i, s := range xs {
		x, y := (*[3]uint64)(xw[3*i:]), (*[3]uint64)(yw[3*i:])
		mask := s ^ ys[i] ^ flip
		y0, y1, y2 := y[0], y[1], y[2]
		var c uint64
		h0, p0 := bits.Mul64(x[0], y0)
		h1, p1 := bits.Mul64(x[0], y1)
		h2, p2 := bits.Mul64(x[0], y2)
		p1, c = bits.Add64(p1, h0, 0)
		p2, c = bits.Add64(p2, h1, c)
		p3 := h2 + c

		h0, l0 := bits.Mul64(x[1], y0)
		h1, l1 := bits.Mul64(x[1], y1)
		h2, l2 := bits.Mul64(x[1], y2)
		l1, c = bits.Add64(l1, h0, 0)
		l2, c = bits.Add64(l2, h1, c)
		h2 += c
		p1, c = bits.Add64(p1, l0, 0)
		p2, c = bits.Add64(p2, l1, c)
		p3, c = bits.Add64(p3, l2, c)
		p4 := h2 + c

		h0, l0 = bits.Mul64(x[2], y0)
		h1, l1 = bits.Mul64(x[2], y1)
		h2, l2 = bits.Mul64(x[2], y2)
		l1, c = bits.Add64(l1, h0, 0)
		l2, c = bits.Add64(l2, h1, c)
		h2 += c
		p2, c = bits.Add64(p2, l0, 0)
		p3, c = bits.Add64(p3, l1, c)
		p4, c = bits.Add64(p4, l2, c)
		p5 := h2 + c

		sum[0], c = bits.Add64(sum[0], p0^mask, mask&1)
		sum[1], c = bits.Add64(sum[1], p1^mask, c)
		sum[2], c = bits.Add64(sum[2], p2^mask, c)
		sum[3], c = bits.Add64(sum[3], p3^mask, c)
		sum[4], c = bits.Add64(sum[4], p4^mask, c)
		sum[5], c = bits.Add64(sum[5], p5^mask, c)
		sum[6], _ = bits.Add64(sum[6], mask, c)
	}
}

// addRow4 is addRow for coefficients of four limbs.
func addRow4(sum *[9]uint64, xw, yw, xs, ys []uint64, flip uint64) {
	ys = ys[:len(xs)]
	for i, s := range xs {
		x, y := (*[4]uint64)(xw[4*i:]), (*[4]uint64)(yw[4*i:])
		mask := s ^ ys[i] ^ flip
		y0, y1, y2, y3 := y[0], y[1], y[2], y[3]
		var c uint64
		v := x[0]
		h0, p0 := bits.Mul64(v, y0)
		h1, p1 := bits.Mul64(v, y1)
		h2, p2 := bits.Mul64(v, y2)
		h3, p3 := bits.Mul64(v, y3)
		p1, c = bits.Add64(p1, h0, 0)
		p2, c = bits.Add64(p2, h1, c)
		p3, c = bits.Add64(p3, h2, c)
		p4 := h3 + c

		v = x[1]
		h0, l0 := bits.Mul64(v, y0)
		h1, l1 := bits.Mul64(v, y1)
		h2, l2 := bits.Mul64(v, y2)
		h3, l3 := bits.Mul64(v, y3)
		l1, c = bits.Add64(l1, h0, 0)
		l2, c = bits.Add64(l2, h1, c)
		l3, c = bits.Add64(l3, h2, c)
		h3 += c
		p1, c = bits.Add64(p1, l0, 0)
		p2, c = bits.Add64(p2, l1, c)
		p3, c = bits.Add64(p3, l2, c)
		p4, c = bits.Add64(p4, l3, c)
		p5 := h3 + c

		v = x[2]
		h0, l0 = bits.Mul64(v, y0)
		h1, l1 = bits.Mul64(v, y1)
		h2, l2 = bits.Mul64(v, y2)
		h3, l3 = bits.Mul64(v, y3)
		l1, c = bits.Add64(l1, h0, 0)
		l2, c = bits.Add64(l2, h1, c)
		l3, c = bits.Add64(l3, h2, c)
		h3 += c
		p2, c = bits.Add64(p2, l0, 0)
		p3, c = bits.Add64(p3, l1, c)
		p4, c = bits.Add64(p4, l2, c)
		p5, c = bits.Add64(p5, l3, c)
		p6 := h3 + c

		v = x[3]
		h0, l0 = bits.Mul64(v, y0)
		h1, l1 = bits.Mul64(v, y1)
		h2, l2 = bits.Mul64(v, y2)
		h3, l3 = bits.Mul64(v, y3)
		l1, c = bits.Add64(l1, h0, 0)
		l2, c = bits.Add64(l2, h1, c)
		l3, c = bits.Add64(l3, h2, c)
		h3 += c
		p3, c = bits.Add64(p3, l0, 0)
		p4, c = bits.Add64(p4, l1, c)
		p5, c = bits.Add64(p5, l2, c)
		p6, c = bits.Add64(p6, l3, c)
		p7 := h3 + c

		sum[0], c = bits.Add64(sum[0], p0^mask, mask&1)
		sum[1], c = bits.Add64(sum[1], p1^mask, c)
		sum[2], c = bits.Add64(sum[2], p2^mask, c)
		sum[3], c = bits.Add64(sum[3], p3^mask, c)
		sum[4], c = bits.Add64(sum[4], p4^mask, c)
		sum[5], c = bits.Add64(sum[5], p5^mask, c)
		sum[6], c = bits.Add64(sum[6], p6^mask, c)
		sum[7], c = bits.Add64(sum[7], p7^mask, c)
		sum[8], _ = bits.Add64(sum[8], mask, c)
	}
}
