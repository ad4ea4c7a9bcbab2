package main

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
)

// The figures of the bench, computed numerically from its data beforehand.
func TestFigures(t *testing.T) {
	b, err := newBench()
	if err != nil {
		t.Fatal(err)
	}
	all := tf.Must(modesOf(b.toPan))
	for i, want := range []mode{{2.479, 0.0996}, {18.06, 0.0496}} {
		if got := all[i]; math.Abs(got.hertz-want.hertz) > 5e-4*want.hertz || math.Abs(got.damping-want.damping) > 6e-5 {
			t.Errorf("mode %+v, want %+v", got, want)
		}
	}
	pan := transmissibility{b.toPan.FrequencyFunction()}
	hertz, top, err := pan.peak(1, 10)
	if err != nil || math.Abs(hertz-2.46) > 0.005 || math.Abs(math.Pow(10, top/20)-5.24) > 0.005 {
		t.Errorf("peak %v dB at %v Hz, %v", top, hertz, err)
	}
	if one, err := pan.crossing(hertz, 10); err != nil || math.Abs(one-3.54) > 0.005 {
		t.Errorf("crosses one at %v, %v", one, err)
	}
	values := tf.Must(pan.decibels([]float64{10, 50}))
	if math.Abs(values[0]+18.4) > 0.05 || math.Abs(values[1]+56.0) > 0.05 {
		t.Errorf("%v dB at 10 and 50 Hz", values)
	}
	if v := tf.Must(b.released.At(0)); v != 0.5 {
		t.Errorf("the pan is let go at %v mm", v)
	}
}

func TestRun(t *testing.T) {
	folder := t.TempDir()
	var out strings.Builder
	if err := run([]string{"-output", folder}, &out); err != nil {
		t.Fatal(err)
	}
	text := out.String()
	if strings.Count(text, "the same transfer function, exactly") != 2 || strings.Contains(text, "ANOTHER") ||
		!strings.Contains(text, "sags by 0.04965 m, where a small push meets 5.005e+04 N/m") ||
		!strings.Contains(text, "not an equilibrium: speed drifts 1.1 m/s^2") {
		t.Error(text)
	}
	for _, name := range []string{"transmissibility.png", "transmissibility.svg", "release.png", "release.svg"} {
		if info, err := os.Stat(filepath.Join(folder, name)); err != nil || info.Size() < 5000 {
			t.Errorf("%s: %v", name, err)
		}
	}
}
