package lti

import (
	"bytes"
	"encoding"
	"encoding/json"
	"fmt"
	"io"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/tf"
)

// ParseBlockDiagram reads a block diagram in s from JSON:
//
//	{"inputs":  {"setpoint": "mA"},
//	 "outputs": {"level": "m"},
//	 "signals": {"error": "mA", "opening": "mm", "measured": "mA"},
//	 "blocks":  {"controller":  {"from": "error", "to": "opening", "function": "400 + 400/(1500 s) [mA -> mm]"},
//	             "pool":        {"from": "opening", "to": "level", "function": "0.0042/(5600 s + 3.75) [mm -> m]"},
//	             "transmitter": {"from": "level", "to": "measured", "function": "8/(15 s + 1) [m -> mA]"}},
//	 "sums":    {"error": {"plus": ["setpoint"], "minus": ["measured"]}}}
//
// A function is what tf.Parse reads. The order of the names is kept. The errors
// are *SyntaxError for the JSON itself, also for a field of another name and a
// field given twice, *WiringError for a function that cannot be read, ErrLimit
// for a text beyond 1 MiB or functions with a total degree beyond 16384, and
// those of BlockDiagram.Build.
func ParseBlockDiagram(text string) (*Diagram[tf.Continuous], error) {
	return parseBlockDiagram[tf.Continuous](text)
}

// ParseDiscreteBlockDiagram reads a block diagram in z: a function is what
// tf.ParseDiscrete reads. In all else it is ParseBlockDiagram.
func ParseDiscreteBlockDiagram(text string) (*Diagram[tf.Discrete], error) {
	return parseBlockDiagram[tf.Discrete](text)
}

func parseBlockDiagram[G tf.Block[G]](text string) (*Diagram[G], error) {
	if len(text) > lex.MaxLength {
		return nil, lex.Fault(text, lex.MaxLength, fmt.Sprintf("a text of %d bytes", len(text)), fmt.Sprintf("at most %d", lex.MaxLength), ErrLimit)
	}
	r := &diagramReader[G]{&reader{text: text, decoder: json.NewDecoder(bytes.NewReader([]byte(text)))}, &BlockDiagram[G]{}, 0}
	if err := r.fields(map[string]func() error{
		"inputs":  func() error { return r.pairs("a unit", r.record.Input) },
		"outputs": func() error { return r.pairs("a unit", r.record.Output) },
		"signals": func() error { return r.pairs("a unit", r.record.Signal) },
		"blocks":  func() error { return r.named(r.block) },
		"sums":    func() error { return r.named(r.sum) },
	}, `"inputs", "outputs", "signals", "blocks" or "sums"`); err != nil {
		return nil, err
	}
	if t, err := r.decoder.Token(); err != io.EOF {
		return nil, r.fault(fmt.Sprintf("%v", t), "the end")
	}
	return r.record.Build()
}

type diagramReader[G tf.Block[G]] struct {
	*reader
	record *BlockDiagram[G]
	degree int // of all functions together
}

// maxTextDegree bounds the degrees of all functions in a text, so that a short
// text of high powers is short work.
const maxTextDegree = 4 * maxProductDegree

// fields reads an object whose fields are known, each at most once.
func (r *diagramReader[G]) fields(read map[string]func() error, want string) error {
	if err := r.delimiter('{'); err != nil {
		return err
	}
	seen := map[string]bool{}
	for r.decoder.More() {
		field, err := r.str("a field")
		if err != nil {
			return err
		}
		if seen[field] {
			return r.reader.fault(fmt.Sprintf("the field %q twice", field), "it once")
		}
		seen[field] = true
		next, ok := read[field]
		if !ok {
			return r.reader.fault(fmt.Sprintf("the field %q", field), want)
		}
		if err := next(); err != nil {
			return err
		}
	}
	return r.delimiter('}')
}

// named reads an object of named objects.
func (r *diagramReader[G]) named(read func(name string) error) error {
	if err := r.delimiter('{'); err != nil {
		return err
	}
	for r.decoder.More() {
		name, err := r.str("a name")
		if err != nil {
			return err
		}
		if err := read(name); err != nil {
			return err
		}
	}
	return r.delimiter('}')
}

