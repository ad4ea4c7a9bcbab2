package algebraic

import (
	"bufio"
	"errors"
	"math/big"
	"math/cmplx"
	"os"
	"sort"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/internal/intpoly"
)

// expected is a root of testdata/roots.txt.
type expected struct {
	value        complex128
	multiplicity int
}

type reference struct {
	family string
	poly   intpoly.Poly
	roots  []expected
}

// references reads testdata/roots.txt, which testdata/generate.py writes with
// mpmath.
func references(t testing.TB) []reference {
	file, err := os.Open("testdata/roots.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	var out []reference
	lines := bufio.NewScanner(file)
	lines.Buffer(nil, 1<<20)
	for lines.Scan() {
		part := strings.Split(lines.Text(), ";")
		r := reference{family: part[0]}
		var c []*big.Int
		for _, s := range strings.Fields(part[1]) {
			v, _ := new(big.Int).SetString(s, 10)
			c = append(c, v)
		}
		r.poly = intpoly.FromBigs(c...)
		for _, s := range strings.Fields(part[2]) {
			f := strings.Split(s, ",")
			re, err1 := strconv.ParseFloat(f[0], 64)
			im, err2 := strconv.ParseFloat(f[1], 64)
			m, err3 := strconv.Atoi(f[2])
			if err1 != nil || err2 != nil || err3 != nil {
				t.Fatal(s, err1, err2, err3)
			}
			r.roots = append(r.roots, expected{complex(re, im), m})
		}
		out = append(out, r)
	}
	return out
}

// tally is what a family of inputs took.
type tally struct {
	work
	polynomials, components int
	time                    time.Duration
}

func TestReference(t *testing.T) {
	families := map[string]*tally{}
	for _, r := range references(t) {
		if testing.Short() && r.poly.Degree() > 64 {
			continue
		}
		beyond := false
		for _, e := range r.roots {
			beyond = beyond || cmplx.IsInf(e.value)
		}
		w := &work{left: maxWork}
		start := time.Now()
		roots, err := find(r.poly, w)
		spent := time.Since(start)
		if beyond != errors.Is(err, fault.ErrRange) || !beyond && err != nil {
			t.Errorf("%s, degree %d: error %v", r.family, r.poly.Degree(), err)
		}
		if err != nil {
			continue
		}
		f := families[r.family]
		if f == nil {
			f = &tally{}
			families[r.family] = f
		}
		f.polynomials++
		f.triaged += w.triaged
		f.refined += w.refined
		f.decided += w.decided
		f.decomposed += w.decomposed
		f.isolated += w.isolated
		f.time += spent
		if len(roots) != len(r.roots) {
			t.Errorf("%s, degree %d: %d roots, expected %d", r.family, r.poly.Degree(), len(roots), len(r.roots))
			continue
		}
		for i, x := range roots {
			f.components += 2
			if x.Number.Value() != r.roots[i].value || x.Multiplicity != r.roots[i].multiplicity {
				t.Errorf("%s, degree %d: root %d is %v (%d times), expected %v (%d times)", r.family, r.poly.Degree(),
					i, x.Number.Value(), x.Multiplicity, r.roots[i].value, r.roots[i].multiplicity)
			}
			if r.family == "decades" {
				continue // where components round to 0
			}
			if x.Number.IsReal() != (imag(r.roots[i].value) == 0) || x.Number.IsImaginary() != (real(r.roots[i].value) == 0) {
				t.Errorf("%s: %v: real %v, imaginary %v", r.family, x.Number.Value(), x.Number.IsReal(), x.Number.IsImaginary())
			}
		}
	}
	// Well-conditioned polynomials stay in the first stage.
	if f := families["random"]; f.decomposed+f.isolated != 0 || 100*f.refined > f.components {
		t.Errorf("random: %d decomposed, %d isolated, %d of %d components refined", f.decomposed, f.isolated, f.refined, f.components)
	}
	var names []string
	for name := range families {
		names = append(names, name)
	}
	sort.Strings(names)
	t.Logf("%-20s %5s %10s %8s %8s %8s %10s %8s %10s", "family", "polys", "components",
		"triaged", "refined", "decided", "decomposed", "isolated", "time/poly")
	for _, name := range names {
		f := families[name]
		t.Logf("%-20s %5d %10d %8d %8d %8d %10d %8d %10v", name, f.polynomials, f.components,
			f.triaged, f.refined, f.decided, f.decomposed, f.isolated, (f.time / time.Duration(f.polynomials)).Round(time.Microsecond))
	}
}
