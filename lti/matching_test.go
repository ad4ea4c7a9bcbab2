package lti

import (
	"math/bits"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/qofs/qofs/units"
)

// Against all subsets of the equations: by Hall's theorem they are overdetermined
// where some subset holds fewer signals than equations; and where none is, the
// closed part is the union of the subsets that hold as many.
func TestMatchingAgainstSubsets(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 4))
	var over, closed int
	for range 3000 {
		n, signals := 1+random.IntN(7), 1+random.IntN(8)
		m := make(incidence, n)
		masks := make([]uint, n)
		for i := range m {
			for j := range signals {
				if random.IntN(3) == 0 {
					m[i] = append(m[i], j)
					masks[i] |= 1 << j
				}
			}
		}
		worst, rows, within := 0, uint(0), uint(0)
		for subset := range uint(1) << n {
			var held uint
			for i := range n {
				if subset>>i&1 == 1 {
					held |= masks[i]
				}
			}
			excess := bits.OnesCount(subset) - bits.OnesCount(held)
			worst = max(worst, excess)
			if excess == 0 {
				rows |= subset
				within |= held
			}
		}
		s := &System{equations: make([]equation, n), signals: make([]units.Signal, signals)}
		for j := range s.signals {
			s.signals[j].Name = string(rune('a' + j))
		}
		for i, js := range m {
			side := &node{}
			for _, j := range js {
				side = &node{kind: isSum, a: side, b: &node{kind: isName, name: s.signals[j].Name}}
			}
			s.equations[i] = equation{left: side, right: &node{}}
		}
		err := s.overdetermined()
		if (err != nil) != (worst > 0) {
			t.Fatalf("%v: %v, the worst excess is %d", m, err, worst)
		}
		if err != nil {
			over++
			e := err.(*DeterminacyError)
			var held uint
			for _, i := range e.Dependent {
				held |= masks[i-1]
			}
			if len(e.Dependent)-bits.OnesCount(held) != worst || len(e.Unknowns) != bits.OnesCount(held) {
				t.Fatalf("%v: %v, the worst excess is %d", m, err, worst)
			}
			continue
		}
		gotRows, gotWithin := m.closed(signals)
		for j := range signals {
			if !slices.ContainsFunc(m, func(js []int) bool { return slices.Contains(js, j) }) && slices.Contains(gotWithin, j) {
				t.Fatalf("%v: %d stands in no equation", m, j)
			}
		}
		if maskOf(gotRows) != rows || maskOf(gotWithin) != within {
			t.Fatalf("%v: closed part %v, %v, want %b, %b", m, gotRows, gotWithin, rows, within)
		}
		if rows != 0 {
			closed++
		}
	}
	if over < 100 || closed < 100 {
		t.Errorf("%d overdetermined, %d with a closed part: too few to tell", over, closed)
	}
}

func maskOf(indices []int) (mask uint) {
	for _, i := range indices {
		mask |= 1 << i
	}
	return mask
}
