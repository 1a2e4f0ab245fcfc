package tidy

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// Read reads a table that [Write] wrote. The header must be the declared one,
// column for column; a cell that its column cannot hold is a *[CellError]. A
// CR LF inside a quoted cell is read as LF. It panics when T is not the row
// of a table.
func Read[T any](r io.Reader) ([]T, error) {
	t := TableOf[T]()
	source := csv.NewReader(r)
	source.ReuseRecord = true
	source.FieldsPerRecord = len(t.Columns)
	header, err := source.Read()
	if errors.Is(err, io.EOF) {
		return nil, fmt.Errorf("table %s: the file is empty", t.Name)
	}
	if err != nil && !errors.Is(err, csv.ErrFieldCount) {
		return nil, fmt.Errorf("table %s: %w", t.Name, err)
	}
	if err := t.checkHeader(header); err != nil {
		return nil, err
	}
	var rows []T
	for {
		record, err := source.Read()
		if errors.Is(err, io.EOF) {
			return rows, nil
		}
		if err != nil {
			return nil, fmt.Errorf("table %s: %w", t.Name, err)
		}
		var row T
		v := reflect.ValueOf(&row).Elem()
		for i, cell := range record {
			c := &t.Columns[i]
			field := v.FieldByIndex(c.index)
			message := setField(field, c, cell)
			if message == "" {
				message = c.check(field, []byte(cell))
			}
			if message != "" {
				return nil, &CellError{Table: t.Name, Row: len(rows) + firstRow, Column: c.Name, Message: message}
			}
		}
		rows = append(rows, row)
	}
}

// checkHeader compares a header with the declared columns and names the first
// difference.
func (t *Table) checkHeader(header []string) error {
	for i, c := range t.Columns {
		if i >= len(header) {
			return fmt.Errorf("table %s: column %q is missing", t.Name, c.Name)
		}
		if header[i] != c.Name {
			return fmt.Errorf("table %s: column %d is %q, want %q", t.Name, i+1, header[i], c.Name)
		}
	}
	if extra := header[len(t.Columns):]; len(extra) > 0 {
		return fmt.Errorf("table %s: column %q is not part of the table", t.Name, extra[0])
	}
	return nil
}

// setField sets a field from the text of its cell and returns what is wrong
// with the text, or "".
func setField(field reflect.Value, c *Column, cell string) string {
	switch c.Kind {
	case Integer, MaybeInteger:
		if cell == "" && c.Kind == MaybeInteger {
			return ""
		}
		n, err := strconv.Atoi(cell)
		if err != nil {
			return fmt.Sprintf("%q is not a whole number", cell)
		}
		if c.Kind == MaybeInteger {
			field.Set(reflect.ValueOf(Int(n)))
		} else {
			field.SetInt(int64(n))
		}
	case Number:
		x, ok := parseNumber(cell)
		if !ok {
			return fmt.Sprintf("%q is not a number", cell)
		}
		field.SetFloat(x)
	case Boolean:
		if !slices.Contains([]string{"true", "false"}, cell) {
			return fmt.Sprintf("%q is neither true nor false", cell)
		}
		field.SetBool(cell == "true")
	default:
		field.SetString(strings.Clone(cell))
	}
	return ""
}

// parseNumber reads what appendNumber writes.
func parseNumber(cell string) (float64, bool) {
	switch cell {
	case "":
		return math.NaN(), true
	case "INF":
		return math.Inf(1), true
	case "-INF":
		return math.Inf(-1), true
	}
	if !isDecimal(cell) {
		return 0, false
	}
	x, err := strconv.ParseFloat(cell, 64)
	return x, err == nil
}
