package units

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
