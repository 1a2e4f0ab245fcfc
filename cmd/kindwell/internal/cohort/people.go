package cohort

import (
	"errors"
	"fmt"
	"slices"
	"sort"
	"strings"

	"kindwell/internal/names"
	"kindwell/twin"
)

// The columns of the people table that have a meaning of their own.
const (
	personRole     = "person"
	familyRole     = "family"
	motherRole     = "mother"
	fatherRole     = "father"
	twinSetRole    = "twin_set"
	zygosityRole   = "zygosity"
	mzSetRole      = "mz_set"
	rearedInRole   = "reared_in"
	birthOrderRole = "birth_order"
	sexRole        = "sex"
	ageRole        = "age"
)

// idRoles hold ids: a person has one of each at most.
func idRoles() []string {
	return []string{familyRole, motherRole, fatherRole, twinSetRole, mzSetRole, rearedInRole}
}

func peopleRoles() []string {
	return append(append([]string{personRole}, idRoles()...), zygosityRole, birthOrderRole, sexRole, ageRole)
}

// peopleTable is the people table on its way to a cohort.
type peopleTable struct {
	*Table
	rows   *personRows
	column map[string]string // role -> column of the file, for those that are there
	role   map[string]string // the other way round
	text   map[string][]string
}

// loadPeople reads the people table into the cohort: ids, pedigree, variables.
func (l *loader) loadPeople() {
	var faults collector
	defer func() { l.faults.take(&faults) }()
	p := &peopleTable{column: make(map[string]string), role: make(map[string]string), text: make(map[string][]string)}
	in := l.in.People
	p.Table = l.read(in.File, &faults, typing{
		check:    func(g *grid, faults *collector) bool { return l.checkPeopleColumns(p, g, faults) },
		role:     func(name string) Role { return l.peopleColumnRole(p, name) },
		topCoded: func() string { return p.column[ageRole] },
		warn:     func(about, message string) { l.warn("people", about, message) },
	})
	if p.Table == nil {
		return
	}
	p.rows = groupRows(p.Table, p.column[personRole], in.Session, "people: {session: NAME}", &faults)
	persons := l.readPersons(p, &faults)
	c := l.cohort
	c.People, c.Lines, c.Records = p.rows.ids, p.rows.lines(p.Table), persons
	c.index = make(map[string]int, len(c.People))
	for i, id := range c.People {
		c.index[id] = i
	}
	l.peopleVariables(p, &faults)
	if !faults.empty() {
		return
	}
	pedigree, notes, err := twin.NewPedigree(persons, in.Rules)
	if err != nil {
		p.pedigreeFaults(err, &faults)
		for _, shared := range c.SharedParents() {
			faults.add(&Fault{File: p.file, Row: p.header, Column: p.column[shared.Role], Value: shared.ID, Message: shared.String()})
		}
		return
	}
	c.Pedigree = pedigree
	c.FamilyLabel = make([]string, len(c.People))
	for i := range c.FamilyLabel {
		c.FamilyLabel[i] = pedigree.FamilyLabel(pedigree.Family(i))
	}
	l.warnNoKin(p)
	for _, note := range notes {
		l.warn("people", note.About, p.noteMessage(note, c))
	}
	if age := p.column[ageRole]; age != "" && p.Numeric(age) {
		l.checkAges(p, p.Numbers(age))
	}
}

// checkPeopleColumns settles which column plays which role.
func (l *loader) checkPeopleColumns(p *peopleTable, g *grid, faults *collector) bool {
	in := l.in.People
	named := make([]string, 0, len(in.Columns))
	for role := range in.Columns {
		named = append(named, role)
	}
	sort.Strings(named)
	for _, role := range named {
		if in.Columns[role] != "" && !slices.Contains(peopleRoles(), role) {
			faults.add(&Fault{File: g.file, Row: g.header, Message: fmt.Sprintf("people.columns names %s, which is no column of ours; %s", quote(role), orNearest(role, peopleRoles()))})
		}
	}
	for _, role := range peopleRoles() {
		name := in.Columns[role]
		mapped := name != "" && name != role
		switch {
		case mapped && !slices.Contains(g.names, name):
			faults.add(g.noColumn(name, "the study names it under people.columns, "+role))
			continue
		case mapped && slices.Contains(g.names, role):
			faults.add(&Fault{File: g.file, Row: g.header, Column: role, Message: fmt.Sprintf("is in the table although people.columns takes %s from %s; rename it, or drop the entry", role, quote(name))})
			continue
		case !mapped:
			name = role
		}
		if !slices.Contains(g.names, name) {
			if role == personRole {
				faults.add(g.noColumn(role, "name it, or map it (people: {columns: {person: NAME}})"))
			}
			continue
		}
		if other, taken := p.role[name]; taken {
			faults.add(&Fault{File: g.file, Row: g.header, Column: name, Message: fmt.Sprintf("people.columns uses it for both %s and %s", other, role)})
			continue
		}
		p.column[role], p.role[name] = name, role
	}
	if in.Session != "" {
		l.require(g, in.Session, "people.session", faults)
		if role, taken := p.role[in.Session]; taken {
			faults.add(&Fault{File: g.file, Row: g.header, Column: in.Session, Message: "people.session names it, but it is the column of " + role})
		}
	}
	l.warnNearlyRoles(p, g)
	return faults.empty()
}

