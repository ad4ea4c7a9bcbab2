package identify

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"strings"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Parameter is a fitted number.
type Parameter struct {
	Name  string // such as "gain" or "dead time"
	Value float64
	Unit  units.Unit
	// StandardError is what the scatter of the record leaves open, with the
	// correlation of neighbouring residuals taken into account.
	StandardError float64
	// Uncertainty is StandardError, and for a fit without Drift also how far the
	// parameter moves when a drift is allowed: a slow drift can hide in a gain
	// while the residuals look perfect.
	Uncertainty float64
}

// String is "gain 0.1203 ± 0.0042 K/W", where the uncertainty stands after the
// sign; that of a quick look, which is not known, is left out.
func (p Parameter) String() string {
	text := fmt.Sprintf("%s %.4g", p.Name, p.Value)
	if !math.IsNaN(p.Uncertainty) {
		text += fmt.Sprintf(" ± %.2g", p.Uncertainty)
	}
	if !p.Unit.IsOne() {
		text += " " + p.Unit.String()
	}
	return text
}

// Fit is a model fitted to a record.
type Fit struct {
	_          [0]func()
	function   tf.Continuous
	parameters []Parameter
	residuals  []float64
	record     Record
	warnings   []string
}

// Function returns the fitted transfer function with the signals of the record.
// Its coefficients are exactly the binary fractions of the parameters.
func (f Fit) Function() tf.Continuous { return f.function }

// Parameters returns the fitted numbers, the gain first and the dead time last.
func (f Fit) Parameters() []Parameter { return slices.Clone(f.parameters) }

// Parameter returns the parameter of a name, and whether there is one.
func (f Fit) Parameter(name string) (Parameter, bool) {
	for _, p := range f.parameters {
		if p.Name == name {
			return p, true
		}
	}
	return Parameter{}, false
}

// Residuals returns the output of the record less that of the model, row by row.
func (f Fit) Residuals() []float64 { return slices.Clone(f.residuals) }

// Modelled returns the output of the model, row by row.
func (f Fit) Modelled() []float64 {
	out := slices.Clone(f.record.y)
	for i, e := range f.residuals {
		out[i] -= e
	}
	return out
}

// RMS is the root mean square of the residuals in the unit of the output.
func (f Fit) RMS() float64 {
	sum := 0.0
	for _, e := range f.residuals {
		sum += e * e
	}
	return math.Sqrt(sum / float64(max(1, len(f.residuals))))
}

// Warnings says what a person should look at before the model is used: those of
// the record, and what the fit cannot show.
func (f Fit) Warnings() []string { return slices.Clone(f.warnings) }

// String lists parameters, residual and warnings, a line each.
func (f Fit) String() string {
	var lines []string
	for _, p := range f.parameters {
		lines = append(lines, p.String())
	}
	lines = append(lines, strings.TrimSpace(fmt.Sprintf("residual %.3g %s", f.RMS(), f.record.output.Unit)))
	for _, w := range f.warnings {
		lines = append(lines, "look: "+w)
	}
	return strings.Join(lines, "\n")
}

// Term is a part of a fit beside the model itself.
type Term struct{ drift, transient bool }

// Drift allows for an output that drifts evenly all the time, whatever the input
// does.
func Drift() Term { return Term{drift: true} }

// InitialMotion allows for an output that is not at rest when the record begins
// and dies away with the slowest time constant of the model. It is of no use with
// Integrating, where it is a drift.
func InitialMotion() Term { return Term{transient: true} }

// FirstOrder fits gain·e^(−dead time·s)/(time constant·s + 1) by least squares. The
// output may start from any level.
//
// The method is variable projection (Golub and Pereyra 1973) with the search of
// Nelder and Mead (1965) from a fixed set of starting points, so that the same
// record gives the same fit. The errors are ErrNoTest for a record from which
// nothing can be learnt.
func FirstOrder(r Record, terms ...Term) (Fit, error) {
	k := kind{
		names: []string{"time constant"}, units: []string{"s"},
		respond: func(out, q []float64) { r.respond(out, &lag{a1: q[0]}, q[1]) },
		slow:    func(q []float64) float64 { return q[0] },
		denominator: func(q []float64) []float64 {
			return []float64{1, q[0]}
		},
		starts: func(span, step float64) (out [][]float64) {
			for _, tau := range []float64{0.003, 0.01, 0.03, 0.1, 0.2, 0.5, 1.5} {
				out = append(out, []float64{max(tau*span, step/4)})
			}
			return out
		},
	}
	return k.fit(r, terms)
}

