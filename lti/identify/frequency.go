package identify

import (
	"fmt"
	"io"
	"math"
	"math/cmplx"
	"slices"
	"strings"

	"github.com/qofs/qofs/units"
)

// FrequencyTable is a measured frequency response: complex ratios of output to
// input at angular frequencies, with the coherence of the measurement where it is
// known. It is immutable.
type FrequencyTable struct {
	_             [0]func()
	input, output units.Signal
	omega         []float64 // rad/s, ascending
	value         []complex128
	coherence     []float64 // 1 where it was not measured
	notes         []string
}

// NewFrequencyTable returns the table of values at angular frequencies in rad/s,
// above 0, in the unit of the output over that of the input. Coherences lie above
// 0 and up to 1; nil stands for 1 everywhere. The rows need not be in order. The
// errors are *RowError, ErrLimit beyond MaxRows, and ErrNoTest for slices of
// different lengths.
func NewFrequencyTable(input, output units.Signal, omega []float64, value []complex128, coherence []float64) (FrequencyTable, error) {
	if coherence == nil {
		coherence = make([]float64, len(omega))
		for i := range coherence {
			coherence[i] = 1
		}
	}
	if len(omega) != len(value) || len(omega) != len(coherence) {
		return FrequencyTable{}, fmt.Errorf("identify: %d frequencies, %d values, %d coherences: %w", len(omega), len(value), len(coherence), ErrNoTest)
	}
	if len(omega) > MaxRows {
		return FrequencyTable{}, ErrLimit
	}
	order := make([]int, len(omega))
	for i := range order {
		order[i] = i
		switch w, v, c := omega[i], value[i], coherence[i]; {
		case !(w > 0) || math.IsInf(w, 0):
			return FrequencyTable{}, &RowError{Row: i + 1, Found: fmt.Sprintf("a frequency of %v rad/s", w), Want: "one above 0"}
		case cmplx.IsNaN(v) || cmplx.IsInf(v) || v == 0:
			return FrequencyTable{}, &RowError{Row: i + 1, Found: fmt.Sprintf("the value %v", v), Want: "a finite ratio other than 0"}
		case !(c > 0 && c <= 1):
			return FrequencyTable{}, &RowError{Row: i + 1, Found: fmt.Sprintf("a coherence of %v", c), Want: "one above 0 and up to 1"}
		}
	}
	slices.SortStableFunc(order, func(i, j int) int {
		switch {
		case omega[i] < omega[j]:
			return -1
		case omega[i] > omega[j]:
			return 1
		}
		return 0
	})
	t := FrequencyTable{input: input, output: output}
	for _, i := range order {
		t.omega, t.value, t.coherence = append(t.omega, omega[i]), append(t.value, value[i]), append(t.coherence, coherence[i])
	}
	return t, nil
}

// Len is the number of rows.
func (t FrequencyTable) Len() int { return len(t.omega) }

// Row returns the angular frequency in rad/s, the value and the coherence of a row,
// counted from 0 in ascending frequency.
func (t FrequencyTable) Row(i int) (omega float64, value complex128, coherence float64) {
	return t.omega[i], t.value[i], t.coherence[i]
}

// decibels is what stands for the unit in the header of a column of decibels.
const decibels = "dB re "

// ReadFrequencyTable reads a frequency response from comma-separated values under
// a header that names each column and its unit:
//
//	frequency: Hz, magnitude: dB re mm/V, phase: deg, coherence: 1
//	0.5,           -20.1,                 -12.5,      0.98
//
// The frequency is in Hz, rad/s or another unit of these; the magnitude is a ratio
// in its own unit or in decibels of one ("dB re 1" where it has none); the phase
// is in deg or rad. The column of the coherence may be missing, and other columns
// are passed over. Input and output get the names and units of the signals given,
// to which the unit of the magnitude is converted.
//
// The errors are *RowError, *units.MismatchError for a magnitude of another
// dimension, those of NewFrequencyTable, what the reader returns, and ErrLimit as
// for ReadRecord.
func ReadFrequencyTable(r io.Reader, input, output units.Signal) (FrequencyTable, error) {
	inDecibels := false
	t, err := readTable(r, func(cell string) (units.Signal, error) {
		name, unit, ok := strings.Cut(cell, ":")
		if rest, found := strings.CutPrefix(strings.TrimSpace(unit), decibels); ok && found && strings.TrimSpace(name) == "magnitude" {
			inDecibels = true
			return units.ParseSignal("magnitude: " + rest)
		}
		return units.ParseSignal(cell)
	})
	if err != nil {
		return FrequencyTable{}, err
	}
	want := []units.Unit{units.MustParse("rad/s"), output.Unit.Div(input.Unit), units.MustParse("rad"), {}}
	var at [4]int
	var scale [4]float64
	for k, name := range []string{"frequency", "magnitude", "phase", "coherence"} {
		if at[k], err = t.find(name); err != nil {
			if k == 3 {
				at[k] = -1
				continue
			}
			return FrequencyTable{}, err
		}
		factor, err := t.columns[at[k]].Unit.ConversionTo(want[k])
		if err != nil {
			return FrequencyTable{}, &RowError{Row: 1, Column: name, Found: t.columns[at[k]].Unit.String(), Want: want[k].String(), Err: err}
		}
		scale[k], _ = factor.Float64()
	}
	var omega, coherence []float64
	var value []complex128
	missing := 0
	var lines []int
	for i, row := range t.rows {
		w, m, phase, c := row[at[0]]*scale[0], row[at[1]], row[at[2]]*scale[2], 1.0
		if at[3] >= 0 {
			c = row[at[3]] * scale[3]
		}
		if math.IsNaN(w + m + phase + c) {
			missing++
			continue
		}
		if inDecibels {
			m = math.Pow(10, m/20)
		}
		omega, coherence = append(omega, w), append(coherence, c)
		value = append(value, cmplx.Rect(m*scale[1], phase))
		lines = append(lines, t.lines[i])
	}
	out, err := NewFrequencyTable(input, output, omega, value, coherence)
	if row, ok := err.(*RowError); ok {
		row.Row = lines[row.Row-1]
	}
	if missing > 0 {
		out.notes = append(out.notes, count(missing, "row is", "rows are")+" left out because a value is missing")
	}
	return out, err
}

// Warnings says what a person should look at in the table before it is fitted:
// missing values, jumps of the phase between neighbouring frequencies, frequencies
// at which the coherence is low.
func (t FrequencyTable) Warnings() []string {
	out := slices.Clone(t.notes)
	low := 0
	for i, c := range t.coherence {
		if c < 0.8 {
			low++
		}
		if i > 0 {
			if turn := cmplx.Phase(t.value[i] / t.value[i-1]); math.Abs(turn) > 2 {
				out = append(out, fmt.Sprintf("the phase turns by %.0f° from %.4g to %.4g rad/s: rows are too far apart there, or noise",
					turn*180/math.Pi, t.omega[i-1], t.omega[i]))
			}
		}
	}
	if low > 0 {
		out = append(out, fmt.Sprintf("the coherence is below 0.8 at %d of %d frequencies, which count little", low, len(t.omega)))
	}
	return out
}
