package tf

import (
	"math"
	"sync"

	"github.com/qofs/qofs/internal/ball"
)

const (
	seriesTerms = 64
	firstTerms  = 24 // of the series up to 1/16 of its range
)

// taylorSeries is Σ terms[k]·t^k about t = 0, with the exact Markov parameters
// over k! as terms: there the modes cancel. Below until, the sum of the first n
// terms has an error of at most quickError·Σ sizes[k]·t^k +
// remainder(n)·(t/until)^n. It is filled when it is needed first.
type taylorSeries struct {
	until     float64 // 0 where the series leaves the range of the stage
	once      sync.Once
	terms     [seriesTerms]double
	sizes     [seriesTerms]float64
	remainder [2]float64 // for all terms, and for firstTerms
}

// seriesRange returns the until of the series, with ρ·until = 8 (see bound).
func (e *expansion) seriesRange(q *quick) float64 {
	until := 3 - e.bound().rate
	if size := e.seriesScale(q); until < -300 || until > 300 || size > 300 || size < -300 {
		return 0
	}
	return math.Ldexp(1, until)
}

// seriesScale is the scale of the growth as q scales it.
func (e *expansion) seriesScale(q *quick) int { return e.bound().scale - exponentOf(q.scale) }

// exponentOf returns n for 2^n.
func exponentOf(power float64) int {
	_, n := math.Frexp(power)
	return n - 1
}

// series returns the filled series of q.
func (e *expansion) series(q *quick) *taylorSeries {
	s := &q.taylor
	s.once.Do(func() {
		const prec = 256
		factorial := ball.FromInt64(1)
		for k, v := range e.markov(seriesTerms, prec) {
			if k > 0 {
				factorial = factorial.Mul(ball.FromInt64(int64(k)), prec)
			}
			c := v.Div(factorial, prec).MulPow2(-exponentOf(q.scale))
			d, ok := doubled(c, midpoint(c))
			s.terms[k], s.sizes[k] = d, math.Abs(d.h)
			if !ok { // a parameter that is 0, or nearly so
				s.terms[k] = double{}
				above, _ := c.Abs().Upper().Float64()
				s.sizes[k] = above/quickError + 0x1p-1000
			}
		}
		// 2·2^scale·(ρ·until)^n/n! with 64! > 2^295 and 24! > 2^79.
		size := e.seriesScale(q)
		s.remainder[0] = math.Ldexp(1, size+1+3*seriesTerms-295)
		s.remainder[1] = math.Ldexp(1, size+1+3*firstTerms-79)
	})
	return s
}

// near returns the first terms of the Taylor series about 0 and a bound of the
// error.
func (s *taylorSeries) near(th, tl float64, terms int) (double, float64) {
	sum := s.terms[terms-1]
	magnitude := s.sizes[terms-1]
	for k := terms - 2; k >= 0; k-- {
		sum = product2(sum, th, tl).plus(s.terms[k])
		magnitude = float64(magnitude*th) + s.sizes[k]
	}
	ratio, rest := th/s.until, s.remainder[0]
	eighth := ratio * ratio
	eighth *= eighth
	eighth *= eighth
	power := float64(eighth*eighth) * eighth // 24th
	if terms == firstTerms {
		rest = s.remainder[1]
	} else {
		power = float64(power*power) * float64(eighth*eighth) // 64th
	}
	return sum, magnitude*quickError + rest*power*(1+0x1p-40)
}
