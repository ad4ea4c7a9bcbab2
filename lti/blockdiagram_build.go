package lti

import (
	"errors"
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/qofs/qofs/internal/decimal"
	"github.com/qofs/qofs/internal/intpoly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Build checks the record and returns the diagram. The error joins
// (errors.Join) one typed error for each fault:
//
//   - *DeclarationError for a signal with an unknown unit or a bad name, one
//     declared twice, and one that nothing determines though it is no Input;
//   - *WiringError for a block or a sum with a fault of its own, with a signal
//     that does not exist (an *UnknownNameError is behind it), with a unit or a
//     name that does not fit, and for a second block or sum that determines the
//     same signal;
//   - *AlgebraicLoopError for a loop that determines none of its signals.
//
// It is ErrEmptyDiagram for a record without blocks and sums, and ErrLimit for
// more than 512 signals, blocks or sums, 4096 terms of sums, and where the
// signals of a loop pass the limits of TransferFunction.
func (d *BlockDiagram[G]) Build() (*Diagram[G], error) {
	summands := 0
	for _, s := range d.sums {
		summands += len(s.terms)
	}
	if len(d.signals) > maxSignals || len(d.blocks) > maxBlocks || len(d.sums) > maxBlocks || summands > maxSummands {
		return nil, fmt.Errorf("lti: %d signals, %d blocks, %d sums with %d terms; at most %d, %d, %d and %d: %w",
			len(d.signals), len(d.blocks), len(d.sums), summands, maxSignals, maxBlocks, maxBlocks, maxSummands, ErrLimit)
	}
	if len(d.blocks)+len(d.sums) == 0 {
		return nil, ErrEmptyDiagram
	}
	b := &wiring[G]{diagram: &Diagram[G]{record: d.copy()}}
	b.declare()
	b.connectBlocks()
	b.connectSums()
	b.undetermined()
	if len(b.faults) == 0 {
		b.faults = b.diagram.network.settle()
	}
	if len(b.faults) > maxFaults {
		b.faults = append(b.faults[:maxFaults], fmt.Errorf("more than %d faults: %w", maxFaults, ErrLimit))
	}
	if len(b.faults) > 0 {
		return nil, errors.Join(b.faults...)
	}
	return b.diagram, nil
}

// wiring is the work of Build.
type wiring[G tf.Block[G]] struct {
	diagram *Diagram[G]
	sources []string // what determines each signal, in words; empty where nothing does
	faulty  []bool   // signals whose declaration is faulty
	astray  bool     // something determines a signal that does not exist
	faults  []error
}

func (b *wiring[G]) report(err error) { b.faults = append(b.faults, err) }

// declare reads the signals.
func (b *wiring[G]) declare() {
	d := b.diagram
	declared := map[string]bool{}
	for _, s := range d.record.signals {
		count := len(b.faults)
		u, err := units.Parse(s.text)
		if err != nil {
			b.report(&DeclarationError{s.role.String(), s.name, s.text, err.Error(), err})
		}
		if !isIdentifier(s.name) {
			b.report(&DeclarationError{s.role.String(), s.name, s.text, "the name must be of letters, digits and underscores, and begin with a letter", nil})
		}
		if declared[s.name] {
			b.report(&DeclarationError{s.role.String(), s.name, s.text, "the name is declared already; a signal is an Input, an Output or a Signal, once", nil})
		}
		declared[s.name] = true
		d.signals = append(d.signals, units.Signal{Name: s.name, Unit: u})
		d.network.names = append(d.network.names, s.name)
		d.network.rows = append(d.network.rows, networkRow{input: s.role == isInput})
		b.faulty = append(b.faulty, len(b.faults) > count)
	}
	b.sources = make([]string, len(d.signals))
}

// find returns the index of a signal that a block or a sum names.
func (b *wiring[G]) find(place WiringError, name string) (int, bool) {
	i, err := b.diagram.find(name)
	if err != nil {
		place.Signal, place.Reason, place.Err = name, err.Error(), err
		b.report(&place)
	}
	return i, err == nil
}

// determine notes that a block or a sum determines a signal.
func (b *wiring[G]) determine(place WiringError, i int, by string, row networkRow) {
	d := b.diagram
	name := d.network.names[i]
	place.Signal = name
	switch {
	case d.network.rows[i].input:
		place.Reason = fmt.Sprintf("%s is an Input, which comes from outside; declare it with Signal or Output to determine it here", name)
	case b.sources[i] != "":
		place.Reason = fmt.Sprintf("%s is determined already by the %s; give each its own signal and join them with Sum", name, b.sources[i])
	default:
		b.sources[i] = by
		d.network.rows[i] = row
		return
	}
	b.report(&place)
}

func (b *wiring[G]) connectBlocks() {
	names := map[string]bool{}
	for _, k := range b.diagram.record.blocks {
		place := WiringError{Block: k.name}
		if !isBlockName(k.name) {
			place.Reason = fmt.Sprintf("the one from %s to %s needs a printable name of at most 256 bytes", k.from, k.to)
			b.report(&place)
		} else if names[k.name] {
			place.Reason = "there are two blocks of this name"
			b.report(&place)
		}
		names[k.name] = true
		b.connectBlock(WiringError{Block: k.name}, k)
	}
	b.checkPeriods()
}

// isBlockName reports whether a text can serve as the name of a block.
func isBlockName(name string) bool {
	printable := func(r rune) bool { return unicode.IsPrint(r) }
	return name != "" && len(name) <= 256 && utf8.ValidString(name) && strings.TrimSpace(name) == name &&
		strings.IndexFunc(name, func(r rune) bool { return !printable(r) }) < 0
}

func (b *wiring[G]) connectBlock(place WiringError, k diagramBlock[G]) {
	from, fromOk := b.find(place, k.from)
	to, toOk := b.find(place, k.to)
	b.astray = b.astray || !toOk
	f := takeApart(k.function)
	bare := fromOk && !b.checkEnd(place, "input", f.input, from) && isBare(f.input) && isBare(f.output)
	if toOk && !bare {
		b.checkEnd(place, "output", f.output, to)
	}
	if !fromOk || !toOk {
		if toOk && b.sources[to] == "" {
			b.sources[to] = "block " + k.name
		}
		return
	}
	if from == to {
		place.Signal = k.from
		place.Reason = fmt.Sprintf("it would determine %s from %s itself; close a loop over a Sum that another signal enters too", k.to, k.from)
		b.report(&place)
		b.sources[to] = "block " + k.name
		return
	}
	b.determine(place, to, "block "+k.name, networkRow{block: k.name, den: f.den, terms: []networkTerm{{from, f.num, f.delay}}})
}

// isBare tells that an end of a block has no unit and no name.
func isBare(s units.Signal) bool { return s.Name == "" && s.Unit.IsOne() }

// checkEnd compares an end of a block with the signal there.
func (b *wiring[G]) checkEnd(place WiringError, end string, found units.Signal, i int) bool {
	want := b.diagram.signals[i]
	if b.faulty[i] || found.Connects(want) {
		return true
	}
	place.Signal, place.Found, place.Want = want.Name, found, want
	place.Reason = fmt.Sprintf("its %s [%s] does not fit the signal [%s]: ", end, found, want)
	switch mismatch := fitError(found.Unit, want.Unit); {
	case mismatch == nil:
		place.Reason += fmt.Sprintf("the names differ; connect it to %q, or rename its %s with WithSignals if both are the same quantity", found.Name, end)
	case isBare(found):
		place.Reason += "WithUnits gives a block from 1 to 1 its units"
		place.Err = mismatch
	default:
		place.Reason += conversion(found.Unit, want.Unit, mismatch, "ConvertUnits on the block mends it")
		place.Err = mismatch
	}
	b.report(&place)
	return false
}

// fitError is nil for equal units.
func fitError(found, want units.Unit) error {
	if found.Equal(want) {
		return nil
	}
	return &units.MismatchError{Found: found, Want: want}
}

// conversion names the factor between two units, or what stands against one.
func conversion(found, want units.Unit, mismatch error, mends string) string {
	k, err := want.ConversionTo(found)
	if err != nil {
		return mismatch.Error()
	}
	return fmt.Sprintf("1 %s is %s %s; %s", want, decimal.Text(k), found, mends)
}

// checkPeriods demands one sampling period of all blocks in z.
func (b *wiring[G]) checkPeriods() {
	blocks := b.diagram.record.blocks
	for _, k := range blocks[min(1, len(blocks)):] {
		period, sampled := periodOf(k.function)
		if first, _ := periodOf(blocks[0].function); sampled && !period.Equal(first) {
			b.report(&WiringError{Block: k.name, Reason: fmt.Sprintf("it is sampled every %s and block %s every %s; resample one of them so that the periods agree",
				period, blocks[0].name, first)})
		}
	}
	if _, sampled := periodOf(*new(G)); sampled && len(blocks) == 0 {
		b.report(&WiringError{Sum: b.diagram.record.sums[0].to, Reason: "a diagram in z needs a block, which tells the sampling period"})
	}
}

func (b *wiring[G]) connectSums() {
	for _, s := range b.diagram.record.sums {
		place := WiringError{Sum: s.to}
		to, ok := b.find(place, s.to)
		b.astray = b.astray || !ok
		if len(s.terms) == 0 {
			place.Reason = "it has no term; name its signals with Plus and Minus"
			b.report(&place)
		}
		row := networkRow{den: intpoly.FromInt64s(1)}
		seen := map[string]bool{}
		for k, t := range s.terms {
			from, found := b.connectTerm(place, k, t, to, ok, seen)
			if found {
				row.terms = append(row.terms, networkTerm{from: from, num: intpoly.FromInt64s(int64(t.sign))})
			}
		}
		if ok {
			b.determine(place, to, "sum "+s.to, row)
		}
	}
}

// connectTerm checks one term of a sum.
func (b *wiring[G]) connectTerm(place WiringError, k int, t Summand, to int, ok bool, seen map[string]bool) (from int, found bool) {
	fail := func(reason string, err error) (int, bool) {
		place.Reason, place.Err = reason, err
		b.report(&place)
		return none, false
	}
	place.Signal = t.signal
	if t.sign == 0 {
		return fail(fmt.Sprintf("term %d has no sign; write Plus(…) or Minus(…)", k+1), nil)
	}
	if from, found = b.find(place, t.signal); !found {
		return none, false
	}
	switch {
	case seen[t.signal]:
		return fail(fmt.Sprintf("%s stands twice in it; a Block with a gain serves for a multiple", t.signal), nil)
	case ok && from == to:
		return fail(fmt.Sprintf("%s stands on both sides, a loop without a block in it; give the loop a Block and a signal of its own", t.signal), nil)
	}
	seen[t.signal] = true
	if !ok || b.faulty[from] || b.faulty[to] {
		return from, true
	}
	place.Found, place.Want = b.diagram.signals[from], b.diagram.signals[to]
	if mismatch := fitError(place.Found.Unit, place.Want.Unit); mismatch != nil {
		return fail(fmt.Sprintf("its term %s [%s] does not fit the sum [%s]: %s", t, place.Found.Unit, place.Want.Unit,
			conversion(place.Found.Unit, place.Want.Unit, mismatch, "declare both in one unit, or put a Block with the gain between")), mismatch)
	}
	return from, true
}

// undetermined reports signals that nothing determines. Where something
// determines a signal that does not exist, that is the fault to mend first.
func (b *wiring[G]) undetermined() {
	if b.astray {
		return
	}
	for i, s := range b.diagram.record.signals {
		if s.role == isInput || b.sources[i] != "" || b.faulty[i] {
			continue
		}
		b.report(&DeclarationError{s.role.String(), s.name, s.text,
			"no block and no sum determines it; declare it with Input if it comes from outside", nil})
	}
}
