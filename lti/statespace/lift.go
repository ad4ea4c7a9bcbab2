package statespace

import (
	"math/big"

	"github.com/qofs/qofs/internal/modp"
)

// maxProducts bounds the search for a subspace, in products of words.
const maxProducts = 1 << 30

// work counts products of words.
type work struct{ spent int }

func (w *work) spend(products int) error {
	if w.spent += products; w.spent > maxProducts {
		return ErrLimit
	}
	return nil
}

// words is the length of a number, at least 1.
func words(x *big.Int) int { return x.BitLen()/64 + 1 }

// closure returns the smallest subspace that holds the generators and, with each
// row r, r·m.
//
// Its echelon form is found modulo primes, put together by the Chinese remainder
// theorem, and turned into fractions (Wang 1981), with more primes until that
// succeeds. Two facts prove the result, whatever the primes were: it holds the
// generators and is closed under m, by exact arithmetic, and its rank is that of
// an image, which is at most the true one. A full rank needs no fractions.
func (w *work) closure(generators, m matrix) (*subspace, error) {
	var primes modp.Primes
	var images []*image
	next := 1 // how many images the next attempt takes
	for {
		fresh, err := w.image(primes.Next(), generators, m)
		if err != nil {
			return nil, err
		}
		if fresh == nil {
			continue
		}
		if len(fresh.free) == 0 {
			return wholeSpace(len(m)), nil
		}
		if len(images) > 0 {
			switch c := fresh.compare(images[0]); {
			case c < 0:
				continue // this prime hides something
			case c > 0: // the earlier ones did
				images, next = nil, 1
			}
		}
		if images = append(images, fresh); len(images) < next {
			continue
		}
		next += 1 + next/4
		e, err := w.lift(images)
		if err != nil {
			return nil, err
		}
		if e == nil {
			continue
		}
		if s, err := w.prove(e, generators, m); s != nil || err != nil {
			return s, err
		}
	}
}

// echelon is an echelon form in whole numbers: row k has 1 in its pivot and
// numerators[k][j]/denominators[k] in the column free[j].
type echelon struct {
	pivots, free []int
	numerators   [][]*big.Int
	denominators []*big.Int
}

// spareBits is by how many bits numerators and denominators together must be
// smaller than the product of the primes. Of random residues, one in 2^spareBits
// looks like a fraction then; without it, most do, and the proof would refuse
// them.
const spareBits = 32

// lift returns the fractions that the images come from, nil where more primes are
// needed.
func (w *work) lift(images []*image) (*echelon, error) {
	one := images[0]
	c, err := w.remainders(images)
	if err != nil {
		return nil, err
	}
	bound := new(big.Int).Lsh(big.NewInt(1), uint((c.modulus.BitLen()-2-spareBits)/2))
	half := new(big.Int).Rsh(c.modulus, 1)
	size := words(c.modulus)
	out := &echelon{pivots: one.pivots, free: one.free}
	for k := range one.rows {
		den := big.NewInt(1)
		row, dens := make([]*big.Int, len(one.free)), make([]*big.Int, len(one.free))
		for j := range row {
			if err := w.spend(len(images)*(size+2) + 2*size*words(den)); err != nil {
				return nil, err
			}
			t := c.value(images, k, j)
			t.Mod(t.Mul(t, den), c.modulus)
			if t.Cmp(half) > 0 {
				t.Sub(t, c.modulus)
			}
			// The entries of a row mostly have one denominator.
			if t.CmpAbs(bound) > 0 {
				num, q, err := w.fraction(t, c.modulus, bound)
				if err != nil {
					return nil, err
				}
				if den = new(big.Int).Mul(den, q); den.Cmp(bound) > 0 {
					return nil, nil
				}
				t = num
			}
			row[j], dens[j] = t, den
		}
		for j, d := range dens {
			if d != den {
				row[j].Mul(row[j], new(big.Int).Quo(den, d))
			}
		}
		out.numerators, out.denominators = append(out.numerators, row), append(out.denominators, den)
	}
	return out, nil
}

// fraction returns num and q > 0 with num ≡ q·t modulo m and |num| ≤ bound: the
// first in the sequence of Euclid (Wang 1981). The caller bounds q.
func (w *work) fraction(t, m, bound *big.Int) (num, q *big.Int, err error) {
	r, s := new(big.Int).Set(m), new(big.Int).Mod(t, m)
	a, b := new(big.Int), big.NewInt(1) // r ≡ a·t, s ≡ b·t
	var quotient, rest, product big.Int
	for s.Cmp(bound) > 0 {
		quotient.QuoRem(r, s, &rest)
		if err := w.spend((words(s) + words(b)) * words(&quotient)); err != nil {
			return nil, nil, err
		}
		r, s = s, r.Set(&rest)
		a, b = b, a.Sub(a, product.Mul(&quotient, b))
	}
	if b.Sign() < 0 {
		return s.Neg(s), b.Neg(b), nil
	}
	return s, b, nil
}

// remainders is what the Chinese remainder theorem needs: the sum of cofactor
// times (weight · residue modulo its prime) over all primes has all the residues.
type remainders struct {
	modulus   *big.Int
	cofactors []*big.Int // modulus/prime
	weights   []uint64   // inverse of the cofactor modulo the prime, plain
}

