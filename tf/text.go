package tf

import (
	"math/big"
	"strings"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/internal/polytext"
	"github.com/qofs/qofs/internal/ratfun"
)

// precision is the number of significant digits of printed numbers, or exact.
type precision int

const exact precision = 0

// write writes a number.
func (p precision) write(r *big.Rat) string {
	if p == exact {
		return decimal.Text(r)
	}
	return decimal.Significant(r, int(p))
}

// notation is the plain notation with numbers of that precision.
func (p precision) notation() polytext.Notation {
	if p == exact {
		return polytext.Plain
	}
	return polytext.Rounded(int(p))
}

// scaled is the ascending coefficients of k·p.
func scaled(p intpoly.Poly, k *big.Rat) []*big.Rat {
	c := make([]*big.Rat, p.Degree()+1)
	for i := range c {
		c[i] = new(big.Rat).SetInt(p.Coefficient(i))
		c[i].Mul(c[i], k)
	}
	return c
}

// terms is the number of terms that are written for p.
func terms(p intpoly.Poly) int {
	n := 0
	for i := range p.Degree() + 1 {
		if p.Sign(i) != 0 {
			n++
		}
	}
	return max(1, n)
}

// isFinite reports whether every number is a finite decimal.
func isFinite(c []*big.Rat) bool {
	for _, r := range c {
		if _, ok := decimal.Finite(r); !ok {
			return false
		}
	}
	return true
}

// plainRatio writes k·num/(k·den) on one line. loose tells that it needs
// parentheses to be a factor.
func plainRatio(f ratfun.Func, k *big.Rat, variable string, p precision) (text string, loose bool) {
	w := p.notation()
	num, den := w.Write(scaled(f.Num(), k), variable), w.Write(scaled(f.Den(), k), variable)
	many := terms(f.Num()) > 1
	if den == "1" {
		return num, many || strings.HasPrefix(num, "-")
	}
	if many {
		num = "(" + num + ")"
	}
	if strings.Contains(den, " ") {
		den = "(" + den + ")"
	}
	return num + "/" + den, strings.HasPrefix(num, "-")
}

// scale is the number by which numerator and denominator are multiplied for
// the text. It makes the leading or the lowest coefficient below 1, or leaves
// all coefficients integers, where the exact text is the shortest, and of equals
// takes the first; rounded numbers leave out the integers. A function of z gets
// the leading coefficient 1 wherever that leaves finite decimals, as is usual in
// the trade, and so does a polynomial in s.
func scale(f ratfun.Func, variable string, p precision) *big.Rat {
	den := f.Den()
	low := den.Coefficient(den.Valuation())
	candidates := []*big.Rat{
		new(big.Rat).SetFrac(big.NewInt(1), den.Leading()),
		new(big.Rat).SetFrac(big.NewInt(1), low.Abs(low)),
		big.NewRat(1, 1),
	}
	if p != exact {
		candidates = candidates[:2]
	}
	var best *big.Rat
	length := 0
	for i, k := range candidates {
		if p == exact && !(isFinite(scaled(f.Num(), k)) && isFinite(scaled(den, k))) {
			continue
		}
		if i == 0 && (variable == "z" || den.Degree() == 0) {
			return k
		}
		text, _ := plainRatio(f, k, variable, p)
		if best == nil || len(text) < length {
			best, length = k, len(text)
		}
	}
	return best
}
