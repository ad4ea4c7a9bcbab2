package statespace

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// SyntaxError tells what is wrong in a text and where.
type SyntaxError = lex.SyntaxError

// maxText bounds a model as JSON, in bytes.
const maxText = 1 << 22

// document is a model as JSON. Numbers are texts, so that they stay exact; raw
// ones, so that what is wrong with one is told with its place.
type document struct {
	States      []signal `json:"states"`
	Inputs      []signal `json:"inputs"`
	Outputs     []signal `json:"outputs"`
	State       entries  `json:"state matrix,omitempty"`
	Input       entries  `json:"input matrix,omitempty"`
	Output      entries  `json:"output matrix,omitempty"`
	Feedthrough entries  `json:"feedthrough matrix,omitempty"`
	Period      string   `json:"period,omitempty"`
}

type entries [][]json.RawMessage

type signal struct {
	Name string `json:"name"`
	Unit string `json:"unit"`
}

func (c model) document(period string) document {
	list := func(signals []units.Signal) []signal {
		out := make([]signal, len(signals))
		for i, s := range signals {
			out[i] = signal{s.Name, s.Unit.String()}
		}
		return out
	}
	texts := func(m matrix) entries {
		var out entries
		for _, row := range m {
			line := make([]json.RawMessage, len(row))
			for j, v := range row {
				line[j] = json.RawMessage(`"` + decimal.Text(v) + `"`)
			}
			out = append(out, line)
		}
		return out
	}
	return document{list(c.states), list(c.inputs), list(c.outputs),
		texts(c.state), texts(c.input), texts(c.output), texts(c.feedthrough), period}
}

// content is what a document says.
type content struct {
	states, inputs, outputs []units.Signal
	m                       Matrices
}

// decode reads the JSON alone; offsets has the place of the value of each field.
func decode(text []byte) (d document, offsets map[string]int, err error) {
	if len(text) > maxText {
		return d, nil, lex.Fault(string(text), maxText, fmt.Sprintf("a text of %d bytes", len(text)), fmt.Sprintf("at most %d", maxText), ErrLimit)
	}
	decoder := json.NewDecoder(bytes.NewReader(text))
	fault := func(found, want string) error {
		return lex.Fault(string(text), int(decoder.InputOffset()), found, want, nil)
	}
	const want = "a state-space model as JSON"
	into := map[string]any{"states": &d.States, "inputs": &d.Inputs, "outputs": &d.Outputs, "state matrix": &d.State,
		"input matrix": &d.Input, "output matrix": &d.Output, "feedthrough matrix": &d.Feedthrough, "period": &d.Period}
	offsets = map[string]int{}
	if t, err := decoder.Token(); t != json.Delim('{') {
		return d, nil, fault(found(t, err), want)
	}
	for decoder.More() {
		t, err := decoder.Token()
		field, ok := t.(string)
		if !ok {
			return d, nil, fault(found(t, err), want)
		}
		_, twice := offsets[field]
		switch {
		case into[field] == nil:
			return d, nil, fault(fmt.Sprintf("the field %q", lex.Excerpt(field, 0)),
				`"states", "inputs", "outputs", "state matrix", "input matrix", "output matrix", "feedthrough matrix" or "period"`)
		case twice:
			return d, nil, fault(fmt.Sprintf("the field %q twice", field), "it once")
		}
		value := json.RawMessage{}
		if err := decoder.Decode(&value); err != nil {
			return d, nil, fault(found(nil, err), want)
		}
		offsets[field] = int(decoder.InputOffset()) - len(value)
		strict := json.NewDecoder(bytes.NewReader(value))
		strict.DisallowUnknownFields()
		if err := strict.Decode(into[field]); err != nil {
			offset := offsets[field]
			if kind := (*json.UnmarshalTypeError)(nil); errors.As(err, &kind) {
				offset += max(int(kind.Offset)-1, 0) // the decoder is behind what it met
			}
			return d, nil, lex.Fault(string(text), offset, found(nil, err), shape(field), nil)
		}
	}
	if t, err := decoder.Token(); err != nil {
		return d, nil, fault(found(t, err), want)
	}
	if t, err := decoder.Token(); err != io.EOF {
		return d, nil, fault(found(t, err), "the end")
	}
	return d, offsets, nil
}

// shape tells what a field holds.
func shape(field string) string {
	switch field {
	case "states", "inputs", "outputs":
		return `a list such as [{"name": "level", "unit": "m"}]`
	case "period":
		return `a text such as "0.01 s"`
	}
	return `rows of numbers as texts, such as [["-0.5", "1/3"]]`
}

// found tells what the decoder met, without the names of Go's types.
func found(t json.Token, err error) string {
	var kind *json.UnmarshalTypeError
	switch {
	case err == io.EOF || err == io.ErrUnexpectedEOF:
		return "the end"
	case errors.As(err, &kind):
		return "a JSON " + kind.Value
	case err != nil:
		return strings.TrimPrefix(err.Error(), "json: ")
	case t == nil:
		return "null"
	}
	return lex.Excerpt(fmt.Sprint(t), 0)
}

