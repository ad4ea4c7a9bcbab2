package units

import "math/big"

// symbol is a named unit.
type symbol struct {
	text      string
	dimension Dimension
	scale     *big.Rat
	prefixes  bool // takes SI prefixes
	cycle     bool // counts cycles, turns or parts of one
	large     bool // takes prefixes above 1 only
}

// Pi is the rational number that stands for π in conversions between cycles or
// degrees and radians: 2646693125139304345/842468587426513207, a convergent of
// the continued fraction of π, within 1.42e-38 of it. It returns a fresh copy.
func Pi() *big.Rat { return big.NewRat(2646693125139304345, 842468587426513207) }

// row is a line of the table of units: symbols that mean the same, the unit
// that they are measured in, and the exact scale, in which a final π stands
// for Pi.
type row struct {
	symbols  []string
	base     string // in symbols of earlier rows; empty for a base unit
	scale    string
	prefixes bool
	cycle    bool
}

// siRows are the units of the SI and those that the SI Brochure (9th edition,
// tables 4 and 8) names or accepts for use with it.
var siRows = []row{
	{[]string{"m"}, "", "1", true, false},
	{[]string{"g"}, "", "1/1000", true, false},
	{[]string{"s"}, "", "1", true, false},
	{[]string{"A"}, "", "1", true, false},
	{[]string{"K", "degC", "°C", "℃"}, "", "1", true, false},
	{[]string{"mol"}, "", "1", true, false},
	{[]string{"cd"}, "", "1", true, false},
	{[]string{"rad"}, "", "1", true, false},
	{[]string{"sr"}, "rad^2", "1", true, false},
	{[]string{"count"}, "", "1", false, false},
	{[]string{"LSB"}, "", "1", false, false},
	{[]string{"%"}, "", "1", false, false},
	{[]string{"Hz"}, "rad/s", "2π", true, true},
	{[]string{"N"}, "kg*m/s^2", "1", true, false},
	{[]string{"Pa"}, "N/m^2", "1", true, false},
	{[]string{"J"}, "N*m", "1", true, false},
	{[]string{"W"}, "J/s", "1", true, false},
	{[]string{"C"}, "A*s", "1", true, false},
	{[]string{"V"}, "W/A", "1", true, false},
	{[]string{"F"}, "C/V", "1", true, false},
	{[]string{"Ω", "Ω", "ohm"}, "V/A", "1", true, false},
	{[]string{"S"}, "A/V", "1", true, false},
	{[]string{"Wb"}, "V*s", "1", true, false},
	{[]string{"T"}, "Wb/m^2", "1", true, false},
	{[]string{"H"}, "Wb/A", "1", true, false},
	{[]string{"lm"}, "cd*sr", "1", true, false},
	{[]string{"lx"}, "lm/m^2", "1", true, false},
	{[]string{"Bq"}, "1/s", "1", true, false},
	{[]string{"Gy", "Sv"}, "J/kg", "1", true, false},
	{[]string{"kat"}, "mol/s", "1", true, false},
	{[]string{"min"}, "s", "60", false, false},
	{[]string{"h"}, "s", "3600", false, false},
	{[]string{"d"}, "s", "86400", false, false},
	{[]string{"au"}, "m", "149597870700", false, false},
	{[]string{"deg", "°"}, "rad", "1/180π", false, true},
	{[]string{"arcmin", "′"}, "rad", "1/10800π", false, true},
	{[]string{"arcsec", "″"}, "rad", "1/648000π", false, true},
	{[]string{"ha"}, "m^2", "10000", false, false},
	{[]string{"L", "l"}, "m^3", "1/1000", true, false},
	{[]string{"t"}, "kg", "1000", true, false},
	{[]string{"Da"}, "kg", "1.66053906660e-27", true, false},
	{[]string{"eV"}, "J", "1.602176634e-19", true, false},
}

