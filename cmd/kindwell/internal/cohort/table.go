package cohort

import (
	"bytes"
	"encoding/csv"
	"fmt"

	"github.com/go-gota/gota/dataframe"
	"github.com/go-gota/gota/series"
)

// Role says what the cells of a column are. It comes from what the study does
// with the column, never from a guess at its type, but for Auto.
type Role int

const (
	// Auto columns hold numbers when at least nine in ten of their cells that
	// are not missing do (the others are then faults), and categories
	// otherwise. A column without any cell holds numbers, all missing.
	Auto Role = iota
	// ID cells are text that names something, kept to the letter: "007" stays
	// "007". White space at their ends is refused.
	ID
	// Category cells are text; white space at their ends is taken off.
	Category
	// Number cells are decimal numbers; each other cell is a fault.
	Number
	// Skip columns are not looked at.
	Skip
)

// autoShare is the least share of numbers in an Auto column of numbers.
const autoShare = 0.9

// Table is a checked table: columns of text or numbers with the line of the
// file for every row. Rows are counted from 0.
type Table struct {
	file    string
	header  int
	names   []string
	column  map[string]int // place in the file
	held    map[string]int // place in the frame
	numeric []bool         // by place in the frame
	frame   dataframe.DataFrame
	lines   []int
	inner   map[int][]int
}

// TableOptions says how to read a table.
type TableOptions struct {
	// Roles gives columns their role by name; a name that is not in the table
	// is not an error, ask Has.
	Roles map[string]Role
	// Other is the role of all other columns.
	Other Role
	// MissingCodes are further cells that stand for a missing value, beside the
	// empty one, NA, n/a and NaN.
	MissingCodes []string
}

// ReadTable reads one table, which need not be one of a cohort's: a list of
// sequences, of states, of folds. A relative file name counts from folder. The
// error is *Faults.
func ReadTable(folder, file string, opt TableOptions) (*Table, InputFile, error) {
	var all, faults collector
	table, input := readTable(folder, file, &faults, typing{
		missing: newMissingCells(opt.MissingCodes),
		role: func(name string) Role {
			if role, ok := opt.Roles[name]; ok {
				return role
			}
			return opt.Other
		},
	})
	all.take(&faults)
	return table, input, all.err()
}

// ReadNames reads the names of a table's columns. The error is *Faults.
func ReadNames(folder, file string) ([]string, error) {
	var faults collector
	s, fault := openSource(folder, file)
	if fault != nil {
		faults.add(fault)
		return nil, faults.err()
	}
	r := csv.NewReader(bytes.NewReader(s.text))
	r.Comma = s.comma
	g, _ := readHeader(r, s, &faults)
	if g == nil {
		return nil, faults.err()
	}
	return g.names, nil
}

// File is the table's name as the study gives it.
func (t *Table) File() string { return t.file }

// Len is the number of rows.
func (t *Table) Len() int { return len(t.lines) }

// Names are the names of all columns in the order of the file, skipped ones too.
func (t *Table) Names() []string { return t.names }

// Has tells whether the table has a column that was not skipped.
func (t *Table) Has(name string) bool { _, ok := t.held[name]; return ok }

// Numeric tells whether the table has a column of that name that holds numbers.
func (t *Table) Numeric(name string) bool { at, ok := t.held[name]; return ok && t.numeric[at] }

// Line is the line of the file on which a row starts, from 1.
func (t *Table) Line(row int) int { return t.lines[row] }

// Frame is the data frame behind the table: float and text series, missing
// where the cell is. Its own ways of printing and writing round numbers.
func (t *Table) Frame() dataframe.DataFrame { return t.frame }

// Numbers is a column of numbers, NaN where the cell is missing. It panics when
// the column is not one.
func (t *Table) Numbers(name string) []float64 {
	if !t.Numeric(name) {
		panic(fmt.Sprintf("cohort: %q is no column of numbers", name))
	}
	return t.frame.Col(name).Float()
}

// Text is a column of ids or categories, "" where the cell is missing. It
// panics when the column is not one.
func (t *Table) Text(name string) []string {
	if !t.Has(name) || t.Numeric(name) {
		panic(fmt.Sprintf("cohort: %q is no column of text", name))
	}
	cells := t.frame.Col(name)
	text := make([]string, cells.Len())
	for i := range text {
		if e := cells.Elem(i); !e.IsNA() {
			text[i] = e.String()
		}
	}
	return text
}

