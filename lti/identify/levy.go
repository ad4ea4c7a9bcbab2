package identify

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

// maxFitDegree bounds the degrees of a fit.
const maxFitDegree = 40

// FrequencyFit is a transfer function fitted to a frequency response.
type FrequencyFit struct {
	_        [0]func()
	function tf.Continuous
	table    FrequencyTable
	fitted   []complex128
	warnings []string
}

// Function returns the fitted transfer function with the signals of the table. Its
// coefficients are exact binary fractions.
func (f FrequencyFit) Function() tf.Continuous { return f.function }

// Fitted returns the values of the function at the frequencies of the table.
func (f FrequencyFit) Fitted() []complex128 { return slices.Clone(f.fitted) }

// RelativeError is the root mean square of |fitted − measured|/|measured|.
func (f FrequencyFit) RelativeError() float64 {
	sum := 0.0
	for i, v := range f.fitted {
		e := cmplx.Abs(v-f.table.value[i]) / cmplx.Abs(f.table.value[i])
		sum += e * e
	}
	return math.Sqrt(sum / float64(max(1, len(f.fitted))))
}

// Warnings says what a person should look at before the model is used.
func (f FrequencyFit) Warnings() []string { return slices.Clone(f.warnings) }

// String is the function with four digits, the error and the warnings, a line each.
func (f FrequencyFit) String() string {
	lines := []string{fmt.Sprintf("%.4g", f.function), fmt.Sprintf("relative error %.2g", f.RelativeError())}
	for _, w := range f.warnings {
		lines = append(lines, "look: "+w)
	}
	return strings.Join(lines, "\n")
}

// Levy fits a ratio of polynomials of the given degrees to a frequency response by
// the linear least squares of Levy (1959): with the absolute term of the
// denominator 1, it minimises |numerator − value·denominator|², which weighs the
// errors by the denominator and so favours high frequencies. Errors count
// relative to the measured value, and a row of coherence γ² with γ²/(1 − γ²), the
// inverse of the variance that it stands for (at most 1000 times the least).
//
// The plant must not have a pole at 0; Integrators are taken out beforehand. The
// error is ErrNoTest for too few rows for the coefficients or rows that do not
// determine them, and ErrLimit for a degree above 40.
func Levy(t FrequencyTable, numerator, denominator int) (FrequencyFit, error) {
	return t.fit(numerator, denominator, 1)
}

// SanathananKoerner fits like Levy, and again with each row divided by the
// denominator found before (Sanathanan and Koerner 1963), until nothing moves: it
// minimises the error of the ratio itself. That makes it the method to prefer.
func SanathananKoerner(t FrequencyTable, numerator, denominator int) (FrequencyFit, error) {
	return t.fit(numerator, denominator, 50)
}

func (t FrequencyTable) fit(m, n, rounds int) (FrequencyFit, error) {
	if m < 0 || n < 0 || m > maxFitDegree || n > maxFitDegree {
		return FrequencyFit{}, fmt.Errorf("identify: degrees of %d over %d: %w", m, n, ErrLimit)
	}
	if len(t.omega) == 0 || 2*len(t.omega) < m+n+1 {
		return FrequencyFit{}, fmt.Errorf("identify: %d frequencies for %d coefficients: %w", len(t.omega), m+n+1, ErrNoTest)
	}
	// Powers of ω over the geometric mean of the ends keep the columns comparable.
	centre := math.Sqrt(t.omega[0] * t.omega[len(t.omega)-1])
	weights := t.weights()
	var best []float64
	bestError := math.Inf(1)
	previous := make([]complex128, len(t.omega)) // the denominator of the round before
	for i := range previous {
		previous[i] = 1
	}
	settled := 0
	for range rounds {
		c, err := t.solve(m, n, centre, weights, previous)
		if err != nil {
			if best != nil {
				break
			}
			return FrequencyFit{}, err
		}
		sum := 0.0
		for i, w := range t.omega {
			num, den := evaluateRatio(c, m, w/centre)
			previous[i] = den
			e := cmplx.Abs(num/den-t.value[i]) / cmplx.Abs(t.value[i]) * weights[i]
			sum += e * e
		}
		if sum < bestError*(1-1e-9) {
			best, bestError, settled = c, sum, 0
		} else if settled++; settled > 3 {
			break
		}
	}
	if best == nil {
		return FrequencyFit{}, fmt.Errorf("identify: the rows do not determine %d coefficients: %w", m+n+1, ErrNoTest)
	}
	return t.finish(best, m, n, centre)
}

// weights returns the square roots of the weights, times what makes errors
// relative.
func (t FrequencyTable) weights() []float64 {
	out := make([]float64, len(t.omega))
	for i, c := range t.coherence {
		out[i] = math.Sqrt(c / max(1-c, 1e-3))
	}
	return out
}

