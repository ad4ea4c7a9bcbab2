package ball

import (
	"math/big"
	"testing"
)

func TestConstantsAgreeWithSeries(t *testing.T) {
	for _, w := range []uint{64, 200, 1000, tableBits - 40} {
		for name, pair := range map[string][2]*big.Int{
			"pi":   {piFixed(w), new(big.Int).Rsh(chudnovsky(w+32), 32)},
			"log2": {log2Fixed(w), new(big.Int).Rsh(machinLog2(w+32), 32)},
		} {
			if d := new(big.Int).Sub(pair[0], pair[1]); d.CmpAbs(big.NewInt(1)) > 0 {
				t.Errorf("%s at %d bits: difference %d", name, w, d)
			}
		}
	}
}

func TestQuickIdentities(t *testing.T) {
	for _, prec := range []uint{64, 128, 500, 3000} {
		for _, v := range []float64{1, 0.3, -0.7, 2.5, 1e-3, 1e-9, 123.456, -50, 1e10, 0x1.0000001p0, 1 - 0x1p-40, 1e-200, 3, 1e200} {
			x := FromFloat64(v)
			s, c := x.SinCos(prec)
			check(t, "s2+c2", v, s.Sqr(prec).Add(c.Sqr(prec), prec), FromInt64(1), prec-8)
			check(t, "atan2", v, Atan2(s, c, prec).Sin(prec), s, prec-12)
			if v > 0 {
				check(t, "exp(log)", v, x.Log(prec+10).Exp(prec), x, prec-16)
			}
			if v < 1000 && v > -1000 {
				check(t, "log(exp)", v, x.Exp(2*prec+800).Log(2*prec+800), x, 8)
				check(t, "exp*exp", v, x.Exp(prec).Mul(x.Neg().Exp(prec), prec), FromInt64(1), prec-8)
			}
		}
	}
}

func check(t *testing.T, what string, v float64, got, want Real, bits uint) {
	t.Helper()
	d := got.Sub(want, 4000)
	if !d.ContainsZero() || !got.IsFinite() {
		t.Errorf("%s of %g: %v, want %v", what, v, got, want)
	}
	if got.RelativeBits() < int(bits) {
		t.Errorf("%s of %g: %d bits, want %d", what, v, got.RelativeBits(), bits)
	}
}

// Perfect squares have exact roots.
func TestPerfectSquares(t *testing.T) {
	for n := int64(1); n < 3000; n++ {
		for _, prec := range []uint{64, 200} {
			if s := FromInt64(n * n).Sqrt(prec); !s.IsExact() || s.mid.Cmp(FromInt64(n).mid) != 0 {
				t.Errorf("√%d² = %v", n, s)
			}
		}
	}
}
