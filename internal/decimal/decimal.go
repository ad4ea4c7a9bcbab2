// Package decimal writes rational numbers as text: exactly, or rounded to a
// number of significant digits.
package decimal

import (
	"math"
	"math/big"
	"strconv"
	"strings"
)

// Text writes r exactly: as a decimal where that is finite, else as a
// fraction.
func Text(r *big.Rat) string {
	if s, ok := Finite(r); ok {
		return s
	}
	return r.String()
}

// Finite writes r as an exact decimal; ok is false where there is none.
func Finite(r *big.Rat) (text string, ok bool) {
	if r.IsInt() {
		return decimalText(r.Num(), 0), true
	}
	places, exact := r.FloatPrec()
	if !exact {
		return "", false
	}
	n := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(places)), nil)
	n.Mul(n, r.Num())
	return decimalText(n.Quo(n, r.Denom()), -places), true
}

// Significant writes r rounded to the given number of significant digits, ties
// to even, without trailing zeros.
func Significant(r *big.Rat, digits int) string {
	if r.Sign() == 0 {
		return "0"
	}
	abs := new(big.Rat).Abs(r)
	// e is the exponent with 10^(e−1) ≤ |r| < 10^e: an estimate that is off by
	// one at most, then corrected.
	e := int(math.Ceil(float64(abs.Num().BitLen()-abs.Denom().BitLen()) * math.Log10(2)))
	n, rest, den := scaled(abs, digits-e)
	for countDigits(n) != digits {
		e += countDigits(n) - digits
		n, rest, den = scaled(abs, digits-e)
	}
	if c := rest.Lsh(rest, 1).Cmp(den); c > 0 || c == 0 && n.Bit(0) == 1 {
		n.Add(n, big.NewInt(1))
	}
	if r.Sign() < 0 {
		n.Neg(n)
	}
	return decimalText(n, e-digits)
}

// countDigits is the number of decimal digits of n ≥ 0, none for 0.
func countDigits(n *big.Int) int {
	if n.Sign() == 0 {
		return 0
	}
	return len(n.String())
}

// scaled is r·10^k, r > 0, as n + rest/den.
func scaled(r *big.Rat, k int) (n, rest, den *big.Int) {
	power := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(k, -k))), nil)
	num, den := r.Num(), r.Denom()
	if k >= 0 {
		num = new(big.Int).Mul(num, power)
	} else {
		den = new(big.Int).Mul(den, power)
	}
	n, rest = new(big.Int).QuoRem(num, den, new(big.Int))
	return n, rest, den
}

// decimalText writes n·10^e: in plain digits where few zeros are needed, else
// with a power of ten, as in 1.25e-9.
func decimalText(n *big.Int, e int) string {
	if n.Sign() == 0 {
		return "0"
	}
	const maxZeros = 5 // zeros that plain notation may add
	sign, all := "", new(big.Int).Abs(n).String()
	if n.Sign() < 0 {
		sign = "-"
	}
	digits := strings.TrimRight(all, "0")
	e += len(all) - len(digits)
	point := len(digits) + e // 0.digits × 10^point
	switch {
	case e >= 0 && e <= maxZeros:
		return sign + digits + strings.Repeat("0", e)
	case e < 0 && point > 0:
		return sign + digits[:point] + "." + digits[point:]
	case e < 0 && point > -maxZeros:
		return sign + "0." + strings.Repeat("0", -point) + digits
	}
	mantissa := digits[:1]
	if len(digits) > 1 {
		mantissa += "." + digits[1:]
	}
	return sign + mantissa + "e" + strconv.Itoa(point-1)
}
