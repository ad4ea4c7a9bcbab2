package statespace

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// maxText bounds a model as JSON, in bytes.
const maxText = 1 << 22

// document is a model as JSON. Numbers are texts, so that they stay exact.
type document struct {
	States      []signal   `json:"states"`
	Inputs      []signal   `json:"inputs"`
	Outputs     []signal   `json:"outputs"`
	State       [][]string `json:"state matrix,omitempty"`
	Input       [][]string `json:"input matrix,omitempty"`
	Output      [][]string `json:"output matrix,omitempty"`
	Feedthrough [][]string `json:"feedthrough matrix,omitempty"`
	Period      string     `json:"period,omitempty"`
}

type signal struct {
	Name string     `json:"name"`
	Unit units.Unit `json:"unit"`
}

func (c model) document(period string) document {
	list := func(signals []units.Signal) []signal {
		out := make([]signal, len(signals))
		for i, s := range signals {
			out[i] = signal{s.Name, s.Unit}
		}
		return out
	}
	texts := func(m matrix) [][]string {
		var out [][]string
		for _, row := range m {
			line := make([]string, len(row))
			for j, v := range row {
				line[j] = decimal.Text(v)
			}
			out = append(out, line)
		}
		return out
	}
	return document{list(c.states), list(c.inputs), list(c.outputs),
		texts(c.state), texts(c.input), texts(c.output), texts(c.feedthrough), period}
}

// read reads a document; discrete tells whether it has a period.
func read(text []byte, discrete bool) (states, inputs, outputs []units.Signal, m Matrices, period units.Quantity, err error) {
	var d document
	if len(text) > maxText {
		return nil, nil, nil, m, period, ErrLimit
	}
	decoder := json.NewDecoder(bytes.NewReader(text))
	decoder.DisallowUnknownFields()
	if err = decoder.Decode(&d); err != nil {
		return nil, nil, nil, m, period, lex.Fault(string(text), int(decoder.InputOffset()), err.Error(), "a state-space model as JSON", nil)
	}
	list := func(signals []signal) []units.Signal {
		out := make([]units.Signal, len(signals))
		for i, s := range signals {
			out[i] = units.Signal{Name: s.Name, Unit: s.Unit}
		}
		return out
	}
	for _, part := range []struct {
		name string
		from [][]string
		into *[][]*big.Rat
	}{{"state matrix", d.State, &m.State}, {"input matrix", d.Input, &m.Input},
		{"output matrix", d.Output, &m.Output}, {"feedthrough matrix", d.Feedthrough, &m.Feedthrough}} {
		for i, line := range part.from {
			row := make([]*big.Rat, len(line))
			for j, text := range line {
				p, err := poly.Parse(text)
				if err == nil && p.Degree() > 0 {
					err = fmt.Errorf("%q is no number", text)
				}
				if err != nil {
					return nil, nil, nil, m, period, fmt.Errorf("statespace: %s, row %d, column %d: %w", part.name, i+1, j+1, err)
				}
				row[j] = p.Coefficient(0)
			}
			*part.into = append(*part.into, row)
		}
	}
	switch {
	case discrete:
		if period, err = units.ParseQuantity(d.Period); err != nil {
			err = fmt.Errorf("statespace: period: %w", err)
		}
	case d.Period != "":
		err = fmt.Errorf("statespace: a period of %q, which belongs to a model in discrete time", d.Period)
	}
	return list(d.States), list(d.Inputs), list(d.Outputs), m, period, err
}

// MarshalJSON writes signals and matrices, the numbers exactly, as texts.
func (c Continuous) MarshalJSON() ([]byte, error) { return json.Marshal(c.document("")) }

// UnmarshalJSON reads what MarshalJSON writes. The errors are *SyntaxError for the
// JSON and for numbers and units, and those of New.
func (c *Continuous) UnmarshalJSON(text []byte) error {
	states, inputs, outputs, m, _, err := read(text, false)
	if err != nil {
		return err
	}
	fresh, err := New(states, inputs, outputs, m)
	if err == nil {
		c.model = fresh.model
	}
	return err
}

// MarshalJSON writes signals, matrices and the period, as for Continuous.
func (d Discrete) MarshalJSON() ([]byte, error) { return json.Marshal(d.document(d.Period().String())) }

// UnmarshalJSON reads what MarshalJSON writes; the errors are those of Continuous
// and of NewDiscrete.
func (d *Discrete) UnmarshalJSON(text []byte) error {
	states, inputs, outputs, m, period, err := read(text, true)
	if err != nil {
		return err
	}
	fresh, err := NewDiscrete(states, inputs, outputs, m, period)
	if err == nil {
		d.model, d.period = fresh.model, fresh.period
	}
	return err
}