func (w *work) remainders(images []*image) (*remainders, error) {
	c := &remainders{modulus: big.NewInt(1)}
	if err := w.spend(len(images) * (3*len(images) + inverseProducts)); err != nil {
		return nil, err
	}
	p := new(big.Int)
	for _, i := range images {
		c.modulus.Mul(c.modulus, p.SetUint64(i.field.P))
	}
	var t big.Int
	for _, i := range images {
		cofactor := new(big.Int).Quo(c.modulus, p.SetUint64(i.field.P))
		residue := i.field.Stored(t.Mod(cofactor, p).Uint64())
		c.cofactors = append(c.cofactors, cofactor)
		c.weights = append(c.weights, i.field.Plain(i.field.Inverse(residue)))
	}
	return c, nil
}

// value returns a number with the residues of the images at row k and column j.
func (c *remainders) value(images []*image, k, j int) *big.Int {
	var sum, t, x big.Int
	for l, i := range images {
		if r := i.rows[k][j]; r != 0 {
			sum.Add(&sum, t.Mul(c.cofactors[l], x.SetUint64(i.field.Mul(r, c.weights[l]))))
		}
	}
	return &sum
}

// prove returns the subspace of an echelon form if it holds the generators and is
// closed under m, nil if not.
func (w *work) prove(e *echelon, generators, m matrix) (*subspace, error) {
	for _, g := range generators {
		if ok, err := w.holds(e, g); !ok {
			return nil, err
		}
	}
	s := &subspace{pivots: e.pivots}
	products, err := w.products(e, m)
	if err != nil {
		return nil, err
	}
	for _, row := range products {
		if ok, err := w.holds(e, row); !ok {
			return nil, err
		}
		s.action = append(s.action, matrix{row}.columns(e.pivots)[0])
	}
	s.rows = zeros(len(e.pivots), len(e.pivots)+len(e.free))
	for k, p := range e.pivots {
		s.rows[k][p].SetInt64(1)
		for l, j := range e.free {
			s.rows[k][j].SetFrac(e.numerators[k][l], e.denominators[k])
		}
	}
	return s, nil
}

// products returns the rows of an echelon form times m.
func (w *work) products(e *echelon, m matrix) (matrix, error) {
	out := zeros(len(e.pivots), len(m))
	column := make([]*big.Int, len(m))
	var sum, t big.Int
	for j := range m {
		scale := big.NewInt(1)
		for _, row := range m {
			if err := w.lcm(scale, row[j]); err != nil {
				return nil, err
			}
		}
		for k, row := range m {
			column[k] = whole(row[j], scale)
		}
		for i, p := range e.pivots {
			den := e.denominators[i]
			sum.Mul(den, column[p])
			for l, k := range e.free {
				if column[k].Sign() == 0 {
					continue
				}
				if err := w.spend(words(e.numerators[i][l]) * words(column[k])); err != nil {
					return nil, err
				}
				sum.Add(&sum, t.Mul(e.numerators[i][l], column[k]))
			}
			if sum.Sign() == 0 {
				continue
			}
			size := max(words(&sum), words(den)+words(scale))
			if err := w.spend(2 * size * size); err != nil {
				return nil, err
			}
			out[i][j].SetFrac(&sum, t.Mul(den, scale))
		}
	}
	return out, nil
}

// holds reports whether a row is in the span of an echelon form: the sum of its
// rows times the entries of the row at the pivots.
func (w *work) holds(e *echelon, row []*big.Rat) (bool, error) {
	scale := big.NewInt(1)
	factors := make([]*big.Rat, len(e.pivots))
	for k, p := range e.pivots {
		size := max(words(row[p].Num()), words(e.denominators[k]))
		if err := w.spend(2 * size * size); err != nil {
			return false, err
		}
		factors[k] = new(big.Rat).SetFrac(big.NewInt(1), e.denominators[k])
		factors[k].Mul(factors[k], row[p])
		if err := w.lcm(scale, factors[k]); err != nil {
			return false, err
		}
	}
	var sum, t big.Int
	wholes := make([]*big.Int, len(factors))
	for k, v := range factors {
		wholes[k] = whole(v, scale)
	}
	for l, j := range e.free {
		sum.SetInt64(0)
		for k, v := range wholes {
			if v.Sign() == 0 {
				continue
			}
			if err := w.spend(words(v) * words(e.numerators[k][l])); err != nil {
				return false, err
			}
			sum.Add(&sum, t.Mul(v, e.numerators[k][l]))
		}
		if err := w.spend(words(&sum)*words(row[j].Denom()) + words(scale)*words(row[j].Num())); err != nil {
			return false, err
		}
		sum.Mul(&sum, row[j].Denom())
		if sum.Cmp(t.Mul(scale, row[j].Num())) != 0 {
			return false, nil
		}
	}
	return true, nil
}

// lcm makes scale a multiple of the denominator of v.
func (w *work) lcm(scale *big.Int, v *big.Rat) error {
	if v.IsInt() {
		return nil
	}
	den := v.Denom()
	if err := w.spend(words(den) * (words(scale) + 2*words(den))); err != nil {
		return err
	}
	g := new(big.Int).GCD(nil, nil, scale, den)
	scale.Mul(scale, g.Quo(den, g))
	return nil
}
