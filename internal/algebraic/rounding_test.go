package algebraic

import (
	"errors"
	"math"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// pairAt returns a polynomial with the simple roots re ± i·√im2.
func pairAt(re, im2 *big.Rat) intpoly.Poly {
	// (x − re)² + im2
	one := big.NewRat(1, 1)
	c0 := new(big.Rat).Mul(re, re)
	c0.Add(c0, im2)
	c1 := new(big.Rat).Mul(re, big.NewRat(-2, 1))
	return integral(c0, c1, one)
}

// integral multiplies by the product of the denominators.
func integral(c ...*big.Rat) intpoly.Poly {
	den := big.NewInt(1)
	for _, r := range c {
		den.Mul(den, r.Denom())
	}
	out := make([]*big.Int, len(c))
	for i, r := range c {
		out[i] = new(big.Int).Mul(r.Num(), new(big.Int).Quo(den, r.Denom()))
	}
	return intpoly.FromBigs(out...)
}

func power2(k int) *big.Rat {
	v := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(k, -k))))
	if k < 0 {
		v.Inv(v)
	}
	return v
}

// TestRoundingBoundaries puts a component of a root exactly on the boundary
// between two float64 values, and next to it on both sides.
func TestRoundingBoundaries(t *testing.T) {
	values := []float64{1, -1, 1.5, math.Nextafter(1, 2), 3e-200, -7e250, 12345.678,
		math.SmallestNonzeroFloat64, 5 * math.SmallestNonzeroFloat64, 0x1p-1022, -0x1.fffffp-1023}
	other := intpoly.FromInt64s(5, 3, 1)
	three := power2(0).SetInt64(3)
	exact := 0
	for _, v := range values {
		next := math.Nextafter(v, math.Inf(1))
		if v < 0 {
			next = math.Nextafter(v, math.Inf(-1))
		}
		a, b := new(big.Rat).SetFloat64(v), new(big.Rat).SetFloat64(next)
		middle := a.Add(a, b)
		middle.Mul(middle, big.NewRat(1, 2))
		for _, side := range []int64{-1, 0, 1} { // toward 0, on the boundary, away
			delta := new(big.Rat).Mul(middle, big.NewRat(side, 1))
			delta.Mul(delta, power2(-300))
			c := new(big.Rat).Add(middle, delta)
			want := v
			if even := math.Float64bits(v)&1 == 0; side > 0 || side == 0 && !even {
				want = next
			}
			line := integral(new(big.Rat).Neg(c), power2(0))
			norm := new(big.Rat).Mul(c, c)
			square := new(big.Rat).Mul(norm, three)
			for _, test := range []struct {
				name string
				poly intpoly.Poly
				part func(complex128) float64
			}{
				{"real root", line.Mul(other), func(z complex128) float64 { return real(z) }},
				// c ± i·|c|·√3
				{"real part", pairAt(c, square).Mul(other), func(z complex128) float64 { return real(z) }},
				// 7 ± i·c
				{"imaginary part", pairAt(new(big.Rat).SetInt64(7), norm).Mul(other),
					func(z complex128) float64 { return math.Copysign(imag(z), v) }},
			} {
				w := &work{left: maxWork}
				roots, err := find(test.poly, w)
				if err != nil {
					t.Fatalf("%s %v side %d: %v", test.name, v, side, err)
				}
				found := false
				for _, r := range roots {
					found = found || test.part(r.Number.Value()) == want
				}
				if !found {
					t.Errorf("%s, side %d of the boundary of %v: want %v, roots %v", test.name, side, v, want, roots[0].Number.Value())
				}
				if side == 0 {
					exact += w.decided
				}
			}
		}
	}
	if exact < 3*len(values) {
		t.Errorf("%d exact decisions for %d components on a boundary", exact, 3*len(values))
	}
}

// TestRangeBoundary: half a unit beyond the largest float64 is out of range.
func TestRangeBoundary(t *testing.T) {
	limit := new(big.Int).Lsh(big.NewInt(1<<54-1), 970)
	if _, err := Roots(intpoly.FromBigs(new(big.Int).Neg(limit), big.NewInt(1))); !errors.Is(err, fault.ErrRange) {
		t.Errorf("2^1024 − 2^970: error %v", err)
	}
	limit.Sub(limit, big.NewInt(1))
	r, err := Roots(intpoly.FromBigs(new(big.Int).Neg(limit), big.NewInt(1)))
	if err != nil || real(r[0].Number.Value()) != math.MaxFloat64 {
		t.Errorf("2^1024 − 2^970 − 1: %v, error %v", r, err)
	}
}

