package tf

import (
	"fmt"
	"math"
	"testing"

	"github.com/qofs/qofs/poly"
)

// frequencyInput is the ratio with numerator coefficients 1, 2, …, n+1 and
// denominator coefficients 1, 1/2, …, 1/(n+1), both ascending.
func frequencyInput(n int) Continuous {
	num, den := make([]string, n+1), ""
	for i := range num {
		num[i] = fmt.Sprint(i + 1)
		den += fmt.Sprintf(" 1/%d", i+1)
	}
	return Must(New(rationalPoly(nil, fmt.Sprint(num)[1:len(fmt.Sprint(num))-1]), rationalPoly(nil, den)))
}

func linspace(i int) float64 { return 0.1 + float64(float64(i)*(9.9/999)) }

// TestFrequencyStages compares the first stage with the exact one bit for bit,
// and counts how often the first one does not decide.
func TestFrequencyStages(t *testing.T) {
	r := splitmix(7)
	families := []struct {
		name  string
		block func() Continuous
		most  float64 // largest share of points that the exact stage may get
	}{
		{"benchmark", func() Continuous { return frequencyInput(1 + r.intn(20)) }, 0.01},
		{"random", func() Continuous { return Must(New(r.poly(1+r.intn(12)), r.poly(1+r.intn(12)))) }, 0.01},
		{"even", func() Continuous { return Must(New(poly.MustParse("s^2 + 3"), poly.MustParse("s^4 + 7 s^2 + 11"))) }, 0.01},
		{"imaginary", func() Continuous { return MustParse("s/(s^2 + 3)") }, 0.01},
		{"lightly damped", func() Continuous {
			k := int64(1 + r.intn(1000))
			return Must(New(ints(1, 1), ints(1000000*k, 1, 1000000))) // ζ near 1e-6
		}, 0.05},
		{"near cancellation", func() Continuous { return MustParse("(s^2 + 0.000001 s + 4)/((s^2 + 0.0000010001 s + 4) (s + 1)^5)") }, 0.05},
	}
	for _, family := range families {
		points, undecided := 0, 0
		for range 60 {
			g := family.block()
			function := g.FrequencyFunction()
			f := function.p
			if f.fast == nil {
				t.Fatalf("%s: no first stage for %v", family.name, g)
			}
			for range 20 {
				omega := math.Ldexp(float64(r.next()>>11), r.intn(14)-60)
				if r.intn(3) == 0 {
					omega = -omega
				}
				want, err := f.exactAt(omega)
				if err != nil {
					t.Fatal(err)
				}
				points++
				v, reOK, imOK := f.fast.value(omega)
				reOK, imOK = reOK || f.isImaginary, imOK || f.isReal
				if !reOK || !imOK {
					undecided++
				}
				if reOK && !f.isImaginary && real(v) != real(want) || imOK && !f.isReal && imag(v) != imag(want) {
					t.Fatalf("%s: %v at %v: %v, exactly %v", family.name, g, omega, v, want)
				}
				if got, err := function.At(omega); err != nil || got != want {
					t.Fatalf("%s: %v at %v: %v, %v, exactly %v", family.name, g, omega, got, err, want)
				}
			}
		}
		t.Logf("%s: %d of %d points not decided by the first stage", family.name, undecided, points)
		if float64(undecided) > family.most*float64(points) {
			t.Errorf("%s: %d of %d points not decided by the first stage", family.name, undecided, points)
		}
	}
}

func BenchmarkFrequencyResponse(b *testing.B) {
	for _, n := range []int{4, 10, 20} {
		b.Run(fmt.Sprintf("degree=%d", n), func(b *testing.B) {
			f := frequencyInput(n).FrequencyFunction()
			b.ReportAllocs()
			i := 0
			for b.Loop() {
				if _, err := f.At(linspace(i)); err != nil {
					b.Fatal(err)
				}
				if i++; i == 1000 {
					i = 0
				}
			}
		})
	}
}
