package poly_test

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"github.com/qofs/qofs/poly"
)

func power(p poly.Poly, n int) poly.Poly {
	out := poly.FromInts(1)
	for range n {
		out = out.Mul(p)
	}
	return out
}

func ExamplePoly_Roots() {
	// (s+1)^5 (s^2+2s+5)^3, expanded
	p := power(poly.FromInts(1, 1), 5).Mul(power(poly.FromInts(5, 2, 1), 3))
	roots, err := p.Roots()
	if err != nil {
		panic(err)
	}
	for _, r := range roots {
		fmt.Println(r)
	}
	// Output:
	// -1, 5 times
	// -1+2i, 3 times
	// -1-2i, 3 times
}

func TestRootsOfConstants(t *testing.T) {
	if _, err := (poly.Poly{}).Roots(); !errors.Is(err, poly.ErrZeroPolynomial) {
		t.Errorf("roots of 0: error %v", err)
	}
	if r, err := poly.FromInts(7).Roots(); err != nil || len(r) != 0 {
		t.Errorf("roots of 7: %v, %v", r, err)
	}
}

func TestRootsOutOfRange(t *testing.T) {
	huge := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(400), nil))
	one := big.NewRat(1, 1)
	if _, err := poly.FromRats(huge, one).Roots(); !errors.Is(err, poly.ErrRange) {
		t.Errorf("root -1e400: error %v", err)
	}
	r, err := poly.FromRats(one, huge).Roots()
	if err != nil || r[0].Value != 0 {
		t.Errorf("root -1e-400: %v, %v", r, err)
	}
	if q, ok := r[0].Rat(); !ok || q.Cmp(new(big.Rat).Neg(new(big.Rat).Inv(huge))) != 0 {
		t.Errorf("root -1e-400: rational %v, %v", q, ok)
	}
}