// solve is one linear least-squares problem for the numerator's coefficients and
// those of the denominator from the first power on, in ω/centre.
func (t FrequencyTable) solve(m, n int, centre float64, weights []float64, previous []complex128) ([]float64, error) {
	rows, columns := 2*len(t.omega), m+1+n
	a, b := mat.NewDense(rows, columns, nil), mat.NewVecDense(rows, nil)
	for i, omega := range t.omega {
		s := complex(0, omega/centre)
		scale := complex(weights[i]/cmplx.Abs(t.value[i]), 0) / previous[i]
		power := complex(1, 0)
		for k := 0; k <= max(m, n); k++ {
			if k <= m {
				v := power * scale
				a.Set(2*i, k, real(v))
				a.Set(2*i+1, k, imag(v))
			}
			if k >= 1 && k <= n {
				v := -t.value[i] * power * scale
				a.Set(2*i, m+k, real(v))
				a.Set(2*i+1, m+k, imag(v))
			}
			power *= s
		}
		v := t.value[i] * scale
		b.SetVec(2*i, real(v))
		b.SetVec(2*i+1, imag(v))
	}
	norms := make([]float64, columns)
	for k := range norms {
		if norms[k] = mat.Norm(a.ColView(k), 2); norms[k] == 0 {
			norms[k] = 1
		}
		for i := range rows {
			a.Set(i, k, a.At(i, k)/norms[k])
		}
	}
	var qr mat.QR
	qr.Factorize(a)
	if c := qr.Cond(); c > 1e13 || math.IsNaN(c) {
		return nil, fmt.Errorf("identify: the rows do not determine %d coefficients: lower the degrees: %w", columns, ErrNoTest)
	}
	var x mat.VecDense
	if err := qr.SolveVecTo(&x, false, b); err != nil {
		return nil, fmt.Errorf("identify: %w: %w", err, ErrNoTest)
	}
	c := make([]float64, columns)
	for k := range c {
		c[k] = x.AtVec(k) / norms[k]
	}
	return c, nil
}

// evaluateRatio returns numerator and denominator at j·w.
func evaluateRatio(c []float64, m int, w float64) (num, den complex128) {
	s, power := complex(0, w), complex(1, 0)
	for k := 0; k <= m; k++ {
		num += complex(c[k], 0) * power
		power *= s
	}
	den, power = 1, s
	for _, v := range c[m+1:] {
		den += complex(v, 0) * power
		power *= s
	}
	return num, den
}

// finish makes the exact function and says what is suspicious about it.
func (t FrequencyTable) finish(c []float64, m, n int, centre float64) (FrequencyFit, error) {
	num, err := poly.FromFloats(c[:m+1]...)
	if err != nil {
		return FrequencyFit{}, err
	}
	den, err := poly.FromFloats(append([]float64{1}, c[m+1:]...)...)
	if err != nil {
		return FrequencyFit{}, err
	}
	// s/centre for s
	inverse := new(big.Rat).SetFloat64(centre)
	inverse.Inv(inverse)
	argument := poly.FromRats(nil, inverse)
	if num, err = num.Compose(argument); err != nil {
		return FrequencyFit{}, err
	}
	if den, err = den.Compose(argument); err != nil {
		return FrequencyFit{}, err
	}
	f := FrequencyFit{table: t, warnings: t.Warnings()}
	if f.function, err = assemble(num, den, 0, t.input, t.output); err != nil {
		return FrequencyFit{}, err
	}
	for _, w := range t.omega {
		num, den := evaluateRatio(c, m, w/centre)
		f.fitted = append(f.fitted, num/den)
	}
	return f, f.inspect()
}

// inspect adds warnings about poles to the right and about pairs of pole and zero.
func (f *FrequencyFit) inspect() error {
	x, err := lti.Inspect(f.function, big.NewRat(1, 50))
	if err != nil {
		return err
	}
	if right := x.Poles.Outside; right > 0 {
		f.warnings = append(f.warnings, fmt.Sprintf("%s in the right half-plane: the fitted model is unstable, whatever the plant is", count(right, "pole lies", "poles lie")))
	}
	if len(x.Near) > 0 {
		f.warnings = append(f.warnings, fmt.Sprintf("%s nearly cancelled by a zero: lower degrees may do", count(len(x.Near), "pole is", "poles are")))
	}
	if rms := f.RelativeError(); rms > 0.2 {
		f.warnings = append(f.warnings, fmt.Sprintf("the fit is off by %.0f %%: the degrees are too low, or the response has dead time", 100*rms))
	}
	return nil
}

// WithoutIntegrators returns the table of the plant times s^k: that of a plant with
// k poles at 0 without them. The function fitted to it belongs to the plant again
// when it is divided by s^k.
func (t FrequencyTable) WithoutIntegrators(k int) FrequencyTable {
	out := t
	out.value = slices.Clone(t.value)
	for i, w := range t.omega {
		for range max(0, min(k, 8)) {
			out.value[i] *= complex(0, w)
		}
	}
	return out
}
