package cohort

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"
)

// grid is a table as read: for every column its cells as text or, where the
// column has to hold numbers, as numbers; for every row the line of the file on
// which it starts.
type grid struct {
	file    string
	names   []string
	header  int // line of the header
	columns []gridColumn
	lines   []int
	inner   map[int][]int // lines of the cells of rows that go over several lines
}

// gridColumn has the cells in one of two forms.
type gridColumn struct {
	role    Role
	text    []string
	numbers *numberColumn
}

// line is the line of the file on which a cell starts.
func (g *grid) line(row, column int) int {
	if lines, ok := g.inner[row]; ok {
		return lines[column]
	}
	return g.lines[row]
}

// readGrid splits a table into cells. Rows without any text are skipped, except
// in a table of one column, where an empty line cannot be told from a lost one
// and is refused. It is nil when faults made it stop.
func readGrid(s *source, typing typing, faults *collector) *grid {
	r := csv.NewReader(bytes.NewReader(s.text))
	r.Comma = s.comma
	r.FieldsPerRecord = -1
	r.ReuseRecord = true
	g, end := readHeader(r, s, faults)
	if g == nil {
		return nil
	}
	if typing.check != nil && !typing.check(g, faults) {
		return nil
	}
	width := len(g.names)
	g.prepare(typing, min(bytes.Count(s.text, []byte{'\n'}), len(s.text)/width+1))
	for {
		record, err := r.Read()
		if err == io.EOF {
			break
		}
		if err != nil {
			faults.add(parseFault(s.file, err))
			return nil // what follows a broken quote cannot be trusted
		}
		line, _ := r.FieldPos(0)
		if width == 1 && line > end+1 {
			faults.add(&Fault{File: s.file, Row: end + 1, Message: "an empty line in a table of one column; write NA for a missing cell, or delete the line"})
		}
		last, _ := r.FieldPos(len(record) - 1)
		end = last + strings.Count(record[len(record)-1], "\n")
		if (width > 1 || len(record) > 1) && blank(record) {
			continue
		}
		if len(record) != width {
			faults.add(&Fault{File: s.file, Row: line, Message: raggedMessage(len(record), width, s.comma)})
			continue
		}
		if end != line {
			g.keepInner(r)
		}
		g.lines = append(g.lines, line)
		for j, cell := range record {
			if len(cell) > maxCell && utf8.RuneCountInString(cell) > maxCell {
				faults.add(&Fault{File: s.file, Row: g.line(len(g.lines)-1, j), Column: g.names[j], Message: "a cell of more than 32,767 characters; is a quote opened here and closed much later?"})
				return nil
			}
			switch c := &g.columns[j]; {
			case c.numbers != nil:
				c.numbers.add(cell, typing.missing)
			case c.role != Skip:
				c.text = append(c.text, cell)
			}
		}
	}
	if len(g.lines) == 0 && faults.empty() {
		faults.add(&Fault{File: s.file, Message: "has a header and no rows"})
	}
	return g
}

// prepare makes room for the cells.
func (g *grid) prepare(typing typing, rows int) {
	g.lines = make([]int, 0, rows)
	g.columns = make([]gridColumn, len(g.names))
	for j, name := range g.names {
		c := &g.columns[j]
		c.role = typing.role(name)
		switch c.role {
		case Skip:
		case Number:
			c.numbers = newNumberColumn(rows, typing.topCodes(name))
		default:
			c.text = make([]string, 0, rows)
		}
	}
}

// keepInner notes where the cells of the next row start, when a line break
// inside a cell parts them.
func (g *grid) keepInner(r *csv.Reader) {
	if g.inner == nil {
		g.inner = make(map[int][]int)
	}
	lines := make([]int, len(g.names))
	for j := range lines {
		lines[j], _ = r.FieldPos(j)
	}
	g.inner[len(g.lines)] = lines
}

