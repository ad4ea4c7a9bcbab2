package dd

import (
	"encoding/binary"
	"hash/fnv"
	"math/rand/v2"
	"testing"
)

// All results are the same bits on every machine: the checksum was computed
// under GOAMD64=v1 and holds under GOAMD64=v3 and GOARCH=arm64.
func TestSameBitsEverywhere(t *testing.T) {
	h := fnv.New64a()
	see := func(values ...DD) {
		for _, v := range values {
			binary.Write(h, binary.LittleEndian, v)
		}
	}
	r := rand.New(rand.NewPCG(13, 14))
	for range 5000 {
		x, y := random(r, 8), random(r, 8)
		see(x.Add(y), x.Sub(y), x.Mul(y), x.AddFloat(y.Hi), x.MulFloat(y.Hi), Exp(x))
		if y.Hi != 0 {
			see(x.Div(y), y.Mul(y).Sqrt())
		}
		s, c := SinCos(y)
		z := Complex{x, y}
		see(s, c, z.Mul(z).Re, z.Mul(z).Im)
		v, bound := Horner([]DD{x, y, s, c}, z)
		see(v.Re, v.Im, From(bound))
	}
	const want = 0x7caa76d4dcc5f821
	if got := h.Sum64(); got != want {
		t.Errorf("checksum %#x, want %#x", got, uint64(want))
	}
}

// Round decides only what every number within the bound decides.
func TestRound(t *testing.T) {
	for _, c := range []struct {
		x     DD
		bound float64
		want  float64
		ok    bool
	}{
		{DD{1, 0}, 0x1p-60, 1, true},
		{DD{1, 0x1p-54}, 0x1p-60, 1, true},
		{DD{1, 0x1p-53}, 0x1p-100, 0, false}, // about a tie
		{DD{1, 0x1p-53 + 0x1p-90}, 0x1p-100, 1 + 0x1p-52, true},
		{DD{0, 0}, 0, 0, false}, // below the range
		{DD{0x1p-1000, 0}, 0, 0, false},
		{DD{-3, 0}, 0x1p-70, -3, true},
	} {
		if v, ok := c.x.Round(c.bound); ok != c.ok || ok && v != c.want {
			t.Errorf("%v.Round(%g) = %g %t, want %g %t", c.x, c.bound, v, ok, c.want, c.ok)
		}
	}
}
