package poly

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratpoly"
)

// MaxDegree and MaxBits bound the results of Pow and Compose: the degree, and
// an upper bound on the bits of numerators and denominators together.
const (
	MaxDegree = 4096
	MaxBits   = 1 << 18
)

// bits bounds the size of a coefficient of p.
func (p Poly) bits() int { return p.integer().MaxBitLen() + p.rational().DenominatorBits() }

// Pow returns p^n; p^0 is 1. The error is ErrLimit for a negative n, and where
// the result could pass MaxDegree or MaxBits.
func (p Poly) Pow(n int) (Poly, error) {
	if n < 0 || n > 0 && (p.Degree() > MaxDegree/n || p.bits() > MaxBits/n) || n > MaxBits {
		return Poly{}, ErrLimit
	}
	e := big.NewInt(int64(n))
	return Poly(ratpoly.New(p.integer().Pow(n), new(big.Int).Exp(p.rational().Denominator(), e, nil))), nil
}

// Compose returns p(q(x)). The error is ErrLimit where the result could pass
// MaxDegree or MaxBits.
func (p Poly) Compose(q Poly) (Poly, error) {
	m, n := p.Degree(), q.Degree()
	if m > 0 && n > 0 && (n > MaxDegree/m || q.bits() > (MaxBits-min(p.bits(), MaxBits))/m) || m > MaxDegree {
		return Poly{}, ErrLimit
	}
	var v Poly
	for i := m; i >= 0; i-- {
		v = v.Mul(q).Add(FromRats(p.Coefficient(i)))
	}
	return v, nil
}

// QuoRem returns the quotient and the remainder of p over q: p = quo·q + rem
// with a degree of rem below that of q. The errors are ErrDivisionByZero for
// q = 0, and ErrLimit where the remainder could pass MaxBits per coefficient
// (bits of q times the difference of the degrees).
func (p Poly) QuoRem(q Poly) (quo, rem Poly, err error) {
	if q.IsZero() {
		return Poly{}, Poly{}, ErrDivisionByZero
	}
	if p.Degree() < q.Degree() {
		return Poly{}, p, nil
	}
	if n := p.Degree() - q.Degree() + 1; q.integer().MaxBitLen() > MaxBits/n {
		return Poly{}, Poly{}, ErrLimit
	}
	// With P = dp·p and Q = dq·q whole and lc^k·P = A·Q + R:
	// p = (A·dq/(lc^k·dp))·q + R/(lc^k·dp).
	a, r, k := p.integer().PseudoQuoRem(q.integer())
	den := new(big.Int).Exp(q.integer().Leading(), big.NewInt(int64(k)), nil)
	den.Mul(den, p.rational().Denominator())
	return Poly(ratpoly.New(a.MulInt(q.rational().Denominator()), den)), Poly(ratpoly.New(r, den)), nil
}

// GCD returns the monic greatest common divisor of p and q; the polynomial 0
// when both are 0. The error is ErrLimit where the degree of one times the bits
// of the other passes 2^26.
func (p Poly) GCD(q Poly) (Poly, error) {
	if err := p.boundPair(q); err != nil {
		return Poly{}, err
	}
	g := fromInteger(p.integer().GCD(q.integer()))
	if g.Degree() == 0 { // 1, as most are
		return g, nil
	}
	return g.Monic(), nil
}

// boundPair is the bound that GCD, ExtendedGCD and Resultant share.
func (p Poly) boundPair(q Poly) error {
	const most = 1 << 26
	if (p.Degree()+1)*(q.bits()+1) > most || (q.Degree()+1)*(p.bits()+1) > most {
		return ErrLimit
	}
	return nil
}

// ExtendedGCD returns the monic greatest common divisor g and polynomials u, v
// with u·p + v·q = g, deg u < deg q/g and deg v < deg p/g where these are
// positive. The errors are those of GCD, and ErrLimit for degrees above 512.
func (p Poly) ExtendedGCD(q Poly) (g, u, v Poly, err error) {
	if err := p.boundPair(q); err != nil {
		return Poly{}, Poly{}, Poly{}, err
	}
	if max(p.Degree(), q.Degree()) > 512 {
		return Poly{}, Poly{}, Poly{}, ErrLimit
	}
	one := FromInts(1)
	a, ua, va := p, one, Poly{}
	b, ub, vb := q, Poly{}, one
	for !b.IsZero() {
		t, r, err := a.QuoRem(b)
		if err != nil {
			return Poly{}, Poly{}, Poly{}, err
		}
		ur, vr := ua.Sub(t.Mul(ub)), va.Sub(t.Mul(vb))
		// A monic remainder keeps the numbers as small as they can be.
		if !r.IsZero() {
			k := r.Coefficient(r.Degree())
			k.Inv(k)
			r, ur, vr = r.Scale(k), ur.Scale(k), vr.Scale(k)
		}
		a, ua, va, b, ub, vb = b, ub, vb, r, ur, vr
	}
	if a.IsZero() {
		return a, ua, va, nil
	}
	k := a.Coefficient(a.Degree())
	k.Inv(k)
	return a.Scale(k), ua.Scale(k), va.Scale(k), nil
}

// Resultant returns the resultant of p and q, which is 0 when they have a
// common root and where one of them is 0. The error is that of GCD.
func (p Poly) Resultant(q Poly) (*big.Rat, error) {
	if err := p.boundPair(q); err != nil {
		return nil, err
	}
	// res(P/dp, Q/dq) = res(P, Q)/(dp^deg q · dq^deg p)
	power := func(d *big.Int, n int) *big.Int { return new(big.Int).Exp(d, big.NewInt(int64(max(n, 0))), nil) }
	den := power(p.rational().Denominator(), q.Degree())
	den.Mul(den, power(q.rational().Denominator(), p.Degree()))
	return new(big.Rat).SetFrac(p.integer().Resultant(q.integer()), den), nil
}

// Factor is a factor of a polynomial and how often it occurs.
type Factor struct {
	_            [0]func()
	Poly         Poly
	Multiplicity int
}

// SquareFree returns the square-free decomposition of p: monic factors of
// positive degree without multiple roots, pairwise coprime, in ascending
// multiplicity. Their product is p.Monic(); a constant has none. The method is
// that of Yun (1976). The error is that of GCD.
func (p Poly) SquareFree() ([]Factor, error) {
	if err := p.boundPair(p); err != nil {
		return nil, err
	}
	found := p.integer().SquareFree()
	out := make([]Factor, len(found))
	for i, f := range found {
		out[i] = Factor{Poly: fromInteger(f.Poly).Monic(), Multiplicity: f.Multiplicity}
	}
	return out, nil
}

// squareFreePart is the product of the distinct factors.
func squareFreePart(p intpoly.Poly) intpoly.Poly {
	_, p = p.Primitive()
	if p.Degree() < 1 {
		return p
	}
	q, _ := p.QuoExact(p.GCD(p.Derivative()))
	return q
}