// warnNearlyRoles points at columns that seem to be one of ours under another
// spelling; left alone they would be lost without a word.
func (l *loader) warnNearlyRoles(p *peopleTable, g *grid) {
	plain := func(name string) string {
		name = strings.NewReplacer("_", "", "-", "", " ", "", ".", "").Replace(strings.ToLower(name))
		return strings.TrimSuffix(strings.TrimSuffix(name, "id"), "s")
	}
	for _, role := range peopleRoles() {
		if p.column[role] != "" {
			continue
		}
		for _, name := range g.names {
			if p.role[name] != "" || name == l.in.People.Session {
				continue
			}
			if plain(name) == plain(role) || len(role) >= 6 && names.Distance(plain(name), plain(role)) < 2 {
				l.warn("people", role, fmt.Sprintf("%s has no column %s; if %s is meant, map it (people: {columns: {%s: %s}})", g.file, role, quote(name), role, name))
				break
			}
		}
	}
}

// warnNoKin says when the table holds no word about who is related.
func (l *loader) warnNoKin(p *peopleTable) {
	for _, role := range []string{familyRole, motherRole, fatherRole, twinSetRole} {
		if p.column[role] != "" {
			return
		}
	}
	l.warn("people", familyRole, p.file+" has none of the columns family, mother, father and twin_set: everybody counts as a family of their own")
}

// peopleColumnRole is the role of a column by its name in the file.
func (l *loader) peopleColumnRole(p *peopleTable, name string) Role {
	role := p.role[name]
	switch {
	case name == l.in.People.Session, role == personRole, slices.Contains(idRoles(), role):
		return ID
	case role == zygosityRole, role == sexRole:
		return Category
	case role == ageRole && !l.numeric[role] && !l.category[role]:
		return Auto
	case role != "":
		return l.ifWanted(role)
	}
	return l.ifWanted(name)
}

func (l *loader) ifWanted(name string) Role {
	if !l.wanted(name) {
		return Skip
	}
	return l.variableRole(name)
}

// readPersons puts together what the pedigree is read from. Rows of one person
// that contradict each other are faults.
func (l *loader) readPersons(p *peopleTable, faults *collector) []twin.Person {
	take := func(role string, column []string) []string {
		values, conflicts := p.rows.firstText(column)
		for _, c := range conflicts {
			faults.add(p.Fault(c.second, p.column[role], p.cell(c.second, p.column[role]), "row %d of the same person has %s; make the rows of a person agree",
				p.Line(c.first), quote(p.cell(c.first, p.column[role]))))
		}
		p.text[role] = values
		return values
	}
	persons := make([]twin.Person, len(p.rows.ids))
	for i, id := range p.rows.ids {
		persons[i].ID = id
	}
	for _, role := range idRoles() {
		if p.column[role] == "" {
			continue
		}
		values := take(role, p.Text(p.column[role]))
		for i := range persons {
			*field(&persons[i], role) = values[i]
		}
	}
	if name := p.column[zygosityRole]; name != "" {
		column := p.Text(name)
		for row, cell := range column {
			column[row] = strings.ToUpper(cell)
			if z := column[row]; z != "" && z != "MZ" && z != "DZ" {
				faults.add(p.Fault(row, name, cell, "zygosity is MZ or DZ, or empty for people who are no twins and where it is not known%s", zygosityHint(cell)))
				column[row] = ""
			}
		}
		for i, z := range take(zygosityRole, column) {
			switch z {
			case "MZ":
				persons[i].Zygosity = twin.Monozygotic
			case "DZ":
				persons[i].Zygosity = twin.Dizygotic
			}
		}
	}
	if name := p.column[sexRole]; name != "" {
		column, odd := p.Text(name), []int{}
		for row, cell := range column {
			sex := parseSex(cell)
			if sex != twin.SexUnknown {
				column[row] = sex.String()
			} else if cell != "" {
				odd = append(odd, p.Line(row))
			}
		}
		if len(odd) > 0 {
			l.warn("people", sexRole, fmt.Sprintf("%s, %s: %s of column %s neither male nor female (m, f): kept as a category, counted as unknown for parents and twins",
				p.file, lineList(odd), plural(len(odd), "cell", "cells"), quote(name)))
		}
		for i, cell := range take(sexRole, column) {
			persons[i].Sex = parseSex(cell)
		}
	}
	return persons
}

