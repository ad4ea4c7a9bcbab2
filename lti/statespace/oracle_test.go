package statespace

import (
	"math/big"
	"slices"
)

// slowSubspace is spanned by rows in reduced echelon form: in the column pivots[k]
// row k has 1 and the others have 0. The rows are in no particular order.
type slowSubspace struct {
	rows   matrix
	pivots []int
	spent  int // products of words, roughly
}

// add takes in a row and returns what was new in it, nil if nothing was.
func (s *slowSubspace) add(row []*big.Rat) ([]*big.Rat, error) {
	r := make([]*big.Rat, len(row))
	for j, v := range row {
		r[j] = new(big.Rat).Set(v)
	}
	for k, p := range s.pivots {
		if err := s.subtract(r, s.rows[k], new(big.Rat).Set(r[p])); err != nil {
			return nil, err
		}
	}
	pivot := slices.IndexFunc(r, func(v *big.Rat) bool { return v.Sign() != 0 })
	if pivot < 0 {
		return nil, nil
	}
	inverse := new(big.Rat).Inv(r[pivot])
	for _, v := range r {
		v.Mul(v, inverse)
	}
	for _, other := range s.rows {
		if err := s.subtract(other, r, new(big.Rat).Set(other[pivot])); err != nil {
			return nil, err
		}
	}
	s.rows, s.pivots = append(s.rows, r), append(s.pivots, pivot)
	return r, nil
}

// subtract takes k·t off r and counts the work: a step with fractions of w words
// takes some products and greatest common divisors of w² each.
func (s *slowSubspace) subtract(r, t []*big.Rat, k *big.Rat) error {
	if k.Sign() == 0 {
		return nil
	}
	for j, v := range t {
		if v.Sign() == 0 {
			continue
		}
		w := (k.Num().BitLen() + k.Denom().BitLen() + v.Num().BitLen() + v.Denom().BitLen() + r[j].Num().BitLen() + r[j].Denom().BitLen()) / 64
		if s.spent += 16 + 8*w*w; s.spent > maxProducts {
			return ErrLimit
		}
		r[j].Sub(r[j], new(big.Rat).Mul(k, v))
	}
	return nil
}

// sort puts the rows into the order of their pivots.
func (s *slowSubspace) sort() {
	order := make([]int, len(s.pivots))
	for k := range order {
		order[k] = k
	}
	slices.SortFunc(order, func(k, l int) int { return s.pivots[k] - s.pivots[l] })
	s.rows = s.rows.rows(order)
	slices.Sort(s.pivots)
}

// slowClosure is the oracle of closure: it returns the smallest subspace that holds the generators and, with each
// row r, r·m.
func slowClosure(generators, m matrix) (*slowSubspace, error) {
	s := &slowSubspace{}
	queue := slices.Clone(generators)
	for len(queue) > 0 {
		row := queue[0]
		queue = queue[1:]
		fresh, err := s.add(row)
		if err != nil {
			return nil, err
		}
		if fresh != nil && len(s.rows) < len(m) {
			queue = append(queue, matrix{fresh}.times(m, len(m))[0])
		}
	}
	s.sort()
	return s, nil
}
