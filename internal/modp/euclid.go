package modp

// Resultant returns the resultant of two polynomials with stored coefficients,
// ascending, and leading coefficients that are not 0. It overwrites both.
func (f *Field) Resultant(a, b []uint64) uint64 {
	r := f.one
	for len(b) > 1 {
		m, n := len(a)-1, len(b)-1
		lc := b[n]
		a = f.trueRemainder(a, b, f.Inverse(lc))
		if len(a) == 0 {
			return 0
		}
		// res(a, b) = (−1)^(m n) lc(b)^(m − deg r) res(b, r)
		if m*n%2 == 1 {
			r = f.Neg(r)
		}
		r = f.Mul(r, f.Power(lc, m-(len(a)-1)))
		a, b = b, a
	}
	if len(b) == 0 {
		return 0
	}
	return f.Mul(r, f.Power(b[0], len(a)-1))
}

// trueRemainder returns a modulo b in the place of a; inverse is that of the
// leading coefficient of b.
func (f *Field) trueRemainder(a, b []uint64, inverse uint64) []uint64 {
	for len(a) >= len(b) {
		f.cancelTop(a, b, inverse)
		a = dropZeros(a[:len(a)-1])
	}
	return a
}

// cancelTop subtracts from a the multiple of b that removes its leading term,
// and returns the factor.
func (f *Field) cancelTop(a, b []uint64, inverse uint64) (factor uint64) {
	k := len(a) - len(b)
	factor = f.Mul(a[len(a)-1], inverse)
	for j, x := range b {
		a[k+j] = f.Sub(a[k+j], f.Mul(factor, x))
	}
	return factor
}

// Power returns x^n for n ≥ 0.
func (f *Field) Power(x uint64, n int) uint64 { return f.powerWord(x, uint64(n)) }

func (f *Field) powerWord(x, n uint64) uint64 {
	r := f.one
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			r = f.Mul(r, x)
		}
		x = f.Mul(x, x)
	}
	return r
}

// Cofactors returns u and v with u·a + v·b = 1, deg u < deg b and deg v < deg a,
// for stored coefficients and coprime a and b of positive degree; ok is false
// where they are not coprime. It overwrites a and b.
func (f *Field) Cofactors(a, b []uint64) (u, v []uint64, ok bool) {
	m, n := len(a), len(b)
	// Invariants: ua·A + va·B = a and ub·A + vb·B = b for the given A and B.
	ua, va := make([]uint64, n), make([]uint64, m)
	ub, vb := make([]uint64, n), make([]uint64, m)
	ua[0], vb[0] = f.one, f.one
	for len(b) > 1 {
		inverse := f.Inverse(b[len(b)-1])
		for len(a) >= len(b) {
			k := len(a) - len(b)
			factor := f.cancelTop(a, b, inverse)
			f.subtractShifted(ua, ub, k, factor)
			f.subtractShifted(va, vb, k, factor)
			a = dropZeros(a[:len(a)-1])
		}
		a, ua, va, b, ub, vb = b, ub, vb, a, ua, va
	}
	if len(b) == 0 {
		return nil, nil, false
	}
	inverse := f.Inverse(b[0])
	for _, w := range [][]uint64{ub, vb} {
		for i := range w {
			w[i] = f.Mul(w[i], inverse)
		}
	}
	return ub, vb, true
}

// subtractShifted subtracts factor·x^k·b from a, of the same length; what would
// leave it is 0.
func (f *Field) subtractShifted(a, b []uint64, k int, factor uint64) {
	for j := range len(a) - k {
		if b[j] != 0 {
			a[k+j] = f.Sub(a[k+j], f.Mul(factor, b[j]))
		}
	}
}

// StoredResidue returns the stored residue of a number in two's complement.
func (f *Field) StoredResidue(c []uint64) uint64 { return f.Stored(f.Residue(c)) }

// Plain returns the plain residue of a stored number.
func (f *Field) Plain(x uint64) uint64 { return f.reduce(0, x) }
