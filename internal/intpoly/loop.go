package intpoly

import "math/big"

// Loop returns n1·d2 and d1·d2 + sign·n1·n2 for sign = ±1, both negated where
// that makes the leading coefficient of the second positive: the loop with
// n1/d1 forward and n2/d2 back.
func Loop(n1, d1, n2, d2 Poly, sign int) (num, den Poly) {
	num = n1.Mul(d2)
	den = SumOfProducts(d1, d2, n1, n2, sign)
	if den.Sign(den.Degree()) < 0 {
		num, den = num.negateFresh(), den.negateFresh()
	}
	return num, den
}

// negateFresh is Neg for a value that nobody else holds, in its own limbs where
// they suffice.
func (p Poly) negateFresh() Poly {
	for i := range p.terms() {
		if c := p.at(i); c[p.n-1] == 1<<63 && isZero(c[:p.n-1]) {
			return p.Neg() // −2^(64 n − 1) has no negative of the same length
		}
	}
	for i := range p.terms() {
		negate(p.at(i))
	}
	return trim(p.w, max(p.n, 1))
}

// WordContent returns the content of p where it is a word, else 0. The content
// of 0 is 0.
func (p Poly) WordContent() uint64 {
	if p.n == 1 {
		return p.wordContent()
	}
	c := p.Content()
	if !c.IsUint64() {
		return 0
	}
	return c.Uint64()
}

// word returns a word as a number.
func word(x uint64) *big.Int { return new(big.Int).SetUint64(x) }

// QuoWord is QuoInt for a word.
func (p Poly) QuoWord(c uint64) Poly { return p.QuoInt(word(c)) }
