package polymatrix

import "github.com/qofs/qofs/internal/modp"

// maxBlock is how many points are worked at once, at most: the steps of the plan
// are read once for all of them, and their pivots share one inversion.
const maxBlock = 32

// block is how many points are worked at once.
func (s *system) block() int { return min(maxBlock, s.degree+1) }

// node returns the stored number of which the points are the multiples 1, 2, 3 …
// It is no small integer, so that a pivot hardly ever vanishes there.
func node(f *modp.Field) uint64 { return f.Stored(0x1d872b41bea9f3c5 % f.P) }

// evaluator carries out a plan modulo one prime.
type evaluator struct {
	s            *system
	p            *plan
	f            *modp.Field
	coefficients [][]uint64 // of the entries
	x, det       []uint64   // at the points of a block
	factor       []uint64
	cells        vectors // of the slots
	inverses     vectors // of the pivots
}

// vectors are vectors of one length in a row.
type vectors struct {
	length int
	all    []uint64
}

func newVectors(count, length int) vectors { return vectors{length, make([]uint64, count*length)} }

func (v vectors) at(k int) []uint64 { return v.all[k*v.length : (k+1)*v.length] }

func (s *system) evaluator(p *plan, f *modp.Field) *evaluator {
	n := s.block()
	e := &evaluator{s: s, p: p, f: f, coefficients: make([][]uint64, len(s.entries)), x: make([]uint64, n), det: make([]uint64, n),
		factor: make([]uint64, n), cells: newVectors(p.slots, n), inverses: newVectors(len(p.steps), n)}
	for k := range s.entries {
		e.coefficients[k] = s.entries[k].poly.Residues(f)
	}
	return e
}

// solutions writes the stored values of the determinant and of the numerators at
// all points, result by result; false where a pivot vanishes.
func (e *evaluator) solutions(values []uint64, columns []int) bool {
	terms := e.s.degree + 1
	unknown := newVectors(e.s.n, len(e.x))
	for from := 0; from < terms; from += len(e.x) {
		count := min(len(e.x), terms-from)
		if !e.eliminate(from) {
			return false
		}
		copy(values[from:from+count], e.det[:count])
		for r := range e.s.rhs {
			e.substitute(unknown, r)
			for k, c := range columns {
				at := (1+r*len(columns)+k)*terms + from
				for i := range count {
					values[at+i] = e.f.Mul(e.det[i], unknown.at(c)[i])
				}
			}
		}
	}
	return true
}

// restIsZero reports whether all that the plan leaves is 0 at all points; ok is
// false where a pivot vanishes.
func (e *evaluator) restIsZero() (zero, ok bool) {
	for from := 0; from <= e.s.degree; from += len(e.x) {
		if !e.eliminate(from) {
			return false, false
		}
		for _, k := range e.p.rest {
			for _, v := range e.cells.at(int(k)) {
				if v != 0 {
					return false, true
				}
			}
		}
	}
	return true, true
}

// eliminate carries out the plan at a block of points and sets the determinant;
// false where a pivot vanishes.
func (e *evaluator) eliminate(from int) bool {
	f := e.f
	e.evaluate(from)
	one := f.Stored(1)
	for i := range e.det {
		if e.det[i] = one; e.p.negative {
			e.det[i] = f.Neg(one)
		}
	}
	for k := range e.p.steps {
		t := &e.p.steps[k]
		pivot, inverse := e.cells.at(int(t.pivot)), e.inverses.at(k)
		if !invert(f, inverse, pivot) {
			return false
		}
		multiply(f, e.det, e.det, pivot)
		for _, r := range t.rows {
			multiply(f, e.factor, e.cells.at(int(r.factor)), inverse)
			for l, target := range r.targets {
				subtractProduct(f, e.cells.at(int(target)), e.factor, e.cells.at(int(t.sources[l])))
			}
		}
	}
	return true
}

