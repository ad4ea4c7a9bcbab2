package poly

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/ratpoly"
)

// MaxDegree and MaxBits bound the results of Pow and Compose: the degree, and
// an upper bound on the bits of a numerator and its denominator together. All
// coefficients together are bounded by maxTotal.
const (
	MaxDegree = 4096
	MaxBits   = 1 << 18
	maxTotal  = 3 << 24
)

// bits is the size of the longest coefficient of p, to a bit.
func (p Poly) bits() int { return p.span() + p.denominatorBits() }

// Pow returns p^n; p^0 is 1. The error is ErrLimit for a negative n, and where
// the result could pass MaxDegree, MaxBits or 6 MiB in all.
func (p Poly) Pow(n int) (Poly, error) {
	if err := p.Err(); err != nil {
		return Poly{}, err
	}
	if n < 0 || n > 0 && (p.Degree() > MaxDegree/n || p.bits() > MaxBits/n) || n > MaxBits ||
		(p.Degree()*n+1)*p.bits()*n > maxTotal {
		return Poly{}, ErrLimit
	}
	e := big.NewInt(int64(n))
	return checked(ratpoly.New(p.integer().Pow(n), new(big.Int).Exp(p.rational().Denominator(), e, nil)))
}

// Compose returns p(q(x)). The error is ErrLimit where the result could pass
// MaxDegree, MaxBits or, for a q of positive degree, 6 MiB in all.
func (p Poly) Compose(q Poly) (Poly, error) {
	if err := errorOf(p, q); err != nil {
		return Poly{}, err
	}
	m, n := p.Degree(), q.Degree()
	if m > 0 && n > 0 && (n > MaxDegree/m || q.bits() > (MaxBits-min(p.bits(), MaxBits))/m) || m > MaxDegree {
		return Poly{}, ErrLimit
	}
	if m > 0 && n > 0 && (m*n+1)*(p.bits()+m*q.bits()) > maxTotal {
		return Poly{}, ErrLimit
	}
	powers := []Poly{q} // q^(2^k)
	for k := 1; 1<<k <= m; k++ {
		powers = append(powers, powers[k-1].Mul(powers[k-1]))
	}
	out := p.compose(powers, 0, m+1)
	return out, out.Err()
}

// checked returns p and its Err.
func checked(p ratpoly.Poly) (Poly, error) {
	out := Poly(p.Checked())
	return out, out.Err()
}

// errorOf is the first error of p and q.
func errorOf(p, q Poly) error {
	if err := p.Err(); err != nil {
		return err
	}
	return q.Err()
}

// compose returns Σ c_i·q^(i − from) over from ≤ i < to. It splits the sum where
// the upper part is lifted by a power q^(2^k), so that long results are products
// of long factors.
func (p Poly) compose(powers []Poly, from, to int) Poly {
	switch {
	case to <= from:
		return Poly{}
	case to-from == 1:
		return FromRats(p.Coefficient(from))
	}
	k := 0
	for 2<<k < to-from {
		k++
	}
	upper := p.compose(powers, from+1<<k, to)
	return p.compose(powers, from, from+1<<k).Add(upper.Mul(powers[k]))
}

// QuoRem returns the quotient and the remainder of p over q: p = quo·q + rem
// with a degree of rem below that of q. The errors are ErrDivisionByZero for
// q = 0, and ErrLimit where the remainder could pass MaxBits per coefficient
// (bits of q times the difference k of the degrees), or be longer than a Poly may be, or where deg p·k² times the
// bits of q passes 2^37: beyond degree 2500
// over 1250 with 32-bit coefficients.
func (p Poly) QuoRem(q Poly) (quo, rem Poly, err error) {
	if err := errorOf(p, q); err != nil {
		return Poly{}, Poly{}, err
	}
	if q.IsZero() {
		return Poly{}, Poly{}, ErrDivisionByZero
	}
	if p.Degree() < q.Degree() {
		return Poly{}, p, nil
	}
	n, bits := p.Degree()-q.Degree()+1, q.integer().MaxBitLen()
	if bits > MaxBits/n || float64(p.Degree()+1)*float64(n)*float64(n)*float64(bits) > 1<<37 {
		return Poly{}, Poly{}, ErrLimit
	}
	// With P = dp·p and Q = dq·q whole and lc^k·P = A·Q + R:
	// p = (A·dq/(lc^k·dp))·q + R/(lc^k·dp).
	a, r, k := p.integer().PseudoQuoRem(q.integer())
	den := new(big.Int).Exp(q.integer().Leading(), big.NewInt(int64(k)), nil)
	den.Mul(den, p.rational().Denominator())
	if quo, err = checked(ratpoly.New(a.MulInt(q.rational().Denominator()), den)); err != nil {
		return Poly{}, Poly{}, err
	}
	if rem, err = checked(ratpoly.New(r, den)); err != nil {
		return Poly{}, Poly{}, err
	}
	return quo, rem, nil
}

