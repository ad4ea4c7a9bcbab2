package identify

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/qofs/qofs/units"
)

var watt, kelvin = units.Signal{Name: "heater", Unit: units.MustParse("W")}, units.Signal{Name: "zone", Unit: units.MustParse("K")}

// truth is a plant with known parameters; poles are kept apart from the fitted
// ones: the response is summed from e^(−t/τ) by hand.
type truth struct{ gain, tau, delay, noise, drift, resolution float64 }

// stepRecord is the record of a step of the input at the row at.
func (p truth) stepRecord(seed uint64, n, at int, dt, size float64) Record {
	r := rand.New(rand.NewPCG(seed, 77))
	time, u, y := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range time {
		time[i] = float64(i) * dt
		if i >= at {
			u[i] = size
		}
		since := time[i] - float64(at)*dt - p.delay
		if since > 0 {
			y[i] = p.gain * size * (1 - math.Exp(-since/p.tau))
		}
		y[i] += 900 + p.drift*time[i] + p.noise*r.NormFloat64()
		if p.resolution > 0 {
			y[i] = math.Round(y[i]/p.resolution) * p.resolution
		}
		u[i] += 2000
	}
	record, err := NewRecord(watt, kelvin, time, u, y)
	if err != nil {
		panic(err)
	}
	return record
}

func value(t *testing.T, f Fit, name string) Parameter {
	t.Helper()
	p, ok := f.Parameter(name)
	if !ok {
		t.Fatalf("no parameter %q", name)
	}
	return p
}

func near(got, want, relative float64) bool { return math.Abs(got-want) <= relative*math.Abs(want) }

func TestExactRecords(t *testing.T) {
	p := truth{gain: 0.12, tau: 400, delay: 90}
	r := p.stepRecord(1, 900, 10, 5, 300)
	for name, fit := range map[string]func(Record, ...Term) (Fit, error){"first": FirstOrder} {
		f, err := fit(r)
		if err != nil {
			t.Fatal(err)
		}
		if !near(value(t, f, "gain").Value, 0.12, 1e-6) || !near(value(t, f, "time constant").Value, 400, 1e-5) || !near(value(t, f, "dead time").Value, 90, 1e-4) {
			t.Errorf("%s: %v", name, f)
		}
		if len(f.Warnings()) > 0 {
			t.Errorf("warnings %q", f.Warnings())
		}
		g := f.Function()
		if g.Input().Name != "heater" || g.Output().Name != "zone" || g.Denominator().Degree() != 1 {
			t.Error(g)
		}
	}
	// The quick looks interpolate between rows 5 s apart.
	for name, look := range map[string]func(Record) (Fit, error){"two points": TwoPoint, "areas": Area} {
		f, err := look(r)
		if err != nil {
			t.Fatal(err)
		}
		if !near(value(t, f, "gain").Value, 0.12, 1e-3) || !near(value(t, f, "time constant").Value, 400, 0.01) || !near(value(t, f, "dead time").Value, 90, 0.05) {
			t.Errorf("%s: %v", name, f)
		}
	}
}

// Second order, by its closed forms for light damping and for two real poles
// (Abramowitz & Stegun 29.3.12 and 29.3.17 integrated).
func TestSecondOrder(t *testing.T) {
	for _, zeta := range []float64{0.2, 1.6} {
		w, delay, gain := 0.05, 12.0, 3.0
		step := func(t float64) float64 {
			if t <= 0 {
				return 0
			}
			if zeta < 1 {
				d := w * math.Sqrt(1-zeta*zeta)
				return 1 - math.Exp(-zeta*w*t)*(math.Cos(d*t)+zeta*w/d*math.Sin(d*t))
			}
			root := math.Sqrt(zeta*zeta - 1)
			p, q := w*(zeta-root), w*(zeta+root)
			return 1 - (q*math.Exp(-p*t)-p*math.Exp(-q*t))/(q-p)
		}
		var time, u, y []float64
		for i := range 600 {
			x := float64(i) * 1.3
			time = append(time, x)
			u = append(u, map[bool]float64{true: 2, false: 0}[i >= 20])
			y = append(y, 5+gain*2*step(x-20*1.3-delay))
		}
		r, _ := NewRecord(watt, kelvin, time, u, y)
		f, err := SecondOrder(r)
		if err != nil {
			t.Fatal(err)
		}
		if !near(value(t, f, "gain").Value, gain, 1e-4) || !near(value(t, f, "natural frequency").Value, w, 1e-3) ||
			!near(value(t, f, "damping ratio").Value, zeta, 1e-3) || !near(value(t, f, "dead time").Value, delay, 1e-2) {
			t.Errorf("damping %v: %v", zeta, f)
		}
	}
}

