package main

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// model holds the blocks of the canal and the loops made of them. Functions
// with "closed" in their comment stand on the Padé approximant.
type model struct {
	hoist tf.Continuous // current → gate
	pool  tf.Continuous // gate → level, with its dead time
	drain tf.Continuous // offtake → level, without dead time: it opens at the transmitter

	position    tf.Continuous // the inner loop: command → gate
	transmitter tf.Continuous // level → reading
	controller  tf.Continuous // error → command
	open        tf.Continuous // level → level, once around the loop, with dead time

	followed, resisted loop // from setpoint and from offtake, closed
}

// loop holds the closed functions from one input.
type loop struct{ level, gate, current tf.Continuous }

// builder keeps the first error, so that a chain of blocks reads as one.
type builder struct{ err error }

func (b *builder) keep(what string) func(tf.Continuous, error) tf.Continuous {
	return func(g tf.Continuous, err error) tf.Continuous {
		if err != nil && b.err == nil {
			b.err = fmt.Errorf("%s: %w", what, err)
		}
		return g
	}
}

// newModel composes the loops with a Padé approximant of the given degree.
func newModel(in *input, degree int) (*model, error) {
	b, m := &builder{}, &model{}
	m.hoist = b.keep("hoist")(in.hoist.TransferFunction("current", "gate"))
	pool := b.keep("pool")(in.pool.TransferFunction("gate", "level", "offtake"))
	m.drain = b.keep("offtake")(in.pool.TransferFunction("offtake", "level", "gate"))
	m.pool = b.keep("dead time")(pool.WithDeadTime(in.deadTime))
	if b.err != nil {
		return nil, b.err
	}

	gate, level, current := m.hoist.Output(), m.pool.Output(), m.hoist.Input()
	command := units.Signal{Name: "command", Unit: gate.Unit}
	measured := units.Signal{Name: "measured", Unit: gate.Unit}
	reading := units.Signal{Name: "reading", Unit: units.MustParse("mA")}
	demand := units.Signal{Name: "error", Unit: reading.Unit}
	setpoint := units.Signal{Name: "setpoint", Unit: level.Unit}

	drive := b.keep("position loop, gain")(gain(in.positionGain, command, current))
	sensor := b.keep("position loop, sensor lag")(lag(in.sensorLag, gate, measured))
	m.position = b.keep("position loop")(tf.Feedback(b.keep("position loop")(tf.Series(drive, m.hoist)), between(b, sensor, gate, command)))
	slope, err := slopeOf(in)
	if err != nil {
		return nil, err
	}
	scale := b.keep("transmitter, span")(gain(slope, level, reading))
	m.transmitter = b.keep("transmitter")(tf.Series(scale, b.keep("transmitter, lag")(lag(in.transmitterLag, reading, reading))))
	m.controller = b.keep("controller")(proportionalIntegral(in, demand, command))
	if b.err != nil {
		return nil, b.err
	}

	// The error is setpoint less reading, both in mA, so that the loop is cut
	// and named there.
	compare := between(b, m.transmitter, level, demand)
	m.open = b.keep("open loop")(tf.Series(compare, m.controller, m.position, m.pool))
	pool = b.keep("approximant")(m.pool.PadeApproximant(degree))
	enter := b.keep("setpoint")(gain(slope, setpoint, demand))

	around := b.keep("loop")(tf.Series(m.controller, m.position, pool)) // error → level
	m.followed.level = b.keep("setpoint to level")(tf.Series(enter, b.keep("loop")(tf.Feedback(around, compare))))
	chain := b.keep("loop")(tf.Series(m.controller, m.position)) // error → gate
	back := b.keep("loop")(tf.Series(pool, compare))             // gate → error
	m.followed.gate = b.keep("setpoint to gate")(tf.Series(enter, b.keep("loop")(tf.Feedback(chain, back))))
	effort := b.keep("position loop")(tf.Feedback(drive, b.keep("position loop")(tf.Series(m.hoist, between(b, sensor, gate, command)))))
	answer := b.keep("loop")(tf.Series(m.controller, effort)) // error → current
	rest := b.keep("loop")(tf.Series(m.hoist, pool, compare)) // current → error
	m.followed.current = b.keep("setpoint to current")(tf.Series(enter, b.keep("loop")(tf.Feedback(answer, rest))))

	// The offtake acts on the level inside the loop: what it does alone, and
	// what the loop then does about it.
	unity := b.keep("level")(gain(units.NewQuantity(big.NewRat(1, 1), units.Unit{}), level, level))
	m.resisted.level = b.keep("offtake to level")(tf.Series(m.drain, b.keep("loop")(tf.Feedback(unity, b.keep("loop")(tf.Series(compare, around))))))
	minus := big.NewRat(-1, 1)
	m.resisted.gate = b.keep("offtake to gate")(tf.Series(m.resisted.level, tf.Must(tf.Scale(compare, minus)), chain))
	m.resisted.current = b.keep("offtake to current")(tf.Series(m.resisted.level, tf.Must(tf.Scale(compare, minus)), answer))
	return m, b.err
}

// between gives a block other signals of the same units.
func between(b *builder, g tf.Continuous, in, out units.Signal) tf.Continuous {
	return b.keep("signals")(g.WithSignals(in, out))
}

// gain is a constant block between two signals, in whatever unit it is given.
func gain(k units.Quantity, in, out units.Signal) (tf.Continuous, error) {
	k, err := k.ConvertTo(out.Unit.Div(in.Unit))
	if err != nil {
		return tf.Continuous{}, err
	}
	return tf.Gain(k).WithSignals(in, out)
}

// lag is 1/(T s + 1).
func lag(t units.Quantity, in, out units.Signal) (tf.Continuous, error) {
	g, err := tf.New(poly.FromInts(1), poly.FromRats(big.NewRat(1, 1), t.Value()))
	if err != nil {
		return g, err
	}
	return g.WithSignals(in, out)
}

// proportionalIntegral is k (1 + 1/(T s)).
func proportionalIntegral(in *input, from, to units.Signal) (tf.Continuous, error) {
	t := in.integralTime.Value()
	shape, err := tf.New(poly.FromRats(big.NewRat(1, 1), t), poly.FromRats(nil, t))
	if err != nil {
		return shape, err
	}
	if shape, err = shape.WithSignals(from, from); err != nil {
		return shape, err
	}
	k, err := gain(in.controllerGain, from, to)
	if err != nil {
		return k, err
	}
	return tf.Series(shape, k)
}

// slopeOf is the transmitter's current over level.
func slopeOf(in *input) (units.Quantity, error) {
	rise, err := in.spanCurrent[1].Sub(in.spanCurrent[0])
	if err != nil {
		return rise, err
	}
	run, err := in.spanLevel[1].Sub(in.spanLevel[0])
	if err != nil {
		return run, err
	}
	return rise.Div(run)
}
