package poly_test

import (
	"errors"
	"fmt"
	"math/big"
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
