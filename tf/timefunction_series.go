package tf

import (
	"math"
	"sync"

	"github.com/qofs/qofs/internal/ball"
)

// So many terms are taken over the whole range, to a quarter, and to a
// sixteenth of it.
const (
	seriesTerms  = 64
	quarterTerms = 36
	firstTerms   = 24
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
	remainder [3]float64 // for all terms, for quarterTerms and for firstTerms
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
		// 2·2^scale·(ρ·until)^n/n! with 64! > 2^295, 36! > 2^138 and 24! > 2^79.
		size := e.seriesScale(q)
		s.remainder[0] = math.Ldexp(1, size+1+3*seriesTerms-295)
		s.remainder[1] = math.Ldexp(1, size+1+3*quarterTerms-138)
		s.remainder[2] = math.Ldexp(1, size+1+3*firstTerms-79)
	})
	return s
}

// at returns the series at th + tl ≤ until and a bound of its error.
func (s *taylorSeries) at(th, tl float64) (double, float64) {
	ratio := th / s.until
	r4 := float64(ratio*ratio) * float64(ratio*ratio)
	r12 := float64(r4*r4) * r4
	r24 := float64(r12 * r12)
	switch {
	case ratio < 1.0/16:
		return s.sum(th, tl, firstTerms, s.remainder[2]*r24)
	case ratio < 1.0/4:
		return s.sum(th, tl, quarterTerms, float64(s.remainder[1]*r24)*r12)
	}
	return s.sum(th, tl, seriesTerms, float64(s.remainder[0]*r24)*float64(r24*r12)*r4)
}

// sum adds a number of terms and bounds the error, given that of the rest.
func (s *taylorSeries) sum(th, tl float64, terms int, rest float64) (double, float64) {
	sum := s.terms[terms-1]
	magnitude := s.sizes[terms-1]
	for k := terms - 2; k >= 0; k-- {
		sum = product2(sum, th, tl).plus(s.terms[k])
		magnitude = float64(magnitude*th) + s.sizes[k]
	}
	return sum, magnitude*quickError + rest*(1+0x1p-40)
}
