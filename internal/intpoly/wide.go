package intpoly

import "math/bits"

// magnitudes holds the absolute values of the coefficients, each in n limbs,
// and their signs.
type magnitudes struct {
	w        []uint64
	negative []bool
	n        int
}

// room is what a caller's stack holds of magnitudes.
const (
	roomLimbs = 72
	roomTerms = 18
)

type room struct {
	w        [roomLimbs]uint64
	negative [roomTerms]bool
}

// magnitudesOf returns the magnitudes of p, in r where they fit.
func magnitudesOf(p Poly, r *room) magnitudes {
	n, terms := p.n, p.terms()
	if p.span() <= 64*(n-1) && !p.hasMinimum() {
		n-- // the top limbs are signs
	}
	m := magnitudes{n: n}
	if terms*n <= roomLimbs && terms <= roomTerms {
		m.w, m.negative = r.w[:terms*n], r.negative[:terms]
	} else {
		m.w, m.negative = make([]uint64, terms*n), make([]bool, terms)
	}
	for i := range terms {
		c, x := m.w[i*n:(i+1)*n], p.w[i*p.n:(i+1)*p.n]
		sign := signOf(x[p.n-1])
		m.negative[i] = sign != 0
		carry := sign & 1
		for k := range c {
			c[k], carry = bits.Add64(x[k]^sign, 0, carry)
		}
	}
	return m
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

// wideSums computes a·b + sign·c·d into w, n limbs to a coefficient.
func wideSums(w []uint64, n int, a, b, c, d Poly, sign int) {
	var ra, rb room
	ma, mb := magnitudesOf(a, &ra), magnitudesOf(b, &rb)
	convolve(w, n, ma, mb, false)
	if !c.IsZero() {
		mc, md := magnitudesOf(c, &ra), magnitudesOf(d, &rb)
		convolve(w, n, mc, md, sign < 0)
	}
}

// convolve adds the product of a and b to w, or subtracts it.
func convolve(w []uint64, n int, a, b magnitudes, negative bool) {
	if a.n == 4 && b.n == 4 {
		convolve4(w, n, a, b, negative)
		return
	}
	var store [2][24]uint64
	size := a.n + b.n + 1 // one limb for the carries of a sum
	var plus, minus []uint64
	if size <= len(store[0]) {
		plus, minus = store[0][:size], store[1][:size]
	} else {
		plus, minus = make([]uint64, size), make([]uint64, size)
	}
	la, lb := len(a.negative), len(b.negative)
	for k := 0; k < la+lb-1; k++ {
		clear(plus)
		clear(minus)
		for i := max(0, k-lb+1); i <= min(k, la-1); i++ {
			j := k - i
			acc := plus
			if a.negative[i] != b.negative[j] {
				acc = minus
			}
			multiplyAdd(acc, a.w[i*a.n:(i+1)*a.n], b.w[j*b.n:(j+1)*b.n])
		}
		if negative {
			settle(w[k*n:(k+1)*n], minus, plus)
		} else {
			settle(w[k*n:(k+1)*n], plus, minus)
		}
	}
}

// convolve4 is convolve for magnitudes of four limbs.
func convolve4(w []uint64, n int, a, b magnitudes, negative bool) {
	la, lb := len(a.negative), len(b.negative)
	for k := 0; k < la+lb-1; k++ {
		var plus, minus [9]uint64
		for i := max(0, k-lb+1); i <= min(k, la-1); i++ {
			j := k - i
			acc := &plus
			if a.negative[i] != b.negative[j] {
				acc = &minus
			}
			multiplyAdd4(acc, (*[4]uint64)(a.w[4*i:]), (*[4]uint64)(b.w[4*j:]))
		}
		if negative {
			settle(w[k*n:(k+1)*n], minus[:], plus[:])
		} else {
			settle(w[k*n:(k+1)*n], plus[:], minus[:])
		}
	}
}

// settle adds plus − minus to c.
func settle(c, plus, minus []uint64) {
	var carry, borrow uint64
	for k := range c {
		var x, y uint64
		if k < len(plus) {
			x, y = plus[k], minus[k]
		}
		c[k], carry = bits.Add64(c[k], x, carry)
		c[k], borrow = bits.Sub64(c[k], y, borrow)
	}
}

// multiplyAdd adds x·y to acc, which has len(x) + len(y) + 1 limbs.
func multiplyAdd(acc, x, y []uint64) {
	if len(x) == 4 && len(y) == 4 {
		multiplyAdd4((*[9]uint64)(acc), (*[4]uint64)(x), (*[4]uint64)(y))
		return
	}
	if len(x) > len(y) {
		x, y = y, x
	}
	for i, v := range x {
		var carry uint64
		row := acc[i:]
		for j, u := range y {
			hi, lo := bits.Mul64(v, u)
			var c uint64
			lo, c = bits.Add64(lo, carry, 0)
			hi += c
			row[j], c = bits.Add64(row[j], lo, 0)
			carry = hi + c
		}
		for j := len(y); carry != 0; j++ {
			row[j], carry = bits.Add64(row[j], carry, 0)
		}
	}
}

// multiplyAdd4 is multiplyAdd for four limbs.
func multiplyAdd4(acc *[9]uint64, x, y *[4]uint64) {
	y0, y1, y2, y3 := y[0], y[1], y[2], y[3]
	for i := range 4 {
		v := x[i]
		h0, l0 := bits.Mul64(v, y0)
		h1, l1 := bits.Mul64(v, y1)
		h2, l2 := bits.Mul64(v, y2)
		h3, l3 := bits.Mul64(v, y3)
		var c uint64
		l1, c = bits.Add64(l1, h0, 0)
		l2, c = bits.Add64(l2, h1, c)
		l3, c = bits.Add64(l3, h2, c)
		h3 += c
		row := (*[5]uint64)(acc[i : i+5])
		row[0], c = bits.Add64(row[0], l0, 0)
		row[1], c = bits.Add64(row[1], l1, c)
		row[2], c = bits.Add64(row[2], l2, c)
		row[3], c = bits.Add64(row[3], l3, c)
		row[4], c = bits.Add64(row[4], h3, c)
		for j := i + 5; c != 0; j++ {
			acc[j], c = bits.Add64(acc[j], 0, c)
		}
	}
}
