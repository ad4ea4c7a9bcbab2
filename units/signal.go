package units

import (
	"strings"
	"unicode"

	"github.com/qofs/qofs/internal/lex"
)

// Signal is what flows into or out of a block: a unit and, where it matters, a
// name. Two signals of the same unit and different names do not connect: the
// valve's milliamperes are not the transmitter's. An empty name fits any.
type Signal struct {
	Name string
	Unit Unit
}

// Equal reports whether s and t have the same name and equal units.
func (s Signal) Equal(t Signal) bool { return s.Name == t.Name && s.Unit.Equal(t.Unit) }

// Connects reports whether s can feed t: equal units, and names that agree or
// of which one is empty.
func (s Signal) Connects(t Signal) bool {
	return (s.Name == t.Name || s.Name == "" || t.Name == "") && s.Unit.Equal(t.Unit)
}

// String is "name: unit", or the unit alone.
func (s Signal) String() string {
	if s.Name == "" {
		return s.Unit.String()
	}
	return s.Name + ": " + s.Unit.String()
}

// ParseSignal reads what String writes: "level: m", or the unit alone. A name
// is letters, digits and underscores, first a letter or an underscore. The
// error is a *SyntaxError.
func ParseSignal(text string) (Signal, error) {
	if len(text) > MaxText {
		_, err := newParser(text, symbols)
		return Signal{}, err
	}
	name, rest, named := strings.Cut(text, ":")
	if !named {
		rest, name = text, ""
	}
	name = strings.TrimSpace(name)
	if named && !isName(name) {
		return Signal{}, lex.Fault(text, 0, "no name before the colon", "a name of letters, digits and underscores", nil)
	}
	u, err := Parse(rest)
	if err != nil {
		if e, ok := err.(*SyntaxError); ok {
			offset := e.Offset + len(text) - len(rest)
			err = lex.Fault(text, offset, e.Found, e.Want, e.Err)
		}
		return Signal{}, err
	}
	return Signal{name, u}, nil
}

func isName(s string) bool {
	for i, r := range s {
		if r != '_' && !unicode.IsLetter(r) && (i == 0 || !unicode.IsDigit(r)) {
			return false
		}
	}
	return s != ""
}

// MarshalText is String, for encoding.TextMarshaler. The error is a
// *SyntaxError for a name that ParseSignal does not read.
func (s Signal) MarshalText() ([]byte, error) {
	if s.Name != "" && !isName(s.Name) {
		return nil, lex.Fault(s.Name, 0, "a name that does not parse back", "letters, digits and underscores", nil)
	}
	return []byte(s.String()), nil
}

// UnmarshalText is ParseSignal, for encoding.TextUnmarshaler.
func (s *Signal) UnmarshalText(text []byte) error {
	t, err := ParseSignal(string(text))
	if err == nil {
		*s = t
	}
	return err
}
