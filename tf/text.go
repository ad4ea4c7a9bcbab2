package tf

import "math/big"

// ratText writes a rational number exactly: as a decimal where that is finite,
// else as a fraction.
func ratText(r *big.Rat) string {
	if s, ok := decimal(r); ok {
		return s
	}
	return r.String()
}

// decimal writes r as an exact decimal; ok is false where there is none.
func decimal(r *big.Rat) (string, bool) {
	n, exact := r.FloatPrec()
	if !exact {
		return "", false
	}
	return r.FloatString(n), true
}
