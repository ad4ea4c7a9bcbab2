package intpoly

// Int64 returns the coefficient of x^i and whether it fits; 0 outside the
// range of p.
func (p Poly) Int64(i int) (v int64, ok bool) {
	if i < 0 || i >= p.terms() {
		return 0, true
	}
	c := p.at(i)
	for _, x := range c[1:] {
		if x != signOf(c[0]) {
			return 0, false
		}
	}
	return int64(c[0]), true
}
