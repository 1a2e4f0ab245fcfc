package cohort

import (
	"fmt"
	"math"

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
	numeric map[string]bool
	frame   dataframe.DataFrame
	lines   []int
	inner   map[int][]int
	column  map[string]int // place in the file
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
	g := readGrid(s, &faults)
	if err := faults.err(); err != nil {
		return nil, err
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
func (t *Table) Has(name string) bool { _, ok := t.numeric[name]; return ok }

// Numeric tells whether a column holds numbers.
func (t *Table) Numeric(name string) bool { return t.numeric[name] }

// Line is the line of the file on which a row starts, from 1.
func (t *Table) Line(row int) int { return t.lines[row] }

// Frame is the data frame behind the table: float and text series, missing
// where the cell is. Its own ways of printing and writing round numbers.
func (t *Table) Frame() dataframe.DataFrame { return t.frame }

// Numbers is a column of numbers, NaN where the cell is missing. It panics when
// the column is not one.
func (t *Table) Numbers(name string) []float64 {
	if numeric, ok := t.numeric[name]; !ok || !numeric {
		panic(fmt.Sprintf("cohort: %q is no column of numbers", name))
	}
	return t.frame.Col(name).Float()
}

// Text is a column of ids or categories, "" where the cell is missing. It
// panics when the column is not one.
func (t *Table) Text(name string) []string {
	if numeric, ok := t.numeric[name]; !ok || numeric {
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
	// topCoded names the column in which 89+ counts as 89, with a warning.
	topCoded string
	// warn takes the warnings; nil when there can be none.
	warn func(about, message string)
	// check, if any, looks at the names before any cell is read as a number.
	check func(file string, header int, names []string, faults *collector)
}

// readTable reads and types a table; it is nil when faults came of it.
func readTable(folder, file string, faults *collector, typing typing) (*Table, InputFile) {
	s, fault := openSource(folder, file)
	if fault != nil {
		faults.add(fault)
		return nil, InputFile{}
	}
	g := readGrid(s, faults)
	if g == nil || g.names == nil {
		return nil, s.input
	}
	if typing.check != nil {
		typing.check(g.file, g.header, g.names, faults)
	}
	t := g.table(typing, faults)
	if !faults.empty() {
		return nil, s.input
	}
	return t, s.input
}

// table gives the columns their types. The text of the cells is let go column
// by column, so that only one of the two forms is held.
func (g *grid) table(typing typing, faults *collector) *Table {
	t := &Table{
		file: g.file, header: g.header, names: g.names, lines: g.lines, inner: g.inner,
		numeric: make(map[string]bool, len(g.names)),
		column:  make(map[string]int, len(g.names)),
	}
	var columns []series.Series
	for j, name := range g.names {
		t.column[name] = j
		role := typing.role(name)
		if role == Skip {
			continue
		}
		var column series.Series
		switch role {
		case ID:
			column = series.New(g.ids(j, typing.missing, faults), series.String, name)
		case Category:
			column = series.New(g.categories(j, typing.missing), series.String, name)
		default:
			numbers := g.numbers(j, typing)
			if role == Auto && !numbers.enough() {
				column = series.New(g.categories(j, typing.missing), series.String, name)
				break
			}
			numbers.report(g, j, role, typing, faults)
			column = series.New(numbers.values, series.Float, name)
		}
		t.numeric[name] = column.Type() == series.Float
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

func (g *grid) ids(j int, missing missingCells, faults *collector) []string {
	text := make([]string, g.rows())
	for i := range text {
		cell := g.cell(i, j)
		bare := trimmed(cell)
		switch {
		case missing.text(bare) && (bare == cell || bare == ""):
			text[i] = missingText
		case bare != cell:
			faults.add(&Fault{File: g.file, Row: g.line(i, j), Column: g.names[j], Value: cell,
				Message: "an id with blanks or invisible characters at its ends; ids are matched to the letter, so take them off"})
			text[i] = bare
		default:
			text[i] = cell
		}
	}
	return text
}

func (g *grid) categories(j int, missing missingCells) []string {
	text := make([]string, g.rows())
	for i := range text {
		cell := trimmed(g.cell(i, j))
		if missing.text(cell) {
			cell = missingText
		}
		text[i] = cell
	}
	return text
}

// numberColumn is a column read as numbers: the values and the rows of the
// cells that are neither numbers nor missing.
type numberColumn struct {
	values []float64
	bad    []int
	top    []int // rows of cells like 89+
	filled int   // cells that are not missing
}

func (g *grid) numbers(j int, typing typing) numberColumn {
	c := numberColumn{values: make([]float64, g.rows())}
	topColumn := typing.topCoded != "" && g.names[j] == typing.topCoded
	for i := range c.values {
		cell := trimmed(g.cell(i, j))
		if typing.missing.text(cell) {
			c.values[i] = math.NaN()
			continue
		}
		v, why := parseNumber(cell)
		if why != "" && topColumn {
			if top, ok := topCoded(cell); ok {
				v, why = top, ""
				c.top = append(c.top, i)
			}
		}
		switch {
		case why != "":
			c.bad = append(c.bad, i)
			v = math.NaN()
		case typing.missing.number(v):
			c.values[i] = math.NaN()
			continue
		}
		c.filled++
		c.values[i] = v
	}
	return c
}

// enough tells whether an Auto column holds numbers.
func (c numberColumn) enough() bool {
	return float64(c.filled-len(c.bad)) >= autoShare*float64(c.filled)
}

// report turns the bad cells into faults: one by one, or in one when the column
// seems to hold no numbers at all.
func (c numberColumn) report(g *grid, j int, role Role, typing typing, faults *collector) {
	address := func(i int, message string) *Fault {
		return &Fault{File: g.file, Row: g.line(i, j), Column: g.names[j], Value: g.cell(i, j), Message: message}
	}
	if n := len(c.bad); n > 1 && 2*n > c.filled {
		_, why := parseNumber(trimmed(g.cell(c.bad[0], j)))
		faults.add(address(c.bad[0], fmt.Sprintf("%s; so with %d of the %d cells of this column, which has to hold numbers", why, n, c.filled)))
		return
	}
	for _, i := range c.bad {
		_, why := parseNumber(trimmed(g.cell(i, j)))
		if role == Auto {
			why += fmt.Sprintf("; %d of the %d cells of this column are numbers (if they are codes of categories, begin each with a letter)", c.filled-len(c.bad), c.filled)
		}
		faults.add(address(i, why))
	}
	if len(c.top) > 0 && typing.warn != nil {
		typing.warn(g.names[j], fmt.Sprintf("%s: %s like %s (%s): taken as the number before the plus",
			g.file, plural(len(c.top), "cell", "cells"), trimmed(g.cell(c.top[0], j)), rowList(g, c.top)))
	}
}

// rowList names the first lines of some rows.
func rowList(g *grid, rows []int) string {
	lines := make([]int, 0, len(rows))
	for _, i := range rows {
		lines = append(lines, g.lines[i])
	}
	return lineList(lines)
}

// lineList prints up to ten lines: row 3; rows 3, 9 and 12; rows 1, 2 ... and 5 more.
func lineList(lines []int) string {
	const limit = 10
	if len(lines) == 1 {
		return fmt.Sprintf("row %d", lines[0])
	}
	list := "rows "
	for k, line := range lines[:min(len(lines), limit)] {
		switch {
		case k == 0:
		case k == len(lines)-1:
			list += " and "
		default:
			list += ", "
		}
		list += fmt.Sprint(line)
	}
	if more := len(lines) - limit; more > 0 {
		list += fmt.Sprintf(" and %d more", more)
	}
	return list
}
