package tf

import (
	"errors"
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

// TestFrequencyStages compares the first stage with the exact one bit for bit,
// and counts how often the first one does not decide.
func TestFrequencyStages(t *testing.T) {
	r := splitmix(7)
	families := []struct {
		name  string
		block func() Continuous
		most  float64 // largest share of points that the exact stage may get
		near  float64 // where the points gather, or 0
	}{
		{"benchmark", func() Continuous { return frequencyInput(1 + r.intn(20)) }, 0.01, 0},
		{"random", func() Continuous { return Must(New(r.poly(1+r.intn(12)), r.poly(1+r.intn(12)))) }, 0.01, 0},
		{"even", func() Continuous { return Must(New(poly.MustParse("s^2 + 3"), poly.MustParse("s^4 + 7 s^2 + 11"))) }, 0.01, 0},
		{"imaginary", func() Continuous { return MustParse("s/(s^2 + 3)") }, 0.01, 0},
		{"lightly damped", func() Continuous {
			k := int64(1 + r.intn(1000))
			return Must(New(ints(1, 1), ints(1000000*k, 1, 1000000))) // ζ near 1e-6
		}, 0.05, 0},
		{"at the resonance", func() Continuous { return MustParse("(s + 1)/(s^2 + 0.000002 s + 1)") }, 0.6, 1},
		{"at the edge of stability", func() Continuous { return MustParse("(s + 3)/((s^2 + 1e-14 s + 2) (s + 1)^7)") }, 1, math.Sqrt2},
		{"large gain", func() Continuous { return MustParse("1e115 (s + 3)/(s^2 + s + 2)") }, 0.01, 0},
		{"small gain", func() Continuous { return MustParse("1e-115 (s^2 + 3)/(s^2 + s + 3)") }, 1, math.Sqrt(3)},
		{"stiff", func() Continuous {
			return MustParse("(s + 1e9)/((s + 1e-7) (s + 3) (s + 2e4) (s^2 + 1e5 s + 7e15) (s + 3e8))")
		}, 0.01, 7e6},
		{"fast", func() Continuous { return MustParse("1e60/(s + 1e6)^10") }, 0.01, 3e6},
		{"slow", func() Continuous { return MustParse("1/(1e7 s + 1)^10") }, 0.01, 2e-7},
		{"near cancellation", func() Continuous { return MustParse("(s^2 + 0.000001 s + 4)/((s^2 + 0.0000010001 s + 4) (s + 1)^5)") }, 0.05, 0},
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
				if family.near > 0 { // as near to the resonance as float64 goes, and less so
					omega = family.near * (1 + float64(float64(r.intn(64)-32)*math.Ldexp(1, -20-r.intn(33))))
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
			var omega [1000]float64
			for i := range omega {
				omega[i] = 0.1 + float64(float64(i)*(9.9/999))
			}
			b.ReportAllocs()
			i := 0
			for b.Loop() {
				if _, err := f.At(omega[i]); err != nil {
					b.Fatal(err)
				}
				if i++; i == len(omega) {
					i = 0
				}
			}
		})
	}
}

// FuzzFrequencyStages compares the first stage with the exact one.
func FuzzFrequencyStages(f *testing.F) {
	f.Add(int64(1), int64(2), int64(3), int64(4), int64(5), int64(6), 1.5)
	f.Add(int64(1), int64(0), int64(-1), int64(1<<62), int64(1), int64(-1<<62), 1e-9)
	f.Fuzz(func(t *testing.T, a, b, c, d, e, g int64, omega float64) {
		function, err := New(ints(a, b, c, a), ints(d, e, g))
		if err != nil || math.IsNaN(omega-omega) {
			return
		}
		p := function.FrequencyFunction().p
		if p.fast == nil {
			return
		}
		want, err := p.exactAt(omega)
		v, reOK, imOK := p.fast.value(omega)
		if err != nil && (reOK || imOK) && !errors.Is(err, ErrRange) {
			t.Fatalf("%v at %v: %v, exactly %v", function, omega, v, err)
		}
		if err == nil && (reOK && real(v) != real(want) || imOK && imag(v) != imag(want)) {
			t.Fatalf("%v at %v: %v, exactly %v", function, omega, v, want)
		}
		size, err := p.exactMagnitude(omega)
		if v, ok := p.fast.magnitude(omega); ok && (err != nil || v != size) {
			t.Fatalf("magnitude of %v at %v: %v, exactly %v, %v", function, omega, v, size, err)
		}
	})
}

// BenchmarkFrequencyExact is the stage behind the first one.
func BenchmarkFrequencyExact(b *testing.B) {
	for _, n := range []int{4, 10, 20} {
		b.Run(fmt.Sprintf("degree=%d", n), func(b *testing.B) {
			f := frequencyInput(n).FrequencyFunction().p
			for b.Loop() {
				if _, err := f.exactAt(0.7345); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkFrequencyRead is one reading of each kind of a loop with dead time.
func BenchmarkFrequencyRead(b *testing.B) {
	f := MustParse("exp(-180 s) 4.032 (1500 s + 1)/(1500 s (1493 s + 1) (15 s + 1))").FrequencyFunction()
	for name, read := range map[string]func(float64) (float64, error){
		"magnitude": f.Magnitude, "decibels": f.Decibels, "phase": f.Phase, "delay": f.GroupDelay,
		"value": func(w float64) (float64, error) { v, err := f.At(w); return real(v), err },
	} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if _, err := read(0.0024); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