func (d document) content() (c content, err error) {
	for _, list := range []struct {
		kind string
		from []signal
		into *[]units.Signal
	}{{"state", d.States, &c.states}, {"input", d.Inputs, &c.inputs}, {"output", d.Outputs, &c.outputs}} {
		for _, s := range list.from {
			out := units.Signal{Name: s.Name}
			if out.Unit, err = units.Parse(s.Unit); err != nil {
				return c, &SignalError{Kind: list.kind, Signal: out, Reason: "its unit cannot be read: " + err.Error(), Err: err}
			}
			*list.into = append(*list.into, out)
		}
	}
	from := [...]entries{d.State, d.Input, d.Output, d.Feedthrough}
	into := [...]*[][]*big.Rat{&c.m.State, &c.m.Input, &c.m.Output, &c.m.Feedthrough}
	for k, p := range parts(c.states, c.inputs, c.outputs) {
		for i, line := range from[k] {
			row := make([]*big.Rat, len(line))
			for j, raw := range line {
				if row[j], err = number(raw); err != nil {
					return c, p.fault(i, j, err)
				}
			}
			*into[k] = append(*into[k], row)
		}
	}
	return c, nil
}

// number reads an entry, which is a text, so that no other program on the way
// rounds it to a float64.
func number(raw json.RawMessage) (*big.Rat, error) {
	var text *string
	if err := json.Unmarshal(raw, &text); err != nil || text == nil {
		return nil, lex.Fault(string(raw), 0, lex.Excerpt(string(raw), 0), `a number as text, such as "0.5"`, nil)
	}
	p, err := poly.Parse(*text)
	if err != nil {
		return nil, err
	}
	if p.Degree() > 0 {
		return nil, lex.Fault(*text, 0, fmt.Sprintf("%q", lex.Excerpt(*text, 0)), "a number, such as -0.5, 1e-3 or 1/3", nil)
	}
	return p.Coefficient(0), nil
}

// MarshalJSON writes signals and matrices, the numbers exactly, as texts.
func (c Continuous) MarshalJSON() ([]byte, error) { return json.Marshal(c.document("")) }

// UnmarshalJSON reads what MarshalJSON writes. The errors are *SyntaxError for the
// JSON itself, also for a field of another name, a field given twice and a period;
// *SignalError and *EntryError with the place, both of which wrap a *SyntaxError,
// for units and numbers that cannot be read; and those of New.
func (c *Continuous) UnmarshalJSON(text []byte) error {
	d, offsets, err := decode(text)
	if err != nil {
		return err
	}
	if offset, ok := offsets["period"]; ok {
		return lex.Fault(string(text), offset, fmt.Sprintf("a period of %q", lex.Excerpt(d.Period, 0)), "none: it belongs to a model in discrete time", nil)
	}
	t, err := d.content()
	if err != nil {
		return err
	}
	fresh, err := New(t.states, t.inputs, t.outputs, t.m)
	if err == nil {
		c.model = fresh.model
	}
	return err
}

// MarshalText is MarshalJSON, for formats that hold text: the lists of signals
// with their units have no shorter form that reads back, and String shows the
// equations for people.
func (c Continuous) MarshalText() ([]byte, error) { return c.MarshalJSON() }

// UnmarshalText is UnmarshalJSON.
func (c *Continuous) UnmarshalText(text []byte) error { return c.UnmarshalJSON(text) }

// MarshalJSON writes signals, matrices and the period, as for Continuous.
func (d Discrete) MarshalJSON() ([]byte, error) { return json.Marshal(d.document(d.Period().String())) }

// UnmarshalJSON reads what MarshalJSON writes. The errors are those of Continuous,
// *SyntaxError for a period that is missing or cannot be read, and those of
// NewDiscrete.
func (d *Discrete) UnmarshalJSON(text []byte) error {
	r, offsets, err := decode(text)
	if err != nil {
		return err
	}
	offset, ok := offsets["period"]
	if !ok {
		return lex.Fault(string(text), len(text), "no period", `a sampling period, such as "period": "0.01 s"`, nil)
	}
	period, err := units.ParseQuantity(r.Period)
	if err != nil {
		return lex.Fault(string(text), offset, fmt.Sprintf("a period of %q", lex.Excerpt(r.Period, 0)), "a time such as 0.01 s", err)
	}
	t, err := r.content()
	if err != nil {
		return err
	}
	fresh, err := NewDiscrete(t.states, t.inputs, t.outputs, t.m, period)
	if err == nil {
		d.model, d.period = fresh.model, fresh.period
	}
	return err
}

// MarshalText is MarshalJSON, for formats that hold text.
func (d Discrete) MarshalText() ([]byte, error) { return d.MarshalJSON() }

// UnmarshalText is UnmarshalJSON.
func (d *Discrete) UnmarshalText(text []byte) error { return d.UnmarshalJSON(text) }
