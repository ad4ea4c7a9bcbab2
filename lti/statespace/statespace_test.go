package statespace

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func signals(unit string, names ...string) []units.Signal {
	var out []units.Signal
	for _, n := range names {
		out = append(out, units.Signal{Name: n, Unit: units.MustParse(unit)})
	}
	return out
}

func rats(rows ...[]int64) [][]*big.Rat {
	out := make([][]*big.Rat, len(rows))
	for i, row := range rows {
		for _, v := range row {
			out[i] = append(out[i], big.NewRat(v, 1))
		}
	}
	return out
}

// random returns a model of n states with fractions of small numbers, of which
// some are 0.
func random(r *rand.Rand, n, inputs, outputs int) Continuous {
	fill := func(rows, columns int) [][]*big.Rat {
		out := make([][]*big.Rat, rows)
		for i := range out {
			for range columns {
				v := big.NewRat(r.Int64N(41)-20, 1+r.Int64N(9))
				if r.IntN(3) == 0 {
					v = nil
				}
				out[i] = append(out[i], v)
			}
		}
		return out
	}
	names := func(kind string, n int) []units.Signal {
		var out []units.Signal
		for i := range n {
			out = append(out, units.Signal{Name: fmt.Sprint(kind, i)})
		}
		return out
	}
	return tf.Must(New(names("state", n), names("in", inputs), names("out", outputs),
		Matrices{fill(n, n), fill(n, inputs), fill(outputs, n), fill(outputs, inputs)}))
}

// leverrier is the method of Faddeev and Leverrier, the oracle: the numerator
// from input i to output o and the monic denominator.
func leverrier(c model, i, o int) (num, den poly.Poly) {
	n := len(c.states)
	m := zeros(n, n) // M_1 = I, M_k = A·M_(k−1) + c_(n−k+1)·I
	coefficients := make([]*big.Rat, n+1)
	coefficients[n] = big.NewRat(1, 1)
	var adjoint []matrix // coefficient of s^(n−k) of the adjoint of s·I − A
	for k := 1; k <= n; k++ {
		m = c.state.times(m, n)
		for j := range n {
			m[j][j].Add(m[j][j], coefficients[n-k+1])
		}
		adjoint = append(adjoint, m.clone())
		trace := new(big.Rat)
		for j, row := range c.state.times(m, n) {
			trace.Add(trace, row[j])
		}
		coefficients[n-k] = trace.Mul(trace, big.NewRat(-1, int64(k)))
	}
	den = poly.FromRats(coefficients...)
	top := make([]*big.Rat, n)
	for k, a := range adjoint {
		v := matrix{c.output[o]}.times(a, n).times(c.input.columns([]int{i}), 1)
		top[n-1-k] = v[0][0]
	}
	return poly.FromRats(top...).Add(den.Scale(c.feedthrough[o][i])), den
}

func TestTransferFunctionsAgainstLeverrier(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 150 {
		c := random(r, r.IntN(7), 1+r.IntN(3), 1+r.IntN(3))
		inputs, outputs := []string{}, []string{}
		for _, s := range c.inputs {
			inputs = append(inputs, s.Name)
		}
		for _, s := range c.outputs {
			outputs = append(outputs, s.Name)
		}
		all, err := c.TransferFunctions(inputs, outputs)
		if err != nil {
			t.Fatal(err)
		}
		p, err := c.CharacteristicPolynomial()
		if err != nil {
			t.Fatal(err)
		}
		for o, row := range all {
			for i, g := range row {
				num, den := leverrier(c.model, i, o)
				want := tf.Must(tf.Must(tf.New(num, den)).WithSignals(c.inputs[i], c.outputs[o]))
				if !g.Equal(want) || !p.Equal(den) {
					t.Fatalf("%v\nfrom %d to %d: %v, want %v", c, i, o, g, want)
				}
			}
		}
	}
}

// A model of another choice of states, z = T·x, has the same transfer function.
func TestSimilarity(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 40 {
		n := 1 + r.IntN(5)
		c := random(r, n, 1, 1)
		// T is the unit matrix plus one entry k; its inverse has −k.
		i, j, k := r.IntN(n), r.IntN(n), big.NewRat(r.Int64N(19)-9, 1+r.Int64N(5))
		if i == j {
			continue
		}
		m := c.Matrices()
		for l := range n { // rows: T·A, T·B; columns: A·T⁻¹, C·T⁻¹
			m.State[i][l].Add(m.State[i][l], new(big.Rat).Mul(k, m.State[j][l]))
		}
		m.Input[i][0].Add(m.Input[i][0], new(big.Rat).Mul(k, m.Input[j][0]))
		for l := range n {
			m.State[l][j].Sub(m.State[l][j], new(big.Rat).Mul(k, m.State[l][i]))
		}
		m.Output[0][j].Sub(m.Output[0][j], new(big.Rat).Mul(k, m.Output[0][i]))
		d := tf.Must(New(c.States(), c.Inputs(), c.Outputs(), m))
		if g, h := tf.Must(c.TransferFunction("in0", "out0")), tf.Must(d.TransferFunction("in0", "out0")); !g.Equal(h) {
			t.Fatalf("%v\nand\n%v", g, h)
		}
	}
}

