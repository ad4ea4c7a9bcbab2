package units

import (
	"strconv"
	"strings"
)

// Dimension is a product of powers of the base dimensions: the seven of the
// SI, the plane angle (tracked here), and the numbers that must not vanish
// silently: count, LSB and %. It is comparable; the zero value is the
// dimension of a pure number.
type Dimension struct {
	exponents [len(baseSymbols)]int32
	beyond    bool // past maxDimension: stays so
}

// The base dimensions, by index, and the symbols of their coherent units.
const (
	metre = iota
	kilogram
	second
	ampere
	kelvin
	mole
	candela
	radian
	count
	lsb
	percent
)

var baseSymbols = [...]string{"m", "kg", "s", "A", "K", "mol", "cd", "rad", "count", "LSB", "%"}

// maxDimension bounds the exponents of a dimension: far past every unit within
// MaxPower and MaxSymbols, and far from where int32 wraps.
const maxDimension = 1 << 20

// IsZero reports whether d is the dimension of a pure number.
func (d Dimension) IsZero() bool { return d == Dimension{} }

// Mul returns the dimension of a product. Past the exponent 2^20 it is the
// dimension of no unit.
func (d Dimension) Mul(e Dimension) Dimension {
	if d.beyond || e.beyond {
		return Dimension{beyond: true}
	}
	for i := range d.exponents {
		d.exponents[i] += e.exponents[i]
		if x := d.exponents[i]; x > maxDimension || x < -maxDimension {
			return Dimension{beyond: true}
		}
	}
	return d
}

// Div returns the dimension of a quotient. Past the exponent 2^20 it is the
// dimension of no unit.
func (d Dimension) Div(e Dimension) Dimension {
	if d.beyond || e.beyond {
		return Dimension{beyond: true}
	}
	for i := range d.exponents {
		d.exponents[i] -= e.exponents[i]
		if x := d.exponents[i]; x > maxDimension || x < -maxDimension {
			return Dimension{beyond: true}
		}
	}
	return d
}

// WithoutAngle returns d with the radian taken as 1, as the SI does.
func (d Dimension) WithoutAngle() Dimension {
	d.exponents[radian] = 0
	return d
}

// Unit returns the coherent unit of d, spelled as String does.
func (d Dimension) Unit() Unit {
	if d.beyond {
		return unbounded
	}
	return fromFactors(d.coherentFactors())
}

// factors spells d in base units.
func (d Dimension) factors() []factor {
	var fs []factor
	for i, e := range d.exponents {
		if e != 0 {
			f := symbolFactor(baseSymbols[i])
			f.exponent = int(e)
			fs = append(fs, f)
		}
	}
	return fs
}

// String spells the coherent unit of d, by N, Pa, J, W, V, Ω, F or H in the
// place of the kilogram where that is shorter, else in base units: "W/K", "N/m",
// "m/s^2", or "1".
func (d Dimension) String() string {
	switch {
	case d.beyond:
		return unbounded.String()
	case d.IsZero():
		return "1"
	}
	return spell(d.coherentFactors())
}

// spell writes factors as text that parses back: a product over one solidus.
func spell(fs []factor) string {
	var above, below []string
	for _, f := range fs {
		s := f.text
		if e := max(f.exponent, -f.exponent); e != 1 {
			s += "^" + strconv.Itoa(e)
		}
		if f.exponent > 0 {
			above = append(above, s)
		} else {
			below = append(below, s)
		}
	}
	s := strings.Join(above, "*")
	switch {
	case len(below) == 0:
		return s
	case s == "":
		s = "1"
	}
	if len(below) == 1 {
		return s + "/" + below[0]
	}
	return s + "/(" + strings.Join(below, "*") + ")"
}