// An integrating plant that is already running when the record begins, with input
// pulses at uneven instants.
func TestIntegrating(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 3))
	var time, u, y []float64
	x, level, now := 0.0, 40.0, 0.0
	delay := 7.0
	var changes []struct{ at, u float64 }
	for i := range 800 {
		dt := 0.2 + r.Float64()
		time, u = append(time, now), append(u, x)
		y = append(y, level)
		if i%90 == 30 {
			x = 4 * (r.Float64() - 0.5)
		}
		changes = append(changes, struct{ at, u float64 }{now, u[len(u)-1]})
		now += dt
	}
	for i := range y { // level = 40 + 0.01 t + 0.25 ∫u(t − delay)
		sum := 0.0
		for k, c := range changes {
			end := math.Inf(1)
			if k+1 < len(changes) {
				end = changes[k+1].at
			}
			sum += c.u * max(0, min(time[i]-delay, end)-c.at)
		}
		y[i] = 40 + 0.01*time[i] + 0.25*sum + 0.001*r.NormFloat64()
	}
	record, _ := NewRecord(watt, kelvin, time, u, y)
	f, err := Integrating(record, Drift())
	if err != nil {
		t.Fatal(err)
	}
	if !near(value(t, f, "gain").Value, 0.25, 1e-3) || !near(value(t, f, "dead time").Value, delay, 1e-2) {
		t.Error(f)
	}
	if f.Function().Denominator().Degree() != 1 || f.Function().Denominator().Coefficient(0).Sign() != 0 {
		t.Error(f.Function())
	}
	if u := value(t, f, "gain").Unit; !u.Equal(units.MustParse("K/(W*s)")) {
		t.Error(u)
	}
}

// An arbitrary input along straight lines, at uneven stamps, and an output that is
// not at rest: simulated in small steps by the midpoint rule, which is exact enough
// here to 1e-6.
func TestJoinedInput(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 5))
	var time, u []float64
	now := 0.0
	for range 300 {
		time, u = append(time, now), append(u, r.NormFloat64())
		now += 0.5 + r.Float64()
	}
	input := func(x float64) float64 {
		if x <= 0 {
			return u[0]
		}
		for i := 1; i < len(time); i++ {
			if x <= time[i] {
				return u[i-1] + (u[i]-u[i-1])*(x-time[i-1])/(time[i]-time[i-1])
			}
		}
		return u[len(u)-1]
	}
	const tau, delay, gain = 8, 2.5, 1.7
	x, y, at := 0.0, make([]float64, len(time)), 0.0
	h := 0.002
	for i := range time {
		for at+h/2 < time[i] {
			mid := input(at+h/2-delay) - u[0]
			x = (x-mid)*math.Exp(-h/tau) + mid
			at += h
		}
		y[i] = 3 + gain*x + 0.8*math.Exp(-time[i]/tau)
	}
	record, _ := NewRecord(watt, kelvin, time, u, y)
	f, err := FirstOrder(record.JoinedByLines(), InitialMotion())
	if err != nil {
		t.Fatal(err)
	}
	if !near(value(t, f, "gain").Value, gain, 2e-3) || !near(value(t, f, "time constant").Value, tau, 4e-3) || !near(value(t, f, "dead time").Value, delay, 4e-3) || f.RMS() > 1e-3 {
		t.Error(f)
	}
	held, err := FirstOrder(record, InitialMotion())
	if err != nil || held.RMS() < 3*f.RMS() {
		t.Errorf("an input taken for held fits as well: %v, %v", held, err)
	}
}

// The record of the kiln: a drift of −2 K in 8 h takes some 6 % off the gain of a
// fit without drift, whose residuals look perfect.
func TestKilnDrift(t *testing.T) {
	p := truth{gain: 0.12, tau: 9392, delay: 140, noise: 0.3, drift: -2.0 / 28800, resolution: 0.1}
	r := p.stepRecord(9, 961, 1, 30, 300)
	blind, err := FirstOrder(r)
	if err != nil {
		t.Fatal(err)
	}
	gain := value(t, blind, "gain")
	if gain.Value > 0.117 || blind.RMS() > 0.4 {
		t.Errorf("%v", blind)
	}
	if math.Abs(gain.Value-0.12) > 2*gain.Uncertainty || gain.StandardError > gain.Uncertainty/2 {
		t.Errorf("gain %+v does not cover 0.12", gain)
	}
	if !strings.Contains(strings.Join(blind.Warnings(), "\n"), "a drift could hide here") {
		t.Errorf("%q", blind.Warnings())
	}
	f, err := FirstOrder(r, Drift())
	if err != nil {
		t.Fatal(err)
	}
	if gain := value(t, f, "gain"); math.Abs(gain.Value-0.12) > 3*gain.Uncertainty || gain.StandardError < 2*value(t, blind, "gain").StandardError {
		t.Errorf("%+v", gain)
	}
}