// Two tanks in a row, in litres, minutes and millimetres: numbers belong to the
// units.
func TestUnits(t *testing.T) {
	c := tf.Must(New(signals("mm", "upper", "lower"), signals("L/min", "inflow"), signals("m", "depth"), Matrices{
		State:  [][]*big.Rat{{big.NewRat(-1, 100), nil}, {big.NewRat(1, 100), big.NewRat(-1, 50)}},
		Input:  [][]*big.Rat{{big.NewRat(1, 60)}, {nil}},
		Output: [][]*big.Rat{{nil, big.NewRat(1, 1000)}},
	}))
	g := tf.Must(c.TransferFunction("inflow", "depth"))
	want := tf.MustParse("(1/600)/(10000 s^2 + 300 s + 2) [inflow: L/min -> depth: m]")
	if !g.Equivalent(want) {
		t.Errorf("%v, want %v", g, want)
	}
	// A state is read like an output.
	upper := tf.Must(c.TransferFunction("inflow", "upper"))
	if want := tf.MustParse("(1/60)/(s + 0.01) [inflow: L/min -> upper: mm]"); !upper.Equivalent(want) || !upper.Output().Equal(want.Output()) {
		t.Errorf("%v, want %v", upper, want)
	}
	if text := c.String(); text != "upper' = -0.01 upper + 1/60 inflow [mm/s]\nlower' = 0.01 upper - 0.02 lower [mm/s]\ndepth = 0.001 lower [m]" {
		t.Error(text)
	}
}

// TestTimeResponse compares impulse responses with gonum's matrix exponential, by
// scaling and squaring: its error is some thousand roundings of terms of the size
// of the exponential, which leaves a factor of 100 to the tolerance.
func TestTimeResponse(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 20 {
		n := 1 + r.IntN(5)
		c := random(r, n, 1, 1)
		m := c.Matrices()
		for i := range n { // slow enough for t = 1
			for j := range n {
				m.State[i][j].Mul(m.State[i][j], big.NewRat(1, 20))
			}
		}
		m.Feedthrough[0][0].SetInt64(0)
		c = tf.Must(New(c.States(), c.Inputs(), c.Outputs(), m))
		impulse, err := tf.Must(c.TransferFunction("in0", "out0")).InverseLaplace()
		if err != nil {
			t.Fatal(err)
		}
		f := tf.Must(c.Floats())
		for _, x := range []float64{0, 0.3, 1} {
			var scaled, e, v, y mat.Dense
			scaled.Scale(x, f.State)
			e.Exp(&scaled)
			if f.Input == nil || f.Output == nil {
				t.Fatal("no matrix")
			}
			v.Mul(&e, f.Input)
			y.Mul(f.Output, &v)
			got, err := impulse.At(x)
			if err != nil || math.Abs(got-y.At(0, 0)) > 1e-10*(1+mat.Norm(f.Input, 1)*mat.Norm(f.Output, 1)*mat.Norm(&e, 1)) {
				t.Errorf("at %v: %v, %v; by the matrix exponential %v", x, got, err, y.At(0, 0))
			}
		}
	}
}

