package tf

import (
	"math"
	"sync"

	"github.com/qofs/qofs/internal/ball"
	"github.com/qofs/qofs/internal/dd"
)

// taylorSeries is Σ terms[k]·t^k about t = 0, with the exact Markov parameters
// over k! as terms: there the modes cancel. It serves up to until, and is filled
// when it is needed first.
type taylorSeries struct {
	until float64 // 0 where the series leaves the range of the stage
	reach float64 // ρ·until, see bound
	scale float64 // of results, like that of quick
	once  sync.Once
	terms []double
	sizes []float64 // bounds of |terms|, with 1/quickError times their errors
	tiers [3]tier   // up to 1, 1/4 and 1/16 of until
}

// tier is how many terms are taken, and what is left out at until. From the
// index tail on the terms are so small that float64 serves for them.
type tier struct {
	count, tail int
	remainder   float64
}

// maxSeriesTerms bounds the number of terms of the first stage.
const maxSeriesTerms = 512

// reachOf returns the exponent E of the range ρ·t ≤ 2^E in which the series is
// preferred: the function begins with t^(r−1), r the relative degree, and the modes
// cancel until t has grown to some r/ρ.
func (e *expansion) reachOf() int {
	r := e.den.Degree() - e.num.Degree()
	reach := 3
	for 1<<reach < 2*r && reach < 7 {
		reach++
	}
	return reach
}

// seriesRange returns the until of the series and the scale of its results.
func (e *expansion) seriesRange() (until, scale float64) {
	exponent, size := e.reachOf()-e.bound().rate, e.bound().scale
	if exponent < -300 || exponent > 300 || size > 1000 || size < -1000 {
		return 0, 1
	}
	if size < -200 || size > 200 {
		return math.Ldexp(1, exponent), math.Ldexp(1, size)
	}
	return math.Ldexp(1, exponent), 1
}

// exponentOf returns n for 2^n.
func exponentOf(power float64) int {
	_, n := math.Frexp(power)
	return n - 1
}

// series returns the filled series of q.
func (e *expansion) series(q *quick) *taylorSeries {
	s := &q.taylor
	s.once.Do(func() {
		s.reach = math.Ldexp(1, e.reachOf())
		count := 0
		for i := range s.tiers {
			s.tiers[i] = e.tier(s.reach, math.Ldexp(s.reach, -2*i), e.bound().scale-exponentOf(s.scale))
			count = max(count, s.tiers[i].count)
		}
		const prec = 512
		factorial := ball.FromInt64(1)
		for k, v := range e.markov(count, prec) {
			if k > 0 {
				factorial = factorial.Mul(ball.FromInt64(int64(k)), prec)
			}
			c := v.Div(factorial, prec).MulPow2(-exponentOf(s.scale))
			d, ok := doubled(c, midpoint(c))
			size := math.Abs(d.Hi)
			if !ok { // a parameter that is 0, or nearly so
				d = double{}
				above, _ := c.Abs().Upper().Float64()
				size = above/quickError + 0x1p-1000
			}
			s.terms, s.sizes = append(s.terms, d), append(s.sizes, size)
		}
		for i := range s.tiers {
			s.findTail(&s.tiers[i], math.Ldexp(s.until, -2*i))
		}
	})
	return s
}

// findTail sets the tail of a tier for times up to last: its terms are together
// below 2^−36 of the sum of all, at last and therefore at every earlier time, so
// that computing with them in float64, three roundings a term of at most 512,
// adds less than 2^−36·2^−42 = 2^−78 of the sum to the error.
func (s *taylorSeries) findTail(t *tier, last float64) {
	total, power := 0.0, 1.0
	powers := make([]float64, t.count)
	for k := range powers {
		powers[k] = s.sizes[k] * power
		total += powers[k]
		power *= last
	}
	t.tail = t.count
	for rest := 0.0; t.tail > 1; t.tail-- {
		if rest += powers[t.tail-1]; !(rest <= total*0x1p-37) {
			return
		}
	}
}

// tier returns how many terms make the rest negligible at x = ρ·t, beside the
// first term that matters, x^(r−1)/(r−1)!, and beside 1; and the bound of the rest
// at until, 2·2^scale·reach^n/n!, which holds at x for n + 1 ≥ 2x (see seriesAt).
func (e *expansion) tier(reach, x float64, scale int) tier {
	first := e.den.Degree() - e.num.Degree() - 1
	wanted, term := 0.0, 0.0 // logarithms
	n := 1
	remainder := math.Ldexp(1, scale+1) * reach
	for ; n < maxSeriesTerms; n++ {
		term += math.Log2(x / float64(n))
		if n == first {
			wanted = min(0, term)
		}
		if n >= first && float64(n+1) >= 2*x && term < wanted-90 {
			break
		}
		remainder *= reach / float64(n+1)
	}
	return tier{count: n, remainder: remainder * (1 + 0x1p-40)}
}

// settle rounds what at returns.
func (s *taylorSeries) settle(sum double, bound float64) (float64, bool) {
	return settle(sum, bound, s.scale)
}

// at returns the series at th + tl ≤ until and a bound of its error.
func (s *taylorSeries) at(th, tl float64) (double, float64) {
	ratio := th / s.until
	t := &s.tiers[0]
	switch {
	case ratio < 1.0/16:
		t = &s.tiers[2]
	case ratio < 1.0/4:
		t = &s.tiers[1]
	}
	rest := t.remainder
	for n, power := t.count, ratio; n > 0; n >>= 1 {
		if n&1 == 1 {
			rest *= power
		}
		power *= power
	}
	tail, magnitude, k := 0.0, 0.0, t.count-1
	for ; k >= t.tail; k-- {
		tail = float64(tail*th) + s.terms[k].Hi
		magnitude = float64(magnitude*th) + s.sizes[k]
	}
	sum := double{Hi: tail}
	for ; k >= 0; k-- {
		sum = sum.Mul(dd.Pair(th, tl)).AddLoose(s.terms[k])
		magnitude = float64(magnitude*th) + s.sizes[k]
	}
	return sum, magnitude*quickError + rest*(1+0x1p-40) + 0x1p-1000
}
