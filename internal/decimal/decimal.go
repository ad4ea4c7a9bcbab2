// Package decimal writes rational numbers as text: exactly, or rounded to a
// number of significant digits.
package decimal

import (
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
	// 10^(e−1) ≤ |r| < 10^e up to one, which the loop corrects
	e := int(float64(abs.Num().BitLen()-abs.Denom().BitLen()) * 0.30102999566398120)
	for {
		n := scaledRound(abs, digits-e)
		switch length := len(n.String()); {
		case length > digits+1 || length == digits+1 && !isPowerOfTen(n):
			e++
		case length < digits:
			e--
		default:
			if r.Sign() < 0 {
				n.Neg(n)
			}
			return decimalText(n, e-digits)
		}
	}
}

func isPowerOfTen(n *big.Int) bool {
	return strings.Trim(n.String()[1:], "0") == "" && n.String()[0] == '1'
}

// scaledRound is r·10^k, r > 0, rounded to an integer, ties to even.
func scaledRound(r *big.Rat, k int) *big.Int {
	power := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(k, -k))), nil)
	a, b := r.Num(), r.Denom()
	if k >= 0 {
		a = new(big.Int).Mul(a, power)
	} else {
		b = new(big.Int).Mul(b, power)
	}
	q, rest := new(big.Int).QuoRem(a, b, new(big.Int))
	if c := rest.Lsh(rest, 1).Cmp(b); c > 0 || c == 0 && q.Bit(0) == 1 {
		q.Add(q, big.NewInt(1))
	}
	return q
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
