package lti

import (
	"math/big"

	"github.com/qofs/qofs/internal/intpoly"
)

// expansion is the expansion at infinity of what the unknowns of explicit
// equations are of the inputs: a row by input for each unknown and power of s.
type expansion struct {
	highest int            // power
	rows    [][][]*big.Rat // by unknown, then by highest − power
}

// at returns the coefficients of a power of s for the unknown in a column.
func (e *expansion) at(column, power int) []*big.Rat { return e.rows[column][e.highest-power] }

// above returns the highest power above a given one that an unknown has with an
// input, and false where there is none.
func (e *expansion) above(column, power int) (input, found int, ok bool) {
	for p := e.highest; p > power; p-- {
		for l, v := range e.at(column, p) {
			if v.Sign() != 0 {
				return l, p, true
			}
		}
	}
	return 0, 0, false
}

// expand returns the expansion for the inputs whose columns follow those of the
// unknowns, m of them, down to the power that minus the highest order of a state
// and the given one ask for.
//
// Row j of the equations, of degree d, is Σ_k A_k(s) X_k = −B. At the power q + d
// it yields the coefficient q of X_j, from higher ones and, in earlier columns,
// from that of the same power: no other entry of the row has a term of degree d.
func (x *explicit) expand(m, order int, left *budget) (*expansion, error) {
	out := &expansion{rows: make([][][]*big.Rat, x.n)}
	lowest := -order
	for j, r := range x.rows {
		lowest = min(lowest, -x.degree[j])
		for _, p := range r.entries[x.n : x.n+m] {
			out.highest = max(out.highest, p.Degree()-x.degree[j])
		}
	}
	for power := out.highest; power >= lowest; power-- {
		for j, r := range x.rows {
			row := inputTerms(r.entries[x.n:x.n+m], power+x.degree[j])
			for k, p := range r.entries[:x.n] {
				for e := range min(p.Degree(), x.degree[j]) + 1 {
					at := power + x.degree[j] - e
					if at > out.highest || k == j && e == x.degree[j] || p.Sign(e) == 0 {
						continue
					}
					subtractMultiple(row, out.at(k, at), p.Coefficient(e), left)
				}
			}
			inverse := new(big.Rat).SetFrac(big.NewInt(1), r.entries[j].Leading())
			for _, v := range row {
				v.Mul(v, inverse)
			}
			out.rows[j] = append(out.rows[j], row)
		}
		if err := left.spend(0); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// inputTerms returns the coefficients −B_k of a row.
func inputTerms(entries []intpoly.Poly, k int) []*big.Rat {
	out := make([]*big.Rat, len(entries))
	for l, p := range entries {
		out[l] = new(big.Rat)
		if k >= 0 && k <= p.Degree() {
			out[l].SetInt(p.Coefficient(k))
			out[l].Neg(out[l])
		}
	}
	return out
}

// subtractMultiple takes c times a row away from another.
func subtractMultiple(from, row []*big.Rat, c *big.Int, left *budget) {
	factor := new(big.Rat).SetInt(c)
	for l, v := range row {
		if v.Sign() != 0 && *left >= 0 {
			from[l].Sub(from[l], new(big.Rat).Mul(factor, v))
			words := (from[l].Num().BitLen()+from[l].Denom().BitLen())/64 + 1
			*left -= budget(touch/4 + 8*words*words)
		}
	}
}
