package tidy

import (
	"fmt"
	"io"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// chunk is the size at which written rows are handed on.
const chunk = 1 << 16

// Write writes the table of rows as CSV: the header, then one line a row.
// Rows are not changed. A *[CellError] tells of a cell that the declaration
// does not allow: a category it does not list, a missing key, a value in an
// unfilled column, text that is not UTF-8; what was written before it has
// already gone to w. It panics when T is not the row of a table.
func Write[T any](w io.Writer, rows []T) error {
	t := TableOf[T]()
	line := make([]byte, 0, chunk+chunk/8)
	for c := range t.Columns {
		line = append(appendText(line, t.Columns[c].Name), ',')
	}
	line[len(line)-1] = '\n'
	for i := range rows {
		v := rowValue(rows, i)
		for c := range t.Columns {
			column := &t.Columns[c]
			start := len(line)
			field := v.FieldByIndex(column.index)
			line = appendCell(line, column, field)
			if message := column.check(field, line[start:]); message != "" {
				return &CellError{Table: t.Name, Row: i + firstRow, Column: column.Name, Message: message}
			}
			line = append(line, ',')
		}
		line[len(line)-1] = '\n'
		if len(line) >= chunk {
			if _, err := w.Write(line); err != nil {
				return err
			}
			line = line[:0]
		}
	}
	_, err := w.Write(line)
	return err
}

// rowValue gives access to the fields of row i without copying it.
func rowValue[T any](rows []T, i int) reflect.Value {
	return reflect.ValueOf(&rows[i]).Elem()
}

// appendCell appends a field as the text of its cell, quoted where needed.
func appendCell(dst []byte, c *Column, field reflect.Value) []byte {
	switch c.Kind {
	case Integer:
		return strconv.AppendInt(dst, field.Int(), 10)
	case MaybeInteger:
		if n := field.Interface().(OptionalInt); n.Known {
			return strconv.AppendInt(dst, int64(n.Value), 10)
		}
		return dst
	case Number:
		return appendNumber(dst, field.Float())
	case Boolean:
		return strconv.AppendBool(dst, field.Bool())
	default:
		return appendText(dst, field.String())
	}
}

// check returns what is wrong with a field whose cell has been made, or "".
func (c *Column) check(field reflect.Value, cell []byte) string {
	if c.Unfilled && len(cell) > 0 {
		return fmt.Sprintf("the column is declared as not computed in this version, but holds %s", cell)
	}
	if c.Kind != Text {
		return ""
	}
	text := field.String()
	switch {
	case text == "" && c.Key:
		return "part of the key is missing"
	case text != "" && c.Enum != nil && !slices.Contains(c.Enum, text):
		return fmt.Sprintf("%q is none of %s", text, strings.Join(c.Enum, ", "))
	case !utf8.ValidString(text):
		return fmt.Sprintf("%q is not UTF-8", text)
	}
	return ""
}

// appendText appends a text cell, with quotes exactly where encoding/csv puts
// them: around commas, quotes and line ends, before leading space, and around
// the two characters \. that some databases read as the end of the data.
func appendText(dst []byte, s string) []byte {
	first, _ := utf8.DecodeRuneInString(s)
	if s == "" || s != `\.` && !strings.ContainsAny(s, ",\"\r\n") && !unicode.IsSpace(first) {
		return append(dst, s...)
	}
	dst = append(dst, '"')
	for i := range len(s) {
		if s[i] == '"' {
			dst = append(dst, '"')
		}
		dst = append(dst, s[i])
	}
	return append(dst, '"')
}
