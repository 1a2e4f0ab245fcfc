package cohort

import (
	"slices"

	"kindwell/twin"
)

// Inputs says where the tables of a study are and what their columns mean.
type Inputs struct {
	// Folder is where relative file names count from.
	Folder string
	// MissingCodes are further cells that stand for a missing value, in every
	// table and column, beside the empty one, NA, n/a and NaN.
	MissingCodes []string
	// People is the people table.
	People PeopleInput
	// Measures are the tables of measures, nil when there are none.
	Measures *MeasuresInput
	// Traits are further tables with one row a person.
	Traits []TableInput
	// Use names the columns of people and of the trait tables that the study
	// needs as variables; others are not looked at, apart from sex and age. Nil
	// means all. The roles family, mother, father, twin_set, mz_set and
	// reared_in become variables (categories) only when they are named here.
	Use []string
	// Numeric names those of them that have to hold numbers in every cell.
	Numeric []string
	// Categories names those of them that are categories even if their cells
	// look like numbers.
	Categories []string
}

// PeopleInput says where the people table is.
type PeopleInput struct {
	File string
	// Columns gives the file's name of a column where it differs from ours:
	// person, family, mother, father, twin_set, zygosity, mz_set, reared_in,
	// birth_order, sex, age. An entry without a name is as good as none.
	Columns map[string]string
	// Session is the column that tells apart several rows of a person, empty
	// when there is one row a person.
	Session string
	// Rules decide what the ids leave open.
	Rules twin.Rules
}

// MeasuresInput says where the measures are.
type MeasuresInput struct {
	// Files are the tables, joined by person and session.
	Files []string
	// Person is the column of ids: by default person, or else what the people
	// table calls it.
	Person string
	// Session is the column that tells apart several rows of a person, empty
	// when there is one row a person.
	Session string
	// Use are patterns (see Match) of the columns that are measures; nil means
	// all. Other columns are not looked at.
	Use []string
}

// TableInput says where a table with one row a person (or person and session)
// is.
type TableInput struct {
	File string
	// Person and Session are as in MeasuresInput.
	Person, Session string
}

// Cohort is the tables of a study, checked and joined. People are indices
// 0..len(People)-1 in the order in which the people table first names them.
type Cohort struct {
	// People are the ids.
	People []string
	// Lines are the lines of the people table, each person's first row.
	Lines []int
	// FamilyLabel names each person's connected family: the first family label
	// of its people in the order of the table, or, in a family without any, the
	// id of its first person. Two families never share a name.
	FamilyLabel []string
	// Records are the people as the pedigree read them.
	Records []twin.Person
	// Pedigree holds who is related to whom.
	Pedigree *twin.Pedigree
	// Variables are the columns of people and of the trait tables by name.
	Variables map[string]*Variable
	// Names are the keys of Variables, in the order of tables and columns.
	Names []string
	// Available are the names of all columns that could be variables, whether
	// Inputs.Use named them or not.
	Available []string
	// Measures is nil when the study has none.
	Measures *Measures
	// Findings are what the tables gave rise to.
	Findings

	index  map[string]int
	inputs Inputs
}

// Findings are what else comes of reading tables, in their order.
type Findings struct {
	Warnings   []Warning
	Exclusions []Exclusion
	InputFiles []InputFile
}

// Index finds a person by id.
func (c *Cohort) Index(id string) (int, bool) {
	i, ok := c.index[id]
	return i, ok
}

// Load reads and checks all tables. The error is *Faults with everything that is
// wrong in any of them; the same tables give the same cohort and the same
// messages, in the same order.
func Load(in Inputs) (*Cohort, error) {
	l := &loader{
		in: in, missing: newMissingCells(in.MissingCodes),
		cohort: &Cohort{Variables: make(map[string]*Variable), inputs: in},
		place:  make(map[string]string),
	}
	l.use, l.numeric, l.category = nameSet(in.Use), nameSet(in.Numeric), nameSet(in.Categories)
	l.loadPeople()
	if in.Measures != nil {
		l.cohort.Measures = l.loadMeasures(*in.Measures)
	}
	for _, table := range in.Traits {
		l.loadTraits(table)
	}
	if err := l.faults.err(); err != nil {
		return nil, err
	}
	return l.cohort, nil
}

// ReadMeasures reads further tables of measures of the people of the cohort, as
// when states were learnt anew in every fold. What they give rise to is returned,
// not added to the cohort's. The error is *Faults.
func (c *Cohort) ReadMeasures(in MeasuresInput) (*Measures, Findings, error) {
	l := &loader{
		in: c.inputs, missing: newMissingCells(c.inputs.MissingCodes),
		cohort: &Cohort{People: c.People, index: c.index}, place: make(map[string]string),
	}
	m := l.loadMeasures(in)
	if err := l.faults.err(); err != nil {
		return nil, Findings{}, err
	}
	return m, l.cohort.Findings, nil
}

// loader is the state of one Load.
type loader struct {
	in                     Inputs
	missing                missingCells
	use, numeric, category map[string]bool
	faults                 collector
	cohort                 *Cohort
	place                  map[string]string // table of each variable and measure
}

func nameSet(names []string) map[string]bool {
	if names == nil {
		return nil
	}
	set := make(map[string]bool, len(names))
	for _, n := range names {
		set[n] = true
	}
	return set
}

// wanted tells whether a column is to become a variable.
func (l *loader) wanted(name string) bool { return l.in.Use == nil || l.use[name] }

// variableRole is the role of a column that becomes a variable.
func (l *loader) variableRole(name string) Role {
	switch {
	case l.numeric[name]:
		return Number
	case l.category[name]:
		return Category
	}
	return Auto
}

// read reads one table of the study and enters it among the input files.
func (l *loader) read(file string, faults *collector, typing typing) *Table {
	typing.missing = l.missing
	table, input := readTable(l.in.Folder, file, faults, typing)
	if input.SHA256 != "" {
		l.cohort.InputFiles = append(l.cohort.InputFiles, input)
	}
	return table
}

func (l *loader) warn(analysis, about, message string) {
	l.cohort.Warnings = append(l.cohort.Warnings, Warning{Analysis: analysis, About: about, Message: message})
}

// personColumn finds the column of ids of a table other than people; it is
// empty when there is none, which is then a fault.
func (l *loader) personColumn(g *grid, given, key string, faults *collector) string {
	const ours = "person"
	theirs := l.in.People.Columns[ours]
	switch {
	case given != "" && !slices.Contains(g.names, given):
		l.require(g, given, key+".columns", faults)
		return ""
	case given != "":
		return given
	case slices.Contains(g.names, ours):
		return ours
	case theirs != "" && slices.Contains(g.names, theirs):
		return theirs
	}
	faults.add(g.noColumn(ours, "name it, or map it ("+key+": {columns: {person: NAME}})"))
	return ""
}

// require is a fault when a column that the study names is not there.
func (l *loader) require(g *grid, name, key string, faults *collector) {
	if name != "" && !slices.Contains(g.names, name) {
		faults.add(g.noColumn(name, "the study names it under "+key))
	}
}

// noColumn is the fault of a missing column.
func (g *grid) noColumn(name, hint string) *Fault {
	return &Fault{File: g.file, Row: g.header, Message: "there is no column " + quote(name) + "; " + orNearest(name, g.names) + "; " + hint}
}
