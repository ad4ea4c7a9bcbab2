package lti

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// singular says which of the values sought the rates leave open: those that a
// vector of the kernel of the slopes moves, here the right singular vector of the
// smallest singular value. The columns of a belong to the values in free, each in
// parts of its value.
func (o *operation) singular(a *mat.Dense, free []int) error {
	const share = 1e-6 // of the largest component: less is rounding
	e := &OperatingError{Reason: "is not determined here: the slopes of the rates are singular"}
	var svd mat.SVD
	if n := mat.Norm(a, 1); math.IsNaN(n-n) || !svd.Factorize(a, mat.SVDThin) {
		return e
	}
	var v mat.Dense
	svd.VTo(&v)
	kernel := v.ColView(len(free) - 1)
	first := 0
	for k := range free {
		if math.Abs(kernel.AtVec(k)) > math.Abs(kernel.AtVec(first)) {
			first = k
		}
	}
	e.Signal = o.signal(free[first]).Name
	var others []string
	for k, j := range free {
		if k != first && math.Abs(kernel.AtVec(k)) > share*math.Abs(kernel.AtVec(first)) {
			others = append(others, o.signal(j).Name)
		}
	}
	if len(others) > 0 {
		e.Reason += "; it can change together with " + shortened(others) + " without an effect on any rate"
	}
	return e
}