func TestRefusals(t *testing.T) {
	x, u, y := signals("m", "x", "v"), signals("N", "force"), signals("m", "x")
	var size *SizeError
	var signal *SignalError
	var unknown *UnknownSignalError
	for name, c := range map[string]struct {
		err  error
		as   any
		text string
	}{
		"rows":      {second2(New(x, u, y, Matrices{State: rats([]int64{1, 2})})), &size, "state matrix of 1 by 2: the signals ask for 2 rows and 2 columns"},
		"columns":   {second2(New(x, u, y, Matrices{Input: rats([]int64{1, 2}, []int64{1, 2})})), &size, "input matrix of 2 by 2: the signals ask for 2 rows and 1 column"},
		"ragged":    {second2(New(x, u, y, Matrices{State: rats([]int64{1, 2}, []int64{1})})), &size, "state matrix of 2 by 1: the signals ask for 2 rows and 2 columns"},
		"name":      {second2(New(signals("m", ""), u, y, Matrices{})), &signal, `state "m": has no name`},
		"twice":     {second2(New(signals("m", "x", "x"), u, y, Matrices{})), &signal, `state "x: m": stands twice in the list`},
		"unknown":   {second2(tf.Must(New(x, u, y, Matrices{})).TransferFunction("torque", "x")), &unknown, `no input "torque": there are force`},
		"no output": {second2(tf.Must(New(x, u, y, Matrices{})).TransferFunction("force", "w")), &unknown, `no output "w": there are x, v`},
	} {
		if c.err == nil || !errors.As(c.err, c.as) || c.err.Error() != c.text {
			t.Errorf("%s: %v", name, c.err)
		}
	}
	none := tf.Must(New(x, nil, y, Matrices{}))
	if _, err := none.TransferFunction("force", "x"); err == nil || err.Error() != `no input "force": the model has none` {
		t.Error(err)
	}
	long := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), maxBits+1))
	if _, err := New(x, u, y, Matrices{Output: [][]*big.Rat{{nil, long}}}); !errors.Is(err, ErrLimit) || err.Error() !=
		"output matrix, row 1 (x), column 2 (v): found a number of 8194 bits, want at most 8192: work limit reached" {
		t.Error(err)
	}
	if _, err := New(make([]units.Signal, MaxSignals+1), nil, nil, Matrices{}); !errors.Is(err, ErrLimit) || !strings.HasPrefix(err.Error(), "found 257 states, want at most 256") {
		t.Error(err)
	}
	if _, err := FromFloats(x, u, y, Floats{Output: mat.NewDense(1, 2, []float64{1, math.NaN()})}); !errors.Is(err, ErrNotFinite) || err.Error() !=
		"output matrix, row 1 (x), column 2 (v): found NaN: not a finite number" {
		t.Error(err)
	}
	if _, err := NewDiscrete(x, u, y, Matrices{}, units.MustParseQuantity("0 s")); !errors.Is(err, ErrPeriod) {
		t.Error(err)
	}
	var mismatch *units.MismatchError
	if _, err := NewDiscrete(x, u, y, Matrices{}, units.MustParseQuantity("3 m")); !errors.As(err, &mismatch) {
		t.Error(err)
	}
	var entry *EntryError
	huge := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), 2000))
	if _, err := tf.Must(New(x, u, y, Matrices{Output: [][]*big.Rat{{huge, nil}}})).Floats(); !errors.Is(err, ErrRange) || !errors.As(err, &entry) || entry.ColumnSignal != "x" {
		t.Error(err)
	}
}

func second2[T any](_ T, err error) error { return err }

func TestPureGain(t *testing.T) {
	c := tf.Must(New(nil, signals("V", "u"), signals("mA", "i"), Matrices{Feedthrough: rats([]int64{7})}))
	if g := tf.Must(c.TransferFunction("u", "i")); !g.Equal(tf.MustParse("7 [u: V -> i: mA]")) {
		t.Error(g)
	}
	if c.String() != "i = 7 u [mA]" {
		t.Error(c)
	}
	if p := tf.Must(c.CharacteristicPolynomial()); !p.Equal(poly.FromInts(1)) {
		t.Error(p)
	}
	reduced, hidden, err := c.MinimalRealization()
	if err != nil || !reduced.Equal(c) || hidden.Uncontrollable.Degree() != 0 || hidden.Unobservable.Degree() != 0 {
		t.Error(reduced, hidden, err)
	}
	empty := Continuous{}
	if empty.String() != "" || len(empty.States()) != 0 {
		t.Error("the zero value")
	}
	if p, err := empty.CharacteristicPolynomial(); err != nil || !p.Equal(poly.FromInts(1)) {
		t.Error(p, err)
	}
}

// Values from 1e-300 to 1e300 stay exact.
func TestFarApart(t *testing.T) {
	c := tf.Must(FromFloats(signals("1", "a", "b"), signals("1", "u"), signals("1", "y"), Floats{
		State:  mat.NewDense(2, 2, []float64{-1e-300, 0, 1e300, -1e300}),
		Input:  mat.NewDense(2, 1, []float64{1e-300, 0}),
		Output: mat.NewDense(1, 2, []float64{0, 1e-300}),
	}))
	g := tf.Must(c.TransferFunction("u", "y"))
	num, den := leverrier(c.model, 0, 0)
	if !g.Equivalent(tf.Must(tf.New(num, den))) || g.Denominator().Degree() != 2 {
		t.Error(g)
	}
	f := tf.Must(c.Floats())
	if f.State.At(1, 1) != -1e300 || f.Output.At(0, 1) != 1e-300 || f.Feedthrough.At(0, 0) != 0 {
		t.Error(f)
	}
}
