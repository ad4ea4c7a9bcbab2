package modp

import (
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"
)

// nth returns the field of a prime.
func nth(i int) Field { return newField(1<<62 - uint64(offsets[i])) }

func TestPrimes(t *testing.T) {
	last := uint64(1) << 62
	var primes Primes
	for i := range len(offsets) + 3 {
		f := primes.Next()
		if f.P >= last || !new(big.Int).SetUint64(f.P).ProbablyPrime(20) {
			t.Fatalf("prime %d is %d", i, f.P)
		}
		for p := last - 1; p > f.P && i > 0; p-- {
			if new(big.Int).SetUint64(p).ProbablyPrime(0) {
				t.Fatalf("prime %d passes over %d", i, p)
			}
		}
		last = f.P
	}
}

// All operations, against math/big.
func TestFieldAgainstBig(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 3000 {
		checkField(t, r)
	}
}

// checkField checks one random case.
func checkField(t *testing.T, r *rand.Rand) {
	t.Helper()
	f := nth(r.IntN(40))
	p := new(big.Int).SetUint64(f.P)
	mod := func(x *big.Int) uint64 { return new(big.Int).Mod(x, p).Uint64() }
	a, b := r.Uint64()%f.P, r.Uint64()%f.P
	if r.IntN(8) == 0 {
		a = []uint64{0, 1, f.P - 1}[r.IntN(3)]
	}
	ab := new(big.Int).Mul(new(big.Int).SetUint64(a), new(big.Int).SetUint64(b))
	x, y := f.Stored(a), f.Stored(b)
	if f.Plain(x) != a || f.Plain(f.Mul(x, y)) != mod(ab) || f.Mul(x, b) != mod(ab) {
		t.Fatalf("%d·%d modulo %d", a, b, f.P)
	}
	if f.Sub(a, b) != mod(new(big.Int).Sub(new(big.Int).SetUint64(a), new(big.Int).SetUint64(b))) || f.Neg(a) != (f.P-a)%f.P {
		t.Fatalf("%d − %d modulo %d", a, b, f.P)
	}
	if a != 0 && f.Plain(f.Mul(x, f.Inverse(x))) != 1 {
		t.Fatalf("inverse of %d modulo %d", a, f.P)
	}
	if n := r.IntN(50); f.Plain(f.Power(x, n)) != mod(new(big.Int).Exp(new(big.Int).SetUint64(a), big.NewInt(int64(n)), nil)) {
		t.Fatalf("%d^%d modulo %d", a, n, f.P)
	}
	n := 1 + r.IntN(5)
	c := make([]uint64, n)
	for i := range c {
		c[i] = []uint64{0, 1, ^uint64(0), 1 << 63, r.Uint64()}[r.IntN(5)]
	}
	v, unsigned := new(big.Int), new(big.Int)
	for i := n - 1; i >= 0; i-- {
		unsigned.Lsh(unsigned, 64).Add(unsigned, new(big.Int).SetUint64(c[i]))
	}
	v.Set(unsigned)
	if int64(c[n-1]) < 0 {
		v.Sub(v, new(big.Int).Lsh(big.NewInt(1), uint(64*n)))
	}
	var image [1]uint64
	f.Images(image[:], c, n)
	wantImage := mod(v)
	if n > 1 { // one word is taken as it is
		wantImage = f.Shrink(wantImage, n)
	}
	if f.Residue(c) != mod(v) || image[0] != wantImage || f.Image(c) != f.Shrink(mod(unsigned), n) || f.Grow(f.Shrink(a, n), n) != a {
		t.Fatalf("residues of %v modulo %d", v, f.P)
	}
}

// naiveResultant is the determinant of Sylvester's matrix modulo p.
func naiveResultant(f *Field, a, b []uint64) uint64 {
	m, n := len(a)-1, len(b)-1
	rows := make([][]uint64, m+n)
	for i := range rows {
		rows[i] = make([]uint64, m+n)
		for j := range a {
			if i < n {
				rows[i][i+m-j] = a[j]
			}
		}
		for j := range b {
			if i >= n {
				rows[i][i-n+n-j] = b[j]
			}
		}
	}
	det := f.one
	for k := range rows {
		p := k
		for p < len(rows) && rows[p][k] == 0 {
			p++
		}
		if p == len(rows) {
			return 0
		}
		if p != k {
			rows[p], rows[k] = rows[k], rows[p]
			det = f.Neg(det)
		}
		det = f.Mul(det, rows[k][k])
		inverse := f.Inverse(rows[k][k])
		for i := k + 1; i < len(rows); i++ {
			factor := f.Mul(rows[i][k], inverse)
			for j := k; j < len(rows); j++ {
				rows[i][j] = f.Sub(rows[i][j], f.Mul(factor, rows[k][j]))
			}
		}
	}
	return det
}

