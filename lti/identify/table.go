package identify

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/units"
)

// Bounds on a table.
const (
	maxLine    = 1 << 14 // bytes
	maxColumns = 64
)

// table is a file of comma-separated values under a header.
type table struct {
	columns []units.Signal
	rows    [][]float64 // NaN where a value is missing
	lines   []int       // of the rows
}

// readTable reads a header of signals, such as
//
//	time: min, heater: W, zone: degC
//
// and rows of numbers. What follows a # is a comment; empty lines are left out. A
// missing value is an empty field, "-" or "NaN".
func readTable(r io.Reader, header func(cell string) (units.Signal, error)) (*table, error) {
	t := &table{}
	scanner := bufio.NewScanner(r)
	scanner.Buffer(nil, maxLine)
	for line := 1; scanner.Scan(); line++ {
		text, _, _ := strings.Cut(scanner.Text(), "#")
		if line == 1 {
			text = strings.TrimPrefix(text, "\uFEFF")
		}
		if strings.TrimSpace(text) == "" {
			continue
		}
		cells := strings.Split(text, ",")
		if t.columns == nil {
			if len(cells) > maxColumns {
				return nil, ErrLimit
			}
			for _, c := range cells {
				s, err := header(strings.TrimSpace(c))
				if err != nil {
					return nil, &RowError{Row: line, Found: strconv.Quote(lex.Excerpt(c, 0)), Want: "a column such as \"zone: degC\" or \"magnitude: dB re K/kW\" (" + err.Error() + ")", Err: err}
				}
				t.columns = append(t.columns, s)
			}
			continue
		}
		row, err := t.row(line, cells)
		if err != nil {
			return nil, err
		}
		if len(t.rows) == MaxRows {
			return nil, ErrLimit
		}
		t.rows, t.lines = append(t.rows, row), append(t.lines, line)
	}
	if err := scanner.Err(); err == bufio.ErrTooLong {
		return nil, fmt.Errorf("identify: a line of more than %d bytes: %w", maxLine, ErrLimit)
	} else if err != nil {
		return nil, err
	}
	if t.columns == nil {
		return nil, &RowError{Row: 1, Found: "the end of the table", Want: "a header such as \"time: s, heater: W, zone: degC\""}
	}
	return t, nil
}

func (t *table) row(line int, cells []string) ([]float64, error) {
	if len(cells) != len(t.columns) {
		return nil, &RowError{Row: line, Found: fmt.Sprintf("%d fields", len(cells)), Want: fmt.Sprintf("%d, as in the header", len(t.columns))}
	}
	row := make([]float64, len(cells))
	for i, c := range cells {
		c = strings.TrimSpace(c)
		if c == "" || c == "-" || strings.EqualFold(c, "nan") {
			row[i] = math.NaN()
			continue
		}
		v, err := strconv.ParseFloat(c, 64)
		if err != nil || math.IsInf(v, 0) || math.IsNaN(v) {
			return nil, &RowError{Row: line, Column: t.columns[i].Name, Found: strconv.Quote(lex.Excerpt(c, 0)), Want: "a decimal number", Err: err}
		}
		row[i] = v
	}
	return row, nil
}

// find returns the column of a name.
func (t *table) find(name string) (int, error) {
	var have []string
	for i, c := range t.columns {
		if c.Name == name {
			return i, nil
		}
		have = append(have, c.Name)
	}
	return 0, &RowError{Row: 1, Found: "the columns " + strings.Join(have, ", "), Want: fmt.Sprintf("one of the name %q", name)}
}

// ReadRecord reads a record from comma-separated values under a header that
// names each column and its unit; a column of the name time, in a unit of time,
// holds the instants:
//
//	# step test of zone 3
//	time: min, heater: W, zone: degC
//	0,    2000, 641.2
//	0.5,  2300, 641.3
//
// The names choose input and output among the columns. Rows in which a value is
// missing are left out with a warning.
//
// The errors are *RowError, those of NewRecord, what the reader returns, and
// ErrLimit beyond MaxRows, 64 columns or a line of 16384 bytes.
func ReadRecord(r io.Reader, input, output string) (Record, error) {
	t, err := readTable(r, units.ParseSignal)
	if err != nil {
		return Record{}, err
	}
	var columns [3]int
	for k, name := range []string{"time", input, output} {
		if columns[k], err = t.find(name); err != nil {
			return Record{}, err
		}
	}
	toSeconds, err := t.columns[columns[0]].Unit.ConversionTo(units.MustParse("s"))
	if err != nil {
		return Record{}, &RowError{Row: 1, Column: "time", Found: t.columns[columns[0]].Unit.String(), Want: "a unit of time", Err: err}
	}
	scale, _ := toSeconds.Float64()
	var values [3][]float64
	var lines []int
	missing, first := 0, 0
	for i, row := range t.rows {
		if v := row[columns[0]] + row[columns[1]] + row[columns[2]]; math.IsNaN(v) {
			if missing++; missing == 1 {
				first = t.lines[i]
			}
			continue
		}
		for k, c := range columns {
			v := row[c]
			if k == 0 {
				v *= scale
			}
			values[k] = append(values[k], v)
		}
		lines = append(lines, t.lines[i])
	}
	record, err := NewRecord(t.columns[columns[1]], t.columns[columns[2]], values[0], values[1], values[2])
	if row, ok := err.(*RowError); ok {
		row.Row, row.Column = lines[row.Row-1], "time"
	}
	if missing > 0 {
		record.notes = append(record.notes, fmt.Sprintf("%s left out because a value is missing, the first at row %d", count(missing, "row is", "rows are"), first))
	}
	if err == nil {
		record.lines = lines
	}
	return record, err
}

func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
