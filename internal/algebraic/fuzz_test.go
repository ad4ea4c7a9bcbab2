package algebraic

import (
	"encoding/binary"
	"math"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/intpoly"
)

// FuzzRoots checks laws that hold for the roots of every polynomial: the
// multiplicities add up to the degree, the order, conjugate neighbours, and the
// sum of the roots (Viète), which is −c_{n−1}/c_n.
func FuzzRoots(f *testing.F) {
	f.Add([]byte{1, 0, 0, 0, 0, 0, 0, 0, 0, 2, 0, 0, 0, 0, 0, 0, 0, 5}, uint8(1))
	f.Add([]byte("\xff\xff\xff\xff\xff\xff\xff\xff\x03\x01\x00\x00\x00\x00\x00\x00\x00\x40\x01\x00\x00\x00\x00\x00\x00\x00\x00"), uint8(3))
	f.Fuzz(func(t *testing.T, data []byte, power uint8) {
		var c []*big.Int
		for ; len(data) >= 9 && len(c) < 12; data = data[9:] {
			v := big.NewInt(int64(binary.LittleEndian.Uint64(data)))
			c = append(c, v.Lsh(v, uint(data[8])))
		}
		p := intpoly.FromBigs(c...)
		if p.IsZero() {
			return
		}
		p = p.Pow(1 + int(power%3))
		checkLaws(t, p)
	})
}

func checkLaws(t *testing.T, p intpoly.Poly) {
	t.Helper()
	roots, err := Roots(p)
	if err != nil {
		t.Fatalf("%v", err) // the inputs are far from every limit
	}
	const bits = 300
	total := 0
	sum, size := number(0), number(0)
	for i, r := range roots {
		total += r.Multiplicity
		v := r.Number.Value()
		if i > 0 {
			u := roots[i-1].Number.Value()
			if real(u) > real(v) || real(u) == real(v) && abs(imag(u)) > abs(imag(v)) {
				t.Errorf("%v before %v", u, v)
			}
		}
		if imag(v) < 0 && roots[i-1].Number.Value() != complex(real(v), -imag(v)) {
			t.Errorf("%v does not follow its conjugate", v)
		}
		re, _, err := r.Number.Rounded(bits)
		if err != nil {
			t.Fatal(err)
		}
		// At most half a unit apart, up to the rounding of re.
		gap := new(big.Float).SetPrec(plenty).Sub(re, number(real(v)))
		half := math.Nextafter(abs(real(v)), math.Inf(1)) - abs(real(v))
		if f, _ := gap.Float64(); abs(f) > half/2 {
			t.Errorf("value %v, in more digits %v", v, re)
		}
		re = new(big.Float).SetPrec(plenty).Mul(re, number(float64(r.Multiplicity)))
		sum.Add(sum, re)
		size.Add(size, re.Abs(re))
	}
	n := p.Degree()
	if total != n {
		t.Fatalf("multiplicities add up to %d, degree %d", total, n)
	}
	if n == 0 {
		return
	}
	lead := new(big.Float).SetPrec(plenty).SetInt(p.Leading())
	sum.Mul(sum, lead).Add(sum, new(big.Float).SetPrec(plenty).SetInt(p.Coefficient(n-1)))
	bound := size.Mul(size, lead.Abs(lead))
	bound.SetMantExp(bound, -bits)
	if sum.Abs(sum).Cmp(bound) > 0 {
		t.Errorf("the sum of the roots is off by %g, bound %g", sum, bound)
	}
}

func abs(x float64) float64 { return max(x, -x) }

// TestLaws runs the laws of FuzzRoots on random polynomials and on products
// with common and repeated factors.
func TestLaws(t *testing.T) {
	s := stream(9)
	for range 200 {
		p := s.poly(1+s.below(6), 4+s.below(60))
		q := s.poly(1+s.below(3), 3)
		checkLaws(t, p.Mul(q.Pow(1+s.below(4))).MulPower(s.below(3)))
	}
}
