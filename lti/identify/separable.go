package identify

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize"
)

// separable is a model that is linear in the gain, the level, the drift and the
// initial motion, and not in its time constants and dead time. Only these are
// searched for; the others follow by linear least squares at each step (variable
// projection, Golub and Pereyra 1973).
type separable struct {
	r                Record
	drift, transient bool
	// respond writes the response with the gain 1; slow is the time constant at
	// which an initial motion dies away. Both take natural parameters.
	respond func(out, natural []float64)
	slow    func(natural []float64) float64
	// natural turns search variables, which run over all numbers, into parameters,
	// the dead time last; search is its inverse.
	natural, search func([]float64) []float64

	columns [][]float64
	y, rest []float64
}

// solution is a fit of the linear part.
type solution struct {
	coefficients []float64 // by column; the gain last
	sum          float64   // of the squares of the residuals
}

// fill computes the columns at natural parameters.
func (s *separable) fill(natural []float64) {
	n := len(s.r.time)
	if s.columns == nil {
		one := make([]float64, n)
		for i := range one {
			one[i] = 1
		}
		s.columns = [][]float64{one}
		if s.drift {
			d := make([]float64, n)
			for i, t := range s.r.time { // from −1 to 1
				d[i] = 2*(t-s.r.time[0])/s.r.duration() - 1
			}
			s.columns = append(s.columns, d)
		}
		if s.transient {
			s.columns = append(s.columns, make([]float64, n))
		}
		s.columns = append(s.columns, make([]float64, n))
		mean := 0.0
		for _, v := range s.r.y {
			mean += v / float64(n)
		}
		s.y, s.rest = make([]float64, n), make([]float64, n)
		for i, v := range s.r.y {
			s.y[i] = v - mean
		}
	}
	if s.transient {
		c := s.columns[len(s.columns)-2]
		tau := s.slow(natural)
		for i, t := range s.r.time {
			c[i] = math.Exp(-(t - s.r.time[0]) / tau)
		}
	}
	s.respond(s.columns[len(s.columns)-1], natural)
}

