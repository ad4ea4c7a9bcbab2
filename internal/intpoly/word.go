package intpoly

// Int64 returns the coefficient of x^i and whether it fits; 0 outside the
// range of p.
func (p Poly) Int64(i int) (v int64, ok bool) {
	if i < 0 || i >= len(p.c) {
		return 0, true
	}
	return p.c[i].Int64(), p.c[i].IsInt64()
}
