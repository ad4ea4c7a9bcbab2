package lti

import (
	"fmt"
	"math"
)

// compare looks for slopes that the dual parts do not tell: those of a model that
// computes with the Real part of a number alone, or that has a kink at this point.
//
// Three central differences, each with an eighth of the step before, must agree
// before a slope is doubted. Rounding does not do that, because what it adds grows
// eightfold from one to the next, nor does a curve without a slope, such as x³ at
// 0, whose differences shrink. Points at which the model has no value prove
// nothing.
func (o *operation) compare(s *slopes) error {
	for j, v := range o.values {
		var d [3][]float64
		step := scaleOf(v) / 4096
		for k := range d {
			d[k] = o.differences(j, step)
			step /= 8
		}
		if d[0] == nil || d[1] == nil || d[2] == nil {
			continue
		}
		for i := range s.values {
			const agreement, doubt = 1.0 / 512, 1.0 / 8
			slope, by := s.matrix.At(i, j), d[2][i]
			if by == 0 || !within(d[0][i], by, agreement) || !within(d[1][i], by, agreement) || within(slope, by, doubt) {
				continue
			}
			return &ModelError{Reason: fmt.Sprintf("by differences the slope of %s by %s is %s at this point, by dual numbers it is %s: "+
				"compute with dual numbers throughout, and look for a kink here", o.row(i), o.signal(j).Name, rounded(by), rounded(slope))}
		}
	}
	return nil
}

// within reports whether a and b differ by at most a part of the larger one.
func within(a, b, part float64) bool { return math.Abs(a-b) <= part*max(math.Abs(a), math.Abs(b)) }

// differences returns the central differences of all rates and outputs by one
// variable, or nil.
func (o *operation) differences(j int, step float64) []float64 {
	at := *o
	at.values = append([]float64(nil), o.values...)
	at.values[j] = o.values[j] + step
	above, err := at.call(len(at.values))
	if err != nil {
		return nil
	}
	width := at.values[j]
	at.values[j] = o.values[j] - step
	below, err := at.call(len(at.values))
	if width -= at.values[j]; err != nil || width == 0 {
		return nil
	}
	out := make([]float64, len(above))
	for i := range out {
		out[i] = (above[i].Real - below[i].Real) / width
	}
	return out
}
