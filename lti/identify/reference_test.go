package identify

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"github.com/qofs/qofs/tf"
)

// TestNIST fits y = b1·(1 − e^(−b2 x)), the response of a first-order lag to a step
// at 0, to two sets of NIST's Statistical Reference Datasets for nonlinear
// regression, Misra1a and BoxBOD, and compares with the certified values. Data and
// values are from memory; the certified sums of squares, which belong to them, are
// recomputed here.
func TestNIST(t *testing.T) {
	for name, c := range map[string]struct {
		x, y             []float64
		b1, b2, sd1, sd2 float64
		sum              float64
	}{
		"Misra1a": {
			x:  []float64{77.6, 114.9, 141.1, 190.8, 239.9, 289.0, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0},
			y:  []float64{10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.40, 75.47, 81.78},
			b1: 2.3894212918e+02, b2: 5.5015643181e-04, sd1: 2.7070075241e+00, sd2: 7.2668688436e-06, sum: 1.2455138894e-01,
		},
		"BoxBOD": {
			x:  []float64{1, 2, 3, 5, 7, 10},
			y:  []float64{109, 149, 149, 191, 213, 224},
			b1: 2.1380940889e+02, b2: 5.4723748542e-01, sd1: 1.2354515176e+01, sd2: 1.0455993237e-01, sum: 1.1680088766e+03,
		},
	} {
		// The input steps at 0, before the first row; without a level and a dead time.
		r := Record{time: append([]float64{-1, 0}, c.x...), u: append([]float64{0}, fill(len(c.x)+1, 1)...)}
		n := len(c.x)
		s := &separable{r: r, columns: [][]float64{make([]float64, n)}, y: c.y, rest: make([]float64, n),
			respond: func(out, q []float64) {
				all := make([]float64, n+2)
				r.respond(all, &lag{a1: q[0]}, 0)
				copy(out, all[2:])
			},
			natural: func(x []float64) []float64 { return []float64{math.Exp(x[0])} },
			search:  func(q []float64) []float64 { return []float64{math.Log(q[0])} },
		}
		q, z, err := s.minimize([][]float64{{c.x[n-1] / 3}, {c.x[n-1]}})
		if err != nil {
			t.Fatal(name, err)
		}
		if b1, b2 := z.coefficients[0], 1/q[0]; !near(b1, c.b1, 1e-6) || !near(b2, c.b2, 1e-6) || !near(z.sum, c.sum, 1e-8) {
			t.Errorf("%s: %v, %v, sum %v; certified %v, %v, %v", name, b1, b2, z.sum, c.b1, c.b2, c.sum)
		}
		got, correlation := s.errors(q, z)
		// The certified standard deviations take residuals for independent.
		undo := 1.0
		if correlation > 0 {
			undo = math.Sqrt((1 - correlation) / (1 + correlation))
		}
		if sd1, sd2 := got[0]*undo, got[1]*undo/(q[0]*q[0]); !near(sd1, c.sd1, 1e-3) || !near(sd2, c.sd2, 1e-3) {
			t.Errorf("%s: standard deviations %v, %v; certified %v, %v", name, sd1, sd2, c.sd1, c.sd2)
		}
	}
}

func fill(n int, v float64) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = v
	}
	return out
}

// A direct search for the least relative error, by gonum/optimize, finds hardly
// anything better than the iteration of Sanathanan and Koerner.
func TestAgainstDirectSearch(t *testing.T) {
	table := tableOf(t, tf.MustParse("(0.3 s + 2)/((3 s + 1) (0.002 s^2 + 0.01 s + 1))"), 0.02, 80, 90, 0.03, 7)
	f, err := SanathananKoerner(table, 1, 3)
	if err != nil {
		t.Fatal(err)
	}
	var start []float64
	one := coefficient(f.Function().Denominator(), 0)
	for k := range 2 {
		start = append(start, coefficient(f.Function().Numerator(), k)/one)
	}
	for k := 1; k <= 3; k++ {
		start = append(start, coefficient(f.Function().Denominator(), k)/one)
	}
	relative := func(c []float64) float64 {
		sum := 0.0
		for i, w := range table.omega {
			num, den := evaluateRatio(c, 1, w)
			e := cmplx.Abs(num/den-table.value[i]) / cmplx.Abs(table.value[i])
			sum += e * e
		}
		return math.Sqrt(sum / float64(len(table.omega)))
	}
	if got := relative(start); !near(got, f.RelativeError(), 1e-6) {
		t.Fatalf("relative error %v, computed here %v", f.RelativeError(), got)
	}
	logs := make([]float64, len(start))
	for i, v := range start {
		logs[i] = math.Log(v)
	}
	best, err := optimize.Minimize(optimize.Problem{Func: func(x []float64) float64 {
		c := make([]float64, len(x))
		for i, v := range x {
			c[i] = math.Exp(v)
		}
		return relative(c)
	}}, logs, &optimize.Settings{FuncEvaluations: 4000}, &optimize.NelderMead{SimplexSize: 0.02})
	if err != nil || best.F < 0.98*f.RelativeError() {
		t.Errorf("relative error %v, by direct search %v, %v", f.RelativeError(), best.F, err)
	}
}
