package algebraic

import "slices"

// sortRoots puts the roots on and above the real axis into the order that
// Roots documents: by the components rounded to 53 bits, then to 106, 212, …
// bits. Distinct roots differ in one component from some precision on.
func sortRoots(roots []Root, w *work) error {
	var failed error
	slices.SortFunc(roots, func(r, s Root) int {
		a, b := r.Number, s.Number
		switch {
		case real(a.value) < real(b.value):
			return -1
		case real(a.value) > real(b.value):
			return 1
		case imag(a.value) < imag(b.value):
			return -1
		case imag(a.value) > imag(b.value):
			return 1
		case a == b:
			return 0
		}
		c, err := compare(a, b, w)
		if err != nil {
			failed = err
		}
		return c
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
