package cohort

import (
	"math"
	"slices"
)

// personRows groups the rows of a table by person, in the order in which it
// first names them; the rows of one person go by session.
type personRows struct {
	ids   []string
	start []int // person i has rows[start[i]:start[i+1]]
	rows  []int
	// label is the session of every row of the table, nil without a column.
	label []string
}

// of gives the rows of person i.
func (p *personRows) of(i int) []int { return p.rows[p.start[i]:p.start[i+1]] }

// groupRows sorts the rows of a table by person and session. Rows without an id
// or a session and repeated rows are faults; hint says how to name a session
// column when there is none.
//
// Sessions are ordered by number when all labels of the table are numbers, and
// otherwise as the rows stand in the file.
func groupRows(t *Table, person, session, hint string, faults *collector) *personRows {
	p := &personRows{}
	ids := t.Text(person)
	if session != "" {
		p.label = t.Text(session)
	}
	index := make(map[string]int, len(ids))
	group := make([]int, len(ids))
	for row, id := range ids {
		if id == "" {
			faults.add(t.Fault(row, person, "", "the id is missing (an id cannot be empty, NA, n/a, NaN or a missing code)"))
			group[row] = -1
			continue
		}
		if session != "" && p.label[row] == "" {
			faults.add(t.Fault(row, session, "", "the session is missing; fill it in, or delete the row"))
		}
		i, seen := index[id]
		if !seen {
			i = len(p.ids)
			index[id] = i
			p.ids = append(p.ids, id)
		}
		group[row] = i
	}
	p.start = make([]int, len(p.ids)+1)
	for _, i := range group {
		if i >= 0 {
			p.start[i+1]++
		}
	}
	for i := range p.ids {
		p.start[i+1] += p.start[i]
	}
	p.rows = make([]int, p.start[len(p.ids)])
	next := slices.Clone(p.start)
	for row, i := range group {
		if i >= 0 {
			p.rows[next[i]] = row
			next[i]++
		}
	}
	if session == "" {
		p.refuseRepeated(t, person, hint, faults)
		return p
	}
	p.orderSessions(t, session, faults)
	return p
}

// refuseRepeated finds people with several rows in a table without sessions.
func (p *personRows) refuseRepeated(t *Table, person, hint string, faults *collector) {
	for i, id := range p.ids {
		rows := p.of(i)
		for _, row := range rows[1:] {
			faults.add(t.Fault(row, person, id, "is already on row %d; delete one of the rows, or, if the table has a row a session, name that column (%s)", t.Line(rows[0]), hint))
		}
	}
}

// orderSessions puts everybody's rows in the order of their sessions and finds
// repeated ones.
func (p *personRows) orderSessions(t *Table, session string, faults *collector) {
	numbers := make([]float64, len(p.label))
	numeric := true
	for row, label := range p.label {
		v, why := parseNumber(label)
		if why != "" && label != "" {
			numeric = false
			break
		}
		numbers[row] = v
	}
	for i := range p.ids {
		rows := p.of(i)
		if len(rows) == 1 {
			continue
		}
		first := make(map[string]int, len(rows))
		for _, row := range rows {
			label := p.label[row]
			if label == "" {
				continue
			}
			if before, seen := first[label]; seen {
				faults.add(t.Fault(row, session, label, "the same person and session is already on row %d; delete one of the rows", t.Line(before)))
				continue
			}
			first[label] = row
		}
		if numeric {
			slices.SortStableFunc(rows, func(a, b int) int {
				switch {
				case numbers[a] < numbers[b]:
					return -1
				case numbers[a] > numbers[b]:
					return 1
				}
				return 0
			})
		}
	}
}

// conflict is a person whose rows differ in a column: two rows that do.
type conflict struct{ person, first, second int }

// firstText takes everybody's first cell that is not missing.
func (p *personRows) firstText(column []string) (values []string, conflicts []conflict) {
	values = make([]string, len(p.ids))
	for i := range p.ids {
		from := -1
		for _, row := range p.of(i) {
			switch {
			case column[row] == "":
			case from < 0:
				from, values[i] = row, column[row]
			case column[row] != values[i]:
				conflicts = append(conflicts, conflict{i, from, row})
			}
		}
	}
	return values, conflicts
}

// meanNumbers averages everybody's numbers that are not missing.
func (p *personRows) meanNumbers(column []float64) (values []float64, conflicts []conflict) {
	values = make([]float64, len(p.ids))
	for i := range p.ids {
		rows := p.of(i)
		if len(rows) == 1 {
			values[i] = column[rows[0]]
			continue
		}
		from, differs, sum, n := -1, -1, 0.0, 0
		for _, row := range rows {
			x := column[row]
			if math.IsNaN(x) {
				continue
			}
			if from < 0 {
				from = row
			} else if x != column[from] && differs < 0 {
				differs = row
			}
			sum += x
			n++
		}
		switch {
		case n == 0:
			values[i] = math.NaN()
		case differs < 0:
			values[i] = column[from] // to the last bit, which a mean need not keep
		default:
			values[i] = sum / float64(n)
			conflicts = append(conflicts, conflict{i, from, differs})
		}
	}
	return values, conflicts
}

// lines gives everybody's first line.
func (p *personRows) lines(t *Table) []int {
	lines := make([]int, len(p.ids))
	for i := range p.ids {
		lines[i] = t.Line(p.rows[p.start[i]])
	}
	return lines
}
