package tf

import (
	"bufio"
	"fmt"
	"hash/fnv"
	"math"
	"os"
	"strings"
	"testing"

	"github.com/qofs/qofs/poly"
)

// corpus puts every float64 that the library returns on the inputs of all
// reference files into one checksum.
type corpus struct {
	t     *testing.T
	sum   interface{ Write([]byte) (int, error) }
	count int
}

// take adds results; an error counts as one.
func (c *corpus) take(err error, values ...float64) {
	if err != nil {
		fmt.Fprintln(c.sum, "error")
		return
	}
	for _, v := range values {
		fmt.Fprintf(c.sum, "%x\n", math.Float64bits(v))
		c.count++
	}
}

func (c *corpus) takeComplex(err error, values ...complex128) {
	for _, v := range values {
		c.take(err, real(v), imag(v))
	}
}

// roots takes the certified roots of all polynomials, of degree 200 too.
func (c *corpus) roots() {
	file, err := os.Open("../internal/algebraic/testdata/roots.txt")
	if err != nil {
		c.t.Fatal(err)
	}
	defer file.Close()
	lines := bufio.NewScanner(file)
	lines.Buffer(nil, 1<<20)
	for lines.Scan() {
		p := rationalPoly(c.t, strings.Split(lines.Text(), ";")[1])
		roots, err := p.Roots()
		c.take(err)
		for _, x := range roots {
			c.takeComplex(nil, x.Value)
			c.take(nil, float64(x.Multiplicity))
		}
	}
}

// values takes points of the plane.
func (c *corpus) values() {
	for _, x := range readValues(c.t) {
		v, err := x.g.At(x.point)
		c.takeComplex(err, v)
	}
}

// frequencies takes all that is read off on the imaginary axis.
func (c *corpus) frequencies() {
	file, err := os.Open("testdata/frequency.txt")
	if err != nil {
		c.t.Fatal(err)
	}
	defer file.Close()
	for lines := bufio.NewScanner(file); lines.Scan(); {
		part := strings.Split(lines.Text(), "; ")
		f := Must(New(rationalPoly(c.t, part[0]), rationalPoly(c.t, part[1]))).FrequencyFunction()
		omega := hexFloat(c.t, part[3])
		v, err := f.At(omega)
		c.takeComplex(err, v)
		for _, read := range []func(float64) (float64, error){f.Magnitude, f.Decibels, f.Phase, f.GroupDelay} {
			v, err := read(omega)
			c.take(err, v)
		}
	}
}

// timeFunctions takes coefficients, values and equidistant samples.
func (c *corpus) timeFunctions() {
	for _, r := range readReference(c.t) {
		f := timeFunctionOf(c.t, r.num, r.den)
		terms, err := f.Terms()
		c.take(err)
		for _, x := range terms {
			c.take(nil, x.Decay, x.Frequency, x.Cosine, x.Sine)
		}
		for _, x := range r.t {
			v, err := f.At(x)
			c.take(err, v)
		}
		steps := []float64{0.1}
		if n := len(r.t); n > 0 {
			steps = append(steps, r.t[n/3]/7, r.t[n/2]/13)
		}
		for _, dt := range steps {
			samples, err := f.Sample(dt, 40)
			c.take(err, samples...)
		}
	}
}

// fractions takes the residues.
func (c *corpus) fractions() {
	file, err := os.Open("testdata/partialfractions.txt")
	if err != nil {
		c.t.Fatal(err)
	}
	defer file.Close()
	var num poly.Poly
	for lines := bufio.NewScanner(file); lines.Scan(); {
		head, rest, _ := strings.Cut(lines.Text(), " ")
		switch head {
		case "num":
			num = rationalPoly(c.t, rest)
		case "den":
			p, err := Must(New(num, rationalPoly(c.t, rest))).PartialFractions()
			c.take(err)
			for _, x := range p.Terms() {
				c.takeComplex(nil, x.Pole, x.Coefficient)
			}
		}
	}
}

// TestCorpusChecksum asserts that every machine returns the same bits. The
// checksum is of GOAMD64=v1; most of what goes into it is compared with mpmath
// by the reference tests, so that a change of it means a change of a digit.
func TestCorpusChecksum(t *testing.T) {
	sum := fnv.New64a()
	c := &corpus{t: t, sum: sum}
	c.roots()
	c.values()
	c.frequencies()
	c.timeFunctions()
	c.fractions()
	const want, count = 0x4ec1b8acc4e72175, 35653
	if got := sum.Sum64(); got != want || c.count != count {
		t.Errorf("checksum %#x of %d numbers, want %#x of %d", got, c.count, uint64(want), count)
	}
}