// SecondOrder fits gain·e^(−dead time·s)/(s²/ω² + 2 ζ s/ω + 1), with the natural
// frequency ω in rad/s and the damping ratio ζ, which passes 1 for two real poles;
// in all else it is like FirstOrder.
func SecondOrder(r Record, terms ...Term) (Fit, error) {
	k := kind{
		names: []string{"natural frequency", "damping ratio"}, units: []string{"rad/s", "1"},
		respond: func(out, q []float64) { r.respond(out, &lag{a1: 2 * q[1] / q[0], a2: 1 / (q[0] * q[0])}, q[2]) },
		slow: func(q []float64) float64 {
			if q[1] > 1 {
				return (q[1] + math.Sqrt(q[1]*q[1]-1)) / q[0]
			}
			return 1 / (q[1] * q[0])
		},
		denominator: func(q []float64) []float64 { return []float64{1, 2 * q[1] / q[0], 1 / (q[0] * q[0])} },
		starts: func(span, step float64) (out [][]float64) {
			for _, tau := range []float64{0.003, 0.01, 0.03, 0.1, 0.3} {
				for _, zeta := range []float64{0.1, 0.4, 1, 3} {
					out = append(out, []float64{1 / max(tau*span, step/2), zeta})
				}
			}
			return out
		},
	}
	return k.fit(r, terms)
}

// Integrating fits gain·e^(−dead time·s)/s: an output that runs as long as the
// input is off its first value. A drift here is the rate at which the output runs at
// that first value, which hardly any plant is without. In all else it is like
// FirstOrder; the gain is per second.
func Integrating(r Record, terms ...Term) (Fit, error) {
	k := kind{
		integrating: true,
		respond:     func(out, q []float64) { r.integrate(out, q[0]) },
		slow:        func([]float64) float64 { return math.Inf(1) },
		denominator: func([]float64) []float64 { return []float64{0, 1} },
		starts:      func(span, step float64) [][]float64 { return [][]float64{{}} },
	}
	return k.fit(r, terms)
}

// kind is a family of models.
type kind struct {
	names, units []string // of the parameters between gain and dead time
	integrating  bool
	respond      func(out, natural []float64)
	slow         func(natural []float64) float64
	denominator  func(natural []float64) []float64
	starts       func(span, step float64) [][]float64 // without the dead time
}

func (k *kind) fit(r Record, terms []Term) (Fit, error) {
	s := k.problem(r)
	for _, t := range terms {
		s.drift = s.drift || t.drift
		s.transient = s.transient || t.transient && !k.integrating
	}
	if err := r.check(len(k.names) + 4); err != nil {
		return Fit{}, err
	}
	var starts [][]float64
	for _, q := range k.starts(r.duration(), r.interval()) {
		for _, delay := range []float64{0.001, 0.01, 0.05, 0.15, 0.4} {
			starts = append(starts, append(slices.Clone(q), delay*r.duration()))
		}
	}
	natural, z, err := s.minimize(starts)
	if err != nil {
		return Fit{}, err
	}
	if last := len(natural) - 1; natural[last] < 1e-3*r.interval() { // far below what the rows show
		natural[last] = 0
		z, _ = s.solve(natural)
	}
	f := Fit{record: r, residuals: s.residuals(natural, z), warnings: r.Warnings()}
	standard, correlation := s.errors(natural, z)
	if f.parameters, err = k.parameters(r, natural, z, standard); err != nil {
		return Fit{}, err
	}
	if f.function, err = k.function(r, natural, z); err != nil {
		return Fit{}, err
	}
	if !s.drift {
		if err := k.compareWithDrift(&f, s, natural); err != nil {
			return Fit{}, err
		}
	}
	k.warn(&f, s, natural, correlation)
	return f, nil
}

func (k *kind) problem(r Record) *separable {
	span := 1.0
	if len(r.time) > 1 {
		span = r.duration()
	}
	return &separable{r: r, respond: k.respond, slow: k.slow,
		natural: func(x []float64) []float64 {
			q := make([]float64, len(x))
			for i, v := range x {
				q[i] = math.Exp(max(-300, min(300, v)))
			}
			last := len(x) - 1
			q[last] = span * min(x[last]*x[last], 0.95)
			return q
		},
		search: func(q []float64) []float64 {
			x := make([]float64, len(q))
			for i, v := range q {
				x[i] = math.Log(v)
			}
			last := len(q) - 1
			x[last] = math.Sqrt(q[last] / span)
			return x
		}}
}