func TestEuclid(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	f := nth(3)
	random := func(terms int) []uint64 {
		c := make([]uint64, terms)
		for i := range c {
			if r.IntN(4) > 0 {
				c[i] = f.Stored(uint64(r.IntN(40)))
			}
		}
		c[terms-1] = f.Stored(1 + uint64(r.IntN(9)))
		return c
	}
	multiply := func(a, b []uint64) []uint64 {
		c := make([]uint64, len(a)+len(b)-1)
		for i, x := range a {
			for j, y := range b {
				c[i+j] = f.Sub(c[i+j], f.Neg(f.Mul(x, y)))
			}
		}
		return c
	}
	clone := func(a []uint64) []uint64 { return append([]uint64(nil), a...) }
	coprime := 0
	for range 2000 {
		a, b := random(2+r.IntN(6)), random(2+r.IntN(6))
		if r.IntN(3) == 0 {
			common := random(2 + r.IntN(3))
			a, b = multiply(a, common), multiply(b, common)
		}
		want := naiveResultant(&f, a, b)
		if got := f.Resultant(clone(a), clone(b)); got != want {
			t.Fatalf("resultant of %v and %v is %d, want %d", a, b, got, want)
		}
		g := f.GCD(clone(a), clone(b))
		for _, x := range [][]uint64{a, b} { // the gcd divides both
			if rest := f.trueRemainder(clone(x), g, f.Inverse(g[len(g)-1])); len(rest) != 0 {
				t.Fatalf("gcd %v leaves %v of %v", g, rest, x)
			}
		}
		if (len(g) == 1) != (want != 0) {
			t.Fatalf("gcd %v and resultant %d", g, want)
		}
		u, v, ok := f.Cofactors(clone(a), clone(b))
		if ok != (want != 0) {
			t.Fatalf("cofactors of %v and %v: %v", a, b, ok)
		}
		if !ok {
			continue
		}
		coprime++
		ua, vb := multiply(u, a), multiply(v, b)
		for i := range max(len(ua), len(vb)) {
			var s uint64
			if i < len(ua) {
				s = ua[i]
			}
			if i < len(vb) {
				s = f.Sub(s, f.Neg(vb[i]))
			}
			if s != 0 && i > 0 || i == 0 && s != f.one {
				t.Fatalf("u·a + v·b of %v and %v has %d at %d", a, b, s, i)
			}
		}
	}
	if coprime < 500 {
		t.Errorf("only %d coprime pairs", coprime)
	}
}

// Residues of numbers in two's complement, at the edges of every limb.
func checkPlainImages(t *testing.T, r *rand.Rand) {
	t.Helper()
	var primes Primes
	f := primes.Next()
	for range r.IntN(5) {
		f = primes.Next()
	}
	p := new(big.Int).SetUint64(f.P)
	n, count := 1+r.IntN(20), 1+r.IntN(12)
	w := make([]uint64, n*count)
	for i := range w {
		switch r.IntN(4) {
		case 0:
			w[i] = ^uint64(0)
		case 1: // 0
		default:
			w[i] = r.Uint64()
		}
	}
	out := make([]uint64, count)
	f.PlainImages(out, w, n)
	for i, got := range out {
		want, c := new(big.Int), w[i*n:(i+1)*n]
		for k := n - 1; k >= 0; k-- {
			want.Add(want.Lsh(want, 64), new(big.Int).SetUint64(c[k]))
		}
		if int64(c[n-1]) < 0 {
			want.Sub(want, new(big.Int).Lsh(big.NewInt(1), uint(64*n)))
		}
		if want.Mod(want, p).Uint64() != got {
			t.Fatalf("%x modulo %d is %d, want %v", c, f.P, got, want)
		}
	}
	x := 1 + r.Uint64N(f.P-1)
	if one := f.Mul(x, f.Inverse(x)); f.Plain(one) != 1 {
		t.Fatalf("the inverse of %d modulo %d", x, f.P)
	}
}

func TestPlainImages(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	for range 3000 {
		checkPlainImages(t, r)
	}
}

func FuzzField(f *testing.F) {
	f.Add(uint64(1))
	f.Fuzz(func(t *testing.T, seed uint64) {
		checkField(t, rand.New(rand.NewPCG(seed, 1)))
		checkPlainImages(t, rand.New(rand.NewPCG(seed, 2)))
	})
}

// The cyclic product of two polynomials by the transform is that by its
// definition.
func TestTransform(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for index := range MaxTransforms {
		for _, n := range []int{1, 2, 4, 8, 64} {
			tr := NewTransform(index, n)
			p := new(big.Int).SetUint64(tr.P)
			if !p.ProbablyPrime(20) || tr.P>>61 != 1 {
				t.Fatalf("%d is no prime between 2^61 and 2^62", tr.P)
			}
			a, b := make([]uint64, n), make([]uint64, n)
			want := make([]*big.Int, n)
			for i := range a {
				a[i], b[i] = r.Uint64N(tr.P), r.Uint64N(tr.P)
				want[i] = new(big.Int)
			}
			for i, x := range a {
				for j, y := range b {
					k := (i + j) % n
					xy := new(big.Int).Mul(new(big.Int).SetUint64(x), new(big.Int).SetUint64(y))
					want[k].Mod(want[k].Add(want[k], xy), p)
				}
			}
			tr.Forward(a)
			tr.Forward(b)
			for i := range a {
				a[i] = tr.Mul(tr.Below(a[i]), tr.Below(b[i]))
			}
			tr.Backward(a)
			tr.Scale(a)
			for i := range a {
				if a[i] != want[i].Uint64() {
					t.Fatalf("order %d modulo %d: coefficient %d is %d, want %v", n, tr.P, i, a[i], want[i])
				}
			}
		}
	}
}

func BenchmarkTransform(b *testing.B) {
	for _, n := range []int{256, 2048, 16384, 1 << 17} {
		tr := NewTransform(0, n)
		a := make([]uint64, n)
		b.Run(fmt.Sprintf("order=%d", n), func(b *testing.B) {
			for b.Loop() {
				tr.Forward(a)
			}
		})
		b.Run(fmt.Sprintf("back=%d", n), func(b *testing.B) {
			for b.Loop() {
				tr.Backward(a)
			}
		})
		b.Run(fmt.Sprintf("new=%d", n), func(b *testing.B) {
			for b.Loop() {
				NewTransform(0, n)
			}
		})
	}
}
