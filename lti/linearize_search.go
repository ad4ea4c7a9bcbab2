package lti

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/internal/fault"
)

// search looks for a point at rest.
func (o *operation) search() error {
	var free []int
	for i := range o.values {
		if !o.given[i] {
			o.values[i] = 1 // somewhere in the unit of the signal
		}
		if !o.given[i] || o.sought[i] {
			free = append(free, i)
		}
	}
	if n := len(o.m.States); len(free) != n {
		var names []string
		for _, i := range free {
			names = append(names, o.signal(i).Name)
		}
		return &OperatingError{Reason: fmt.Sprintf("%d states at rest determine as many values, and %d are sought (%s): give more with At, or fewer",
			n, len(free), shortened(names))}
	}
	for range maxNewton {
		s, err := o.slopes()
		if err != nil {
			return err
		}
		w, err := o.newton(s, free)
		if err != nil {
			return err
		}
		step, err := w.step(s.values)
		if err != nil {
			return err
		}
		if w.size(step) < 1e-14 {
			return nil
		}
		done, err := o.descend(w, step, free)
		if err != nil || done {
			return err
		}
	}
	return &OperatingError{Reason: fmt.Sprintf("no point at rest was found in %d steps of Newton's method: start nearer with Near", maxNewton)}
}

const maxNewton = 100

// newton holds the slopes at a point, scaled to values and rates of size 1.
type newton struct {
	lu              mat.LU
	weights, scales []float64 // of the rates and of the values sought
}

// newton prepares the equations of a step; an error names what they leave open.
func (o *operation) newton(s *slopes, free []int) (*newton, error) {
	n := len(o.m.States)
	w := &newton{weights: make([]float64, n), scales: make([]float64, n)}
	if n == 0 {
		return w, nil
	}
	a := mat.NewDense(n, n, nil)
	for k, j := range free {
		w.scales[k] = scaleOf(o.values[j])
		for i := range n {
			a.Set(i, k, s.matrix.At(i, j)*w.scales[k])
		}
		if mat.Norm(a.ColView(k), 2) == 0 {
			return nil, &OperatingError{Signal: o.signal(j).Name, Reason: "has no effect on any rate here, so that no value of it can be found"}
		}
	}
	for i, state := range o.m.States {
		if w.weights[i] = mat.Norm(a.RowView(i), 2); w.weights[i] == 0 {
			return nil, &OperatingError{Signal: state.Name, Reason: "its rate depends on none of the values sought"}
		}
		for k := range n {
			a.Set(i, k, a.At(i, k)/w.weights[i])
		}
	}
	w.lu.Factorize(a)
	if c := w.lu.Cond(); c > 1e14 || math.IsNaN(c) {
		return nil, o.singular(a, free)
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
	var x mat.VecDense
	if err := w.lu.SolveVecTo(&x, false, b); err != nil {
		return nil, &OperatingError{Reason: "the slopes are singular", Err: err}
	}
	out := make([]float64, n)
	for k := range out {
		out[k] = x.AtVec(k) * w.scales[k]
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
func (o *operation) descend(w *newton, step []float64, free []int) (done bool, err error) {
	before := make([]float64, len(free))
	for k, j := range free {
		before[k] = o.values[j]
	}
	norm := w.size(step)
	for part := 1.0; part > 1e-10; part /= 2 {
		for k, j := range free {
			o.values[j] = before[k] + part*step[k]
		}
		out, err := o.call(len(o.values))
		var model *ModelError
		if errors.As(err, &model) && errors.Is(err, fault.ErrNotFinite) {
			continue // outside of where the model is defined
		} else if err != nil {
			return false, err
		}
		rates := make([]float64, len(o.m.States))
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
		if norm < 1e-9 { // as near as float64 gets
			return true, nil
		}
	}
	for k, j := range free {
		o.values[j] = before[k]
	}
	return false, &OperatingError{Reason: "Newton's method makes no progress here: start nearer with Near, or there is no point at rest"}
}
