package main

import (
	"bytes"
	_ "embed"
	"encoding/json"
	"errors"
	"fmt"
	"strings"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/units"
)

//go:embed canal.json
var canal string

// input is everything that the program knows about a canal.
type input struct {
	hoist *lti.System // from current to gate
	pool  *lti.System // from gate and offtake to level

	deadTime          units.Quantity // from the gate to the transmitter
	approximantDegree int            // of the Padé approximant

	positionGain, sensorLag      units.Quantity
	spanLevel, spanCurrent       [2]units.Quantity
	transmitterLag               units.Quantity
	controllerGain, integralTime units.Quantity
	valveRest, valveSwing        units.Quantity
	setpointStep, offtakeStep    units.Quantity
	duration                     units.Quantity
}

// document is the input as it stands in JSON; texts are quantities with units.
type document struct {
	Hoist             json.RawMessage `json:"hoist"`
	Pool              json.RawMessage `json:"pool"`
	DeadTime          string          `json:"dead time"`
	ApproximantDegree int             `json:"approximant degree"`
	PositionLoop      struct {
		Gain      string `json:"gain"`
		SensorLag string `json:"sensor lag"`
	} `json:"position loop"`
	Transmitter struct {
		Level   [2]string `json:"level"`
		Current [2]string `json:"current"`
		Lag     string    `json:"lag"`
	} `json:"transmitter"`
	Controller struct {
		Gain         string `json:"gain"`
		IntegralTime string `json:"integral time"`
	} `json:"controller"`
	Valve struct {
		Rest  string `json:"rest"`
		Swing string `json:"swing"`
	} `json:"valve"`
	SetpointStep string `json:"setpoint step"`
	OfftakeStep  string `json:"offtake step"`
	Duration     string `json:"duration"`
}

// readInput reads the JSON of a canal and reports every fault in it, each with
// the field in which it stands.
func readInput(text string) (*input, error) {
	var d document
	decoder := json.NewDecoder(strings.NewReader(text))
	decoder.DisallowUnknownFields()
	if err := decoder.Decode(&d); err != nil {
		return nil, place(text, err)
	}
	in := &input{approximantDegree: d.ApproximantDegree}
	var faults []error
	for _, p := range []struct {
		field string
		text  json.RawMessage
		to    **lti.System
	}{{"hoist", d.Hoist, &in.hoist}, {"pool", d.Pool, &in.pool}} {
		system, err := lti.ParseSystem(string(p.text))
		if err != nil {
			faults = append(faults, inEach(p.field, err)...)
		}
		*p.to = system
	}
	if in.approximantDegree < 1 || in.approximantDegree > 10 {
		faults = append(faults, fmt.Errorf("approximant degree: found %d, want 1 to 10", in.approximantDegree))
	}
	for _, q := range []struct {
		field, text, unit string
		sign              int // 1: must be positive; 0: not negative; −1: any
		to                *units.Quantity
	}{
		{"dead time", d.DeadTime, "s", 1, &in.deadTime},
		{"position loop, gain", d.PositionLoop.Gain, "mA/mm", 1, &in.positionGain},
		{"position loop, sensor lag", d.PositionLoop.SensorLag, "s", 0, &in.sensorLag},
		{"transmitter, lower level", d.Transmitter.Level[0], "m", -1, &in.spanLevel[0]},
		{"transmitter, upper level", d.Transmitter.Level[1], "m", -1, &in.spanLevel[1]},
		{"transmitter, lower current", d.Transmitter.Current[0], "mA", -1, &in.spanCurrent[0]},
		{"transmitter, upper current", d.Transmitter.Current[1], "mA", -1, &in.spanCurrent[1]},
		{"transmitter, lag", d.Transmitter.Lag, "s", 0, &in.transmitterLag},
		{"controller, gain", d.Controller.Gain, "mm/mA", -1, &in.controllerGain},
		{"controller, integral time", d.Controller.IntegralTime, "s", 1, &in.integralTime},
		{"valve, rest", d.Valve.Rest, "mA", -1, &in.valveRest},
		{"valve, swing", d.Valve.Swing, "mA", 1, &in.valveSwing},
		{"setpoint step", d.SetpointStep, "mm", -1, &in.setpointStep},
		{"offtake step", d.OfftakeStep, "m^3/s", -1, &in.offtakeStep},
		{"duration", d.Duration, "s", 1, &in.duration},
	} {
		v, err := readQuantity(q.text, q.unit)
		switch {
		case err != nil:
			faults = append(faults, fmt.Errorf("%s: %w", q.field, err))
		case v.Sign() < q.sign:
			faults = append(faults, fmt.Errorf("%s: %v is too small", q.field, v))
		}
		*q.to = v
	}
	if in.spanLevel[0].Equal(in.spanLevel[1]) {
		faults = append(faults, errors.New("transmitter, level: the span has no length"))
	}
	return in, errors.Join(faults...)
}

// readQuantity reads a quantity and converts it, exactly, to the unit wanted.
func readQuantity(text, unit string) (units.Quantity, error) {
	if text == "" {
		return units.Quantity{}, fmt.Errorf("missing; want a number and a unit that converts to %s", unit)
	}
	q, err := units.ParseQuantity(text)
	if err != nil {
		return q, err
	}
	return q.ConvertTo(units.MustParse(unit))
}

// inEach puts the name of a field before each of the errors joined in err.
func inEach(field string, err error) []error {
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok {
		return []error{fmt.Errorf("%s: %w", field, err)}
	}
	var out []error
	for _, e := range joined.Unwrap() {
		out = append(out, fmt.Errorf("%s: %w", field, e))
	}
	return out
}

// place adds the line to an error of the JSON decoder.
func place(text string, err error) error {
	var syntax *json.SyntaxError
	var kind *json.UnmarshalTypeError
	offset := int64(-1)
	switch {
	case errors.As(err, &syntax):
		offset = syntax.Offset
	case errors.As(err, &kind):
		offset = kind.Offset
	}
	if offset < 0 || offset > int64(len(text)) {
		return err
	}
	return fmt.Errorf("line %d: %w", 1+bytes.Count([]byte(text[:offset]), []byte("\n")), err)
}