func (k *kind) parameters(r Record, natural []float64, z solution, standard []float64) ([]Parameter, error) {
	gainUnit := r.output.Unit.Div(r.input.Unit)
	if k.integrating {
		gainUnit = gainUnit.Div(units.MustParse("s"))
	}
	out := []Parameter{{Name: "gain", Value: z.coefficients[len(z.coefficients)-1], Unit: gainUnit}}
	for i, name := range k.names {
		unit, err := units.Parse(k.units[i])
		if err != nil {
			return nil, err
		}
		out = append(out, Parameter{Name: name, Value: natural[i], Unit: unit})
	}
	out = append(out, Parameter{Name: "dead time", Value: natural[len(natural)-1], Unit: units.MustParse("s")})
	for i := range out {
		out[i].StandardError, out[i].Uncertainty = standard[i], standard[i]
	}
	return out, nil
}

// function returns the exact transfer function of the parameters.
func (k *kind) function(r Record, natural []float64, z solution) (tf.Continuous, error) {
	num, err := poly.FromFloats(z.coefficients[len(z.coefficients)-1])
	if err != nil {
		return tf.Continuous{}, err
	}
	den, err := poly.FromFloats(k.denominator(natural)...)
	if err != nil {
		return tf.Continuous{}, err
	}
	return assemble(num, den, natural[len(natural)-1], r.input, r.output)
}

func assemble(num, den poly.Poly, delay float64, in, out units.Signal) (tf.Continuous, error) {
	g, err := tf.New(num, den)
	if err != nil {
		return tf.Continuous{}, err
	}
	if g, err = g.WithSignals(in, out); err != nil {
		return tf.Continuous{}, err
	}
	seconds := new(big.Rat).SetFloat64(delay)
	if seconds == nil {
		return tf.Continuous{}, ErrNotFinite
	}
	return g.WithDeadTime(units.NewQuantity(seconds, units.MustParse("s")))
}

// compareWithDrift widens the uncertainty of a fit without drift by what one could
// hide.
func (k *kind) compareWithDrift(f *Fit, s *separable, natural []float64) error {
	with := k.problem(s.r)
	with.drift, with.transient = true, s.transient
	q, z, err := with.minimize([][]float64{natural})
	if err != nil {
		return nil // a drift that cannot be told apart changes nothing
	}
	values := append([]float64{z.coefficients[len(z.coefficients)-1]}, q...)
	for i := range f.parameters {
		p := &f.parameters[i]
		p.Uncertainty = math.Hypot(p.StandardError, values[i]-p.Value)
	}
	if gain := f.parameters[0]; math.Abs(values[0]-gain.Value) > 0.02*math.Abs(gain.Value) {
		rate := z.coefficients[1] * 2 / s.r.duration() * 3600
		f.warnings = append(f.warnings, fmt.Sprintf("a drift could hide here: with one of %.2g %s an hour the gain is %.4g instead of %.4g (Drift fits it)",
			rate, s.r.output.Unit, values[0], gain.Value))
	}
	return nil
}

// warn says what the fit cannot show.
func (k *kind) warn(f *Fit, s *separable, natural []float64, correlation float64) {
	r := s.r
	step := r.interval()
	delay := natural[len(natural)-1]
	add := func(format string, args ...any) { f.warnings = append(f.warnings, fmt.Sprintf(format, args...)) }
	if delay > 0 && delay < step/2 {
		add("a dead time of %.3g s is shorter than the %.3g s from row to row: it says little", delay, step)
	}
	if delay > 0.9*r.duration() {
		add("the dead time takes up the record: the output does not answer to the input")
	}
	if !k.integrating {
		s.fill(natural)
		x := s.columns[len(s.columns)-1]
		last := len(x) - 1
		if moved := r.u[last] - r.u[0]; moved != 0 && r.steadySince(delay+s.slow(natural)/10) {
			if part := x[last] / moved; part < 0.9 {
				add("the record ends at %.0f %% of the final value: gain and time constants are extrapolated", 100*part)
			}
		}
		if tau := s.slow(natural); tau > r.duration() {
			add("the slowest time constant, %.3g s, is longer than the record of %.3g s", tau, r.duration())
		} else if tau < step {
			add("the slowest time constant, %.3g s, is shorter than the %.3g s from row to row", tau, step)
		}
	}
	for _, p := range f.parameters {
		if p.Name != "dead time" && !(p.Uncertainty < math.Abs(p.Value)) {
			add("the record does not determine the %s; look whether a simpler model does", p.Name)
		}
	}
	if rms := f.RMS(); correlation > 0.8 && rms > r.resolution() {
		add("neighbouring residuals correlate by %.2f: the model lacks something, or the disturbance is slow", correlation)
	}
}

// steadySince reports whether the input has kept its last value for some time.
func (r Record) steadySince(time float64) bool {
	last := len(r.u) - 1
	for i := last; i >= 0 && r.time[i] >= r.time[last]-time; i-- {
		if r.u[i] != r.u[last] {
			return false
		}
	}
	return true
}
