package statespace

import (
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Matrices that were typed read as typed; those of FromFloats as their bits.
func TestFromDecimals(t *testing.T) {
	f := Floats{State: mat.NewDense(1, 1, []float64{-0.1}), Input: mat.NewDense(1, 1, []float64{1e-7}), Output: mat.NewDense(1, 1, []float64{2.5})}
	x, u, y := signals("m", "level"), signals("mm", "opening"), signals("mA", "reading")
	const want = "level' = -0.1 level + 1e-7 opening [m/s]\nreading = 2.5 level [mA]"
	if c := tf.Must(FromDecimals(x, u, y, f)); c.String() != want {
		t.Errorf("%q, want %q", c, want)
	}
	d := tf.Must(FromDecimalsDiscrete(x, u, y, f, units.MustParseQuantity("1 s")))
	if v := d.Matrices().State[0][0]; v.Cmp(big.NewRat(-1, 10)) != 0 {
		t.Error(v)
	}
	// 0.1 as a float64 is 3602879701896397/2^55 (Goldberg 1991 has the format).
	if v := tf.Must(FromFloats(x, u, y, f)).Matrices().State[0][0]; v.Cmp(big.NewRat(-3602879701896397, 1<<55)) != 0 {
		t.Error(v)
	}
	if v := tf.Must(f.Decimals()).Output[0][0]; v.Cmp(big.NewRat(5, 2)) != 0 {
		t.Error(v)
	}
	var entry *EntryError
	f.Input = mat.NewDense(1, 1, []float64{math.Inf(-1)})
	if _, err := FromDecimals(x, u, y, f); !errors.As(err, &entry) || !errors.Is(err, ErrNotFinite) ||
		err.Error() != "input matrix, row 1 (level), column 1 (opening): found -Inf: not a finite number" {
		t.Error(err)
	}
	if _, err := f.Decimals(); !errors.As(err, &entry) || entry.RowSignal != "" || entry.Row != 1 {
		t.Error(err)
	}
}

// Both readings round back to the same float64, whatever its size; the decimal
// has at most 17 digits before its power of ten.
func TestDecimalsRoundBack(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	v := []float64{0, 5e-324, math.MaxFloat64, 0.1, 1.0 / 3, 123456789}
	for len(v) < 400 {
		if x := math.Float64frombits(r.Uint64()); !math.IsNaN(x) && !math.IsInf(x, 0) {
			v = append(v, x)
		}
	}
	f := Floats{State: mat.NewDense(20, 20, v)}
	exact, decimals := tf.Must(f.Exact()), tf.Must(f.Decimals())
	bound := new(big.Int).Exp(big.NewInt(10), big.NewInt(17), nil)
	for k, x := range v {
		e, d := exact.State[k/20][k%20], decimals.State[k/20][k%20]
		if back, same := e.Float64(); back != x || !same {
			t.Errorf("%v is exactly %v", x, e)
		}
		if back, _ := d.Float64(); back != x {
			t.Errorf("%v is the decimal %v", x, d)
		}
		digits := new(big.Rat).Abs(d)
		for ten := big.NewRat(10, 1); !digits.IsInt(); {
			digits.Mul(digits, ten)
		}
		n := new(big.Int).Set(digits.Num())
		for m := new(big.Int); n.Sign() != 0; {
			if q, rest := new(big.Int).QuoRem(n, big.NewInt(10), m); rest.Sign() == 0 {
				n = q
				continue
			}
			break
		}
		if n.Cmp(bound) >= 0 {
			t.Errorf("%v has the digits %v", x, n)
		}
	}
}
