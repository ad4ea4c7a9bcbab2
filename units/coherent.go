package units

import "math"

// These are the coherent units with names of their own in which engineers write
// dimensions that hold the kilogram, by field. In each the power of the kilogram
// is 1 or −1.
var (
	electric   = parseAll("V", "Ω", "W", "J", "F", "H", "N", "Pa")
	thermal    = parseAll("W", "J", "Pa", "N")
	mechanical = parseAll("N", "Pa", "J", "W")
)

func parseAll(texts ...string) []Unit {
	out := make([]Unit, len(texts))
	for i, t := range texts {
		out[i] = MustParse(t)
	}
	return out
}

// coherentFactors spells the coherent unit of d as a person would. Where one of
// the named units of the field of d (electric with the ampere, thermal with the
// kelvin, else mechanical) can take the place of the kilogram so that fewer
// symbols are left, m^2 counted as two, it does: W for m^2*kg/s^3, N/m for
// kg/s^2, W/(m^2*K) for kg/(s^3*K). Of several the one with the fewest different
// symbols serves, then the first. All else stays in base units, as do m/s^2,
// kg/s and kg/m^3.
func (d Dimension) coherentFactors() []factor {
	best := d.factors()
	power := d.exponents[kilogram]
	if power == 0 {
		return best
	}
	candidates := mechanical
	switch {
	case d.exponents[ampere] != 0:
		candidates = electric
	case d.exponents[kelvin] != 0:
		candidates = thermal
	}
	least := symbolsIn(best)
	for _, u := range candidates {
		k := power * u.Dimension().exponents[kilogram] // 1 over ±1 is ±1
		rest := d
		for j, e := range u.Dimension().exponents {
			rest.exponents[j] -= k * e
		}
		f := u.factors()[0]
		f.exponent = int(k)
		fs := append([]factor{f}, rest.factors()...)
		if n := symbolsIn(fs); n < least || n == least && len(fs) < len(best) {
			best, least = fs, n
		}
	}
	return best
}

// symbolsIn counts the symbols of a spelling, powers written out; past MaxPower
// there are too many.
func symbolsIn(fs []factor) int {
	n := 0
	for _, f := range fs {
		e := max(f.exponent, -f.exponent)
		if e > MaxPower {
			return math.MaxInt
		}
		n += e
	}
	return n
}
