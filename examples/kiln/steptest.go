package main

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"slices"

	"github.com/qofs/qofs/examples/picture"
	"github.com/qofs/qofs/lti/identify"
	"github.com/qofs/qofs/lti/response"
	"github.com/qofs/qofs/units"
)

// The made-up test: 300 W more for eight hours.
const (
	interval = 30 // s
	rows     = 961
	before   = 20 // rows ahead of the step
	noise    = 0.3
	reading  = 0.1 // resolution
	drift    = -2.0
)

// writeTest writes a made-up test of the zone as a CSV file.
func (z *zone) writeTest(name string) error {
	step, err := response.Step(z.reading, units.MustParseQuantity("300 W"))
	if err != nil {
		return err
	}
	rise, err := step.Sample(interval, rows)
	if err != nil {
		return err
	}
	file, err := os.Create(name)
	if err != nil {
		return err
	}
	defer file.Close()
	out := bufio.NewWriter(file)
	fmt.Fprintf(out, "# made-up step test of a furnace zone: noise %g K, resolution %g K, drift %g K over the test\n", noise, reading, drift)
	fmt.Fprintln(out, "time: s, heater: W, zone: degC")
	random := rand.New(rand.NewPCG(12, 34))
	for i := range rows {
		power, temperature := 7500, 900.0
		if i >= before {
			power += 300
			temperature += rise[i-before]
		}
		temperature += drift*float64(i)/(rows-1) + noise*random.NormFloat64()
		fmt.Fprintf(out, "%d, %d, %.1f\n", i*interval, power, math.Round(temperature/reading)*reading)
	}
	if err := out.Flush(); err != nil {
		return err
	}
	return file.Close()
}

// test is a record with two fits.
type test struct {
	record         identify.Record
	without, with  identify.Fit // without and with a drift
	from           float64      // instant of the step
	change, before float64      // of the heater, and the level of the reading before
}

func readTest(name string) (*test, error) {
	file, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	t := &test{}
	if t.record, err = identify.ReadRecord(file, "heater", "zone"); err != nil {
		return nil, err
	}
	if t.without, err = identify.FirstOrder(t.record); err != nil {
		return nil, err
	}
	if t.with, err = identify.FirstOrder(t.record, identify.Drift()); err != nil {
		return nil, err
	}
	_, first, _ := t.record.Row(0)
	sum, n := 0.0, 0
	for i := range t.record.Len() {
		at, u, y := t.record.Row(i)
		if u != first {
			t.from, t.change = at, u-first
			break
		}
		sum, n = sum+y, n+1
	}
	t.before = sum / float64(n)
	return t, nil
}

func (t *test) report(w io.Writer, z *zone) error {
	fmt.Fprintf(w, "  %d rows, %.4g W more at %.0f s\n", t.record.Len(), t.change, t.from)
	for _, f := range []struct {
		title string
		fit   identify.Fit
	}{{"first order and dead time", t.without}, {"the same with a drift", t.with}} {
		fmt.Fprintf(w, "\n  %s\n", f.title)
		for _, p := range f.fit.Parameters() {
			fmt.Fprintf(w, "    %s\n", p)
		}
		fmt.Fprintf(w, "    residual %.2g K\n", f.fit.RMS())
		for _, warning := range f.fit.Warnings() {
			fmt.Fprintf(w, "    look: %s\n", warning)
		}
	}
	gain, err := z.reading.StaticGain()
	if err != nil {
		return err
	}
	times, err := timeConstants(z.reading)
	if err != nil {
		return err
	}
	fmt.Fprintf(w, "\n  the equations say: gain %.4g, time constants %s;\n  the two short ones look like a dead time in a record of this step\n", gain, times)
	return nil
}

// draw writes the record with both models, and the residuals.
func (t *test) draw(folder string, z *zone) ([]string, error) {
	n := t.record.Len()
	hours, zoneReading, modelled := make([]float64, n), make([]float64, n), make([]float64, n)
	fitted := t.with.Modelled()
	last, _, _ := t.record.Row(n - 1)
	equations, err := response.Step(z.reading, units.NewQuantity(new(big.Rat).SetFloat64(t.change), t.record.Input().Unit))
	if err != nil {
		return nil, err
	}
	for i := range n {
		at, _, y := t.record.Row(i)
		hours[i], zoneReading[i] = at/3600, y
		modelled[i] = t.before
		if at > t.from {
			v, err := equations.At(at - t.from)
			if err != nil {
				return nil, err
			}
			modelled[i] += v
		}
	}
	top := picture.New("zone / °C", hours, fitted, picture.Water)
	top.Low, top.High = slices.Min(zoneReading)-3, slices.Max(modelled)+3
	top.Dots(hours, zoneReading, picture.Slate)
	top.Curve(hours, modelled, picture.Wood, 1)
	top.Label(0.55*last/3600, modelled[n*55/100], "the equations, without drift ", picture.Wood, picture.AboveLeft)
	top.Label(0.98*last/3600, fitted[n*3/10], "first order and dead time with a drift, through the readings", picture.Water, picture.BelowLeft)
	panels := []*picture.Panel{top}
	for _, f := range []struct {
		axis, note string
		fit        identify.Fit
	}{
		{"residual / K", "without a drift: the residuals look as good, and the gain is off", t.without},
		{"residual / K", "with a drift", t.with},
	} {
		p := picture.NewFine(f.axis, hours, f.fit.Residuals(), picture.Iron)
		p.Low, p.High = -1.5, 1.5
		p.Label(last/3600, 1.4, f.note+" ", picture.Iron, picture.BelowLeft)
		panels = append(panels, p)
	}
	return picture.Save(folder, "steptest", "t / h", "Fitted to one test of a made-up kiln; not a basis for limits or interlocks.", panels...)
}