// evaluate sets the slots to the values of the entries at a block of points.
func (e *evaluator) evaluate(from int) {
	f := e.f
	g := node(f)
	for i := range e.x {
		e.x[i] = f.Mul(f.Stored(uint64(from+i+1)), g)
	}
	clear(e.cells.all)
	for k, c := range e.coefficients {
		v := e.cells.at(e.p.start[k])
		for j := len(c) - 1; j >= 0; j-- {
			for i := range v {
				v[i] = f.Add(f.Mul(v[i], e.x[i]), c[j])
			}
		}
	}
}

// substitute sets the unknowns for a right-hand side, from the last pivot back.
func (e *evaluator) substitute(unknown vectors, rhs int) {
	f := e.f
	for k := len(e.p.steps) - 1; k >= 0; k-- {
		t := &e.p.steps[k]
		x := unknown.at(t.column)
		clear(x)
		for l, j := range t.columns {
			if int(j) == e.s.n+rhs {
				for i, v := range e.cells.at(int(t.sources[l])) {
					x[i] = f.Add(x[i], v)
				}
			} else if int(j) < e.s.n {
				subtractProduct(f, x, unknown.at(int(j)), e.cells.at(int(t.sources[l])))
			}
		}
		multiply(f, x, x, e.inverses.at(k))
	}
}

func multiply(f *modp.Field, z, x, y []uint64) {
	x, y = x[:len(z)], y[:len(z)]
	for i := range z {
		z[i] = f.Mul(x[i], y[i])
	}
}

func subtractProduct(f *modp.Field, z, x, y []uint64) {
	x, y = x[:len(z)], y[:len(z)]
	for i := range z {
		z[i] = f.Sub(z[i], f.Mul(x[i], y[i]))
	}
}

// invert sets z to the inverses of x, with one inversion for all (Montgomery
// 1987); false where one of x is 0.
func invert(f *modp.Field, z, x []uint64) bool {
	product := f.Stored(1)
	for i, v := range x {
		z[i] = product // of those before
		product = f.Mul(product, v)
	}
	if product == 0 {
		return false
	}
	inverse := f.Inverse(product)
	for i := len(x) - 1; i >= 0; i-- {
		z[i] = f.Mul(z[i], inverse)
		inverse = f.Mul(inverse, x[i])
	}
	return true
}

// interpolation turns values at the multiples 1, 2, 3 … of the node into
// coefficients.
type interpolation struct {
	f        *modp.Field
	numbers  []uint64 // stored 0, 1, 2 …
	inverses []uint64 // of these
	shrink   []uint64 // powers of the inverse of the node
	c        []uint64
}

func newInterpolation(f *modp.Field, terms int) *interpolation {
	t := &interpolation{f: f, numbers: make([]uint64, terms+1), inverses: make([]uint64, terms+1), shrink: make([]uint64, terms), c: make([]uint64, terms)}
	for k := range t.numbers {
		t.numbers[k] = f.Stored(uint64(k))
		if k > 0 {
			t.inverses[k] = f.Inverse(t.numbers[k])
		}
	}
	g := f.Inverse(node(f))
	t.shrink[0] = f.Stored(1)
	for k := 1; k < terms; k++ {
		t.shrink[k] = f.Mul(t.shrink[k-1], g)
	}
	return t
}

// interpolate replaces stored values by plain coefficients.
func (t *interpolation) interpolate(v []uint64) {
	f, n := t.f, len(v)
	for k := 1; k < n; k++ { // Newton's divided differences
		inverse := t.inverses[k]
		for i := n - 1; i >= k; i-- {
			v[i] = f.Mul(f.Sub(v[i], v[i-1]), inverse)
		}
	}
	// Horner's rule on the Newton form: c ← c·(y − (k+1)) + v_k.
	c := t.c
	clear(c)
	for k := n - 1; k >= 0; k-- {
		y := t.numbers[k+1]
		for i := n - 1 - k; i > 0; i-- {
			c[i] = f.Sub(c[i-1], f.Mul(y, c[i]))
		}
		c[0] = f.Sub(v[k], f.Mul(y, c[0]))
	}
	for i := range v {
		v[i] = f.Plain(f.Mul(c[i], t.shrink[i]))
	}
}