// monic divides a primitive polynomial, or 0, by its leading coefficient.
func monic(p intpoly.Poly) Poly {
	if p.Degree() < 1 { // 0, or 1 as most are
		return fromInteger(p)
	}
	return Poly(ratpoly.Monic(p))
}

// GCD returns the monic greatest common divisor of p and q; the polynomial 0
// when both are 0. The error is ErrLimit for operands whose modular images could
// take more than 2^34 multiplications of words: beyond degree 16 with 480,000
// bits, degree 1000 with 45,000 bits, or degree 8000 with 1900 bits.
func (p Poly) GCD(q Poly) (Poly, error) {
	if err := errorOf(p, q); err != nil {
		return Poly{}, err
	}
	if p.integer().GCDWork(q.integer()) > intpoly.MaxGCDWork {
		return Poly{}, ErrLimit
	}
	return monic(p.integer().GCD(q.integer())), nil
}

// ExtendedGCD returns the monic greatest common divisor g and polynomials u, v
// with u·p + v·q = g, deg u < deg q/g and deg v < deg p/g where these are
// positive; a constant multiple of one of them where the other is the gcd. The
// error is ErrLimit for operands whose cofactors, which are as long as the
// resultant, would take more than 11·2^28 multiplications of words or would be
// longer than a Poly may be: beyond degree 350 with 32-bit coefficients.
func (p Poly) ExtendedGCD(q Poly) (g, u, v Poly, err error) {
	if err := errorOf(p, q); err != nil {
		return Poly{}, Poly{}, Poly{}, err
	}
	a, b := p.integer(), q.integer()
	if a.CofactorWork(b) > intpoly.MaxCofactorWork {
		return Poly{}, Poly{}, Poly{}, ErrLimit
	}
	h := a.GCD(b)
	if h.IsZero() {
		return Poly{}, Poly{}, Poly{}, nil
	}
	a, _ = a.QuoExact(h)
	b, _ = b.QuoExact(h)
	// s·a + t·b = r, and with P = dp·p = a·h the factors of p and q are s·dp and
	// t·dq over r·lc(h).
	var s, t intpoly.Poly
	var r *big.Int
	switch {
	case b.Degree() == 0:
		t, r = intpoly.FromInt64s(1), b.Coefficient(0)
	case a.Degree() == 0:
		s, r = intpoly.FromInt64s(1), a.Coefficient(0)
	default:
		s, t, r, _ = a.Cofactors(b)
	}
	r.Mul(r, h.Leading())
	if u, err = checked(ratpoly.New(s.MulInt(p.rational().Denominator()), r)); err != nil {
		return Poly{}, Poly{}, Poly{}, err
	}
	if v, err = checked(ratpoly.New(t.MulInt(q.rational().Denominator()), r)); err != nil {
		return Poly{}, Poly{}, Poly{}, err
	}
	return monic(h), u, v, nil
}

// Resultant returns the resultant of p and q, which is 0 when they have a
// common root and where one of them is 0. The error is ErrLimit for operands whose
// resultant would take more than 2^32 multiplications of words: beyond degree 850
// with 32-bit coefficients, or degree 20 with 20,000 bits.
func (p Poly) Resultant(q Poly) (*big.Rat, error) {
	if err := errorOf(p, q); err != nil {
		return nil, err
	}
	if p.integer().ResultantWork(q.integer()) > intpoly.MaxResultantWork {
		return nil, ErrLimit
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
// that of Yun (1976). The error is ErrLimit, as for GCD but from half its work on.
func (p Poly) SquareFree() ([]Factor, error) {
	if err := p.Err(); err != nil {
		return nil, err
	}
	if p.integer().GCDWork(p.integer()) > intpoly.MaxGCDWork/2 {
		return nil, ErrLimit
	}
	found := p.integer().SquareFree()
	out := make([]Factor, len(found))
	for i, f := range found {
		out[i] = Factor{Poly: monic(f.Poly), Multiplicity: f.Multiplicity}
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
