package tf

// MarshalText returns the text of String, so that a value in a JSON document
// is such a text.
func (g Continuous) MarshalText() ([]byte, error) { return []byte(g.String()), nil }

// UnmarshalText reads what Parse reads.
func (g *Continuous) UnmarshalText(text []byte) error {
	parsed, err := Parse(string(text))
	if err == nil {
		*g = parsed
	}
	return err
}

// MarshalText returns the text of String, so that a value in a JSON document
// is such a text.
func (g Discrete) MarshalText() ([]byte, error) { return []byte(g.String()), nil }

// UnmarshalText reads what ParseDiscrete reads.
func (g *Discrete) UnmarshalText(text []byte) error {
	parsed, err := ParseDiscrete(string(text))
	if err == nil {
		*g = parsed
	}
	return err
}
