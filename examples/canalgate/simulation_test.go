package main

import "math"

// A simulation that shares nothing with the library: the canal's differential
// equations with the figures of canal.json, by the classical Runge–Kutta method
// with a fixed step. The dead time is either a true one, a buffer of past gate
// openings, or the Padé approximant of degree 4 as four more states.

const (
	simulatedStep = 0.02 // s; the fastest time constant is about 0.1 s
	deadTime      = 180.0
)

// state: gate, gate speed, sensed position, level in m, transmitter lag in mA,
// integral of the error, then the four states of the approximant.
type state [10]float64

type simulation struct {
	setpoint, offtake float64 // m, m³/s
	approximant       bool
	past              []float64 // gate openings, one a half step
}

// padé4 are the coefficients of the closed form c_k = (8−k)! 4!/(8! k! (4−k)!)
// times T^k: 1, 1/2, 3/28, 1/84, 1/1680.
var padé4 = [5]float64{1, deadTime / 2, deadTime * deadTime * 3 / 28, math.Pow(deadTime, 3) / 84, math.Pow(deadTime, 4) / 1680}

// outputs returns the delayed gate and the valve current in a state.
func (m *simulation) outputs(x state, halfStep int) (delayed, current float64) {
	if m.approximant {
		// The controllable form of Σ c_k (−T s)^k / Σ c_k (T s)^k, whose direct
		// part is 1.
		delayed = x[0]
		for k := range 4 {
			sign := 1.0
			if k%2 == 1 {
				sign = -1
			}
			delayed += (sign - 1) * padé4[k] / padé4[4] * x[6+k]
		}
	} else if i := halfStep - int(deadTime/(simulatedStep/2)); i >= 0 {
		delayed = m.past[i]
	}
	err := 8*m.setpoint - x[4]
	command := 400 * (err + x[5]/1500)
	return delayed, 0.8 * (command - x[2])
}

func (m *simulation) slope(x state, halfStep int) (d state) {
	delayed, current := m.outputs(x, halfStep)
	d[0] = x[1]
	d[1] = (0.5*current - x[1]) / 0.4
	d[2] = (x[0] - x[2]) / 0.1
	d[3] = (0.0042*delayed - 2.5*x[3] - m.offtake - 1.25*x[3]) / 5600
	d[4] = (8*x[3] - x[4]) / 15
	d[5] = 8*m.setpoint - x[4]
	if m.approximant {
		d[9] = x[0]
		for k := range 4 {
			if k < 3 {
				d[6+k] = x[7+k]
			}
			d[9] -= padé4[k] / padé4[4] * x[6+k]
		}
	}
	return d
}

// run returns level in mm, gate in mm and current in mA at t = 0, 1, 2, … s.
func (m *simulation) run(seconds int) (level, gate, current []float64) {
	var x state
	perSecond := int(math.Round(1 / simulatedStep))
	for n := 0; ; n++ {
		m.past = append(m.past, x[0])
		if n%perSecond == 0 {
			_, i := m.outputs(x, 2*n)
			level, gate, current = append(level, 1000*x[3]), append(gate, x[0]), append(current, i)
			if n == seconds*perSecond {
				return level, gate, current
			}
		}
		h := simulatedStep
		k1 := m.slope(x, 2*n)
		k2 := m.slope(add(x, k1, h/2), 2*n+1)
		k3 := m.slope(add(x, k2, h/2), 2*n+1)
		k4 := m.slope(add(x, k3, h), 2*n+2)
		middle := x[0] + h/2*k2[0] // good to h², for the buffer's half steps
		for i := range x {
			x[i] += h / 6 * (k1[i] + 2*k2[i] + 2*k3[i] + k4[i])
		}
		m.past = append(m.past, middle)
	}
}

func add(x, d state, h float64) state {
	for i := range x {
		x[i] += h * d[i]
	}
	return x
}
