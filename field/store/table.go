package store

import (
	"encoding/csv"
	"fmt"
	"io"
	"os"
	"strconv"
	"strings"
)

// A Table is rows of numbers under a header: every row has one number a column.
type Table struct {
	Header []string
	Rows   [][]float64
}

func (t Table) check() error {
	if len(t.Header) == 0 {
		return fmt.Errorf("table without columns")
	}
	seen := map[string]bool{}
	for c, name := range t.Header {
		switch {
		case name == "" || strings.ContainsAny(name, "\r\n"):
			return fmt.Errorf("column %d is named %q; want a name on one line", c+1, name)
		case seen[name]:
			return fmt.Errorf("two columns are named %q", name)
		}
		seen[name] = true
	}
	for r, row := range t.Rows {
		if len(row) != len(t.Header) {
			return fmt.Errorf("row %d has %d numbers for %d columns", r, len(row), len(t.Header))
		}
	}
	return nil
}

// Column returns the numbers under the given name, top to bottom, and whether
// there is such a column.
func (t Table) Column(name string) (values []float64, ok bool) {
	for c, head := range t.Header {
		if head != name {
			continue
		}
		for _, row := range t.Rows {
			values = append(values, row[c])
		}
		return values, true
	}
	return nil, false
}

// WriteTable writes a table to a CSV file: the header, then the rows, each number
// with the fewest digits that give the same float64 back. Names of columns must be
// different and not empty.
func WriteTable(path string, t Table) error {
	return Replace(path, func(w io.Writer) error { return encodeTable(w, t) })
}

// ReadTable reads a CSV file of a header and rows of numbers. A cell that is not
// a number is an error that names the line and the column.
func ReadTable(path string) (Table, error) {
	f, err := os.Open(path)
	if err != nil {
		return Table{}, fmt.Errorf("store: %w", err)
	}
	defer f.Close()
	t, err := decodeTable(f)
	if err != nil {
		return Table{}, fmt.Errorf("store: %s: %w", path, err)
	}
	return t, nil
}

// EncodeTable writes a table to w as CSV.
func EncodeTable(w io.Writer, t Table) error {
	if err := encodeTable(w, t); err != nil {
		return fmt.Errorf("store: %w", err)
	}
	return nil
}

func encodeTable(w io.Writer, t Table) error {
	if err := t.check(); err != nil {
		return err
	}
	c := csv.NewWriter(w)
	c.Write(t.Header) // an error is kept for c.Error
	cells := make([]string, len(t.Header))
	for _, row := range t.Rows {
		for i, x := range row {
			cells[i] = strconv.FormatFloat(x, 'g', -1, 64)
		}
		c.Write(cells)
	}
	c.Flush()
	return c.Error()
}

// DecodeTable reads a table from r as CSV.
func DecodeTable(r io.Reader) (Table, error) {
	t, err := decodeTable(r)
	if err != nil {
		return Table{}, fmt.Errorf("store: %w", err)
	}
	return t, nil
}

func decodeTable(r io.Reader) (Table, error) {
	c := csv.NewReader(r)
	c.ReuseRecord = true
	var t Table
	for {
		cells, err := c.Read()
		switch {
		case err == io.EOF && t.Header == nil:
			return Table{}, fmt.Errorf("empty file; want a header and rows of numbers")
		case err == io.EOF:
			return t, nil
		case err != nil:
			return Table{}, err // names line and column
		}
		if t.Header == nil {
			t.Header = append(t.Header, cells...)
			if err := t.check(); err != nil {
				return Table{}, fmt.Errorf("line 1: %w", err)
			}
			continue
		}
		row := make([]float64, len(cells))
		for i, cell := range cells {
			row[i], err = strconv.ParseFloat(cell, 64)
			if err != nil {
				line, _ := c.FieldPos(i)
				return Table{}, fmt.Errorf("line %d, column %d (%s): %q; want a number that fits in a float64", line, i+1, t.Header[i], cell)
			}
		}
		t.Rows = append(t.Rows, row)
	}
}
