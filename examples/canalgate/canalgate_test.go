package main

import (
	"bytes"
	"errors"
	"fmt"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func builtIn(t *testing.T) *results {
	t.Helper()
	in, err := readInput(canal)
	if err != nil {
		t.Fatal(err)
	}
	r, err := compute(in)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// furthest returns the largest difference of two curves from index first on.
func furthest(a, b []float64, first int) float64 {
	d := 0.0
	for i := first; i < min(len(a), len(b)); i++ {
		d = max(d, math.Abs(a[i]-b[i]))
	}
	return d
}

// With the approximant as differential equations the closed forms and the
// simulation are the same functions.
func TestSameAsSimulatedApproximant(t *testing.T) {
	r := builtIn(t)
	for _, c := range []struct {
		name string
		m    simulation
		a    answers
	}{
		{"setpoint", simulation{setpoint: 0.05, approximant: true}, r.following},
		{"offtake", simulation{offtake: 0.25, approximant: true}, r.offtaken},
	} {
		level, gate, current := c.m.run(2000)
		for _, v := range []struct {
			what string
			d    float64
		}{
			{"level / mm", furthest(level, c.a.level.values, 0)},
			{"gate / mm", furthest(gate, c.a.gate.values, 0)},
			{"current / mA", furthest(current, c.a.current.values, 0)},
		} {
			t.Logf("%s, %s: %.2g", c.name, v.what, v.d)
			if !(v.d < 1e-5) {
				t.Errorf("%s, %s: differs by %g from the simulation", c.name, v.what, v.d)
			}
		}
	}
}

// With the true dead time the curves agree as well as the approximant allows,
// and so does what the report reads off them.
func TestNearSimulatedDeadTime(t *testing.T) {
	r := builtIn(t)
	setpoint := simulation{setpoint: 0.05}
	level, gate, current := setpoint.run(5400)
	t.Logf("setpoint: level %.2g, gate %.2g", furthest(level, r.following.level.values, 0), furthest(gate, r.following.gate.values, 0))
	if d := furthest(level, r.following.level.values, 400); !(d < 0.2) {
		t.Errorf("setpoint: level differs by %g mm after 400 s", d)
	}
	for i := range 180 {
		if level[i] != 0 {
			t.Fatalf("the simulated level is %g mm after %d s, before the wave arrives", level[i], i)
		}
	}
	offtake := simulation{offtake: 0.25}
	dip, gates, _ := offtake.run(5400)
	t.Logf("offtake: level %.2g, gate %.2g", furthest(dip, r.offtaken.level.values, 0), furthest(gates, r.offtaken.gate.values, 0))
	if d := furthest(dip, r.offtaken.level.values, 0); !(d < 0.05) {
		t.Errorf("offtake: level differs by %g mm", d)
	}

	var b bytes.Buffer
	if err := r.report(&b); err != nil {
		t.Fatal(err)
	}
	said := func(pattern string) []float64 {
		m := regexp.MustCompile(pattern).FindStringSubmatch(b.String())
		if m == nil {
			t.Fatalf("the report does not say %q", pattern)
		}
		var out []float64
		for _, s := range m[1:] {
			v, err := strconv.ParseFloat(s, 64)
			if err != nil {
				t.Fatal(err)
			}
			out = append(out, v)
		}
		return out
	}
	near := func(what string, got, want, within float64) {
		t.Logf("%s: said %g, simulated %g", what, got, want)
		if !(math.Abs(got-want) <= within) {
			t.Errorf("%s: said %g, simulated %g", what, got, want)
		}
	}
	s := curve{step: 1, values: level}
	v := said(`settles at (\S+) mm; overshoot (\S+) % at (\S+) s; rise from 10 to 90 % in (\S+) s; within 2 % from (\S+) s on`)
	peak, at := s.extreme()
	near("final value", v[0], level[5400], 0.02)
	near("overshoot", v[1], 100*(peak/50-1), 0.05)
	near("its time", v[2], at, 3)
	near("rise time", v[3], s.firstPast(50, 0.9)-s.firstPast(50, 0.1), 3)
	near("settling time", v[4], s.settled(50, 1), 3)
	d, at := curve{step: 1, values: dip}.extreme()
	v = said(`the level moves by (\S+) mm at most, at (\S+) s`)
	near("dip", v[0], d, 0.01)
	near("its time", v[1], at, 3)
	v = said(`setpoint 50 mm asks for (\S+) mA at most \(at (\S+) s\)`)
	near("first demand", v[0], 50*8e-3*400*0.8, 1e-9) // before anything moves
	near("its time", v[1], 0, 0)
	v = said(`BEYOND THE LIMITS for about (\S+) s`)
	near("time beyond", v[0], curve{step: 1, values: current}.beyond(8), 1)
}

func TestReport(t *testing.T) {
	folder := t.TempDir()
	var b bytes.Buffer
	if err := run([]string{"-output", folder}, &b); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	before := -1
	for _, heading := range []string{"WHAT WAS UNDERSTOOD", "TRANSFER FUNCTIONS", "MODES", "STABILITY", "STATIC GAINS",
		"STEP RESPONSES", "DEMAND ON THE VALVE", "CANCELLED FACTORS", "CAUTIONS", "PICTURES"} {
		at := strings.Index(text, heading)
		if at <= before {
			t.Errorf("%s stands at %d, after a heading at %d", heading, at, before)
		}
		before = at
	}
	for _, want := range []string{
		"area level' + outflow level = inflow - offtake",
		"exp(-180 s) 0.00112/(1493 s + 1) [gate: mm -> level: m]", // 0.0042/3.75 and 5600/3.75
		"stable: of 10 poles 10 decay",                            // 1 + 3 + 1 + 1 + 4
		"BEYOND THE LIMITS",
		"offtake to level: 1493 s + 1 of degree 1 cancels",
		"drown",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the report does not say %q", want)
		}
	}
	for _, name := range []string{"setpoint", "offtake"} {
		path := filepath.Join(folder, name+".png")
		if !strings.Contains(text, path) {
			t.Errorf("the report does not name %s", path)
		}
		f, err := os.Open(path)
		if err != nil {
			t.Fatal(err)
		}
		picture, err := png.Decode(f)
		f.Close()
		if err != nil || picture.Bounds().Dx() < 600 {
			t.Errorf("%s: %v, %v", path, picture, err)
		}
		vector, err := os.ReadFile(filepath.Join(folder, name+".svg"))
		if err != nil || !bytes.Contains(vector, []byte("level / mm")) {
			t.Errorf("%s.svg: %v", name, err)
		}
	}
}

// A wrong unit gives an error that points to it.
func TestWrongInput(t *testing.T) {
	for _, c := range []struct {
		what, right, wrong string
		target             any
		says               []string
	}{
		{"constant", `"5600 m^2"`, `"5600 m^3"`, new(*lti.EquationError), []string{"pool:", `"area level'" (offset 0)`, "m^4/s", "m^3/s"}},
		{"gain", "400 mm/mA", "400 mm/V", new(*units.MismatchError), []string{"controller, gain", "mm/V", "mm/mA"}},
		{"typing error", `"15 s"`, `"15 sek"`, new(*units.SyntaxError), []string{"transmitter, lag", "sek", "offset 3"}},
		{"scale at a junction", `"gate": "mm"`, `"gate": "cm"`, new(*tf.JunctionError), []string{"1 cm is 10 mm"}},
		{"name", `"offtake": "m^3/s"`, `"ofttake": "m^3/s"`, new(*lti.EquationError), []string{`"offtake"`}},
		{"hertz", `"lag": "0.4 s"`, `"lag": "2.5 Hz"`, new(*lti.EquationError), []string{"hoist:", `"lag"`, "15.70796 rad/s"}},
	} {
		file := filepath.Join(t.TempDir(), "canal.json")
		if !strings.Contains(canal, c.right) {
			t.Fatalf("%s: the input has no %s", c.what, c.right)
		}
		if err := os.WriteFile(file, []byte(strings.Replace(canal, c.right, c.wrong, 1)), 0o600); err != nil {
			t.Fatal(err)
		}
		err := run([]string{"-input", file, "-output", t.TempDir()}, new(bytes.Buffer))
		if !errors.As(err, c.target) {
			t.Errorf("%s: %v, want a %T", c.what, err, c.target)
			continue
		}
		for _, s := range append(c.says, file) {
			if !strings.Contains(err.Error(), s) {
				t.Errorf("%s: %v, want it to say %q", c.what, err, s)
			}
		}
	}
	for _, text := range []string{"", "{", "[]", "{}", `{"hoist": 3}`, `{"x": 1}`, strings.Repeat("[", 1<<16)} {
		if in, err := readInput(text); err == nil {
			t.Errorf("%.20q reads as %v", text, in)
		}
	}
}

// The units in which a canal is written do not change what is found.
func TestUnitsDoNotMatter(t *testing.T) {
	want := builtIn(t)
	text := canal
	for _, c := range [][2]string{{`"level":   "m"`, `"level":   "cm"`}, {"5600 m^2", "0.56 hm^2"}, {"400 mm/mA", "0.4 m/mA"}, {"180 s", "3 min"}, {`"2 m"`, `"200 cm"`}} {
		if !strings.Contains(text, c[0]) {
			t.Fatalf("the input has no %s", c[0])
		}
		text = strings.Replace(text, c[0], c[1], 1)
	}
	in, err := readInput(text)
	if err != nil {
		t.Fatal(err)
	}
	got, err := compute(in)
	if err != nil {
		t.Fatal(err)
	}
	for i, v := range want.following.level.values {
		if got.following.level.values[i] != v || got.offtaken.level.values[i] != want.offtaken.level.values[i] {
			t.Fatalf("at %d s: %v and %v, want %v and %v", i, got.following.level.values[i], got.offtaken.level.values[i], v, want.offtaken.level.values[i])
		}
	}
}

// An unstable loop is called so.
func TestUnstable(t *testing.T) {
	in, err := readInput(strings.Replace(canal, "400 mm/mA", "4000 mm/mA", 1))
	if err != nil {
		t.Fatal(err)
	}
	r, err := compute(in)
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := r.report(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"NOT stable", "GROWS", "settles nowhere"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the report does not say %q", want)
		}
	}

	// One that grows beyond every float64 still gets its report.
	b.Reset()
	file := filepath.Join(t.TempDir(), "canal.json")
	text := strings.Replace(strings.Replace(canal, "400 mm/mA", "-4 km/mA", 1), "5400 s", "30 d", 1)
	if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := run([]string{"-input", file, "-output", t.TempDir()}, &b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"NOT stable", "none: setpoint step", tf.ErrRange.Error(), "drown"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the report does not say %q", want)
		}
	}
}

// The phase of a Padé approximant from its closed form: twice the argument of
// the numerator.
func TestPhaseLimit(t *testing.T) {
	q := units.MustParseQuantity("180 s")
	limit, err := phaseLimit(q, 4)
	if err != nil {
		t.Fatal(err)
	}
	deviation := func(w float64) float64 {
		even := padé4[0] - padé4[2]*w*w + padé4[4]*w*w*w*w
		odd := padé4[1]*w - padé4[3]*w*w*w
		return math.Abs(math.Remainder(w*deadTime-2*math.Atan2(odd, even), 2*math.Pi)) * 180 / math.Pi
	}
	if a, b := deviation(limit), deviation(limit+0.03/180); !(a <= 1 && b > 1) {
		t.Errorf("at the limit %g rad/s the phase is off by %g°, a little above by %g°", limit, a, b)
	}
}

func FuzzReadInput(f *testing.F) {
	f.Add(canal)
	f.Add(fmt.Sprintf("%.300s", canal))
	f.Fuzz(func(t *testing.T, text string) {
		if in, err := readInput(text); err == nil && (in.hoist == nil || in.pool == nil) {
			t.Errorf("no error and no plant")
		}
	})
}