// field is the part of a person that a role fills.
func field(who *twin.Person, role string) *string {
	switch role {
	case familyRole:
		return &who.Family
	case motherRole:
		return &who.Mother
	case fatherRole:
		return &who.Father
	case twinSetRole:
		return &who.TwinSet
	case mzSetRole:
		return &who.MZSet
	case rearedInRole:
		return &who.RearedIn
	}
	panic("cohort: no field of a person is called " + role)
}

func parseSex(cell string) twin.Sex {
	switch strings.ToLower(cell) {
	case "male", "m":
		return twin.Male
	case "female", "f":
		return twin.Female
	}
	return twin.SexUnknown
}

func zygosityHint(cell string) string {
	switch s := strings.ToLower(cell); {
	case strings.HasPrefix(s, "mono"), strings.HasPrefix(s, "ident"):
		return "; write MZ"
	case strings.HasPrefix(s, "di"), strings.HasPrefix(s, "frat"), strings.HasPrefix(s, "os"), strings.HasPrefix(s, "ss"):
		return "; write DZ"
	}
	return ""
}

// peopleVariables makes variables of the columns.
func (l *loader) peopleVariables(p *peopleTable, faults *collector) {
	lines := p.rows.lines(p.Table)
	for _, column := range p.Names() {
		name, role := column, p.role[column]
		if role != "" {
			name = role
		}
		if role == personRole || column == l.in.People.Session {
			continue
		}
		isID := slices.Contains(idRoles(), role)
		l.cohort.Available = append(l.cohort.Available, name)
		if isID && !l.use[name] || !l.wanted(name) {
			continue
		}
		v := &Variable{Name: name, File: p.file, Column: column, Lines: lines}
		switch {
		case p.text[role] != nil:
			v.categorical(p.text[role])
		default:
			l.fillVariable(v, "people", p.Table, p.rows, nil, 0)
		}
		if l.numeric[name] && !v.Numeric {
			faults.add(p.headerFault(column, "the study uses it as numbers, but a column of %s is read as words", name))
		}
		l.place[name] = p.file
		l.cohort.Variables[name] = v
		l.cohort.Names = append(l.cohort.Names, name)
	}
}

// pedigreeFaults gives the contradictions among ids their addresses.
func (p *peopleTable) pedigreeFaults(err error, faults *collector) {
	list := []error{err}
	if joined, ok := err.(interface{ Unwrap() []error }); ok {
		list = joined.Unwrap()
	}
	for _, e := range list {
		var person *twin.PersonError
		if !errors.As(e, &person) {
			faults.add(&Fault{File: p.file, Message: e.Error()})
			continue
		}
		row := p.rows.of(person.Person)[0]
		message := person.Message
		if person.Other >= 0 && person.Other != person.Person {
			message += fmt.Sprintf(" (row %d)", p.Line(p.rows.of(person.Other)[0]))
		}
		column := p.column[person.Field]
		value := ""
		if column != "" {
			for _, r := range p.rows.of(person.Person) {
				if value = p.cell(r, column); value != "" {
					row = r
					break
				}
			}
		}
		faults.add(p.Fault(row, column, value, "%s", message))
	}
}

// noteMessage is a note of the pedigree with rows in the place of ids.
func (p *peopleTable) noteMessage(note twin.Note, c *Cohort) string {
	lines := make([]int, len(note.People))
	for k, i := range note.People {
		lines[k] = c.Lines[i]
	}
	slices.Sort(lines)
	message := strings.TrimSuffix(note.Message, ".")
	for at := range message {
		rest, found := strings.CutPrefix(message[at:], ": ")
		if !found {
			continue
		}
		if slices.ContainsFunc(note.People, func(i int) bool {
			who := c.Records[i]
			return strings.HasPrefix(rest, who.ID) || who.Family != "" && strings.HasPrefix(rest, who.Family)
		}) {
			message = message[:at]
			break
		}
	}
	return fmt.Sprintf("%s (%s, %s)", message, p.file, lineList(lines))
}