func TestRootEqual(t *testing.T) {
	roots := func(c ...int64) []poly.Root {
		r, err := poly.FromInts(c...).Roots()
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	a := roots(-2, 0, 1)                                                 // ±√2
	b := roots(-4, 0, 0, 0, 1)                                           // ±√2, ±i√2
	c := roots(-2_000_000_000_000_000_001, 0, 1_000_000_000_000_000_000) // near ±√2
	if !a[1].Equal(b[3]) || a[0].Equal(b[3]) || a[1].Equal(c[1]) || !a[1].Equal(a[1]) {
		t.Errorf("%v %v %v", a, b, c)
	}
	if (poly.Root{}).Equal(a[0]) || !(poly.Root{}).Equal(roots(0, 1)[0]) {
		t.Error("equality with the zero value")
	}
}

func ExamplePoly_RealRoots() {
	// depth (m) at which a canal gate's head balance 2 h^3 - 7 h^2 + 4 = 0 holds
	roots, err := poly.FromInts(4, 0, -7, 2).RealRoots()
	if err != nil {
		panic(err)
	}
	for _, r := range roots {
		fmt.Printf("%.4g\n", real(r.Value))
	}
	// Output:
	// -0.6908
	// 0.8724
	// 3.318
}

func ExampleRoot_Enclosure() {
	roots, err := poly.FromInts(-2, 0, 1).Roots()
	if err != nil {
		panic(err)
	}
	disc, err := roots[1].Enclosure(150)
	if err != nil {
		panic(err)
	}
	fmt.Printf("%.40f, within %.0g\n", disc.Real, disc.Radius)
	// Output: 1.4142135623730950488016887242096980785697, within 7e-46
}

// Wilkinson, Rounding Errors in Algebraic Processes, 1963: the product of
// x−k, k = 1…20, with 2^-23 subtracted from the coefficient of x^19. The values
// are from memory, to the nine decimals that are published.
func TestRootsWilkinson(t *testing.T) {
	p := poly.FromInts(1)
	for k := int64(1); k <= 20; k++ {
		p = p.Mul(poly.FromInts(-k, 1))
	}
	x19 := power(poly.FromInts(0, 1), 19)
	roots, err := p.Sub(x19.Scale(big.NewRat(1, 1<<23))).Roots()
	if err != nil {
		t.Fatal(err)
	}
	want := []complex128{1, 2, 3, 4, 4.999999928, 6.000006944, 6.999697234, 8.007267603, 8.917250249,
		10.095266145 + 0.643500904i, 10.095266145 - 0.643500904i, 11.793633881 + 1.652329728i, 11.793633881 - 1.652329728i,
		13.992358137 + 2.518830070i, 13.992358137 - 2.518830070i, 16.730737466 + 2.812624894i, 16.730737466 - 2.812624894i,
		19.502439400 + 1.940330347i, 19.502439400 - 1.940330347i, 20.846908101}
	if len(roots) != len(want) {
		t.Fatalf("%d roots", len(roots))
	}
	for i, r := range roots {
		if d := r.Value - want[i]; math.Abs(real(d)) > 5.1e-10 || math.Abs(imag(d)) > 5.1e-10 {
			t.Errorf("root %d is %v, published %v", i, r, want[i])
		}
	}
}

// TestRootsEigenvalues compares with the eigenvalues of the companion matrix
// from gonum, which are not certified: equal up to their conditioning.
func TestRootsEigenvalues(t *testing.T) {
	for _, n := range rootDegrees {
		for _, c := range randomPolynomials(n) {
			roots, err := poly.FromInts(c...).Roots()
			if err != nil {
				t.Fatal(err)
			}
			if len(roots) != n {
				t.Fatalf("%d roots of degree %d", len(roots), n)
			}
			for _, v := range eigenRoots(c) {
				nearest := math.Inf(1)
				for _, r := range roots {
					nearest = min(nearest, cmplx.Abs(r.Value-v))
				}
				if nearest > 1e-9*cmplx.Abs(v) {
					t.Errorf("degree %d: no root near the eigenvalue %v", n, v)
				}
			}
		}
	}
}

func TestRootEnclosure(t *testing.T) {
	roots, err := poly.FromInts(0, 10, 4, 2, 3, 1).Roots()
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range roots {
		fine, err := r.Enclosure(400)
		if err != nil {
			t.Fatal(err)
		}
		for _, bits := range []uint{0, 1, 10, 53, 200} {
			d, err := r.Enclosure(bits)
			if err != nil {
				t.Fatal(err)
			}
			re, _ := new(big.Float).Sub(fine.Real, d.Real).Float64()
			im, _ := new(big.Float).Sub(fine.Imaginary, d.Imaginary).Float64()
			radius, _ := d.Radius.Float64()
			if distance := math.Hypot(re, im); distance > radius || radius > math.Ldexp(cmplx.Abs(r.Value), -int(bits)) {
				t.Errorf("%v, %d bits: off by %g, radius %g", r, bits, distance, radius)
			}
		}
	}
	if _, err := roots[0].Enclosure(math.MaxUint); !errors.Is(err, poly.ErrLimit) {
		t.Errorf("too many bits: error %v", err)
	}
	zero, err := (poly.Root{}).Enclosure(53)
	if err != nil || zero.Real.Sign() != 0 || zero.Radius.Sign() != 0 {
		t.Errorf("zero value: %v, error %v", zero, err)
	}
}

func TestRootString(t *testing.T) {
	for _, test := range []struct {
		p    poly.Poly
		want string
	}{
		{poly.FromInts(1, 2), "[-0.5]"},
		{poly.FromInts(0, 0, 1), "[0, 2 times]"},
		{poly.FromInts(9, 0, 4), "[1.5i -1.5i]"},
		{poly.FromInts(5, 2, 1), "[-1+2i -1-2i]"},
		{poly.FromInts(-1, 3), "[0.3333333333333333]"},
	} {
		roots, err := test.p.Roots()
		if got := fmt.Sprint(roots); err != nil || got != test.want {
			t.Errorf("%v, error %v, want %v", got, err, test.want)
		}
	}
}