// TestOrder: roots with the same values are ordered by further digits.
func TestOrder(t *testing.T) {
	one := power2(0)
	tiny := power2(-90)
	sum := func(a, b *big.Rat) *big.Rat { return new(big.Rat).Add(a, b) }
	four := new(big.Rat).SetInt64(4)
	minus := new(big.Rat).SetInt64(-1)
	for _, test := range []struct {
		name string
		p, q intpoly.Poly // the roots of p come first
	}{
		{"real", integral(minus, one), integral(sum(minus, new(big.Rat).Neg(tiny)), one)},
		{"imaginary parts", pairAt(one, four), pairAt(one, sum(four, tiny))},
		{"real parts", pairAt(one, sum(four, tiny)), pairAt(sum(one, tiny), four)},
		{"rounded real parts first", pairAt(sum(one, power2(-51)), four), pairAt(sum(one, power2(-50)), one)},
		{"imaginary parts as rounded first", pairAt(sum(one, tiny), one), pairAt(one, four)},
	} {
		roots, err := Roots(test.q.Mul(test.p))
		if err != nil {
			t.Fatal(err)
		}
		for i, r := range roots {
			first, err := Roots(test.p)
			if err != nil {
				t.Fatal(err)
			}
			in := false
			for _, u := range first {
				in = in || u.Number.Equal(r.Number)
			}
			if in != (i < len(first)) {
				t.Errorf("%s: root %d of %d, %v, from the first polynomial: %v", test.name, i, len(roots), r.Number.Value(), in)
			}
		}
		for i := range roots {
			if !roots[i].Number.IsReal() && i%2 == 0 {
				if !roots[i].Number.Conjugate().Equal(roots[i+1].Number) || imag(roots[i].Number.Value()) < 0 {
					t.Errorf("%s: %v is not followed by its conjugate", test.name, roots[i].Number.Value())
				}
			}
		}
	}
}

// TestRat recognises rational roots and nothing else.
func TestRat(t *testing.T) {
	third := integral(big.NewRat(-1, 3), big.NewRat(1, 1))
	near := integral(big.NewRat(-333333333333333333, 1e18), big.NewRat(1, 1))
	big7 := intpoly.FromInt64s(-7, 1<<62).MulInt(new(big.Int).Lsh(big.NewInt(1), 100)).Add(intpoly.FromInt64s(3))
	cubic := intpoly.FromInt64s(-2, 0, 0, 1)
	roots, err := Roots(third.Mul(near).Mul(big7).Mul(cubic).MulPower(2))
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]bool{"0/1": true, "1/3": true, "333333333333333333/1000000000000000000": true}
	den := new(big.Int).Lsh(big.NewInt(1), 162)
	num := new(big.Int).Lsh(big.NewInt(7), 100)
	want[new(big.Rat).SetFrac(num.Sub(num, big.NewInt(3)), den).String()] = true
	rational := 0
	for _, r := range roots {
		if q, ok := r.Number.Rat(); ok {
			rational++
			if !want[q.String()] {
				t.Errorf("rational root %v", q)
			}
		}
	}
	if rational != 4 || len(roots) != 7 {
		t.Errorf("%d rational roots of %d", rational, len(roots))
	}
}

// TestRounded compares enclosures with the digits of √2.
func TestRounded(t *testing.T) {
	roots, err := Roots(intpoly.FromInt64s(-2, 0, 1))
	if err != nil {
		t.Fatal(err)
	}
	for _, bits := range []uint{2, 53, 64, 200, 5000} {
		re, im, err := roots[1].Number.Rounded(bits)
		want := new(big.Float).SetPrec(bits).Sqrt(big.NewFloat(2))
		if err != nil || re.Cmp(want) != 0 || im.Sign() != 0 {
			t.Errorf("%d bits: %v + %vi, error %v", bits, re, im, err)
		}
	}
	if _, _, err := roots[1].Number.Rounded(MaxPrecision + 1); !errors.Is(err, fault.ErrLimit) {
		t.Errorf("too many bits: error %v", err)
	}
}