// Of 95 % intervals about that many cover the truth, for white noise and for noise
// that correlates from row to row.
func TestCoverage(t *testing.T) {
	if testing.Short() {
		t.Skip("400 fits")
	}
	for name, correlation := range map[string]float64{"white": 0, "correlated": 0.6} {
		covered := map[string]int{}
		const runs = 200
		for seed := range uint64(runs) {
			p := truth{gain: 2, tau: 30, delay: 8}
			r := p.stepRecord(seed, 240, 20, 1, 5)
			noise := rand.New(rand.NewPCG(seed, 5))
			e := 0.0
			for i := range r.y {
				e = correlation*e + 0.2*noise.NormFloat64()
				r.y[i] += e
			}
			f, err := FirstOrder(r, Drift())
			if err != nil {
				t.Fatal(err)
			}
			for name, want := range map[string]float64{"gain": 2, "time constant": 30, "dead time": 8} {
				if q := value(t, f, name); math.Abs(q.Value-want) < 1.96*q.Uncertainty {
					covered[name]++
				}
			}
		}
		for parameter, n := range covered {
			if n < 174 || n > 199 {
				t.Errorf("%s: %s covered in %d of %d", name, parameter, n, runs)
			}
		}
		t.Log(name, covered)
	}
}

func TestWarnings(t *testing.T) {
	p := truth{gain: 0.12, tau: 400, delay: 0, noise: 0.01}
	p.delay = 2
	early := p.stepRecord(3, 77, 2, 5, 300)
	f, err := FirstOrder(early)
	if err != nil {
		t.Fatal(err)
	}
	all := strings.Join(f.Warnings(), "\n")
	if !strings.Contains(all, "the record ends at 6") || !strings.Contains(all, "shorter than the 5 s from row to row") {
		t.Error(all)
	}
	coarse := truth{gain: 0.12, tau: 400, delay: 50, resolution: 2}.stepRecord(3, 500, 2, 5, 300)
	if all := strings.Join(coarse.Warnings(), "\n"); !strings.Contains(all, "moves in steps of 2 K") {
		t.Error(all)
	}
	long := p.stepRecord(3, 500, 2, 5, 300)
	long.time[300] += 1000
	for i := range long.time[301:] {
		long.time[301+i] += 1000
	}
	for i := range long.y[400:] {
		long.y[400+i] = 936.5
	}
	if all := strings.Join(long.Warnings(), "\n"); !strings.Contains(all, "a gap of 1e+03 s before row 301") || !strings.Contains(all, "is it limited?") {
		t.Error(all)
	}
}

// A record that ends early misleads the quick looks, which say so.
func TestQuickLooksOfEarlyEnds(t *testing.T) {
	r := truth{gain: 0.12, tau: 400, delay: 20, noise: 0.01}.stepRecord(4, 300, 10, 5, 300)
	for name, look := range map[string]func(Record) (Fit, error){"two points": TwoPoint, "areas": Area} {
		f, err := look(r)
		if err != nil || !strings.Contains(f.String(), "the response is not over when the record ends") {
			t.Errorf("%s: %v, %v", name, f, err)
		}
		whole, err := look(truth{gain: 0.12, tau: 400, delay: 20, noise: 0.01}.stepRecord(4, 900, 10, 5, 300))
		if err != nil || strings.Contains(whole.String(), "not over") {
			t.Errorf("%s: %v, %v", name, whole, err)
		}
	}
}

func TestRefusedRecords(t *testing.T) {
	flat := make([]float64, 20)
	ramp := make([]float64, 20)
	for i := range ramp {
		ramp[i] = float64(i)
	}
	of := func(time, u, y []float64) Record {
		r, err := NewRecord(watt, kelvin, time, u, y)
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	for name, r := range map[string]Record{
		"empty": {}, "short": of(ramp[:3], ramp[:3], ramp[:3]), "still input": of(ramp, flat, ramp), "still output": of(ramp, ramp, flat), "no time": of(flat, ramp, ramp)} {
		for _, fit := range []func(Record) (Fit, error){
			func(r Record) (Fit, error) { return FirstOrder(r) }, func(r Record) (Fit, error) { return SecondOrder(r, Drift()) },
			func(r Record) (Fit, error) { return Integrating(r) }, TwoPoint, Area} {
			if _, err := fit(r); !errors.Is(err, ErrNoTest) {
				t.Errorf("%s: %v", name, err)
			}
		}
	}
	if _, err := TwoPoint(of(ramp, ramp, ramp)); !errors.Is(err, ErrNoTest) || !strings.Contains(err.Error(), "more than once") {
		t.Error(err)
	}
	var row *RowError
	if _, err := NewRecord(watt, kelvin, []float64{0, 2, 1}, ramp[:3], ramp[:3]); !errors.As(err, &row) || row.Row != 3 {
		t.Error(err)
	}
	if _, err := NewRecord(watt, kelvin, []float64{0, math.NaN()}, ramp[:2], ramp[:2]); !errors.Is(err, ErrNotFinite) {
		t.Error(err)
	}
}

func BenchmarkFirstOrder(b *testing.B) {
	for _, n := range []int{1000, 10000, 100000} {
		b.Run(fmt.Sprintf("rows=%d", n), func(b *testing.B) {
			p := truth{gain: 0.12, tau: float64(n) / 4, delay: float64(n) / 50, noise: 0.3}
			r := p.stepRecord(1, n, 10, 1, 300)
			for b.Loop() {
				if _, err := FirstOrder(r, Drift()); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
