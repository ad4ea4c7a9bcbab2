package main

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
)

// The figures of the zone, computed from its data beforehand: time constants of
// 9392, 103.5 and 40 s, gains of 0.1275 and 0.12 K/W.
func TestZone(t *testing.T) {
	z, err := newZone()
	if err != nil {
		t.Fatal(err)
	}
	if got := tf.Must(timeConstants(z.reading)); got != "9392 s, 103.5 s, 40 s" {
		t.Error(got)
	}
	for _, c := range []struct {
		g    tf.Continuous
		want float64
	}{{z.element, 0.1275}, {z.load, 0.12}, {z.reading, 0.12}} {
		if v := tf.Must(tf.Must(c.g.StaticGain()).Float64()); v != c.want {
			t.Errorf("%v: gain %v, want %v", c.g, v, c.want)
		}
	}
	// Two zones at the same temperature have no heat flow between them: both
	// heaters together do what one does alone.
	own, err := z.system.WithConstant("open", "1")
	if err != nil {
		t.Fatal(err)
	}
	g := tf.Must(own.TransferFunction("heater", "zone", "heater2"))
	if both := tf.Must(tf.Parallel(g, tf.Must(z.neighbour.WithSignals(g.Input(), g.Output())))); !both.Equivalent(z.reading) {
		t.Errorf("%v, want %v", both, z.reading)
	}
}

// The slopes of radiation, computed from the data beforehand: 132 and 60 W/K.
func TestRadiation(t *testing.T) {
	for temperature, want := range map[string]float64{"900 degC": 132, "900 K": 60} {
		if _, got, err := slope(temperature); err != nil || math.Abs(got-want) > 0.5 {
			t.Errorf("%s: %v W/K, %v, want %v", temperature, got, err, want)
		}
	}
}

func TestStepTest(t *testing.T) {
	folder := t.TempDir()
	var out strings.Builder
	if err := run([]string{"-output", folder}, &out); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"steptest.csv", "steptest.png", "steptest.svg"} {
		if info, err := os.Stat(filepath.Join(folder, name)); err != nil || info.Size() < 5000 {
			t.Errorf("%s: %v", name, err)
		}
	}
	got, err := readTest(filepath.Join(folder, "steptest.csv"))
	if err != nil {
		t.Fatal(err)
	}
	blind, _ := got.without.Parameter("gain")
	gain, _ := got.with.Parameter("gain")
	if blind.Value > 0.96*0.12 || math.Abs(gain.Value-0.12) > 3*gain.Uncertainty || math.Abs(blind.Value-0.12) > 2*blind.Uncertainty {
		t.Errorf("gain %v without and %v with a drift", blind, gain)
	}
	if !strings.Contains(out.String(), "a drift could hide here") || !strings.Contains(out.String(), "licensed") {
		t.Error(out.String())
	}
	// Its own record is read like any other.
	out.Reset()
	if err := run([]string{"-record", filepath.Join(folder, "steptest.csv"), "-output", folder}, &out); err != nil {
		t.Error(err)
	}
	bad := filepath.Join(folder, "bad.csv")
	if err := os.WriteFile(bad, []byte("time: s, heater: W\n0, 1\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := run([]string{"-record", bad, "-output", folder}, &out); err == nil || !strings.Contains(err.Error(), "zone") {
		t.Error(err)
	}
}
