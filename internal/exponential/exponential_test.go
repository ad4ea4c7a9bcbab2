package exponential

import (
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/ball"
)

// TestTables compares the source with the file that the script writes.
func TestTables(t *testing.T) {
	source, err := os.ReadFile("tables.go")
	if err != nil {
		t.Fatal(err)
	}
	table, err := os.ReadFile("testdata/tables.txt")
	if err != nil {
		t.Fatal(err)
	}
	_, code, _ := strings.Cut(string(source), "package exponential\n")
	if a, b := strings.Fields(code), strings.Fields(string(table)); strings.Join(a, " ") != strings.Join(b, " ") {
		t.Error("tables.go is not testdata/tables.txt")
	}
}

// distance returns log2 of |h + l − want| over scale, rounded up.
func distance(h, l float64, want ball.Real, relative bool) float64 {
	const prec = 200
	d := ball.FromFloat64(h).Add(ball.FromFloat64(l), prec).Sub(want, prec)
	if relative {
		d = d.Div(want, prec)
	}
	v, _ := d.Abs().Upper().Float64()
	return math.Log2(v)
}

func TestErrors(t *testing.T) {
	count := 20000
	if testing.Short() {
		count = 2000
	}
	r := rand.New(rand.NewPCG(3, 4))
	worstExp, worstSin := math.Inf(-1), math.Inf(-1)
	argument := func(limit float64) (float64, float64) {
		x := limit * (2*r.Float64() - 1)
		if r.IntN(2) == 0 {
			x *= math.Exp2(-30 * r.Float64())
		}
		return fastTwoSum(x, x*0x1p-53*(r.Float64()-0.5))
	}
	for range count {
		const prec = 200
		h, l := argument(MaxExp)
		x := ball.FromFloat64(h).Add(ball.FromFloat64(l), prec)
		eh, el := Exp(h, l)
		worstExp = max(worstExp, distance(eh, el, x.Exp(prec), true))

		h, l = argument(MaxAngle)
		x = ball.FromFloat64(h).Add(ball.FromFloat64(l), prec)
		sin, cos := x.SinCos(prec)
		sh, sl, ch, cl := SinCos(h, l)
		worstSin = max(worstSin, distance(sh, sl, sin, false), distance(ch, cl, cos, false))
	}
	t.Logf("largest errors over %d arguments: Exp 2^%.1f, SinCos 2^%.1f", count, worstExp, worstSin)
	if worstExp > math.Log2(ExpError) || worstSin > math.Log2(SinCosError) {
		t.Error("beyond the bounds")
	}
}

func TestExactPoints(t *testing.T) {
	if h, l := Exp(0, 0); h != 1 || l != 0 {
		t.Errorf("e^0 = %v + %v", h, l)
	}
	if s, sl, c, cl := SinCos(0, 0); s != 0 || sl != 0 || c != 1 || cl != 0 {
		t.Errorf("sin 0, cos 0 = %v + %v, %v + %v", s, sl, c, cl)
	}
}

var sink float64

func BenchmarkExp(b *testing.B) {
	x := -0.3
	for b.Loop() {
		h, l := Exp(x, 0)
		x = -0.3 - 0x1p-20*h
		sink = l
	}
}

func BenchmarkSinCos(b *testing.B) {
	x := -0.3
	for b.Loop() {
		h, l, _, _ := SinCos(x, 0)
		x = -0.3 - 0x1p-20*h
		sink = l
	}
}
