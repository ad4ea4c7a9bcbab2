package intpoly

import "math/big"

// PseudoQuoRem returns quo, rem and k with lc(q)^k·p = quo·q + rem and
// deg rem < deg q, where k = max(0, deg p − deg q + 1). q must not be 0.
func (p Poly) PseudoQuoRem(q Poly) (quo, rem Poly, k int) {
	m, n := p.Degree(), q.Degree()
	if m < n {
		return Poly{}, p, 0
	}
	k = m - n + 1
	divisor, r := q.bigs(), p.bigs()
	lc := divisor[n]
	quotient := make([]*big.Int, k)
	var t big.Int
	for i := m - n; i >= 0; i-- {
		top := r[n+i]
		quotient[i] = new(big.Int).Set(top)
		for j := i + 1; j < k; j++ {
			quotient[j].Mul(quotient[j], lc)
		}
		for j := 0; j < n+i; j++ {
			r[j].Mul(r[j], lc)
			if j >= i {
				r[j].Sub(r[j], t.Mul(top, divisor[j-i]))
			}
		}
		r = r[:n+i]
	}
	return FromBigs(quotient...), FromBigs(r...), k
}

// QuoExact returns p/q and true where q divides p over the integers.
func (p Poly) QuoExact(q Poly) (Poly, bool) {
	m, n := p.Degree(), q.Degree()
	switch {
	case q.IsZero():
		return Poly{}, false
	case p.IsZero():
		return Poly{}, true
	case m < n:
		return Poly{}, false
	}
	if t, ok := quoTwoAdic(p, q); ok {
		return t, true
	}
	return quoExactBig(p, q)
}

// quoTwoAdic divides from the top modulo a power of two, where the leading
// coefficient of q is odd, or from the bottom, where the lowest is. The size of
// the quotient is guessed, and the product is compared with p, so that ok is
// false where q does not divide p and also where the guess is too small.
func quoTwoAdic(p, q Poly) (t Poly, ok bool) {
	n := q.terms()
	switch {
	case q.at(n - 1)[0]&1 == 1:
		t = quoFromTop(p, q)
	case q.at(0)[0]&1 == 1:
		// p/q backwards is p backwards over q backwards, with the powers of x
		// that reversal drops: q has none, and t has those of p.
		v := p.Valuation()
		t = quoFromTop(p.Reverse(), q.Reverse()).Reverse().MulPower(v)
	default:
		return Poly{}, false
	}
	return t, t.Mul(q).Equal(p)
}

// quoFromTop returns the quotient of p and q, whose leading coefficient is odd,
// modulo a power of 2 beyond its likely size.
func quoFromTop(p, q Poly) Poly {
	k := p.Degree() - q.Degree() + 1
	// The coefficients of a factor are rarely longer than those of the product.
	n := limbsFor(max(p.span()-q.span()+32, 63))
	n = min(n, limbsFor(p.span()+k))
	w := make([]uint64, k*n)
	inverse := make([]uint64, 3*n)
	inv, acc, lc := inverse[:n], inverse[n:2*n], inverse[2*n:]
	extend(lc, cut(q.at(q.Degree()), n))
	invert(inv, lc)
	low := func(x Poly, i int) []uint64 { return cut(x.at(i), n) }
	for i := k - 1; i >= 0; i-- {
		// t_i = (p_(i+n) − Σ q_(n−j)·t_(i+j))·lc⁻¹
		extend(acc, low(p, q.Degree()+i))
		for j := 1; j <= min(q.Degree(), k-1-i); j++ {
			subtractProduct(acc, low(q, q.Degree()-j), w[(i+j)*n:(i+j+1)*n])
		}
		multiplyLow(w[i*n:(i+1)*n], acc, inv)
	}
	return trim(w, n)
}

func cut(c []uint64, n int) []uint64 { return c[:min(n, len(c))] }

// quoExactBig is the schoolbook method with exact division.
func quoExactBig(p, q Poly) (Poly, bool) {
	n := q.Degree()
	r, divisor := p.bigs(), q.bigs()
	quotient := make([]*big.Int, len(r)-n)
	var t, rest big.Int
	for i := len(quotient) - 1; i >= 0; i-- {
		quotient[i] = new(big.Int)
		quotient[i].QuoRem(r[n+i], divisor[n], &rest)
		if rest.Sign() != 0 {
			return Poly{}, false
		}
		for j := range n {
			r[i+j].Sub(r[i+j], t.Mul(quotient[i], divisor[j]))
		}
	}
	for _, c := range r[:n] {
		if c.Sign() != 0 {
			return Poly{}, false
		}
	}
	return FromBigs(quotient...), true
}
