package identify

import (
	"fmt"
	"math"
	"slices"
)

// Warnings says what a person should look at in the record before it is fitted, by
// the lines of the file that it was read from, or by rows counted from 1:
// repeated instants, gaps, missing values, an input or output that never moves or
// sits at its end, coarse readings.
func (r Record) Warnings() []string {
	out := slices.Clone(r.notes)
	if len(r.time) < 2 {
		return append(out, fmt.Sprintf("the record has %s", count(len(r.time), "row", "rows")))
	}
	step := r.interval()
	for i := 1; i < len(r.time); i++ {
		if r.time[i] == r.time[i-1] {
			out = append(out, fmt.Sprintf("time stamps repeat at row %d", r.line(i)))
			break
		}
	}
	gap, at := 0.0, 0
	for i := 1; i < len(r.time); i++ {
		if d := r.time[i] - r.time[i-1]; d > gap {
			gap, at = d, i
		}
	}
	if step > 0 && gap > 10*step {
		out = append(out, fmt.Sprintf("a gap of %.3g s before row %d, where the usual step is %.3g s", gap, r.line(at), step))
	}
	if slices.Min(r.u) == slices.Max(r.u) {
		out = append(out, named(r.input, "the input")+" never moves")
	}
	low, high := slices.Min(r.y), slices.Max(r.y)
	if low == high {
		return append(out, named(r.output, "the output")+" never moves")
	}
	if q := r.resolution(); q > 0.02*(high-low) {
		out = append(out, fmt.Sprintf("%s moves in steps of %.3g %s, %.0f %% of its range", named(r.output, "the output"), q, r.output.Unit, 100*q/(high-low)))
	}
	for _, end := range []float64{low, high} {
		if n, first := longestRun(r.y, end); n > max(5, len(r.y)/20) && first > 0 && r.resolution() < 0.02*(high-low) {
			out = append(out, fmt.Sprintf("%s stays at its extreme %.4g %s for %d rows from row %d: is it limited?", named(r.output, "the output"), end, r.output.Unit, n, r.line(first)))
		}
	}
	return out
}

// resolution returns the step of which all changes of the output are multiples, 0
// where there is none that shows.
func (r Record) resolution() float64 {
	least := math.Inf(1)
	for i := 1; i < len(r.y); i++ {
		if d := math.Abs(r.y[i] - r.y[i-1]); d > 0 {
			least = min(least, d)
		}
	}
	if math.IsInf(least, 1) {
		return 0
	}
	for i := 1; i < len(r.y); i++ {
		k := (r.y[i] - r.y[i-1]) / least
		if math.Abs(k-math.Round(k)) > 1e-3 {
			return 0
		}
	}
	return least
}

// longestRun returns the longest run of a value, and where it begins.
func longestRun(y []float64, value float64) (n, first int) {
	run := 0
	for i, v := range y {
		if run++; v != value {
			run = 0
		}
		if run > n {
			n, first = run, i-run+1
		}
	}
	return n, first
}
