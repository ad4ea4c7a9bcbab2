package tf

import (
	"bufio"
	"errors"
	"fmt"
	"math"
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
)

// referenceFunction is one block of testdata/timefunction.txt.
type referenceFunction struct {
	family   string
	num, den []*big.Rat
	t, y     []float64 // y is +Inf where the value does not fit
}

func readReference(t testing.TB) []referenceFunction {
	t.Helper()
	file, err := os.Open("testdata/timefunction.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	var out []referenceFunction
	scanner := bufio.NewScanner(file)
	scanner.Buffer(nil, 1<<20)
	for scanner.Scan() {
		head, rest, _ := strings.Cut(scanner.Text(), " ")
		last := len(out) - 1
		switch head {
		case "function":
			out = append(out, referenceFunction{family: rest})
		case "num":
			out[last].num = rationalsOf(t, rest)
		case "den":
			out[last].den = rationalsOf(t, rest)
		default:
			x, err1 := strconv.ParseFloat(head, 64)
			y, err2 := math.Inf(1), error(nil)
			if rest != "range" {
				y, err2 = strconv.ParseFloat(rest, 64)
			}
			if err1 != nil || err2 != nil {
				t.Fatal(err1, err2)
			}
			out[last].t = append(out[last].t, x)
			out[last].y = append(out[last].y, y)
		}
	}
	if err := scanner.Err(); err != nil || len(out) < 50 {
		t.Fatal(len(out), err)
	}
	return out
}

func rationalsOf(t testing.TB, text string) []*big.Rat {
	var out []*big.Rat
	for _, field := range strings.Fields(text) {
		r, ok := new(big.Rat).SetString(field)
		if !ok {
			t.Fatalf("not a number: %q", field)
		}
		out = append(out, r)
	}
	return out
}

func timeFunctionOf(t testing.TB, num, den []*big.Rat) TimeFunction {
	t.Helper()
	f, err := Must(New(poly.FromRats(num...), poly.FromRats(den...))).InverseLaplace()
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestTimeFunctionReference compares every bit with mpmath
// (testdata/generate_timefunction.py), and counts ErrLimit, of which there
// must be none.
func TestTimeFunctionReference(t *testing.T) {
	compared, quickly, limits := map[string]int{}, map[string]int{}, 0
	var order []string
	for _, c := range readReference(t) {
		f := timeFunctionOf(t, c.num, c.den)
		if compared[c.family] == 0 {
			order = append(order, c.family)
		}
		for i, x := range c.t {
			got, err := f.At(x)
			slow, errSlow := f.e.at(new(big.Rat).SetFloat64(x))
			compared[c.family]++
			if _, ok := f.e.quickAt(x, 0); ok {
				quickly[c.family]++
			}
			for _, v := range []struct {
				y   float64
				err error
			}{{got, err}, {slow, errSlow}} {
				if errors.Is(v.err, fault.ErrLimit) {
					limits++
				}
				if math.IsInf(c.y[i], 1) && errors.Is(v.err, fault.ErrRange) {
					continue
				}
				if v.err != nil || math.Float64bits(v.y) != math.Float64bits(c.y[i]) {
					t.Errorf("%s %v / %v: At(%x) = %x, %v, want %x", c.family, c.num, c.den, x, v.y, v.err, c.y[i])
				}
			}
		}
	}
	report := ""
	for _, family := range order {
		report += fmt.Sprintf("\n%-20s%5d, %5d by the first stage", family, compared[family], quickly[family])
	}
	t.Logf("values compared bit for bit:%s\nErrLimit: %d", report, limits)
	if limits != 0 {
		t.Errorf("ErrLimit %d times", limits)
	}
}