// solve fits the linear part; ok is false where columns depend on each other.
//
// The normal equations of columns of length 1, with one correction, lose little
// for at most four columns.
func (s *separable) solve(natural []float64) (z solution, ok bool) {
	s.fill(natural)
	k := len(s.columns)
	norms := make([]float64, k)
	gram := mat.NewSymDense(k, nil)
	for i, c := range s.columns {
		if norms[i] = math.Sqrt(dot(c, c)); !(norms[i] > 0) || math.IsInf(norms[i], 0) {
			return z, false
		}
		for j, d := range s.columns[:i+1] {
			gram.SetSym(i, j, dot(c, d)/norms[i]/norms[j])
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(gram) || chol.Cond() > 1e12 {
		return z, false
	}
	z.coefficients = make([]float64, k)
	rest := s.rest
	copy(rest, s.y)
	right := mat.NewVecDense(k, nil)
	var step mat.VecDense
	for range 2 {
		for j, c := range s.columns {
			right.SetVec(j, dot(c, rest)/norms[j])
		}
		if err := chol.SolveVecTo(&step, right); err != nil {
			return z, false
		}
		for j, c := range s.columns {
			w := step.AtVec(j) / norms[j]
			z.coefficients[j] += w
			for i, v := range c {
				rest[i] -= w * v
			}
		}
	}
	z.sum = dot(rest, rest)
	return z, !math.IsNaN(z.sum)
}

func dot(x, y []float64) float64 {
	y = y[:len(x)]
	var even, odd float64
	for i := 0; i+1 < len(x); i += 2 {
		even += x[i] * y[i]
		odd += x[i+1] * y[i+1]
	}
	if len(x)%2 == 1 {
		even += x[len(x)-1] * y[len(x)-1]
	}
	return even + odd
}

// objective is the sum of squares over search variables.
func (s *separable) objective(x []float64) float64 {
	if z, ok := s.solve(s.natural(x)); ok {
		return z.sum
	}
	return math.Inf(1)
}

// minimize starts from the best few of some starting points and returns the best
// natural parameters.
func (s *separable) minimize(starts [][]float64) (natural []float64, z solution, err error) {
	type start struct {
		x []float64
		f float64
	}
	var tried []start
	for _, natural := range starts {
		x := s.search(natural)
		tried = append(tried, start{x, s.objective(x)})
	}
	slices.SortStableFunc(tried, func(a, b start) int {
		switch {
		case a.f < b.f:
			return -1
		case a.f > b.f:
			return 1
		}
		return 0
	})
	best := start{f: math.Inf(1)}
	for _, t := range tried[:min(2, len(tried))] {
		if math.IsInf(t.f, 1) {
			continue
		}
		for range 2 { // a second simplex where the first has settled
			result, err := optimize.Minimize(optimize.Problem{Func: s.objective}, t.x,
				&optimize.Settings{FuncEvaluations: 600, Converger: &optimize.FunctionConverge{Relative: 1e-11, Iterations: 25}},
				&optimize.NelderMead{SimplexSize: 0.1})
			if result == nil || err != nil && result.X == nil {
				break
			}
			t = start{result.X, result.F}
		}
		if t.f < best.f {
			best = t
		}
	}
	if best.x == nil {
		return nil, z, fmt.Errorf("identify: no model of this kind answers to the input like the record: %w", ErrNoTest)
	}
	natural = s.natural(best.x)
	z, _ = s.solve(natural)
	return natural, z, nil
}

// residuals returns the record less the model.
func (s *separable) residuals(natural []float64, z solution) []float64 {
	s.fill(natural)
	out := slices.Clone(s.y)
	for j, c := range s.columns {
		for i, v := range c {
			out[i] -= z.coefficients[j] * v
		}
	}
	return out
}

// errors returns the standard errors of the gain and of the natural parameters.
//
// They are those of linearised least squares, with the variance of residuals that
// correlate by ρ from row to row taken (1 + ρ)/(1 − ρ) times (Bartlett 1946 for an
// autoregressive process of first order).
func (s *separable) errors(natural []float64, z solution) (out []float64, correlation float64) {
	rest := s.residuals(natural, z)
	n, k := len(rest), len(z.coefficients)
	p := k + len(natural)
	jacobian := mat.NewDense(n, p, nil)
	gain := z.coefficients[k-1]
	for j, c := range s.columns {
		jacobian.SetCol(j, c)
	}
	plus, minus := make([]float64, n), make([]float64, n)
	steps := make([]float64, len(natural))
	for m, v := range natural {
		h := 1e-4 * math.Abs(v)
		if m == len(natural)-1 {
			h = max(h, 0.05*s.r.interval())
		}
		steps[m] = h
		q := slices.Clone(natural)
		q[m] = v + h
		s.respond(plus, q)
		if q[m] = v - h; q[m] < 0 {
			q[m] = v
			steps[m] = h / 2
		}
		s.respond(minus, q)
		for i := range plus {
			plus[i] = gain * (plus[i] - minus[i]) / 2 // per step, which keeps columns of one size
		}
		jacobian.SetCol(k+m, plus)
	}
	s.fill(natural)
	scales := make([]float64, p)
	for j := range scales {
		scales[j] = mat.Norm(jacobian.ColView(j), 2)
		if scales[j] == 0 {
			scales[j] = 1
		}
		for i := range n {
			jacobian.Set(i, j, jacobian.At(i, j)/scales[j])
		}
	}
	correlation = autocorrelation(rest)
	variance := z.sum / float64(max(1, n-p))
	if correlation > 0 {
		variance *= (1 + min(correlation, 0.999)) / (1 - min(correlation, 0.999))
	}
	var gram mat.SymDense
	gram.SymOuterK(1, jacobian.T())
	var chol mat.Cholesky
	out = make([]float64, 1+len(natural))
	var inverse mat.SymDense
	if !chol.Factorize(&gram) || chol.InverseTo(&inverse) != nil {
		for i := range out {
			out[i] = math.Inf(1)
		}
		return out, correlation
	}
	out[0] = math.Sqrt(variance*inverse.At(k-1, k-1)) / scales[k-1]
	for m := range natural {
		out[1+m] = math.Sqrt(variance*inverse.At(k+m, k+m)) / scales[k+m] * steps[m]
	}
	return out, correlation
}

// autocorrelation is that of neighbouring residuals.
func autocorrelation(e []float64) float64 {
	var above, below float64
	for i, v := range e {
		below += v * v
		if i > 0 {
			above += v * e[i-1]
		}
	}
	if below == 0 {
		return 0
	}
	return above / below
}
