package identify

import (
	"fmt"
	"math"
	"slices"
)

// step is a record of a single step of the input, read for a quick look.
type stepTest struct {
	r               Record
	at              float64 // the instant of the step
	from            int     // its row
	moved           float64 // of the input
	initial, change float64 // of the output
}

// newStepTest finds the step. The output before it and over the last twentieth of
// the record, at least one row each, is averaged.
func newStepTest(r Record) (*stepTest, error) {
	if err := r.check(2); err != nil {
		return nil, err
	}
	from := slices.IndexFunc(r.u, func(v float64) bool { return v != r.u[0] })
	for _, v := range r.u[from:] {
		if v != r.u[from] {
			return nil, fmt.Errorf("identify: %s moves more than once, where the method asks for a single step; the least-squares fits take any input: %w",
				named(r.input, "the input"), ErrNoTest)
		}
	}
	tail := max(1, len(r.y)/20)
	s := &stepTest{r: r, from: from, at: r.time[from], moved: r.u[from] - r.u[0], initial: mean(r.y[:from])}
	s.change = mean(r.y[len(r.y)-tail:]) - s.initial
	if s.change == 0 {
		return nil, fmt.Errorf("identify: %s ends where it began: %w", named(r.output, "the output"), ErrNoTest)
	}
	return s, nil
}

func mean(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v))
}

// moves reports whether the output still moves over the last tenth of the record:
// by more than half a per cent of its change from one half of it to the other.
func (s *stepTest) moves() bool {
	n := len(s.r.y)
	half := max(1, n/20)
	return n >= 40 && math.Abs(mean(s.r.y[n-half:])-mean(s.r.y[n-2*half:n-half])) > 0.005*math.Abs(s.change)
}

// crossing returns when the response first passes a part of its final change,
// between rows along a line.
func (s *stepTest) crossing(part float64) float64 {
	for i := s.from; i < len(s.r.y); i++ {
		now := (s.r.y[i] - s.initial) / s.change
		if now < part {
			continue
		}
		if i == s.from {
			return s.r.time[i]
		}
		before := (s.r.y[i-1] - s.initial) / s.change
		return s.r.time[i-1] + (s.r.time[i]-s.r.time[i-1])*(part-before)/(now-before)
	}
	return s.r.time[len(s.r.time)-1]
}

// TwoPoint reads first order plus dead time off a single step of the input: the
// gain from both ends, time constant and dead time from the instants at which
// 28.3 % and 63.2 % of the change are reached (Smith 1972). It is a quick look
// without uncertainties: noise moves the instants, and a record that ends early
// makes gain and time constant too small. FirstOrder is the fit to trust.
//
// The error is ErrNoTest for a record that is not one of a single step.
func TwoPoint(r Record) (Fit, error) {
	s, err := newStepTest(r)
	if err != nil {
		return Fit{}, err
	}
	t1, t2 := s.crossing(1-math.Exp(-1.0/3)), s.crossing(1-math.Exp(-1))
	tau := 1.5 * (t2 - t1)
	return s.fit(tau, max(0, t2-tau-s.at))
}

// Area reads first order plus dead time off a single step of the input by areas,
// which average over noise: with A0 the area between the final value and the
// response, the sum of dead time and time constant is A0 over the final change, and
// with A1 the area below the response up to that sum after the step, the time
// constant is e·A1 over the final change (Åström and Hägglund 1995). A record that
// ends early moves all three numbers, the dead time most. Otherwise it is like
// TwoPoint.
func Area(r Record) (Fit, error) {
	s, err := newStepTest(r)
	if err != nil {
		return Fit{}, err
	}
	sum := s.area(math.Inf(1), func(y float64) float64 { return 1 - y })
	tau := math.E * s.area(sum, func(y float64) float64 { return y })
	return s.fit(tau, max(0, sum-tau))
}

// area integrates a function of the normalised response by trapezoids from the
// step to some time after it.
func (s *stepTest) area(until float64, of func(y float64) float64) float64 {
	total := 0.0
	value := func(i int) float64 { return of((s.r.y[i] - s.initial) / s.change) }
	for i := s.from; i+1 < len(s.r.y); i++ {
		a, b := s.r.time[i]-s.at, s.r.time[i+1]-s.at
		if a >= until || b == a {
			continue
		}
		f, g := value(i), value(i+1)
		if b > until {
			g, b = f+(g-f)*(until-a)/(b-a), until
		}
		total += (b - a) * (f + g) / 2
	}
	return total
}

// fit assembles the result of a quick look.
func (s *stepTest) fit(tau, delay float64) (Fit, error) {
	if !(tau > 0) {
		return Fit{}, fmt.Errorf("identify: the response rises within one row, which leaves no time constant to read: %w", ErrNoTest)
	}
	gain := s.change / s.moved
	k := kind{names: []string{"time constant"}, units: []string{"s"}, denominator: func(q []float64) []float64 { return []float64{1, q[0]} }}
	natural := []float64{tau, delay}
	f := Fit{record: s.r, warnings: s.r.Warnings()}
	var err error
	if f.function, err = k.function(s.r, natural, solution{coefficients: []float64{gain}}); err != nil {
		return Fit{}, err
	}
	nan := math.NaN()
	if f.parameters, err = k.parameters(s.r, natural, solution{coefficients: []float64{gain}}, []float64{nan, nan, nan}); err != nil {
		return Fit{}, err
	}
	x := make([]float64, len(s.r.time))
	s.r.respond(x, &lag{a1: tau}, delay)
	f.residuals = slices.Clone(s.r.y)
	for i, v := range x {
		f.residuals[i] -= s.initial + gain*v
	}
	if part := x[len(x)-1] / s.moved; part < 0.98 || s.moves() {
		f.warnings = append(f.warnings, "the response is not over when the record ends: gain, time constant and dead time of this method are off; FirstOrder extrapolates")
	}
	return f, nil
}
