package modp

import (
	"math/bits"
	"sync"
)

// friendly are the k for which (2^30 − k)·2^32 + 1 is prime, the smallest first:
// modulo these there are roots of unity of all orders 2^j up to 2^32.
var friendly = [...]uint16{18, 76, 96, 163, 183, 186, 208, 216, 228, 232, 298, 309, 313, 328, 333, 406, 447, 519, 552, 553, 568, 573, 601, 637, 666, 723, 736, 772, 777, 798, 823, 897, 916, 946, 1033, 1054, 1089, 1098, 1134, 1183, 1191, 1197, 1231, 1266, 1299, 1314, 1383, 1384, 1402, 1422, 1426, 1446, 1447, 1488, 1506, 1516, 1563, 1573, 1576, 1596, 1647, 1674, 1689, 1696, 1726, 1752, 1789, 1798, 1828, 1834, 1836, 1842, 1843, 1846, 1866, 1894, 1932, 1944, 1947, 2007, 2011, 2013, 2014, 2023, 2049, 2074, 2104, 2113, 2137, 2151, 2154, 2157, 2172, 2188, 2197, 2218, 2233, 2253, 2256, 2283, 2338, 2353, 2359, 2367, 2379, 2386, 2388, 2389, 2409, 2434, 2451, 2461, 2503, 2517, 2526, 2527, 2559, 2566, 2643, 2646, 2781, 2827, 2847, 2889, 2916, 2959, 2977, 2988}

// MaxTransforms is how many primes with transforms there are.
const MaxTransforms = len(friendly)

// Transform evaluates polynomials modulo a prime at all roots of unity of an
// order that is a power of two, and back.
type Transform struct {
	Field
	root, back []shoup // powers of a root, and their inverses, in bit-reversed order
	inverse    uint64  // stored 1/n
	scale      shoup   // 2^64/n
}

// shoup is a factor w below P and ⌊w·2^64/P⌋, with which products by w need no
// division (Shoup; see Harvey 2014).
type shoup struct{ w, quotient uint64 }

func (f *Field) shoup(w uint64) shoup {
	q, _ := bits.Div64(w, 0, f.P)
	return shoup{w, q}
}

// times returns x·w modulo P, below 2 P, for any x.
func (s shoup) times(x, p uint64) uint64 {
	q, _ := bits.Mul64(x, s.quotient)
	return x*s.w - q*p
}

// common is up to which order the powers are kept once they are known: in
// bit-reversed order those of a lower order come first.
const common = 512

// kept holds for each prime what powers returns for the order common; see roots.
var kept [MaxTransforms]func() [2][]shoup

func init() {
	for index := range kept {
		kept[index] = sync.OnceValue(func() [2][]shoup {
			f := newField(friendlyPrime(index))
			return f.rootPowers(common)
		})
	}
}

func friendlyPrime(index int) uint64 { return (1<<30-uint64(friendly[index]))<<32 + 1 }

// NewTransform returns the transform of order n, a power of two up to 2^32,
// modulo the prime of an index below MaxTransforms.
func NewTransform(index, n int) *Transform {
	t := &Transform{Field: newField(friendlyPrime(index))}
	var powers [2][]shoup
	if n <= common {
		powers = kept[index]()
	} else {
		powers = t.rootPowers(n)
	}
	t.root, t.back = powers[0], powers[1]
	t.inverse = t.Stored(t.P - (t.P-1)/uint64(n)) // n·(P − 1)/n = −1
	t.scale = t.shoup(t.Stored(t.Plain(t.inverse)))
	return t
}

// rootPowers returns the powers of a root of unity of order n and of its inverse.
func (f *Field) rootPowers(n int) [2][]shoup {
	p := f.P
	one := f.Stored(1)
	root := f.Stored(2)
	for x := uint64(2); f.powerWord(root, (p-1)/2) == one; x++ { // not yet a non-residue
		root = f.Stored(x + 1)
	}
	root = f.powerWord(root, (p-1)>>32) // of order 2^32
	for order := uint64(1) << 32; order > uint64(max(n, 2)); order /= 2 {
		root = f.Mul(root, root)
	}
	return [2][]shoup{f.powers(root, n), f.powers(f.Inverse(root), n)}
}

// powers returns the powers root^(bit-reversed i) for i < n/2.
func (f *Field) powers(root uint64, n int) []shoup {
	out := make([]shoup, max(1, n/2))
	out[0] = f.shoup(1)
	// root^(n/4), root^(n/8) … stand at 1, 2, 4 …; the others are products.
	step := root
	steps := make([]uint64, 0, 32)
	for k := 1; k < len(out); k *= 2 {
		steps = append(steps, step)
		step = f.Mul(step, step)
	}
	for k := 1; k < len(out); k *= 2 {
		factor := steps[len(steps)-1]
		steps = steps[:len(steps)-1]
		for i := range k {
			out[k+i] = f.shoup(f.Mul(factor, out[i].w))
		}
	}
	return out
}

// Forward replaces coefficients, any numbers below 4 P, by values below 4 P, in
// bit-reversed order. The slice has n elements.
func (t *Transform) Forward(a []uint64) {
	p, p2 := t.P, 2*t.P
	for m, h := 1, len(a)/2; h > 1; m, h = 2*m, h/2 {
		for i := range m {
			s := t.root[i]
			x, y := a[2*i*h:2*i*h+h], a[2*i*h+h:2*i*h+2*h]
			y = y[:len(x)]
			for j, u := range x {
				if u >= p2 {
					u -= p2
				}
				v := s.times(y[j], p)
				x[j], y[j] = u+v, u-v+p2
			}
		}
	}
	for i := 0; i+1 < len(a); i += 2 {
		u := a[i]
		if u >= p2 {
			u -= p2
		}
		v := t.root[i/2].times(a[i+1], p)
		a[i], a[i+1] = u+v, u-v+p2
	}
}

// Backward replaces values below 2 P in bit-reversed order by n times the
// coefficients, below 2 P.
func (t *Transform) Backward(a []uint64) {
	p, p2 := t.P, 2*t.P
	for i := 0; i+1 < len(a); i += 2 {
		u, v := a[i], a[i+1]
		s := u + v
		if s >= p2 {
			s -= p2
		}
		a[i], a[i+1] = s, t.back[i/2].times(u-v+p2, p)
	}
	for h, m := 2, len(a)/4; m >= 1; m, h = m/2, 2*h {
		for i := range m {
			b := t.back[i]
			x, y := a[2*i*h:2*i*h+h], a[2*i*h+h:2*i*h+2*h]
			y = y[:len(x)]
			for j, u := range x {
				v := y[j]
				s := u + v
				if s >= p2 {
					s -= p2
				}
				x[j], y[j] = s, b.times(u-v+p2, p)
			}
		}
	}
}

// Below returns x modulo P for x < 4 P.
func (f *Field) Below(x uint64) uint64 {
	if x >= 2*f.P {
		x -= 2 * f.P
	}
	if x >= f.P {
		x -= f.P
	}
	return x
}

// Scale turns the result of Backward into the coefficients, below P, of a
// product whose values Mul has multiplied.
func (t *Transform) Scale(a []uint64) { t.scaleBy(a, t.scale) }

// ScaleBy is Scale with a further factor, a stored number.
func (t *Transform) ScaleBy(a []uint64, factor uint64) {
	t.scaleBy(a, t.shoup(t.Stored(t.Plain(t.Mul(t.inverse, factor)))))
}

func (t *Transform) scaleBy(a []uint64, s shoup) {
	for i, x := range a {
		a[i] = t.Below(s.times(x, t.P))
	}
}
