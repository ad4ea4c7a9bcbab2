package tf

import (
	"math"
	"math/big"
	"math/bits"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/ratpoly"
)

// at is the certified stage: the value at a rational time, in balls at doubling
// precision until every point of the ball rounds to the same float64. What is
// rational is decided exactly before.
func (e *expansion) at(t *big.Rat) (float64, error) {
	switch {
	case t.Sign() < 0:
		return 0, nil
	case t.Sign() == 0 || e.den.Degree() == e.den.Valuation():
		return rounded(e.polynomialAt(t))
	}
	if e.isHuge(t) {
		return e.huge(t)
	}
	near := e.nearZero(t)
	for i := range rungs {
		if i == 2 && e.vanishesOffZero(t) {
			return rounded(e.polynomialAt(t))
		}
		y, err := e.enclosure(t, i, near)
		if err != nil {
			return 0, err
		}
		if v, ok := y.Float64(); ok {
			return v, nil
		}
		if y.IsBeyondRange() {
			return 0, fault.ErrRange
		}
	}
	return 0, errUndecided
}

// enclosure returns a ball around the value at t > 0, computed on rung i.
func (e *expansion) enclosure(t *big.Rat, i int, near bool) (ball.Real, error) {
	if near {
		return e.seriesAt(t, i), nil
	}
	parts, err := e.principals(i)
	if err != nil {
		return ball.Real{}, err
	}
	prec := uint(firstPrecision)<<i + 32
	return sumAt(parts, ball.FromRat(t, prec), ball.Real{}, prec), nil
}

// isHuge reports whether the exponent of the fastest growing mode passes 2^20.
func (e *expansion) isHuge(t *big.Rat) bool {
	v, _ := t.Float64()
	return e.growthRate()*v > 1<<20
}

// growthRate is the largest real part of a pole.
func (e *expansion) growthRate() float64 {
	rate := math.Inf(-1)
	for _, root := range e.roots {
		rate = max(rate, real(root.Number.Value()))
	}
	return rate
}

// huge divides the function by e^(σt) of its fastest growing mode, with
// σt > 2^20: where the quotient is above 2^−2^20 the value passes the range.
func (e *expansion) huge(t *big.Rat) (float64, error) {
	rate := e.growthRate()
	for i := range rungs {
		parts, err := e.principals(i)
		if err != nil {
			return 0, err
		}
		prec := uint(firstPrecision)<<i + 32
		x := ball.FromRat(t, prec)
		for _, p := range parts {
			if real(p.root.Value()) != rate {
				continue
			}
			y := sumAt(parts, x, p.pole.Re.Mul(x, prec), prec)
			if _, ok := y.Sign(); ok && y.Abs().Lower().MantExp(nil) > -1<<20+2 {
				return 0, fault.ErrRange
			}
			break
		}
	}
	return 0, errUndecided
}

// sumAt returns e^(−shift)·Σ c_k·t^k/k!·e^(pt) over the principal parts.
func sumAt(parts []principal, t, shift ball.Real, prec uint) ball.Real {
	var sum ball.Real
	for _, p := range parts {
		// Horner in t: c_0 + t/1·(c_1 + t/2·(c_2 + …)).
		var v ball.Complex
		for k := len(p.coefficients) - 1; k >= 0; k-- {
			if k < len(p.coefficients)-1 {
				step := t.Div(ball.FromInt64(int64(k+1)), prec)
				v = ball.NewComplex(v.Re.Mul(step, prec), v.Im.Mul(step, prec))
			}
			v = v.Add(p.coefficients[k], prec)
		}
		decay := p.pole.Re.Mul(t, prec).Sub(shift, prec).Exp(prec)
		if !p.pair {
			sum = sum.Add(v.Re.Mul(decay, prec), prec)
			continue
		}
		sin, cos := p.pole.Im.Mul(t, prec).SinCos(prec)
		y := v.Re.Mul(cos, prec).Sub(v.Im.Mul(sin, prec), prec)
		sum = sum.Add(y.Mul(decay, prec).MulPow2(1), prec)
	}
	return sum
}

// polynomialAt returns the part of the function that belongs to the pole 0, a
// polynomial in t, at t. Where t = 0 that is the initial value of the whole.
func (e *expansion) polynomialAt(t *big.Rat) *big.Rat {
	if t.Sign() == 0 {
		return e.initial()
	}
	m := e.den.Valuation()
	if m == 0 {
		return new(big.Rat)
	}
	f := rationals{}
	c, _ := expand(f, e.num, e.den, new(big.Rat), m)
	v := new(big.Rat)
	for k := m - 1; k >= 0; k-- {
		v.Mul(v, t)
		v.Quo(v, big.NewRat(int64(k+1), 1))
		v.Add(v, c[k])
	}
	return v
}

// initial returns the value just after t = 0.
func (e *expansion) initial() *big.Rat {
	if e.num.Degree() < e.den.Degree()-1 {
		return new(big.Rat)
	}
	return new(big.Rat).SetFrac(e.num.Leading(), e.den.Leading())
}

// vanishesOffZero reports whether the polynomials in t that multiply e^(pt)
// are all zero at t for the poles p ≠ 0; then the value is rational, and
// otherwise it is transcendental (Lindemann 1882, Weierstrass 1885). A
// simple pole has a constant that is not zero.
func (e *expansion) vanishesOffZero(t *big.Rat) bool {
	seen := map[int]bool{}
	for _, root := range e.roots {
		if !root.Number.IsZero() {
			if root.Multiplicity == 1 {
				return false
			}
			seen[root.Multiplicity] = true
		}
	}
	for m := range seen {
		f := residues{e.squareFree(m)}
		c, ok := expand(f, e.num, e.den, f.variable(), m)
		if !ok {
			return false
		}
		var v ratpoly.Poly
		for k := m - 1; k >= 0; k-- {
			v = v.Scale(new(big.Rat).Quo(t, big.NewRat(int64(k+1), 1))).Add(c[k])
		}
		if !v.Integer().IsZero() {
			return false
		}
	}
	return true
}

