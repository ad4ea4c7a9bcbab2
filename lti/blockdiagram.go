package lti

import (
	"slices"

	"github.com/qofs/qofs/tf"
)

// Bounds on a block diagram.
const (
	maxBlocks   = 512  // blocks and sums, each for itself
	maxSummands = 4096 // terms of all sums together
)

// BlockDiagram records blocks, summing junctions and the signals between them.
// Every signal is named and given a unit once; blocks and sums then refer to it
// by that name, in any topology and with any number of loops:
//
//	d := lti.NewBlockDiagram()
//	d.Input("setpoint", "mA")
//	d.Signal("error", "mA")
//	d.Signal("opening", "mm")
//	d.Output("level", "m")
//	d.Signal("measured", "mA")
//	d.Sum("error", lti.Plus("setpoint"), lti.Minus("measured"))
//	d.Block("controller", control, "error", "opening")
//	d.Block("pool", pool, "opening", "level")
//	d.Block("transmitter", transmitter, "level", "measured")
//	diagram, err := d.Build()
//	loop, err := diagram.TransferFunction("setpoint", "level")
//
// Draw what is there once: a plant that is drawn as two blocks, one for each of
// its inputs, has each of its modes twice.
//
// The methods only record; Build reports every fault at once. All blocks are
// tf.Continuous (NewBlockDiagram) or all are tf.Discrete
// (NewDiscreteBlockDiagram). It is not safe for concurrent use; the Diagram is.
type BlockDiagram[G tf.Block[G]] struct {
	signals []diagramSignal
	blocks  []diagramBlock[G]
	sums    []diagramSum
}

// role is what a signal is in a diagram.
type role int

const (
	isInner role = iota
	isInput
	isOutput
)

func (r role) String() string { return [...]string{"signal", "input", "output"}[r] }

type diagramSignal struct {
	declaration
	role role
}

type diagramBlock[G any] struct {
	name     string
	function G
	from, to string
}

type diagramSum struct {
	to    string
	terms []Summand
}

// NewBlockDiagram returns an empty record for blocks in s.
func NewBlockDiagram() *BlockDiagram[tf.Continuous] { return &BlockDiagram[tf.Continuous]{} }

// NewDiscreteBlockDiagram returns an empty record for blocks in z, which must
// all have the same sampling period.
func NewDiscreteBlockDiagram() *BlockDiagram[tf.Discrete] { return &BlockDiagram[tf.Discrete]{} }

// Input declares a signal that comes from outside, and its unit.
func (d *BlockDiagram[G]) Input(name, unit string) {
	d.signals = append(d.signals, diagramSignal{declaration{name, unit}, isInput})
}

// Output declares a signal that is read outside, and its unit. It may be read
// inside too. A block or a sum must determine it.
func (d *BlockDiagram[G]) Output(name, unit string) {
	d.signals = append(d.signals, diagramSignal{declaration{name, unit}, isOutput})
}

// Signal declares a signal inside the diagram and its unit. A block or a sum
// must determine it.
func (d *BlockDiagram[G]) Signal(name, unit string) {
	d.signals = append(d.signals, diagramSignal{declaration{name, unit}, isInner})
}

// Block adds a block from one signal to another. Its ends must have the units
// of the signals, and their names too where they have names: a block
// [valve: mA -> gate: mm] does not connect to the signal "reading" in mA.
func (d *BlockDiagram[G]) Block(name string, function G, from, to string) {
	d.blocks = append(d.blocks, diagramBlock[G]{name, function, from, to})
}

// Sum adds a summing junction, which determines the signal to. All its signals
// have one unit.
//
//	d.Sum("error", lti.Plus("setpoint"), lti.Minus("measured"))
func (d *BlockDiagram[G]) Sum(to string, terms ...Summand) {
	d.sums = append(d.sums, diagramSum{to, slices.Clone(terms)})
}

// Summand is a signal that enters a sum, with its sign. Plus and Minus make
// one; the zero value has no sign and is refused.
type Summand struct {
	signal string
	sign   int
}

// Plus is a signal that a sum adds.
func Plus(signal string) Summand { return Summand{signal, 1} }

// Minus is a signal that a sum subtracts.
func Minus(signal string) Summand { return Summand{signal, -1} }

// String is the sign and the signal, such as "−measured".
func (t Summand) String() string {
	switch t.sign {
	case 1:
		return "+" + t.signal
	case -1:
		return "−" + t.signal
	}
	return t.signal
}

// copy returns a record that shares no slice with d.
func (d *BlockDiagram[G]) copy() BlockDiagram[G] {
	return BlockDiagram[G]{slices.Clone(d.signals), slices.Clone(d.blocks), slices.Clone(d.sums)}
}
