package statespace

import (
	"math"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// hessenberg returns the characteristic polynomial by similarity to a matrix that
// has nothing below its subdiagonal, over the rationals (Cohen, A Course in
// Computational Algebraic Number Theory, 1993, Algorithm 2.2.9).
func hessenberg(m matrix) poly.Poly {
	h, n := m.clone(), len(m)
	for k := 1; k < n-1; k++ {
		i := slices.IndexFunc(h[k:], func(row []*big.Rat) bool { return row[k-1].Sign() != 0 })
		if i < 0 {
			continue
		}
		i += k
		h[i], h[k] = h[k], h[i]
		for _, row := range h {
			row[i], row[k] = row[k], row[i]
		}
		for i := k + 1; i < n; i++ {
			factor := new(big.Rat).Quo(h[i][k-1], h[k][k-1])
			if factor.Sign() == 0 {
				continue
			}
			for j := range n {
				h[i][j].Sub(h[i][j], new(big.Rat).Mul(factor, h[k][j]))
			}
			for _, row := range h {
				row[k].Add(row[k], new(big.Rat).Mul(factor, row[i]))
			}
		}
	}
	// Characteristic polynomials of the leading parts, by their last columns.
	p := []poly.Poly{poly.FromInts(1)}
	for k := range n {
		next := poly.FromRats(new(big.Rat).Neg(h[k][k]), big.NewRat(1, 1)).Mul(p[k])
		below := big.NewRat(1, 1)
		for i := k - 1; i >= 0; i-- {
			below.Mul(below, h[i+1][i])
			next = next.Sub(p[i].Scale(new(big.Rat).Mul(below, h[i][k])))
		}
		p = append(p, next)
	}
	return p[n]
}

func TestCharacteristicPolynomialAgainstHessenberg(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	for k := range 80 {
		n := 1 + k%16
		c := random(r, n, 0, 0)
		m := c.Matrices()
		for i := range n {
			for j := range n {
				if k%3 == 1 && r.IntN(3) > 0 { // sparse
					m.State[i][j] = nil
				}
				if k%3 == 2 { // nine digits
					m.State[i][j] = big.NewRat(r.Int64N(2e9)-1e9, 1000)
				}
			}
		}
		c = tf.Must(New(c.states, nil, nil, m))
		if got, want := tf.Must(c.CharacteristicPolynomial()), hessenberg(c.state); !got.Equal(want) {
			t.Fatalf("%v\n%v, by a Hessenberg matrix %v", c, got, want)
		}
	}
}

// The eigenvalues of a symmetric matrix move by no more than the norm of its
// change (Weyl 1912), and LAPACK's are those of a matrix that differs by a modest
// multiple of n·2^−52 of the norm; the test allows 32.
func TestCharacteristicPolynomialAgainstEigenvalues(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 24))
	for range 20 {
		n := 2 + r.IntN(9)
		s := mat.NewSymDense(n, nil)
		for i := range n {
			for j := range i + 1 {
				s.SetSym(i, j, r.NormFloat64())
			}
		}
		var names []string
		for i := range n {
			names = append(names, string(rune('a'+i)))
		}
		c := tf.Must(FromFloats(signals("m", names...), nil, nil, Floats{State: s}))
		var e mat.EigenSym
		if !e.Factorize(s, false) {
			t.Fatal("no eigenvalues")
		}
		want := e.Values(nil) // ascending
		var got []float64
		for _, root := range tf.Must(tf.Must(c.CharacteristicPolynomial()).Roots()) {
			if imag(root.Value) != 0 || root.Multiplicity != 1 {
				t.Errorf("root %v", root)
			}
			got = append(got, real(root.Value))
		}
		slices.Sort(got)
		tolerance := 32 * float64(n) * 0x1p-52 * mat.Norm(s, 2)
		for k, v := range want {
			if len(got) != n || math.Abs(got[k]-v) > tolerance {
				t.Errorf("roots %v, eigenvalues %v", got, want)
				break
			}
		}
	}
}
