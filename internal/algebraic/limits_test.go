package algebraic

import (
	"errors"
	"math/big"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

func TestLimits(t *testing.T) {
	one := intpoly.FromInt64s(1)
	for _, test := range []struct {
		name string
		poly intpoly.Poly
	}{
		{"degree", one.MulPower(MaxDegree + 1).Add(one)},
		{"bits", intpoly.FromBigs(new(big.Int).Lsh(big.NewInt(1), MaxBits/2), nil, big.NewInt(1))},
	} {
		if _, err := Roots(test.poly); !errors.Is(err, fault.ErrLimit) {
			t.Errorf("%s: error %v", test.name, err)
		}
	}
	if _, err := Roots(intpoly.Poly{}); !errors.Is(err, ErrZero) {
		t.Errorf("zero polynomial: error %v", err)
	}
	if r, err := Roots(intpoly.FromInt64s(-3)); err != nil || len(r) != 0 {
		t.Errorf("constant: %v, error %v", r, err)
	}
}

// TestWork: every stage in fixed point stops when the account is empty.
func TestWork(t *testing.T) {
	var cluster intpoly.Poly
	for _, r := range references(t) {
		if r.family == "cluster rational" {
			cluster = r.poly
		}
	}
	for _, left := range []int64{0, 1000, 10000, 100000} {
		if _, err := find(cluster, &work{left: left}); !errors.Is(err, fault.ErrLimit) {
			t.Errorf("work %d: error %v", left, err)
		}
	}
	w := &work{left: maxWork}
	if _, err := find(cluster, w); err != nil {
		t.Error(err)
	}
	t.Logf("a cluster of degree %d takes %d multiplications of words", cluster.Degree(), maxWork-w.left)
}

// TestDegree1024 reaches the largest degree.
func TestDegree1024(t *testing.T) {
	s := stream(8)
	p := s.poly(MaxDegree, 62)
	w := &work{left: maxWork}
	roots, err := find(p, w)
	if err != nil || len(roots) != MaxDegree {
		t.Fatalf("%d roots, error %v", len(roots), err)
	}
	// Multiplicity 64 beside a factor of degree 128.
	q := s.poly(128, 30)
	roots, err = Roots(q.Mul(intpoly.FromInt64s(5, 2, 1).Pow(64)))
	if err != nil {
		t.Fatal(err)
	}
	high := 0
	for _, r := range roots {
		if r.Multiplicity == 64 && real(r.Number.Value()) == -1 && abs(imag(r.Number.Value())) == 2 {
			high++
		}
	}
	if high != 2 || len(roots) != 130 {
		t.Errorf("%d roots, %d of multiplicity 64", len(roots), high)
	}
}
