package ball

import (
	"bufio"
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"
)

// dyadic reads "m:e", m·2^e.
func dyadic(t *testing.T, s string) *big.Float {
	t.Helper()
	ms, es, _ := strings.Cut(s, ":")
	m, ok := new(big.Int).SetString(ms, 10)
	e, err := strconv.Atoi(es)
	if !ok || err != nil {
		t.Fatalf("bad number %q", s)
	}
	z := new(big.Float).SetInt(m)
	return z.SetMantExp(z, e)
}

var functions = map[string]func(Real, uint) Real{
	"exp": Real.Exp, "log": Real.Log, "sin": Real.Sin, "cos": Real.Cos,
	"atan": Real.Atan, "sqrt": Real.Sqrt, "sinh": Real.Sinh, "cosh": Real.Cosh,
}

// Inclusion and accuracy against mpmath (values of 1200 bits, themselves
// within 2^-1199).
func TestFunctionsContainReference(t *testing.T) {
	file, err := os.Open("testdata/functions.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	cases := 0
	for lines := bufio.NewScanner(file); lines.Scan(); {
		f := strings.Fields(lines.Text())
		var args []Real
		for _, a := range strings.Split(f[1], ",") {
			args = append(args, FromFloat(dyadic(t, a)))
		}
		value := dyadic(t, f[2])
		want := FromFloat(value)
		if value.Sign() != 0 {
			want = want.widen(magPow2(value.MantExp(nil) - 1199))
		}
		for _, prec := range []uint{53, 64, 113, 128, 250, 600, 1100} {
			var got Real
			if f[0] == "atan2" {
				got = Atan2(args[0], args[1], prec)
			} else {
				got = functions[f[0]](args[0], prec)
			}
			cases++
			if !got.Sub(want, 2400).ContainsZero() {
				t.Errorf("%s(%s) at %d bits: %v does not contain %v", f[0], f[1], prec, got, want)
			}
			if got.RelativeBits() < int(prec)-3 {
				t.Errorf("%s(%s) at %d bits: only %d bits", f[0], f[1], prec, got.RelativeBits())
			}
		}
	}
	if cases < 3000 {
		t.Errorf("only %d cases", cases)
	}
}
