package handoff

import (
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"strconv"
)

// NotFinite is a number that a table cannot hold: an infinity anywhere, or a
// missing value where the column must have one.
type NotFinite struct {
	Table  string
	Row    int // data row, from 1
	Column string
	Value  float64
}

func (e *NotFinite) Error() string {
	return fmt.Sprintf("%s: row %d, %s is %v", e.Table, e.Row, e.Column, e.Value)
}

// Incomplete is an entry without the text that names it.
type Incomplete struct {
	Table  string
	Row    int // data row, from 1
	Column string
}

func (e *Incomplete) Error() string {
	return fmt.Sprintf("%s: row %d has no %s", e.Table, e.Row, e.Column)
}

// table collects the rows of one comma-separated file (RFC 4180 quoting, line
// feed at the end of a row, a point as decimal sign).
type table struct {
	name string
	rows [][]string
}

func newTable(name string, columns ...string) *table {
	return &table{name, [][]string{columns}}
}

// number writes a value with the fewest digits that read back as the same
// double. NaN is missing and leaves the field empty.
func number(value float64) string {
	switch {
	case math.IsNaN(value):
		return ""
	case value == 0: // no sign on a zero
		return "0"
	}
	return strconv.FormatFloat(value, 'g', -1, 64)
}

// add appends a row of names followed by values. The values from index
// optional on may be missing.
func (t *table) add(names []string, values []float64, optional int) error {
	row := append([]string(nil), names...)
	for i, value := range values {
		if math.IsInf(value, 0) || math.IsNaN(value) && i < optional {
			return &NotFinite{t.name, len(t.rows), t.rows[0][len(names)+i], value}
		}
		row = append(row, number(value))
	}
	t.rows = append(t.rows, row)
	return nil
}

func (t *table) writeTo(w io.Writer) error {
	return csv.NewWriter(w).WriteAll(t.rows)
}