// readHeader reads and checks the names of the columns and gives the line on
// which the header ends; nil when the rest is not worth reading.
func readHeader(r *csv.Reader, s *source, faults *collector) (*grid, int) {
	record, err := r.Read()
	if err != nil {
		faults.add(parseFault(s.file, err))
		return nil, 0
	}
	g := &grid{file: s.file}
	g.header, _ = r.FieldPos(0)
	end, _ := r.FieldPos(len(record) - 1)
	end += strings.Count(record[len(record)-1], "\n")
	refuse := func(format string, args ...any) {
		faults.add(&Fault{File: s.file, Row: g.header, Message: fmt.Sprintf(format, args...)})
	}
	if len(record) > maxColumns {
		refuse("has %d columns; at most %d can be read", len(record), maxColumns)
		return nil, 0
	}
	if why := wrongDelimiter(record, s.comma); why != "" {
		refuse("%s", why)
		return nil, 0
	}
	if strings.HasPrefix(record[0], "#") && len(record) == 1 {
		refuse("starts with a comment; the first line has to be the header, so delete what comes before it")
		return nil, 0
	}
	g.names = make([]string, len(record))
	first := make(map[string]int, len(record))
	for j, name := range record {
		name = trimmed(name)
		g.names[j] = name
		if name == "" {
			refuse("column %d has no name%s", j+1, lastColumnHint(j, len(record)))
			continue
		}
		if before, seen := first[name]; seen {
			faults.add(&Fault{File: s.file, Row: g.header, Column: name, Message: fmt.Sprintf("is the name of columns %d and %d; rename one of them", before+1, j+1)})
			continue
		}
		first[name] = j
	}
	if !faults.empty() {
		return nil, 0
	}
	return g, end
}

func lastColumnHint(j, width int) string {
	if j > 0 && j == width-1 {
		return "; does the line end in a delimiter?"
	}
	return "; name it, or delete it"
}

// wrongDelimiter says when a header seems to be cut by another character than
// the file's name promises.
func wrongDelimiter(record []string, comma rune) string {
	whole := strings.Join(record, "")
	if strings.HasPrefix(strings.ToLower(record[0]), "sep=") {
		return "is a spreadsheet's sep= line; delete it, so that the header comes first"
	}
	count := func(c string) int { return strings.Count(whole, c) }
	if comma == ',' {
		switch {
		case count("\t") >= len(record):
			return "the columns seem to be separated by tabs; name the file .tsv"
		case count(";") >= len(record):
			return "the columns seem to be separated by semicolons; save the table with commas (and decimal points)"
		}
		return ""
	}
	if len(record) > 1 {
		return ""
	}
	switch {
	case count(",") > 0:
		return "the columns seem to be separated by commas; name the file .csv"
	case count(";") > 0:
		return "the columns seem to be separated by semicolons; save the table with tabs (and decimal points)"
	}
	return ""
}

func raggedMessage(cells, names int, comma rune) string {
	message := plural(cells, "cell", "cells") + " where the header has " + plural(names, "name", "names")
	if cells > names {
		what := "comma"
		if comma == '\t' {
			what = "tab"
		}
		return message + "; put a cell that holds a " + what + " in quotes"
	}
	return message + "; fill the row up with empty cells"
}

// blank tells whether no cell of a row has any text.
func blank(record []string) bool {
	for _, cell := range record {
		if cell != "" && trimmed(cell) != "" {
			return false
		}
	}
	return true
}

// parseFault words what encoding/csv found.
func parseFault(file string, err error) *Fault {
	var p *csv.ParseError
	switch {
	case errors.Is(err, io.EOF):
		return &Fault{File: file, Message: "the file is empty"}
	case !errors.As(err, &p):
		return &Fault{File: file, Message: "cannot be read: " + err.Error()}
	case errors.Is(p.Err, csv.ErrBareQuote):
		return &Fault{File: file, Row: p.Line, Message: "a quote in the middle of a cell; put the whole cell in quotes and write the inner quote twice"}
	case errors.Is(p.Err, csv.ErrQuote):
		return &Fault{File: file, Row: p.StartLine, Message: "a quoted cell of this row is not closed, or text follows its closing quote; write quotes inside a cell twice"}
	}
	return &Fault{File: file, Row: p.Line, Message: p.Err.Error()}
}
