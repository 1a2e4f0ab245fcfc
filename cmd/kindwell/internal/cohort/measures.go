package cohort

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"kindwell/internal/names"
)

// Measures are the tables of measures as they stand in the files: nothing is
// transformed, averaged or filled.
type Measures struct {
	// Names are the measures, in the order of files and columns.
	Names []string
	// Rows are the persons and sessions, by person in the order of the cohort
	// and then by session.
	Rows []MeasureRow
	// Values has a row for every one of Rows and a column for every measure; NaN
	// is missing.
	Values *mat.Dense

	tables []*Table
	table  []int // by measure: place in tables
	column []string
}

// MeasureRow is a person in a session.
type MeasureRow struct {
	// Person is the index in the cohort.
	Person int
	// Session is the label, empty in tables without sessions.
	Session string
	// Lines are the lines of the files, one a file, 0 where a file has no such
	// row.
	Lines []int

	rows []int // rows of the tables, -1 where there is none
}

// Fault is a fault with the address of a cell of Values.
func (m *Measures) Fault(row, measure int, format string, args ...any) *Fault {
	k := m.table[measure]
	value := m.Values.At(row, measure)
	text := ""
	if !math.IsNaN(value) {
		text = formatNumber(value)
	}
	if at := m.Rows[row].rows[k]; at >= 0 {
		return m.tables[k].Fault(at, m.column[measure], text, format, args...)
	}
	return m.tables[k].headerFault(m.column[measure], format, args...)
}

// loadMeasures reads and joins the tables of measures; nil after faults.
func (l *loader) loadMeasures(in MeasuresInput) *Measures {
	m := &Measures{}
	var all []*joinedTable
	for _, file := range in.Files {
		var faults collector
		if t := l.loadMeasureTable(in, file, &faults); t != nil {
			all = append(all, t)
		}
		l.faults.take(&faults)
	}
	if len(all) < len(in.Files) || len(in.Files) == 0 {
		return nil
	}
	for k, t := range all {
		m.tables = append(m.tables, t.Table)
		for _, name := range t.Names() {
			if t.Has(name) && t.Numeric(name) {
				m.Names = append(m.Names, name)
				m.column = append(m.column, name)
				m.table = append(m.table, k)
			}
		}
	}
	if len(m.Names) == 0 {
		l.faults.add(all[0].headerFault("", "has no column that is a measure (%s); its columns are %s", patternList(in.Use), quoteList(all[0].Names(), 8)))
		return nil
	}
	m.Rows = joinRows(all)
	m.Values = mat.NewDense(len(m.Rows), len(m.Names), nil)
	for j, name := range m.column {
		k := m.table[j]
		column := all[k].Numbers(name)
		for i, row := range m.Rows {
			value := math.NaN()
			if at := row.rows[k]; at >= 0 {
				value = column[at]
			}
			m.Values.Set(i, j, value)
		}
	}
	return m
}

func patternList(patterns []string) string {
	if patterns == nil {
		return "any but that of ids"
	}
	return "patterns: " + quoteList(patterns, 8)
}

// joinedTable is a table of measures with the people of its rows.
type joinedTable struct {
	*Table
	rows  *personRows
	place []int // in the cohort, by person of the table, -1 for strangers
}

func (l *loader) loadMeasureTable(in MeasuresInput, file string, faults *collector) *joinedTable {
	var person string
	measure := func(name string) bool {
		return name != person && name != in.Session && !isIDRole(name) && (in.Use == nil || matches(in.Use, name))
	}
	t := l.read(file, faults, typing{
		check: func(g *grid, faults *collector) bool {
			person = l.personColumn(g, in.Person, "measures", faults)
			l.require(g, in.Session, "measures.session", faults)
			l.refuseRepeatedNames(g, faults, measure)
			return person != ""
		},
		role: func(name string) Role {
			switch {
			case name == person, name == in.Session:
				return ID
			case measure(name):
				return Number
			}
			return Skip
		},
		numberHint: " (if it is no measure, narrow the patterns of measures.sets)",
	})
	if t == nil {
		return nil
	}
	rows := groupRows(t, person, in.Session, "measures: {session: NAME}", faults)
	place, ok := l.matchPeople(t, "measures", person, rows, faults)
	if !ok {
		return nil
	}
	return &joinedTable{Table: t, rows: rows, place: place}
}

func matches(patterns []string, name string) bool {
	return slices.ContainsFunc(patterns, func(p string) bool { return names.Match(p, name) })
}

// joinRows joins tables by person and session. Sessions of a person come in the
// order of the first table, those that only later tables have after them.
func joinRows(tables []*joinedTable) []MeasureRow {
	type key struct {
		person  int
		session string
	}
	index := make(map[key]int)
	var rows []MeasureRow
	for k, t := range tables {
		for p, person := range t.place {
			if person < 0 {
				continue
			}
			for _, row := range t.rows.of(p) {
				session := ""
				if t.rows.label != nil {
					session = t.rows.label[row]
				}
				at, seen := index[key{person, session}]
				if !seen {
					at = len(rows)
					index[key{person, session}] = at
					lines := make([]int, 2*len(tables))
					joined := MeasureRow{Person: person, Session: session, Lines: lines[:len(tables):len(tables)], rows: lines[len(tables):]}
					for q := range joined.rows {
						joined.rows[q] = -1
					}
					rows = append(rows, joined)
				}
				rows[at].Lines[k], rows[at].rows[k] = t.Line(row), row
			}
		}
	}
	slices.SortStableFunc(rows, func(a, b MeasureRow) int { return a.Person - b.Person })
	return rows
}
