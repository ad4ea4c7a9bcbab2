package tf

import (
	"math"

	"github.com/qofs/qofs/internal/dd"
)

// sliced is a complex number c + jd, each part as float64 and, more precisely, as
// a multiple of 2^−slice of the size of the number and a rest.
type sliced struct{ c, c1, c2, d, d1, d2 float64 }

func sliceOf(c, d double, slice int) sliced {
	_, exponent := math.Frexp(max(math.Abs(c.Hi), math.Abs(d.Hi), 0x1p-900))
	round := math.Ldexp(1.5, 52-slice+exponent)
	c1, d1 := (c.Hi+round)-round, (d.Hi+round)-round
	return sliced{c.Hi, c1, (c.Hi - c1) + c.Lo, d.Hi, d1, (d.Hi - d1) + d.Lo}
}

// rotate returns the complex product x·y within 2^−74.8 of its size: the
// products of the slices and their sum are exact, what is left is below 2^−24 of
// the size.
func (x *sliced) rotate(y *sliced) (re, im double) {
	re.Hi = float64(x.c1*y.c1) - float64(x.d1*y.d1)
	re.Lo = (float64(x.c1*y.c2) + float64(x.c2*y.c)) - (float64(x.d1*y.d2) + float64(x.d2*y.d))
	im.Hi = float64(x.c1*y.d1) + float64(x.d1*y.c1)
	im.Lo = (float64(x.c1*y.d2) + float64(x.c2*y.d)) + (float64(x.d1*y.c2) + float64(x.d2*y.c))
	return re, im
}

// times does so for real numbers.
func (x *sliced) times(y *sliced) double {
	return dd.Pair(float64(x.c1*y.c1), float64(x.c1*y.c2)+float64(x.c2*y.c))
}

// rows multiplies the table by the anchor and rounds; it returns how many
// values are decided and leaves 0 in the others.
func (s *sampler) rows(out []float64, bound float64) (decided int) {
	h, r := s.sums[0][:len(out)], s.sums[1][:len(out)]
	clear(h)
	clear(r)
	l := 0
	for ; l+1 < len(s.anchor); l += 2 {
		s.addTwo(h, r, l)
	}
	if l < len(s.anchor) {
		s.addOne(h, r, l)
	}
	for j := range out {
		v := h[j] + (r[j] - bound)
		if v == h[j]+(r[j]+bound) {
			out[j] = v
			decided++
		}
	}
	return decided
}

// addOne adds the products of column l: the exact ones to h, the others to r.
func (s *sampler) addOne(h, r []float64, l int) {
	a := s.anchor[l]
	b, b1, b2 := s.column(l, len(h))
	r = r[:len(h)]
	for j := range h {
		h[j] += float64(a.a1 * b1[j])
		r[j] += float64(a.a1*b2[j]) + float64(a.a2*b[j])
	}
}

// addTwo does so for columns l and l+1.
func (s *sampler) addTwo(h, r []float64, l int) {
	a, d := s.anchor[l], s.anchor[l+1]
	b, b1, b2 := s.column(l, len(h))
	c, c1, c2 := s.column(l+1, len(h))
	r = r[:len(h)]
	b, b1, b2, c, c1, c2 = b[:len(h)], b1[:len(h)], b2[:len(h)], c[:len(h)], c1[:len(h)], c2[:len(h)]
	for j := range h {
		h[j] += float64(a.a1*b1[j]) + float64(d.a1*c1[j])
		r[j] += (float64(a.a1*b2[j]) + float64(a.a2*b[j])) + (float64(d.a1*c2[j]) + float64(d.a2*c[j]))
	}
}

// column returns the first n entries of column l.
func (s *sampler) column(l, n int) (b, b1, b2 []float64) {
	i := l * s.block
	return s.table[0][i:][:n], s.table[1][i:][:n], s.table[2][i:][:n]
}
