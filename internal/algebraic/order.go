package algebraic

import "sort"

// sortRoots puts the roots on and above the real axis into the order that
// Roots documents: by the components rounded to 53 bits, then to 106, 212, …
// bits. Distinct roots differ in one component from some precision on.
func sortRoots(roots []Root, w *work) error {
	var failed error
	sort.Slice(roots, func(i, j int) bool {
		a, b := roots[i].Number, roots[j].Number
		if real(a.value) != real(b.value) {
			return real(a.value) < real(b.value)
		}
		if imag(a.value) != imag(b.value) {
			return imag(a.value) < imag(b.value)
		}
		if a == b {
			return false
		}
		c, err := compare(a, b, w)
		if err != nil {
			failed = err
		}
		return c < 0
	})
	return failed
}

func compare(a, b *Number, w *work) (int, error) {
	for bits := uint(106); ; bits *= 2 {
		for _, imaginary := range []bool{false, true} {
			u, err := a.rounded(imaginary, bits, w)
			if err != nil {
				return 0, err
			}
			v, err := b.rounded(imaginary, bits, w)
			if err != nil {
				return 0, err
			}
			if c := u.Cmp(v); c != 0 {
				return c, nil
			}
		}
	}
}