// growth bounds the Markov parameters: |μ_k| ≤ 2^(scale + rate·k).
type growth struct{ scale, rate int }

// bound derives the growth. With den/(lead·s^n) = 1 + a_1/s + a_2/s² + … and
// ρ = 2^rate at least 4·|a_i|^(1/i) for every i, Σ|a_i|ρ^−i ≤ 1/3, so the
// coefficients of the reciprocal are at most 1.5·ρ^k, and those of its product
// with Σ b_j s^(−1−j) at most 1.5·ρ^k·Σ|b_j|ρ^−j.
func (e *expansion) bound() growth {
	e.bounded.Do(func() {
		n := e.den.Degree()
		lead := e.den.BitLen(n) - 1 // lead ≥ 2^(…)
		rate := -1 << 30
		for i := 1; i <= n; i++ {
			if e.den.Sign(n-i) != 0 {
				rate = max(rate, 2+ceilDiv(e.den.BitLen(n-i)-lead, i))
			}
		}
		scale := -1 << 30
		for j := 0; j < n; j++ {
			if e.num.Sign(n-1-j) != 0 {
				scale = max(scale, e.num.BitLen(n-1-j)-lead-rate*j)
			}
		}
		e.growth = growth{scale: scale + 1 + bits.Len(uint(n)), rate: rate}
	})
	return e.growth
}

func ceilDiv(a, b int) int {
	q := a / b
	if q*b < a {
		q++
	}
	return q
}

// nearZero reports whether ρ·t is so small beside the relative degree that the
// Taylor series about 0 cancels less than the terms do.
func (e *expansion) nearZero(t *big.Rat) bool {
	if e.den.Valuation() == e.den.Degree() {
		return false
	}
	limit := -1
	if e.den.Degree()-e.num.Degree() > 2 {
		limit = e.reachOf()
	}
	return log2Above(t)+e.bound().rate <= limit
}

// log2Above returns n with t < 2^n, for t > 0.
func log2Above(t *big.Rat) int { return t.Num().BitLen() - t.Denom().BitLen() + 1 }

// seriesAt returns Σ μ_k·t^k/k! with a bound of what is left out, on rung i.
func (e *expansion) seriesAt(t *big.Rat, i int) ball.Real {
	prec := firstPrecision << i
	work := uint(prec + 32)
	n := e.den.Degree()
	g := e.bound()
	x := ball.FromRat(t, work)
	// ρt ≤ 2^size. From the term on at which k + 2 ≥ 2ρt, the rest is at most
	// 2^scale·Σ_{l>k} (ρt)^l/l! ≤ 2^scale·2·(ρt)^(k+1)/(k+1)!.
	size := log2Above(t) + g.rate
	least := n - 1
	if size >= 0 {
		least = max(least, 2<<size)
	}
	var mu []ball.Real
	sum, power := ball.Real{}, ball.FromInt64(1) // power is t^k/k!
	for k := 0; ; k++ {
		if k >= len(mu) {
			mu = e.ladder[i].parameters(e, 2*k+64, work)
		}
		sum = sum.Add(mu[k].Mul(power, work), work)
		power = power.Mul(x, work).Div(ball.FromInt64(int64(k+1)), work)
		rest := new(big.Float).SetMantExp(power.Upper(), g.scale+1+g.rate*(k+1))
		if k >= least && (k > prec+least || small(rest, sum, prec)) {
			return ball.NewReal(sum.Mid(), new(big.Float).SetPrec(64).SetMode(big.AwayFromZero).Add(sum.Radius(), rest))
		}
	}
}

// parameters returns at least count Markov parameters in balls of prec bits,
// which belong to the rung.
func (r *rung) parameters(e *expansion, count int, prec uint) []ball.Real {
	r.mutex.Lock()
	defer r.mutex.Unlock()
	for len(r.mu) < count {
		r.mu = e.nextMarkov(r.mu, prec)
	}
	return r.mu
}

// nextMarkov appends the next Markov parameter, by the recurrence of
// num = den·Σ μ_k s^(−1−k); leading ones that vanish are exact zeros.
func (e *expansion) nextMarkov(mu []ball.Real, prec uint) []ball.Real {
	n, k := e.den.Degree(), len(mu)
	v := ball.FromInt(e.num.Coefficient(n - 1 - k))
	for i := 1; i <= min(k, n); i++ {
		v = v.Sub(ball.FromInt(e.den.Coefficient(n-i)).Mul(mu[k-i], prec), prec)
	}
	return append(mu, v.Div(ball.FromInt(e.den.Leading()), prec))
}

// markov returns the first count Markov parameters.
func (e *expansion) markov(count int, prec uint) []ball.Real {
	var mu []ball.Real
	for range count {
		mu = e.nextMarkov(mu, prec)
	}
	return mu
}

// small reports whether rest is below 2^−prec of the sum.
func small(rest *big.Float, sum ball.Real, prec int) bool {
	mid := sum.Mid()
	return mid.Sign() != 0 && rest.MantExp(nil) < mid.MantExp(nil)-prec
}

// rounded returns r as the nearest float64.
func rounded(r *big.Rat) (float64, error) {
	v, _ := r.Float64()
	if math.IsInf(v, 0) {
		return 0, fault.ErrRange
	}
	return v + 0, nil
}
