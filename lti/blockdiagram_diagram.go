package lti

import (
	"fmt"
	"slices"
	"strings"

	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Diagram is a checked block diagram. It is immutable and safe to share.
type Diagram[G tf.Block[G]] struct {
	record  BlockDiagram[G]
	signals []units.Signal
	network network
}

// Signals returns all signals in the order of declaration.
func (d *Diagram[G]) Signals() []units.Signal { return slices.Clone(d.signals) }

// Inputs returns the signals that come from outside.
func (d *Diagram[G]) Inputs() []units.Signal { return d.inRole(isInput) }

// Outputs returns the signals that are declared as read outside.
func (d *Diagram[G]) Outputs() []units.Signal { return d.inRole(isOutput) }

func (d *Diagram[G]) inRole(r role) []units.Signal {
	var out []units.Signal
	for i, s := range d.record.signals {
		if s.role == r {
			out = append(out, d.signals[i])
		}
	}
	return out
}

// Blocks returns the names of the blocks in the order of entry.
func (d *Diagram[G]) Blocks() []string {
	out := make([]string, len(d.record.blocks))
	for i, b := range d.record.blocks {
		out[i] = b.name
	}
	return out
}

// Block returns the transfer function of a block. The error is an
// *UnknownNameError.
func (d *Diagram[G]) Block(name string) (G, error) {
	i, err := d.findBlock(name)
	if err != nil {
		var g G
		return g, err
	}
	return d.record.blocks[i].function, nil
}

// WithBlock returns the diagram with another transfer function for a block. The
// errors are *UnknownNameError and those of Build.
func (d *Diagram[G]) WithBlock(name string, function G) (*Diagram[G], error) {
	i, err := d.findBlock(name)
	if err != nil {
		return nil, err
	}
	record := d.record.copy()
	record.blocks[i].function = function
	return record.Build()
}

// PadeApproximant returns the diagram with every dead time replaced by its
// Padé approximant of degree n, as by tf.Continuous.PadeApproximant. A diagram
// in z has no dead times. The errors are those of that method and of Build.
func (d *Diagram[G]) PadeApproximant(n int) (*Diagram[G], error) {
	record := d.record.copy()
	for i, b := range record.blocks {
		c, ok := any(b.function).(tf.Continuous)
		if !ok {
			continue
		}
		c, err := c.PadeApproximant(n)
		if err != nil {
			return nil, fmt.Errorf("block %s: %w", b.name, err)
		}
		record.blocks[i].function = any(c).(G)
	}
	return record.Build()
}

// find returns the index of a signal, or an *UnknownNameError.
func (d *Diagram[G]) find(name string) (int, error) {
	i := slices.IndexFunc(d.signals, func(s units.Signal) bool { return s.Name == name })
	if i < 0 {
		return none, &UnknownNameError{Kind: "signal", Name: name, Have: slices.Clone(d.network.names)}
	}
	return i, nil
}

func (d *Diagram[G]) findBlock(name string) (int, error) {
	i := slices.IndexFunc(d.record.blocks, func(b diagramBlock[G]) bool { return b.name == name })
	if i < 0 {
		return none, &UnknownNameError{Kind: "block", Name: name, Have: d.Blocks()}
	}
	return i, nil
}

// TransferFunction returns the transfer function from one signal to another, in
// their units and under their names, all other inputs being 0.
//
// Where from is no Input it is imposed: the block or sum that determines it is
// set aside, so that loops through it are open. (For a disturbance that adds to
// a signal declare an Input and a Sum.)
//
// Nothing is cancelled: the denominator is the characteristic polynomial of the
// diagram (where from is imposed: of the diagram opened there), so that modes
// which the pair does not show remain as common factors; see HiddenModes. It is
// 0 over that polynomial where no path leads from from to to, and the
// polynomial over itself from a signal to itself.
//
// Dead times of blocks on the way add up. They must lie on no loop between the
// two signals, and all paths must have the same. Loops with dead time that do
// not lie between the two take no part: their denominators are left out.
//
// The errors are *UnknownNameError, *DeadTimeError, *AlgebraicLoopError where
// the opened diagram has one, and ErrLimit where more than 512 signals or blocks
// of a total degree beyond 2048 lie on the way with its loops, and for a result
// of a degree beyond 4096 or with more than 2^26 bits of coefficients. The method is Cramer's rule
// for the equations of the diagram, with the denominators of the blocks
// multiplied out; S. J. Mason's gain formula (Proceedings of the IRE 44, 1956)
// gives the same numerator and denominator, each divided by these.
func (d *Diagram[G]) TransferFunction(from, to string) (g G, err error) {
	source, err := d.find(from)
	if err != nil {
		return g, err
	}
	target, err := d.find(to)
	if err != nil {
		return g, err
	}
	var r ratio
	if source == target {
		r.den, err = d.network.outside(nil, source)
		r.num = r.den
	} else {
		r, err = d.network.transfer(source, target)
	}
	if err != nil {
		return g, err
	}
	return d.signed(r, source, target)
}

// signed gives a ratio its signals.
func (d *Diagram[G]) signed(r ratio, from, to int) (G, error) {
	var like G
	if len(d.record.blocks) > 0 {
		like = d.record.blocks[0].function
	}
	return putTogether(function{r.num, r.den, r.delay, d.signals[from], d.signals[to]}, like)
}

// CharacteristicPolynomial returns the product of the denominators of all
// blocks times det(I − G), G the matrix of the blocks and sums between the
// signals, multiplied by the number that makes its coefficients integers
// without a common divisor and the leading one positive. Its roots are the
// modes of the closed diagram, hidden ones included.
//
// The error is a *DeadTimeError where a dead time lies on a loop, and ErrLimit
// for a degree beyond 4096 or more than 2^26 bits of coefficients.
func (d *Diagram[G]) CharacteristicPolynomial() (poly.Poly, error) {
	for _, part := range d.network.parts {
		if blocks := d.network.delaysWithin(part); len(blocks) > 0 {
			return poly.Poly{}, &DeadTimeError{Result: "characteristic polynomial", Blocks: blocks}
		}
	}
	factors := make([]intpoly.Poly, len(d.network.factors))
	for i, f := range d.network.factors {
		_, factors[i] = f.Primitive()
	}
	p, err := product(factors...)
	return asPoly(p), err
}

// HiddenModes returns the modes of the diagram that the transfer function from
// one signal to another does not show: the roots of the factor that its
// numerator and denominator have in common, with how often each is hidden. All
// modes are hidden from a pair without a path. Whether a mode decays is in the
// sign of its real part, which is exact.
//
// The errors are those of TransferFunction, poly.Poly.GCD and poly.Poly.Roots.
func (d *Diagram[G]) HiddenModes(from, to string) (Modes[G], error) {
	g, err := d.TransferFunction(from, to)
	if err != nil {
		return nil, err
	}
	f := takeApart(g)
	hidden, err := asPoly(f.num).GCD(asPoly(f.den))
	if err != nil {
		return nil, err
	}
	roots, err := hidden.Roots()
	return roots, err
}

// String lists signals, blocks and sums, a line each.
func (d *Diagram[G]) String() string {
	var b strings.Builder
	for i, s := range d.record.signals {
		fmt.Fprintf(&b, "%s %s\n", s.role, d.signals[i])
	}
	for _, k := range d.record.blocks {
		fmt.Fprintf(&b, "block %s, %s to %s: %v\n", k.name, k.from, k.to, k.function)
	}
	for _, s := range d.record.sums {
		fmt.Fprintf(&b, "sum %s = %s\n", s.to, inWords(s.terms))
	}
	return strings.TrimSuffix(b.String(), "\n")
}

// inWords writes a sum as a person would: setpoint − measured.
func inWords(terms []Summand) string {
	var b strings.Builder
	for i, t := range terms {
		switch {
		case i > 0 && t.sign > 0:
			b.WriteString(" + ")
		case i > 0:
			b.WriteString(" − ")
		case t.sign < 0:
			b.WriteString("−")
		}
		b.WriteString(t.signal)
	}
	return b.String()
}
