package lti

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"

	"github.com/qofs/qofs/internal/lex"
)

// ParseSystem reads a system from JSON:
//
//	{"signals":   {"inflow": "L/min", "level": "mm"},
//	 "constants": {"area": "1.5 m^2", "outflow": "0.02 m^2/s"},
//	 "equations": ["area level' + outflow level = inflow"]}
//
// The order of the names is kept. The errors are *SyntaxError for the JSON
// itself, also for a field of another name and a name given twice, and those
// of Equations.Build.
func ParseSystem(text string) (*System, error) {
	if len(text) > lex.MaxLength {
		return nil, lex.Fault(text, lex.MaxLength, fmt.Sprintf("a text of %d bytes", len(text)), fmt.Sprintf("at most %d", lex.MaxLength), ErrLimit)
	}
	r := &reader{text: text, decoder: json.NewDecoder(bytes.NewReader([]byte(text)))}
	e, err := r.system()
	if err != nil {
		return nil, err
	}
	return e.Build()
}

type reader struct {
	text    string
	decoder *json.Decoder
}

// fault points at what was read last.
func (r *reader) fault(found, want string) error {
	return lex.Fault(r.text, int(r.decoder.InputOffset()), found, want, nil)
}

// token returns the next token; the JSON faults of the decoder get their place.
func (r *reader) token() (json.Token, error) {
	t, err := r.decoder.Token()
	if err == io.EOF {
		return nil, r.fault("the end", "the rest of the JSON")
	}
	if err != nil {
		return nil, r.fault(err.Error(), "JSON")
	}
	return t, nil
}

func (r *reader) delimiter(want json.Delim) error {
	t, err := r.token()
	if err == nil && t != want {
		err = r.fault(fmt.Sprintf("%v", t), fmt.Sprintf("%v", want))
	}
	return err
}

func (r *reader) str(what string) (string, error) {
	t, err := r.token()
	if err != nil {
		return "", err
	}
	s, ok := t.(string)
	if !ok {
		return "", r.fault(fmt.Sprintf("%v", t), "a string: "+what)
	}
	return s, nil
}

func (r *reader) system() (*Equations, error) {
	e := NewEquations()
	if err := r.delimiter('{'); err != nil {
		return nil, err
	}
	seen := map[string]bool{}
	for r.decoder.More() {
		field, err := r.str("a field")
		if err != nil {
			return nil, err
		}
		if seen[field] {
			return nil, r.fault(fmt.Sprintf("the field %q twice", field), "it once")
		}
		seen[field] = true
		switch field {
		case "signals":
			err = r.pairs("a unit", e.Signal)
		case "constants":
			err = r.pairs("a quantity", e.Constant)
		case "equations":
			err = r.list(e.Equation)
		default:
			err = r.fault(fmt.Sprintf("the field %q", field), `"signals", "constants" or "equations"`)
		}
		if err != nil {
			return nil, err
		}
	}
	if err := r.delimiter('}'); err != nil {
		return nil, err
	}
	if t, err := r.decoder.Token(); err != io.EOF {
		return nil, r.fault(fmt.Sprintf("%v", t), "the end")
	}
	return e, nil
}

func (r *reader) pairs(what string, declare func(name, text string)) error {
	if err := r.delimiter('{'); err != nil {
		return err
	}
	for r.decoder.More() {
		name, err := r.str("a name")
		if err != nil {
			return err
		}
		text, err := r.str(what)
		if err != nil {
			return err
		}
		declare(name, text)
	}
	return r.delimiter('}')
}

func (r *reader) list(add func(text string)) error {
	if err := r.delimiter('['); err != nil {
		return err
	}
	for r.decoder.More() {
		text, err := r.str("an equation")
		if err != nil {
			return err
		}
		add(text)
	}
	return r.delimiter(']')
}

// MarshalJSON writes the system in the form that ParseSystem reads.
func (s *System) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	quote := func(text string) {
		q, _ := json.Marshal(text) // a string always has a form
		b.Write(q)
	}
	object := func(field string, n int, pair func(i int) (name, text string)) {
		quote(field)
		b.WriteString(":{")
		for i := range n {
			if i > 0 {
				b.WriteByte(',')
			}
			name, text := pair(i)
			quote(name)
			b.WriteByte(':')
			quote(text)
		}
		b.WriteString("},")
	}
	b.WriteByte('{')
	object("signals", len(s.signals), func(i int) (string, string) { return s.signals[i].Name, s.signals[i].Unit.String() })
	object("constants", len(s.constants), func(i int) (string, string) { return s.constants[i].Name, s.constants[i].Value.String() })
	quote("equations")
	b.WriteString(":[")
	for i, q := range s.equations {
		if i > 0 {
			b.WriteByte(',')
		}
		quote(q.text)
	}
	b.WriteString("]}")
	return b.Bytes(), nil
}

// UnmarshalJSON is ParseSystem.
func (s *System) UnmarshalJSON(text []byte) error {
	t, err := ParseSystem(string(text))
	if err == nil {
		*s = *t
	}
	return err
}

// MarshalText is MarshalJSON, for formats that hold text.
func (s *System) MarshalText() ([]byte, error) { return s.MarshalJSON() }

// UnmarshalText is ParseSystem.
func (s *System) UnmarshalText(text []byte) error { return s.UnmarshalJSON(text) }
