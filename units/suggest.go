package units

import (
	"fmt"
	"strings"
)

// suggest tells what to write instead of an unknown symbol: a reason, a power
// for digits at the end, the symbol of a unit's name, or a symbol one edit
// away.
func suggest(name string, table map[string]*symbol) string {
	const none = "a unit such as m, mm, kg, s, N, mA, degC, rad/s (SI symbols, case matters)"
	if len(name) > 32 {
		return none
	}
	if reason := refused[name]; reason != "" {
		return reason
	}
	trimmed := strings.TrimRight(name, "0123456789")
	if _, ok := lookUp(trimmed, table); ok && trimmed != name {
		return fmt.Sprintf("%s^%s", trimmed, name[len(trimmed):])
	}
	low := strings.ToLower(name)
	for _, word := range []string{low, strings.TrimSuffix(low, "s")} {
		if s, ok := namesOfUnits[word]; ok {
			return fmt.Sprintf("its symbol, %q", s)
		}
	}
	if f, ok := lookUp(strings.TrimSuffix(name, "s"), table); ok && len(name) > 2 {
		return fmt.Sprintf("%q, without a plural s", f.text)
	}
	if reason := refused[strings.TrimSuffix(name, "s")]; reason != "" {
		return reason
	}
	if lower := strings.ToLower(name[:1]) + name[1:]; lower != name && strings.HasPrefix(name, "K") && len(name) > 1 { // KW for kW
		if _, ok := lookUp(lower, table); ok {
			return fmt.Sprintf("%q: kilo is a small k", lower)
		}
	}
	for i := range name { // Nm for N*m
		_, first := lookUp(name[:i], table)
		_, second := lookUp(name[i:], table)
		if first && second {
			return fmt.Sprintf("%s*%s, if a product is meant", name[:i], name[i:])
		}
	}
	if best := nearest(name, table); best != "" {
		return fmt.Sprintf("perhaps %q", best)
	}
	return none
}

// nearest returns the symbol, with or without a prefix, that differs from the
// name by case alone, else one that is one edit away, or "". Among equals the
// shorter wins, then the first by bytes, so that the choice does not depend on
// the order of a map.
func nearest(name string, table map[string]*symbol) string {
	best, cost := "", 2
	try := func(candidate string) {
		c := 2 * editDistance(name, candidate)
		if strings.EqualFold(name, candidate) {
			c = 1
		}
		if c > 2 || best != "" && c > cost {
			return
		}
		if best == "" || c < cost || len(candidate) < len(best) || len(candidate) == len(best) && candidate < best {
			best, cost = candidate, c
		}
	}
	for s := range table {
		try(s)
	}
	for prefix := range prefixes {
		for s := range table {
			if _, ok := lookUp(prefix+s, table); ok && len(name) > 2 {
				try(prefix + s)
			}
		}
	}
	return best
}

// namesOfUnits are names that people write where a symbol is needed.
var namesOfUnits = map[string]string{
	"metre": "m", "meter": "m", "gram": "g", "second": "s", "ampere": "A", "amp": "A", "kelvin": "K", "mole": "mol", "candela": "cd",
	"radian": "rad", "hertz": "Hz", "newton": "N", "pascal": "Pa", "joule": "J", "watt": "W", "coulomb": "C", "volt": "V", "farad": "F",
	"siemens": "S", "weber": "Wb", "tesla": "T", "henry": "H", "lumen": "lm", "lux": "lx", "becquerel": "Bq", "sievert": "Sv", "gray": "Gy",
	"minute": "min", "hour": "h", "day": "d", "degree": "deg", "litre": "L", "liter": "L", "tonne": "t", "kilogram": "kg", "percent": "%",
	"celsius": "degC", "fahrenheit": "degF", "revolution": "rev", "turn": "rev", "counts": "count", "inches": "in", "feet": "ft",
	"yard": "yd", "ounce": "oz", "horsepower": "hp", "calorie": "cal", "millimetre": "mm", "millimeter": "mm",
}

// editDistance counts insertions, deletions and exchanges of bytes, up to 2.
func editDistance(a, b string) int {
	if len(a)-len(b) > 1 || len(b)-len(a) > 1 {
		return 2
	}
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := 1
			if a[i] == b[j] {
				cost = 0
			}
			diagonal, row[j+1] = row[j+1], min(diagonal+cost, row[j]+1, row[j+1]+1)
		}
	}
	return min(row[len(b)], 2)
}