// cell is one cell of a column of text, "" where it is missing.
func (t *Table) cell(row int, name string) string {
	if e := t.frame.Elem(row, t.held[name]); !e.IsNA() {
		return e.String()
	}
	return ""
}

// Fault is a fault with the address of a cell; without a column that of a row.
func (t *Table) Fault(row int, column, value, format string, args ...any) *Fault {
	line := t.lines[row]
	if lines, ok := t.inner[row]; ok && column != "" {
		line = lines[t.column[column]]
	}
	return &Fault{File: t.file, Row: line, Column: column, Value: value, Message: fmt.Sprintf(format, args...)}
}

// headerFault is a fault of a whole column, or of the header without one.
func (t *Table) headerFault(column, format string, args ...any) *Fault {
	return &Fault{File: t.file, Row: t.header, Column: column, Message: fmt.Sprintf(format, args...)}
}

// typing says what the columns of a table are to become.
type typing struct {
	missing missingCells
	role    func(name string) Role
	// topCoded, if any, names the column in which 89+ counts as 89, with a
	// warning.
	topCoded func() string
	// numberHint ends the fault of a column that holds no numbers at all.
	numberHint string
	// warn takes the warnings; nil when there can be none.
	warn func(about, message string)
	// check, if any, looks at the names of the columns before the cells; false
	// when these cannot be understood.
	check func(g *grid, faults *collector) bool
}

func (t typing) topCodes(name string) bool { return t.topCoded != nil && t.topCoded() == name }

// readTable reads and types a table; it is nil when faults came of it.
func readTable(folder, file string, faults *collector, typing typing) (*Table, InputFile) {
	s, fault := openSource(folder, file)
	if fault != nil {
		faults.add(fault)
		return nil, InputFile{}
	}
	g := readGrid(s, typing, faults)
	if g == nil {
		return nil, s.input
	}
	t := g.table(typing, faults)
	if !faults.empty() {
		return nil, s.input
	}
	return t, s.input
}

// table gives the columns their types and hands them to a data frame. The cells
// are let go column by column, so that only one of the two forms is held.
func (g *grid) table(typing typing, faults *collector) *Table {
	t := &Table{
		file: g.file, header: g.header, names: g.names, lines: g.lines, inner: g.inner,
		column: make(map[string]int, len(g.names)),
		held:   make(map[string]int, len(g.names)),
	}
	var columns []series.Series
	for j, name := range g.names {
		t.column[name] = j
		c := &g.columns[j]
		if c.role == Auto {
			numbers := newNumberColumn(len(c.text), typing.topCodes(name))
			for _, cell := range c.text {
				numbers.add(cell, typing.missing)
			}
			if numbers.enough() {
				c.numbers = numbers
			}
		}
		var column series.Series
		switch {
		case c.role == Skip:
			continue
		case c.numbers != nil:
			c.numbers.report(g, j, typing, faults)
			column = series.New(c.numbers.values, series.Float, name)
		case c.role == ID:
			column = series.New(g.ids(j, typing.missing, faults), series.String, name)
		default:
			column = series.New(categories(c.text, typing.missing), series.String, name)
		}
		g.columns[j] = gridColumn{}
		t.held[name] = len(columns)
		t.numeric = append(t.numeric, column.Type() == series.Float)
		columns = append(columns, column)
	}
	if len(columns) > 0 {
		t.frame = dataframe.New(columns...)
	}
	return t
}

// missingText is what a missing cell is called inside a text series; no other
// cell can be called so, for NaN is a missing cell.
const missingText = "NaN"

// ids keeps text to the letter.
func (g *grid) ids(j int, missing missingCells, faults *collector) []string {
	text := g.columns[j].text
	for i, cell := range text {
		bare := trimmed(cell)
		switch {
		case bare == "", bare == cell && missing.text(cell):
			text[i] = missingText
		case bare != cell:
			faults.add(&Fault{File: g.file, Row: g.line(i, j), Column: g.names[j], Value: cell,
				Message: "an id with blanks or invisible characters at its ends; ids are matched to the letter, so take them off"})
		}
	}
	return text
}

func categories(text []string, missing missingCells) []string {
	for i, cell := range text {
		cell = trimmed(cell)
		if missing.text(cell) {
			cell = missingText
		}
		text[i] = cell
	}
	return text
}
