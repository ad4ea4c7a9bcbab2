// Package units holds units of measurement, quantities and signals, exactly.
package units

import "math/big"

// Dimension is the exponents of the base dimensions.
type Dimension struct {
	exponents [12]int8
}

// Unit is a unit of measurement: a dimension, an exact scale to the coherent
// unit of that dimension, and the spelling that was read. The zero value is
// the unit 1.
type Unit struct {
	_         [0]func()
	dimension Dimension
	scale     *big.Rat // nil is 1
	spelling  string
}

// Equal reports whether u and v have the same dimension and scale; the
// spelling does not matter.
func (u Unit) Equal(v Unit) bool {
	one := big.NewRat(1, 1)
	a, b := u.scale, v.scale
	if a == nil {
		a = one
	}
	if b == nil {
		b = one
	}
	return u.dimension == v.dimension && a.Cmp(b) == 0
}

// Signal is what flows into or out of a block: a unit and, where it matters,
// a name. An empty name fits any.
type Signal struct {
	Name string
	Unit Unit
}