func (r *diagramReader[G]) block(name string) error {
	var from, to, text string
	into := func(s *string, what string) func() error {
		return func() (err error) {
			*s, err = r.str(what)
			return err
		}
	}
	if err := r.fields(map[string]func() error{
		"from":     into(&from, "the signal read"),
		"to":       into(&to, "the signal determined"),
		"function": into(&text, "a transfer function"),
	}, `"from", "to" or "function"`); err != nil {
		return err
	}
	if len(r.record.blocks) >= maxBlocks || r.degree > maxTextDegree {
		return lex.Fault(r.text, int(r.decoder.InputOffset()), "one block too many",
			fmt.Sprintf("at most %d blocks, with a total degree of %d", maxBlocks, maxTextDegree), ErrLimit)
	}
	var g G
	if err := any(&g).(encoding.TextUnmarshaler).UnmarshalText([]byte(text)); err != nil {
		return &WiringError{Block: name, Reason: "function: " + err.Error(), Err: err}
	}
	f := takeApart(g)
	r.degree += max(0, f.num.Degree()) + f.den.Degree()
	r.record.Block(name, g, from, to)
	return nil
}

func (r *diagramReader[G]) sum(to string) error {
	var terms []Summand
	add := func(term func(string) Summand) func() error {
		return func() error {
			return r.list(func(text string) { terms = append(terms, term(text)) })
		}
	}
	if err := r.fields(map[string]func() error{"plus": add(Plus), "minus": add(Minus)}, `"plus" or "minus"`); err != nil {
		return err
	}
	r.record.Sum(to, terms...)
	return nil
}

// MarshalJSON writes the diagram in the form that ParseBlockDiagram and
// ParseDiscreteBlockDiagram read. In a sum the terms that are added come first.
func (d *Diagram[G]) MarshalJSON() ([]byte, error) {
	w := &jsonWriter{}
	w.begin("{")
	for _, f := range []struct {
		name string
		role role
	}{{"inputs", isInput}, {"outputs", isOutput}, {"signals", isInner}} {
		w.key(f.name)
		w.begin("{")
		for _, s := range d.record.signals {
			if s.role == f.role {
				w.pair(s.name, s.text)
			}
		}
		w.end("}")
	}
	w.key("blocks")
	w.begin("{")
	for _, b := range d.record.blocks {
		text, err := any(b.function).(encoding.TextMarshaler).MarshalText()
		if err != nil {
			return nil, err
		}
		w.key(b.name)
		w.begin("{")
		w.pair("from", b.from)
		w.pair("to", b.to)
		w.pair("function", string(text))
		w.end("}")
	}
	w.end("}")
	w.key("sums")
	w.begin("{")
	for _, s := range d.record.sums {
		w.key(s.to)
		w.begin("{")
		w.terms("plus", s.terms, 1)
		w.terms("minus", s.terms, -1)
		w.end("}")
	}
	w.end("}")
	w.end("}")
	return w.Bytes(), nil
}

// jsonWriter writes JSON in a given order of fields.
type jsonWriter struct {
	bytes.Buffer
	open bool // just after a bracket
}

func (w *jsonWriter) begin(bracket string) { w.WriteString(bracket); w.open = true }
func (w *jsonWriter) end(bracket string)   { w.WriteString(bracket); w.open = false }

func (w *jsonWriter) quote(text string) {
	if !w.open {
		w.WriteByte(',')
	}
	w.open = false
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)  // -> stays legible
	_ = e.Encode(text)      // a string always has a form,
	w.Truncate(w.Len() - 1) // followed by a new line
}

func (w *jsonWriter) key(name string) { w.quote(name); w.begin(":") }

func (w *jsonWriter) pair(name, text string) { w.key(name); w.quote(text) }

func (w *jsonWriter) terms(field string, terms []Summand, sign int) {
	w.key(field)
	w.begin("[")
	for _, t := range terms {
		if t.sign == sign {
			w.quote(t.signal)
		}
	}
	w.end("]")
}

// UnmarshalJSON is ParseBlockDiagram or ParseDiscreteBlockDiagram.
func (d *Diagram[G]) UnmarshalJSON(text []byte) error {
	t, err := parseBlockDiagram[G](string(text))
	if err == nil {
		*d = *t
	}
	return err
}

// MarshalText is MarshalJSON, for formats that hold text.
func (d *Diagram[G]) MarshalText() ([]byte, error) { return d.MarshalJSON() }

// UnmarshalText is ParseBlockDiagram or ParseDiscreteBlockDiagram.
func (d *Diagram[G]) UnmarshalText(text []byte) error { return d.UnmarshalJSON(text) }
