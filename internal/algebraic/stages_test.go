package algebraic

import (
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

// TestStagesAgree compares the values of the first stage with those that fixed
// point finds without it, bit for bit.
func TestStagesAgree(t *testing.T) {
	s := stream(11)
	cases := 1500
	if testing.Short() {
		cases = 150
	}
	triaged, compared := 0, 0
	for i := range cases {
		var p intpoly.Poly
		switch i % 4 {
		case 0:
			p = s.poly(1+s.below(7), 3+s.below(30))
		case 1: // sparse
			p = intpoly.FromInt64s(1 + s.signed(9)).Add(intpoly.FromInt64s(s.signed(20)).MulPower(1 + s.below(3))).
				Add(intpoly.FromInt64s(1 + 2*s.signed(5)).MulPower(3 + s.below(5)))
		case 2: // close pairs
			q := s.poly(1+s.below(3), 20)
			p = q.Mul(q).MulInt(intpoly.FromInt64s(1 << 30).Leading()).Add(s.poly(1, 8))
		case 3: // sizes over hundreds of decades
			p = intpoly.FromInt64s(1)
			for range 1 + s.below(5) {
				f := s.poly(1+s.below(2), 8)
				shifted := intpoly.FromInt64s(1).MulInt(intpoly.FromInt64s(1 << 40).Pow(s.below(12)).Leading()).Leading()
				p = p.Mul(f.ScaleArgument(shifted, intpoly.FromInt64s(1<<40).Pow(s.below(12)).Leading()))
			}
		}
		if p.Degree() < 1 || p.Sign(0) == 0 || !provedSquareFree(p) {
			continue
		}
		w := &work{left: maxWork}
		numbers, ok := triage(p, w)
		if !ok {
			continue
		}
		triaged++
		first, second := appendNumbers(nil, numbers, 1), []Root(nil)
		numbers, err := isolate(p, w)
		if err != nil {
			t.Fatal(err)
		}
		second = appendNumbers(nil, numbers, 1)
		for _, roots := range [][]Root{first, second} {
			for _, r := range roots {
				if err := r.Number.settle(w); err != nil {
					t.Fatal(err)
				}
			}
			if err := sortRoots(roots, w); err != nil {
				t.Fatal(err)
			}
		}
		if len(first) != len(second) {
			t.Fatalf("%d and %d roots", len(first), len(second))
		}
		for k := range first {
			a, b := first[k].Number, second[k].Number
			compared += 2
			if a.value != b.value || a.real != b.real || a.imaginary != b.imaginary {
				t.Errorf("case %d: %v and %v", i, a.value, b.value)
			}
		}
	}
	if 2*triaged < cases {
		t.Errorf("only %d of %d polynomials triaged", triaged, cases)
	}
	t.Logf("%d components of %d polynomials compared", compared, triaged)
}
