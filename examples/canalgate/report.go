package main

import (
	"fmt"
	"io"
	"math"
	"math/big"
	"strings"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// results is all that is computed from an input.
type results struct {
	in                  *input
	model, finer        *model
	following, offtaken answers
	unanswered          error // why there are no step responses
}

func compute(in *input) (*results, error) {
	r := &results{in: in}
	var err error
	if r.model, err = newModel(in, in.approximantDegree); err != nil {
		return nil, err
	}
	if r.finer, err = newModel(in, in.approximantDegree+2); err != nil {
		return nil, err
	}
	if r.following, err = answer(r.model.followed, in.setpointStep, in.duration); err != nil {
		r.unanswered = fmt.Errorf("setpoint step: %w", err)
	} else if r.offtaken, err = answer(r.model.resisted, in.offtakeStep, in.duration); err != nil {
		r.unanswered = fmt.Errorf("offtake step: %w", err)
	}
	return r, nil
}

// report writes in the order in which an engineer reads.
func (r *results) report(w io.Writer) error {
	for _, part := range []func(io.Writer) error{
		r.understood, r.functions, r.modes, r.stability, r.gains, r.responses, r.valve, r.hidden, cautions,
	} {
		if err := part(w); err != nil {
			return err
		}
	}
	return nil
}

func heading(w io.Writer, text string) { fmt.Fprintf(w, "\n%s\n\n", strings.ToUpper(text)) }

func (r *results) understood(w io.Writer) error {
	fmt.Fprintln(w, "LEVEL CONTROL OF A CANAL POOL BY THE GATE AT ITS HEAD")
	heading(w, "what was understood")
	for _, part := range []struct {
		name   string
		system *lti.System
	}{{"hoist", r.in.hoist}, {"pool", r.in.pool}} {
		fmt.Fprintf(w, "  %s\n", part.name)
		for _, s := range part.system.Signals() {
			fmt.Fprintf(w, "    signal    %-10s in %s\n", s.Name, s.Unit)
		}
		for _, c := range part.system.Constants() {
			fmt.Fprintf(w, "    constant  %-10s = %s\n", c.Name, c.Value)
		}
		for _, e := range part.system.Equations() {
			fmt.Fprintf(w, "    equation  %s\n", e)
		}
	}
	fmt.Fprintf(w, `
  Signals are deviations from the operating point. A wave takes %v from the
  gate to the level transmitter; the offtake opens at the transmitter.
  Position loop: %v, sensor lag %v. Transmitter: %v to %v gives
  %v to %v, lag %v. Controller: %v, integral time %v.
  Valve: %v at rest, ±%v.
`, r.in.deadTime, r.in.positionGain, r.in.sensorLag, r.in.spanLevel[0], r.in.spanLevel[1],
		r.in.spanCurrent[0], r.in.spanCurrent[1], r.in.transmitterLag, r.in.controllerGain, r.in.integralTime, r.in.valveRest, r.in.valveSwing)
	return nil
}

func (r *results) functions(w io.Writer) error {
	heading(w, "transfer functions, four digits of exact ones")
	m := r.model
	followed, _ := m.followed.level.LowestTerms()
	resisted, _ := m.resisted.level.LowestTerms()
	for _, f := range []struct {
		what string
		g    tf.Continuous
	}{
		{"hoist", m.hoist}, {"pool", m.pool}, {"offtake alone", m.drain}, {"position loop", m.position},
		{"transmitter", m.transmitter}, {"controller", m.controller}, {"once around the loop", m.open},
		{"closed, from setpoint", followed}, {"closed, from offtake", resisted},
	} {
		fmt.Fprintf(w, "  %s\n    %.4g\n", f.what, f.g)
	}
	limit, err := phaseLimit(r.in.deadTime, r.in.approximantDegree)
	if err != nil {
		return err
	}
	fmt.Fprintf(w, `
  The closed functions hold a Padé approximant of degree %d for the dead time.
  Its magnitude is exactly 1; its phase is right within one degree up to %.4g mrad/s
  (a period of %s). What is faster than that is not to be believed.
`, r.in.approximantDegree, 1000*limit, duration(2*math.Pi/limit))
	return nil
}

func (r *results) modes(w io.Writer) error {
	heading(w, "modes of the closed loop, slowest first")
	modes, err := modesOf(r.model.followed.level, r.finer.followed.level)
	if err != nil {
		return err
	}
	for _, m := range modes {
		fmt.Fprintf(w, "  %s\n", describe(m))
	}
	fmt.Fprintf(w, "  A mode is said to move when it is elsewhere by more than 1 %% with degree %d instead of %d.\n",
		r.in.approximantDegree+2, r.in.approximantDegree)
	return nil
}

// describe puts a mode in words.
func describe(m mode) string {
	p := m.root.Value
	var s string
	switch {
	case p == 0:
		s = "integrates: what comes in stays"
	case imag(p) == 0 && real(p) < 0:
		s = fmt.Sprintf("decays with a time constant of %s", duration(-1/real(p)))
	case imag(p) == 0:
		s = fmt.Sprintf("GROWS e-fold in %s", duration(1/real(p)))
	default:
		s = fmt.Sprintf("swings with a period of %s, ", duration(2*math.Pi/imag(p)))
		switch {
		case real(p) < 0:
			s += fmt.Sprintf("decays with a time constant of %s (damping ratio %.4g)", duration(-1/real(p)), -real(p)/math.Hypot(real(p), imag(p)))
		case real(p) == 0:
			s += "never decays"
		default:
			s += fmt.Sprintf("GROWS e-fold in %s", duration(1/real(p)))
		}
	}
	if m.root.Multiplicity > 1 {
		s += fmt.Sprintf(", %d times", m.root.Multiplicity)
	}
	if !m.stands {
		s += "; moves with the degree of the approximant"
	}
	return s
}

// duration writes a number of seconds with four digits.
func duration(t float64) string {
	if math.IsNaN(t) {
		return "(not in the time shown)"
	}
	return fmt.Sprintf("%.4g s", t)
}

func (r *results) stability(w io.Writer) error {
	heading(w, "stability")
	for _, c := range []struct {
		degree int
		m      *model
	}{{r.in.approximantDegree, r.model}, {r.in.approximantDegree + 2, r.finer}} {
		counts, err := c.m.followed.level.Denominator().HalfPlane()
		if err != nil {
			return err
		}
		verdict := "stable"
		if counts.On+counts.Outside > 0 {
			verdict = "NOT stable"
		}
		fmt.Fprintf(w, "  Padé degree %d: %s: of %d poles %d decay, %d stay, %d grow (counted exactly)\n", c.degree, verdict,
			counts.Inside+counts.On+counts.Outside, counts.Inside, counts.On, counts.Outside)
	}
	fmt.Fprintln(w, "  The counts are exact for the approximants; they do not prove the loop with the dead time itself.")
	return nil
}

func (r *results) gains(w io.Writer) error {
	heading(w, "static gains")
	for _, g := range []struct {
		what string
		g    tf.Continuous
	}{
		{"gate to level, loop open", r.model.pool}, {"offtake to level, loop open", r.model.drain},
		{"setpoint to level, closed", r.model.followed.level}, {"offtake to level, closed", r.model.resisted.level},
		{"offtake to gate, closed", r.model.resisted.gate},
	} {
		reduced, _ := g.g.LowestTerms()
		k, err := reduced.StaticGain()
		if err != nil {
			fmt.Fprintf(w, "  %-28s none: %v\n", g.what, err)
			continue
		}
		fmt.Fprintf(w, "  %-28s %.4g\n", g.what, k)
	}
	return nil
}

func (r *results) responses(w io.Writer) error {
	heading(w, "step responses, closed loop")
	if r.unanswered != nil {
		fmt.Fprintf(w, "  none: %v\n", r.unanswered)
		return nil
	}
	fmt.Fprintf(w, "  setpoint %+v: level(t) =\n    %.4g\n\n", r.in.setpointStep, r.following.level.function)
	fmt.Fprintf(w, "  offtake %+v: level(t) =\n    %.4g\n\n", r.in.offtakeStep, r.offtaken.level.function)
	fmt.Fprintf(w, "  %8s   %-34s   %s\n", "", "after the setpoint step", "after the offtake step")
	fmt.Fprintf(w, "  %8s   %10s %10s %12s   %10s %10s %12s\n", "t / s", "level / mm", "gate / mm", "valve / mA", "level / mm", "gate / mm", "valve / mA")
	for _, i := range []int{0, 60, 180, 300, 450, 600, 900, 1200, 1800, 2700, 3600, intervals} {
		fmt.Fprintf(w, "  %8.4g", float64(i)*r.following.level.step)
		for _, a := range []answers{r.following, r.offtaken} {
			fmt.Fprintf(w, "   %10.4g %10.4g %12.4g", a.level.values[i], a.gate.values[i], a.current.values[i])
		}
		fmt.Fprintln(w)
	}
	fmt.Fprintln(w)
	r.readings(w)
	return nil
}

// readings tells what is read off the level, on the grid.
func (r *results) readings(w io.Writer) {
	level := r.following.level
	if q, err := level.function.FinalValue(); err != nil {
		fmt.Fprintf(w, "  Setpoint: the level settles nowhere: %v\n", err)
	} else if final, err := q.Float64(); err == nil && final != 0 {
		peak, at := level.extreme()
		fmt.Fprintf(w, "  Setpoint: settles at %.4g mm; overshoot %.4g %% at %s; rise from 10 to 90 %% in %s; within 2 %% from %s on.\n",
			final, max(0, 100*(peak/final-1)), duration(at), duration(level.firstPast(final, 0.9)-level.firstPast(final, 0.1)),
			duration(level.settled(final, 0.02*math.Abs(final))))
	}
	dip, at := r.offtaken.level.extreme()
	fmt.Fprintf(w, "  Offtake:  the level moves by %.4g mm at most, at %s", dip, duration(at))
	if q, err := r.offtaken.level.function.FinalValue(); err == nil {
		fmt.Fprintf(w, ", and returns to %.4g", q)
	}
	fmt.Fprintln(w, ".")
	early := 0.0
	seconds, _ := r.in.deadTime.Float64()
	for i, v := range level.values {
		if float64(i)*level.step < seconds {
			early = max(early, math.Abs(v))
		}
	}
	fmt.Fprintf(w, "  Before the wave arrives at %s nothing moves in truth; the approximant shows up to %.2g mm there.\n", duration(seconds), early)
	fmt.Fprintf(w, "  Times are read on a grid of %s.\n", duration(level.step))
}

func (r *results) valve(w io.Writer) error {
	heading(w, "demand on the valve")
	if r.unanswered != nil {
		fmt.Fprintln(w, "  not known without the step responses")
		return nil
	}
	swing, err := r.in.valveSwing.Float64()
	if err != nil {
		return err
	}
	for _, c := range []struct {
		what   string
		height units.Quantity
		a      answers
	}{{"setpoint", r.in.setpointStep, r.following}, {"offtake", r.in.offtakeStep, r.offtaken}} {
		peak, at := c.a.current.extreme()
		fmt.Fprintf(w, "  %s %+v asks for %.4g mA at most (at %s) about the rest of %v; the valve gives ±%v.\n", c.what, c.height, peak, duration(at), r.in.valveRest, r.in.valveSwing)
		if math.Abs(peak) <= swing {
			fmt.Fprintf(w, "    Within the limits: the linear result holds as far as the valve is concerned.\n")
			continue
		}
		share := new(big.Rat).SetFloat64(swing / math.Abs(peak))
		most := units.NewQuantity(share.Mul(share, c.height.Value()), c.height.Unit())
		fmt.Fprintf(w, "    BEYOND THE LIMITS for about %s: the linear result is not valid while the valve is at its stop.\n", duration(c.a.current.beyond(swing)))
		fmt.Fprintf(w, "    The largest step within them is %.3g; ramp the setpoint, or simulate with the limit.\n", most)
	}
	return nil
}

func (r *results) hidden(w io.Writer) error {
	heading(w, "cancelled factors")
	none := true
	for _, c := range []struct {
		what string
		g    tf.Continuous
	}{{"setpoint to level", r.model.followed.level}, {"offtake to level", r.model.resisted.level}} {
		_, factor := c.g.LowestTerms()
		if factor.Degree() <= 0 {
			continue
		}
		none = false
		counts, err := factor.HalfPlane()
		if err != nil {
			return err
		}
		verdict := "all its modes decay"
		if counts.On+counts.Outside > 0 {
			verdict = "IT HIDES MODES THAT DO NOT DECAY"
		}
		fmt.Fprintf(w, "  %s: %s of degree %d cancels; %s.\n", c.what, short(factor), factor.Degree(), verdict)
	}
	if none {
		fmt.Fprintln(w, "  none")
	}
	return nil
}

// short writes a polynomial in s with the constant term 1 where it has one.
func short(p poly.Poly) string {
	if c := p.Coefficient(0); c.Sign() != 0 {
		p = p.Scale(c.Inv(c))
	}
	return strings.ReplaceAll(fmt.Sprintf("%.4g", p), "x", "s")
}

func cautions(w io.Writer) error {
	heading(w, "cautions")
	fmt.Fprint(w, `  Gates drown people and flood land. Levels, limits and interlocks follow the
  local codes and a responsible engineer, not this program.
  The model is linear about one operating point: its constants change with flow
  and depth, and the dead time does too. Check the corners before you rely on it.
`)
	return nil
}
