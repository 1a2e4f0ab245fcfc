package cohort

import (
	"fmt"
	"math"
	"slices"
)

// loadTraits reads a table with one row a person, or person and session, into
// variables.
func (l *loader) loadTraits(in TableInput) {
	var faults collector
	defer func() { l.faults.take(&faults) }()
	var person string
	t := l.read(in.File, &faults, typing{
		check: func(g *grid, faults *collector) bool {
			person = l.personColumn(g, in.Person, "traits", faults)
			l.require(g, in.Session, "traits.session", faults)
			l.refuseRepeatedNames(g, faults, func(name string) bool {
				return name != person && name != in.Session && !isIDRole(name) && l.wanted(name)
			})
			return person != ""
		},
		role: func(name string) Role {
			switch {
			case name == person, name == in.Session:
				return ID
			case isIDRole(name):
				return Skip
			}
			return l.ifWanted(name)
		},
		warn: func(about, message string) { l.warn("traits", about, message) },
	})
	if t == nil {
		return
	}
	rows := groupRows(t, person, in.Session, "traits: {session: NAME}", &faults)
	place, ok := l.matchPeople(t, "traits", person, rows, &faults)
	if !ok {
		return
	}
	c := l.cohort
	lines := make([]int, len(c.People))
	for k, line := range rows.lines(t) {
		if place[k] >= 0 {
			lines[place[k]] = line
		}
	}
	for _, name := range t.Names() {
		if name == person || name == in.Session || isIDRole(name) {
			continue
		}
		c.Available = append(c.Available, name)
		if !t.Has(name) {
			continue
		}
		v := &Variable{Name: name, File: in.File, Column: name, Lines: lines}
		l.fillVariable(v, "traits", t, rows, place, len(c.People))
		c.Variables[name] = v
		c.Names = append(c.Names, name)
	}
}

// isIDRole tells whether a column is one by which people tables say who is
// related; other tables may repeat it, and it is not looked at there.
func isIDRole(name string) bool { return name == personRole || slices.Contains(idRoles(), name) }

// refuseRepeatedNames keeps the names of variables and measures unique over all
// tables.
func (l *loader) refuseRepeatedNames(g *grid, faults *collector, counts func(name string) bool) {
	for _, name := range g.names {
		if !counts(name) {
			continue
		}
		before, taken := l.place[name]
		if taken && before == g.file {
			message := "is a measure and a trait of the same table; write patterns of measures that leave the traits out"
			if g.file == l.in.People.File {
				message = "is a column of people already; the people table need not be named as a table of measures or traits again"
			}
			faults.add(&Fault{File: g.file, Row: g.header, Column: name, Message: message})
			continue
		}
		if taken {
			faults.add(&Fault{File: g.file, Row: g.header, Column: name, Message: "is a column of " + before + " too; rename one of them, so that the name means one thing in the results"})
			continue
		}
		l.place[name] = g.file
	}
}

// matchPeople finds the person of the cohort for every person of a table, -1
// for those who are not in the people table: their rows are left out, with a
// warning and an exclusion each. It is a fault when there is nobody left; ok is
// false when the table cannot be used.
func (l *loader) matchPeople(t *Table, analysis, person string, rows *personRows, faults *collector) (place []int, ok bool) {
	c := l.cohort
	if c.index == nil || !faults.empty() {
		return nil, false
	}
	place = make([]int, len(rows.ids))
	var strangers []int
	left := 0
	for k, id := range rows.ids {
		i, known := c.index[id]
		if !known {
			i = -1
			strangers = append(strangers, t.Line(rows.of(k)[0]))
			left += len(rows.of(k))
		}
		place[k] = i
	}
	switch {
	case len(strangers) == 0:
		return place, true
	case len(strangers) == len(rows.ids):
		row := rows.of(0)[0]
		faults.add(t.Fault(row, person, rows.ids[0], "not one of the %s of this table is in %s, whose first person is %s; ids are matched to the letter",
			plural(len(rows.ids), "person", "people"), l.in.People.File, quote(c.People[0])))
		return nil, false
	}
	reason := "not in " + l.in.People.File
	for k, id := range rows.ids {
		if place[k] < 0 {
			c.Exclusions = append(c.Exclusions, Exclusion{Analysis: analysis, Person: id, Reason: reason})
		}
	}
	l.warn(analysis, t.file, fmt.Sprintf("%s, %s: %s (%s) who %s not in %s: left out",
		t.file, lineList(strangers), plural(len(strangers), "person", "people"), plural(left, "row", "rows"),
		map[bool]string{true: "is", false: "are"}[len(strangers) == 1], l.in.People.File))
	return place, true
}

// fillVariable fills a variable from a column, one value a person of the
// cohort; place is where the table's people stand there, nil when they are the
// cohort's. Rows of a person that differ are averaged, or in a column of
// categories settled by the first, with a warning each.
func (l *loader) fillVariable(v *Variable, analysis string, t *Table, rows *personRows, place []int, people int) {
	v.Numeric = t.Numeric(v.Column)
	if v.Numeric {
		column := t.Numbers(v.Column)
		values, conflicts := rows.meanNumbers(column)
		for _, c := range conflicts {
			l.warn(analysis, v.Name, fmt.Sprintf("%s, rows %d and %d of one person: %s and %s, the mean of the sessions is taken (%s)", t.file,
				t.Line(c.first), t.Line(c.second), formatNumber(column[c.first]), formatNumber(column[c.second]), formatNumber(values[c.person])))
		}
		v.Values = values
		if place != nil {
			v.Values = make([]float64, people)
			for i := range v.Values {
				v.Values[i] = math.NaN()
			}
			for k, i := range place {
				if i >= 0 {
					v.Values[i] = values[k]
				}
			}
		}
		return
	}
	column := t.Text(v.Column)
	values, conflicts := rows.firstText(column)
	for _, c := range conflicts {
		l.warn(analysis, v.Name, fmt.Sprintf("%s, rows %d and %d of one person: %s and %s, the first session's is taken", t.file,
			t.Line(c.first), t.Line(c.second), quote(column[c.first]), quote(column[c.second])))
	}
	if place != nil {
		all := make([]string, people)
		for k, i := range place {
			if i >= 0 {
				all[i] = values[k]
			}
		}
		values = all
	}
	v.categorical(values)
}
