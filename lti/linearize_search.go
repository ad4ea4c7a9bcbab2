package lti

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/internal/fault"
)

const (
	maxNewton = 100
	settled   = 1e-14 // a step, in parts of the scales, that float64 hardly resolves
	stuck     = 1e-9  // a step that may stay as long as it is, where rates are badly rounded
)

// search is Newton's method for the values in free.
type search struct {
	*operation
	free    []int
	typical []float64 // the sizes of the values at the start
}

// find looks for a point at rest.
func (o *operation) find() error {
	x := &search{operation: o}
	for i := range o.values {
		if !o.given[i] {
			o.values[i] = 1 // somewhere in the unit of the signal
		}
		if !o.given[i] || o.sought[i] {
			x.free = append(x.free, i)
			x.typical = append(x.typical, scaleOf(o.values[i]))
		}
	}
	if n := len(o.m.States); len(x.free) != n {
		var names []string
		for _, i := range x.free {
			names = append(names, o.signal(i).Name)
		}
		return &OperatingError{Reason: fmt.Sprintf("%d states at rest determine as many values, and %d are sought (%s): give more with At, or fewer",
			n, len(x.free), shortened(names))}
	}
	for range maxNewton {
		w, step, err := x.next()
		var model *ModelError
		if errors.As(err, &model) && errors.Is(err, fault.ErrNotFinite) {
			return &ModelError{Reason: model.Reason + " that the search came to: begin elsewhere with Near", Err: model.Err}
		} else if err != nil {
			return err
		}
		if norm := w.size(step); norm < settled {
			x.polish(norm, step)
			return nil
		}
		done, err := x.descend(w, step)
		if err != nil || done {
			return err
		}
	}
	return &OperatingError{Reason: fmt.Sprintf("no point at rest was found in %d steps of Newton's method: start nearer with Near", maxNewton)}
}

// next returns the step that would bring all rates to 0 by the slopes here.
func (x *search) next() (w *newton, step []float64, err error) {
	s, err := x.slopes()
	if err != nil {
		return nil, nil, err
	}
	if w, err = x.newton(s); err != nil {
		return nil, nil, err
	}
	step, err = w.step(s.values)
	return w, step, err
}

// polish takes further steps while each is less than half of the one before, for
// values that are far smaller than where they began.
func (x *search) polish(norm float64, step []float64) {
	for range 8 {
		before := slices.Clone(x.values)
		for k, j := range x.free {
			x.values[j] += step[k]
		}
		w, next, err := x.next()
		if err != nil || w.size(next) > norm/2 {
			x.values = before
			return
		}
		norm, step = w.size(next), next
		if norm == 0 {
			return
		}
	}
}

// newton holds the slopes at a point, scaled to values and rates of size 1.
type newton struct {
	lu              mat.LU
	weights, scales []float64 // of the rates and of the values sought, these at least typical
}

// newton prepares the equations of a step; an error names what they leave open.
func (x *search) newton(s *slopes) (*newton, error) {
	n := len(x.m.States)
	w := &newton{weights: make([]float64, n), scales: make([]float64, n)}
	if n == 0 {
		return w, nil
	}
	a := mat.NewDense(n, n, nil)
	for k, j := range x.free {
		w.scales[k] = max(x.typical[k], math.Abs(x.values[j]))
		for i := range n {
			a.Set(i, k, s.matrix.At(i, j)*w.scales[k])
		}
		if mat.Norm(a.ColView(k), 2) == 0 {
			if err := x.compare(s); err != nil {
				return nil, err
			}
			return nil, &OperatingError{Signal: x.signal(j).Name, Reason: "has no effect on any rate here, so that no value of it can be found"}
		}
	}
	for i, state := range x.m.States {
		if w.weights[i] = mat.Norm(a.RowView(i), 2); w.weights[i] == 0 {
			return nil, &OperatingError{Signal: state.Name, Reason: "its rate depends on none of the values sought"}
		}
		for k := range n {
			a.Set(i, k, a.At(i, k)/w.weights[i])
		}
	}
	w.lu.Factorize(a)
	if c := w.lu.Cond(); c > 1e14 || math.IsNaN(c) {
		return nil, x.singular(a, x.free)
	}
	return w, nil
}

// step returns what would bring some rates to 0.
func (w *newton) step(rates []float64) ([]float64, error) {
	n := len(w.weights)
	if n == 0 {
		return nil, nil
	}
	b := mat.NewVecDense(n, nil)
	for i := range n {
		b.SetVec(i, -rates[i]/w.weights[i])
	}
	var v mat.VecDense
	if err := w.lu.SolveVecTo(&v, false, b); err != nil {
		return nil, &OperatingError{Reason: "the slopes are singular", Err: err}
	}
	out := make([]float64, n)
	for k := range out {
		out[k] = v.AtVec(k) * w.scales[k]
	}
	return out, nil
}

// size is the largest part of its value that a step makes.
func (w *newton) size(step []float64) float64 {
	largest := 0.0
	for k, v := range step {
		largest = max(largest, math.Abs(v)/w.scales[k])
	}
	return largest
}

// descend takes the longest part of the step after which the next one, by the same
// slopes, is shorter; done tells that nothing moves any more.
func (x *search) descend(w *newton, step []float64) (done bool, err error) {
	before := slices.Clone(x.values)
	norm := w.size(step)
	for part := 1.0; part > 1e-10; part /= 2 {
		for k, j := range x.free {
			x.values[j] = before[j] + part*step[k]
		}
		out, err := x.call(len(x.values))
		var model *ModelError
		if errors.As(err, &model) && errors.Is(err, fault.ErrNotFinite) {
			continue // outside of where the model is defined
		} else if err != nil {
			return false, err
		}
		rates := make([]float64, len(x.m.States))
		for i := range rates {
			rates[i] = out[i].Real
		}
		next, err := w.step(rates)
		if err != nil {
			return false, err
		}
		if w.size(next) < (1-part/4)*norm {
			return false, nil
		}
		if norm < stuck { // as near as float64 gets
			return true, nil
		}
	}
	return false, &OperatingError{Reason: "Newton's method makes no progress here: start nearer with Near, or there is no point at rest"}
}
