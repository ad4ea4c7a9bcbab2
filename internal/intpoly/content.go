package intpoly

import (
	"math/big"
	"math/bits"
)

// Content is the greatest common divisor of the coefficients, ≥ 0.
func (p Poly) Content() *big.Int {
	if p.n == 1 {
		return new(big.Int).SetUint64(p.wordContent())
	}
	// A coefficient of one word bounds the content by a word.
	for i := range p.terms() {
		if v, ok := p.Int64(i); ok && v != 0 {
			return word(p.CommonWord(magnitude(uint64(v))))
		}
	}
	g := new(big.Int)
	var c big.Int
	for i := range p.terms() {
		if g.IsUint64() && g.Sign() != 0 {
			return word(p.CommonWord(g.Uint64()))
		}
		load(&c, p.at(i))
		g.GCD(nil, nil, g, c.Abs(&c))
	}
	return g
}

// wordContent is Content for word-size coefficients.
func (p Poly) wordContent() uint64 {
	var g uint64
	for _, x := range p.w {
		if g = gcdWord(g, magnitude(x)); g == 1 {
			break
		}
	}
	return g
}

// ContentIsOne reports whether the coefficients have no common divisor but 1.
func (p Poly) ContentIsOne() bool {
	if p.n == 1 {
		return p.wordContent() == 1
	}
	c := p.Content()
	return c.IsUint64() && c.Uint64() == 1
}

// CommonWord returns gcd(g, content of p) for a word g.
func (p Poly) CommonWord(g uint64) uint64 {
	for i := 0; i < p.terms() && g > 1; i++ {
		c := p.at(i)
		var r uint64 // |c| mod g: the two's complement is |c| up to a multiple of 2^(64 n)
		if p.n == 1 {
			r = magnitude(c[0]) % g
		} else {
			negative := int64(c[len(c)-1]) < 0
			for k := len(c) - 1; k >= 0; k-- {
				x := c[k]
				if negative {
					x = ^x // −c − 1
				}
				_, r = bits.Div64(r, x, g)
			}
			if negative {
				r = (r + 1) % g
			}
		}
		g = gcdWord(g, r)
	}
	return g
}

func magnitude(x uint64) uint64 {
	sign := signOf(x)
	return (x ^ sign) - sign
}

// gcdWord is the greatest common divisor, by Stein's binary algorithm (1967).
func gcdWord(a, b uint64) uint64 {
	if a == 0 {
		return b
	}
	if b == 0 {
		return a
	}
	shift := bits.TrailingZeros64(a | b)
	a >>= uint(bits.TrailingZeros64(a))
	for {
		b >>= uint(bits.TrailingZeros64(b))
		if a == b {
			return a << uint(shift)
		}
		if a > b {
			a, b = b, a
		}
		b -= a
	}
}

// Primitive returns p/content with a positive leading coefficient, and the
// content with the sign that makes content·primitive = p.
func (p Poly) Primitive() (content *big.Int, primitive Poly) {
	content = p.Content()
	if p.IsZero() {
		return content, p
	}
	if p.Sign(p.Degree()) < 0 {
		content.Neg(content)
	}
	return content, p.QuoInt(content)
}

// primitive is the primitive part alone.
func (p Poly) primitive() Poly {
	if p.ContentIsOne() {
		if p.Sign(p.Degree()) < 0 {
			return p.Neg()
		}
		return p
	}
	_, q := p.Primitive()
	return q
}
