package tidy

import "fmt"

// CellError is an error about one cell of a result table.
type CellError struct {
	Table   string // name of the table
	Row     int    // row of the file; the header is row 1
	Column  string // name of the column
	Message string // what is wrong, with the value
}

// Error returns the address and the message in one line.
func (e *CellError) Error() string {
	return fmt.Sprintf("table %s, row %d, column %q: %s", e.Table, e.Row, e.Column, e.Message)
}

// firstRow is the row of the file that holds the first observation.
const firstRow = 2

// FormulaCell is the address of a cell that a spreadsheet program would run
// as a formula.
type FormulaCell struct {
	Table  string
	Column string
	Row    int // row of the file, as a spreadsheet numbers it: the header is row 1
}

// FormulaCells returns the addresses of the text cells of rows that begin
// with =, +, -, @, a tab or a carriage return and are no plain decimal
// number, row by row. The cells themselves are never changed. It panics when
// T is not the row of a table.
func FormulaCells[T any](rows []T) []FormulaCell {
	t := TableOf[T]()
	var found []FormulaCell
	for i := range rows {
		v := rowValue(rows, i)
		for c := range t.Columns {
			if t.Columns[c].Kind != Text {
				continue
			}
			if isFormula(v.FieldByIndex(t.Columns[c].index).String()) {
				found = append(found, FormulaCell{Table: t.Name, Column: t.Columns[c].Name, Row: i + firstRow})
			}
		}
	}
	return found
}

func isFormula(cell string) bool {
	if cell == "" {
		return false
	}
	switch cell[0] {
	case '=', '@', '\t', '\r':
		return true
	case '+', '-':
		return !isDecimal(cell)
	}
	return false
}

// isDecimal reports whether s is a plain decimal number: a sign or none,
// digits with at most one point, an exponent or none. Words such as inf, hex
// digits and underscores are not.
func isDecimal(s string) bool {
	if s != "" && (s[0] == '+' || s[0] == '-') {
		s = s[1:]
	}
	whole, s := digits(s)
	fraction := 0
	if s != "" && s[0] == '.' {
		fraction, s = digits(s[1:])
	}
	if whole+fraction == 0 {
		return false
	}
	if s != "" && (s[0] == 'e' || s[0] == 'E') {
		if s = s[1:]; s != "" && (s[0] == '+' || s[0] == '-') {
			s = s[1:]
		}
		var exponent int
		if exponent, s = digits(s); exponent == 0 {
			return false
		}
	}
	return s == ""
}

// digits counts the leading digits of s and returns what follows them.
func digits(s string) (count int, rest string) {
	for count < len(s) && '0' <= s[count] && s[count] <= '9' {
		count++
	}
	return count, s[count:]
}