// customaryRows are units that a plant engineer meets beside the SI, with the
// values of NIST SP 811 (2008), appendix B.
var customaryRows = []row{
	{[]string{"in", "inch"}, "m", "0.0254", false, false},
	{[]string{"ft", "foot"}, "m", "0.3048", false, false},
	{[]string{"yd"}, "m", "0.9144", false, false},
	{[]string{"mi", "mile"}, "m", "1609.344", false, false},
	{[]string{"nmi"}, "m", "1852", false, false},
	{[]string{"acre"}, "ft^2", "43560", false, false}, // international foot
	{[]string{"lb", "pound"}, "kg", "0.45359237", false, false},
	{[]string{"oz"}, "lb", "1/16", false, false},
	{[]string{"lbf"}, "N", "4.4482216152605", false, false},
	{[]string{"kgf"}, "N", "9.80665", false, false},
	{[]string{"psi"}, "lbf/in^2", "1", false, false},
	{[]string{"bar"}, "Pa", "100000", true, false},
	{[]string{"atm"}, "Pa", "101325", false, false},
	{[]string{"Torr"}, "Pa", "101325/760", true, false},
	{[]string{"mmHg"}, "Pa", "133.322387415", false, false},
	{[]string{"inHg"}, "mmHg", "25.4", false, false},
	{[]string{"hp"}, "ft*lbf/s", "550", false, false},
	{[]string{"gal", "gallon"}, "in^3", "231", false, false}, // US
	{[]string{"Btu"}, "J", "1055.05585262", false, false},    // International Table
	{[]string{"cal"}, "J", "4.184", true, false},             // thermochemical
	{[]string{"Wh"}, "W*h", "1", true, false},
	{[]string{"Ah"}, "A*h", "1", true, false},
	{[]string{"degF", "°F", "℉"}, "K", "5/9", false, false},
	{[]string{"knot"}, "m/s", "1852/3600", false, false},
	{[]string{"mph"}, "mi/h", "1", false, false},
	{[]string{"inH2O"}, "Pa", "249.08891", false, false}, // conventional inch
	{[]string{"mmH2O"}, "Pa", "9.80665", false, false},
	{[]string{"cmH2O"}, "Pa", "98.0665", false, false},
	{[]string{"ksi"}, "psi", "1000", false, false},
	{[]string{"mil"}, "in", "1/1000", false, false},
	{[]string{"slug"}, "lbf*s^2/ft", "1", false, false},
	{[]string{"gn"}, "m/s^2", "9.80665", false, false}, // standard gravity
	{[]string{"bbl"}, "gal", "42", false, false},       // of oil
	{[]string{"gpm"}, "gal/min", "1", false, false},
	{[]string{"cfm"}, "ft^3/min", "1", false, false},
	{[]string{"cP"}, "Pa*s", "1/1000", false, false},
	{[]string{"cSt"}, "mm^2/s", "1", false, false},
	{[]string{"dyn"}, "N", "1/100000", false, false},
	{[]string{"erg"}, "J", "1/10000000", false, false},
	{[]string{"VA", "var"}, "V*A", "1", true, false},
	{[]string{"degR"}, "K", "5/9", false, false},
	{[]string{"rev"}, "rad", "2π", false, true},
	{[]string{"rpm"}, "rev/min", "1", false, true},
}

// prefixes are those of the SI, the four of 2022 included.
var prefixes = map[string]int{
	"Q": 30, "R": 27, "Y": 24, "Z": 21, "E": 18, "P": 15, "T": 12, "G": 9, "M": 6, "k": 3, "h": 2, "da": 1,
	"d": -1, "c": -2, "m": -3, "µ": -6, "μ": -6, "u": -6, "n": -9, "p": -12, "f": -15, "a": -18, "z": -21, "y": -24, "r": -27, "q": -30,
}

// refused are symbols that a user may try, with the reason why they are none.
var refused = map[string]string{
	"dB":  "the ratio itself (decibels are read off a response and are no unit here)",
	"B":   "the ratio itself (decibels are read off a response and are no unit here)",
	"Np":  "a level in nepers is no unit here: write the ratio itself",
	"kn":  "knot",
	"kt":  "knot for the speed, Gg for a thousand tonnes",
	"cc":  "cm^3",
	"sec": "s", "hr": "h", "HZ": "Hz", "hz": "Hz", "kph": "km/h", "Kg": "kg", "KG": "kg", "kw": "kW", "Kw": "kW",
	"pct": "%", "celsius": "degC", "PS": "hp for the horsepower of 550 ft*lbf/s, 735.49875 W for the metric one",
	"ton": "t for 1000 kg, or a number of lb", "pt": "L or gal", "qt": "L or gal", "ppm": "the number itself, such as 1e-6",
	"BTU": "Btu", "Cal": "kcal", "KPA": "kPa", "MPA": "MPa", "lbs": "lb", "ms2": "m/s^2", "RPM": "rpm", "degK": "K", "psia": "psi",
	"barg": "bar: the algebra sees differences", "bara": "bar",
	"psig": "psi with an offset of its own: the algebra sees differences, which are in psi",
}

var symbols = build()

// build makes the table of symbols from the rows.
func build() map[string]*symbol {
	table := map[string]*symbol{}
	base := func(name string, i int) {
		var d Dimension
		d.exponents[i] = 1
		table[name].dimension = d
	}
	for _, rows := range [][]row{siRows, customaryRows} {
		for _, r := range rows {
			var u Unit
			if r.base != "" {
				u = mustParseWith(r.base, table)
			}
			scale := rationalOfPi(r.scale)
			scale.Mul(scale, u.scaleRat())
			for _, name := range r.symbols {
				table[name] = &symbol{name, u.Dimension(), scale, r.prefixes, r.cycle, false}
			}
			if r.base == "" {
				name := r.symbols[0]
				i := 0
				for j, b := range baseSymbols {
					if b == name || b == "k"+name {
						i = j
					}
				}
				for _, name := range r.symbols {
					base(name, i)
				}
			}
		}
	}
	// A temperature in degrees takes no prefix.
	for _, name := range []string{"degC", "°C", "℃"} {
		table[name].prefixes = false
	}
	// The SI Brochure knows kt and Mt; ct, pt and qt are other units.
	table["t"].large = true
	return table
}

// rationalOfPi reads "3/4" or "3/4π".
func rationalOfPi(s string) *big.Rat {
	digits, pi := s, false
	if n := len(s) - len("π"); n > 0 && s[n:] == "π" {
		digits, pi = s[:n], true
	}
	v, ok := new(big.Rat).SetString(digits)
	if !ok {
		panic("units: bad scale " + s) // a fault in the table above, met by every test
	}
	if pi {
		v.Mul(v, Pi())
	}
	return v
}
