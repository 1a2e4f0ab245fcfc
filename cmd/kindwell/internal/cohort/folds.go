package cohort

import (
	"fmt"
	"slices"
)

// FoldsInput says where given folds are.
type FoldsInput struct {
	// Outer is a table with the columns repeat, fold and person, a row a repeat
	// and person.
	Outer string
	// Inner is empty or a table with the columns repeat, fold, inner_fold and
	// person, a row for every repeat, outer fold and person who is not held out
	// in it.
	Inner string
	// Person is as in MeasuresInput.
	Person string
}

// FoldTable is folds as given in tables, for the people of a cohort. Where the
// tables have a column people_group, each group of people has folds of its own.
type FoldTable struct {
	cohort       *Cohort
	outer, inner *foldList
}

// GivenRepeat is one repeat of given folds for some people. Folds are numbered
// from 0 without a gap, in the order of their labels: by number when all are
// numbers, otherwise as they stand in the file. A fold that holds none of the
// people is not there.
type GivenRepeat struct {
	// Label is the repeat's label in the table.
	Label string
	// Outer is the fold of every one of the people, Labels are the folds' names.
	Outer  []int
	Labels []string
	// Inner is nil without a table of inner folds. Inner[o] holds the inner fold
	// of every one of the people while outer fold o is held out, -1 for those in
	// it; InnerLabels[o] are the names.
	Inner       [][]int
	InnerLabels [][]string
}

// ReadFolds reads tables of given folds. The input files are returned, not added
// to the cohort's. The error is *Faults.
func (c *Cohort) ReadFolds(in FoldsInput) (*FoldTable, []InputFile, error) {
	l := &loader{in: c.inputs, missing: newMissingCells(c.inputs.MissingCodes), cohort: &Cohort{}}
	f := &FoldTable{cohort: c}
	f.outer = l.readFoldList(c, in, in.Outer, "repeat", "fold")
	if in.Inner != "" {
		f.inner = l.readFoldList(c, in, in.Inner, "repeat", "fold", "inner_fold")
	}
	if err := l.faults.err(); err != nil {
		return nil, nil, err
	}
	return f, l.cohort.InputFiles, nil
}

// foldList is one table of folds. A path is people_group (when there is one),
// repeat and, in a table of inner folds, outer fold; every path has a fold for
// each person.
type foldList struct {
	*Table
	grouped bool
	folds   map[foldPath]*foldColumn
	repeats map[string]*labelOrder // by people_group
}

type foldPath struct{ group, repeat, outer string }

// foldColumn holds the row of each person under one path; the folds' labels.
type foldColumn struct {
	row    map[int]int
	fold   []string // of all rows of the table, shared
	labels *labelOrder
}

// labelOrder is the labels of repeats or folds in order.
type labelOrder struct {
	seen   map[string]bool
	labels []string
}

func (o *labelOrder) add(label string) {
	if o.seen == nil {
		o.seen = make(map[string]bool)
	}
	if !o.seen[label] {
		o.seen[label] = true
		o.labels = append(o.labels, label)
	}
}

// sorted gives the labels by number when all are numbers, else as they came.
func (o *labelOrder) sorted() []string {
	numbers := make(map[string]float64, len(o.labels))
	for _, label := range o.labels {
		v, why := parseNumber(label)
		if why != "" {
			return o.labels
		}
		numbers[label] = v
	}
	sorted := slices.Clone(o.labels)
	slices.SortStableFunc(sorted, func(a, b string) int {
		switch {
		case numbers[a] < numbers[b]:
			return -1
		case numbers[a] > numbers[b]:
			return 1
		}
		return 0
	})
	return sorted
}

// readFoldList reads a table whose last key column is the fold.
func (l *loader) readFoldList(c *Cohort, in FoldsInput, file string, keys ...string) *foldList {
	const groupColumn = "people_group"
	var faults collector
	defer func() { l.faults.take(&faults) }()
	var person string
	t := l.read(file, &faults, typing{
		check: func(g *grid, faults *collector) bool {
			person = l.personColumn(g, in.Person, "folds", faults)
			for _, key := range keys {
				if !slices.Contains(g.names, key) {
					faults.add(g.noColumn(key, "a table of folds has repeat, fold (and inner_fold) and person"))
				}
			}
			return faults.empty()
		},
		role: func(name string) Role {
			if name == person || name == groupColumn || slices.Contains(keys, name) {
				return ID
			}
			return Skip
		},
	})
	if t == nil {
		return nil
	}
	f := &foldList{Table: t, grouped: t.Has(groupColumn), folds: make(map[foldPath]*foldColumn), repeats: make(map[string]*labelOrder)}
	ids := t.Text(person)
	columns := make([][]string, len(keys))
	for k, key := range keys {
		columns[k] = t.Text(key)
	}
	groups := make([]string, t.Len())
	if f.grouped {
		groups = t.Text(groupColumn)
	}
	for row, id := range ids {
		if missing := f.missingKey(row, person, id, keys, columns, groups[row]); missing != "" {
			faults.add(t.Fault(row, missing, "", "is missing; every row of a table of folds names person and folds in full"))
			continue
		}
		path := foldPath{group: groups[row], repeat: columns[0][row]}
		if len(keys) == 3 {
			path.outer = columns[1][row]
		}
		column := f.folds[path]
		if column == nil {
			column = &foldColumn{row: make(map[int]int), fold: columns[len(keys)-1], labels: &labelOrder{}}
			f.folds[path] = column
		}
		if f.repeats[path.group] == nil {
			f.repeats[path.group] = &labelOrder{}
		}
		f.repeats[path.group].add(path.repeat)
		column.labels.add(column.fold[row])
		i, known := c.index[id]
		if !known {
			continue // people whom the study does not have
		}
		if before, seen := column.row[i]; seen {
			faults.add(t.Fault(row, person, id, "is in the same repeat on row %d already; a person has one fold", t.Line(before)))
			continue
		}
		column.row[i] = row
	}
	return f
}

// missingKey names the first column of a row whose cell is missing.
func (f *foldList) missingKey(row int, person, id string, keys []string, columns [][]string, group string) string {
	if id == "" {
		return person
	}
	for k, key := range keys {
		if columns[k][row] == "" {
			return key
		}
	}
	if f.grouped && group == "" {
		return "people_group"
	}
	return ""
}

// For gives the folds of some people, indices in the cohort, who are the group
// of that label; without a column people_group the label does not count. People
// without a fold and families on two sides are refused by name; the error is
// *Faults.
func (f *FoldTable) For(group string, people []int) ([]GivenRepeat, error) {
	var faults collector
	if !f.outer.grouped {
		group = ""
	}
	if f.outer.repeats[group] == nil {
		labels := make([]string, 0, len(f.outer.repeats))
		for label := range f.outer.repeats {
			labels = append(labels, label)
		}
		slices.Sort(labels)
		faults.add(&Fault{File: f.outer.file, Column: "people_group", Message: fmt.Sprintf("has no group %s; its groups are %s", quote(group), quoteList(labels, 8))})
		return nil, faults.err()
	}
	var repeats []GivenRepeat
	for _, label := range f.outer.repeats[group].sorted() {
		r := GivenRepeat{Label: label}
		path := foldPath{group: group, repeat: label}
		r.Outer, r.Labels = f.assign(f.outer, path, people, nil, &faults)
		if len(r.Labels) == 1 {
			faults.add(&Fault{File: f.outer.file, Message: fmt.Sprintf("repeat %s has all these people in fold %s; at least two folds are needed", quote(label), quote(r.Labels[0]))})
		}
		if f.inner != nil && faults.empty() {
			f.assignInner(&r, path, people, &faults)
		}
		repeats = append(repeats, r)
	}
	if err := faults.err(); err != nil {
		return nil, err
	}
	return repeats, nil
}

// assignInner fills in the inner folds of a repeat.
func (f *FoldTable) assignInner(r *GivenRepeat, path foldPath, people []int, faults *collector) {
	if !f.inner.grouped {
		path.group = ""
	}
	for o, outer := range r.Labels {
		path.outer = outer
		held := make([]bool, len(people))
		for k := range people {
			held[k] = r.Outer[k] == o
		}
		inner, labels := f.assign(f.inner, path, people, held, faults)
		r.Inner, r.InnerLabels = append(r.Inner, inner), append(r.InnerLabels, labels)
	}
}

// assign numbers the folds of one path for some people, but for those held out.
func (f *FoldTable) assign(list *foldList, path foldPath, people []int, held []bool, faults *collector) (folds []int, labels []string) {
	where := "repeat " + quote(path.repeat)
	if path.outer != "" {
		where += ", outer fold " + quote(path.outer)
	}
	folds = make([]int, len(people))
	column := list.folds[path]
	if column == nil {
		faults.add(&Fault{File: list.file, Message: "has no rows for " + where})
		return folds, nil
	}
	c := f.cohort
	person := list.personColumn()
	firstOf := make(map[int]int) // row of the first person of each family
	used := make(map[string]bool)
	for k, i := range people {
		row, present := column.row[i]
		out := held != nil && held[k]
		switch {
		case out && present:
			faults.add(list.Fault(row, person, c.People[i], "is held out in %s and cannot have an inner fold there", where))
			continue
		case out:
			continue
		case !present:
			faults.add(&Fault{File: list.file, Column: person, Value: c.People[i], Message: fmt.Sprintf("has no row in %s, but is in the study (row %d of the people table)", where, c.Lines[i])})
			continue
		}
		family := c.Pedigree.Family(i)
		if first, seen := firstOf[family]; !seen {
			firstOf[family] = row
		} else if column.fold[first] != column.fold[row] {
			faults.add(list.Fault(row, person, c.People[i], "is in fold %s, but family %s is in fold %s on row %d (%s); families are never split",
				quote(column.fold[row]), quote(c.FamilyLabel[i]), quote(column.fold[first]), list.Line(first), where))
		}
		used[column.fold[row]] = true
	}
	number := make(map[string]int)
	for _, label := range column.labels.sorted() {
		if used[label] {
			number[label] = len(labels)
			labels = append(labels, label)
		}
	}
	for k, i := range people {
		folds[k] = -1
		if row, present := column.row[i]; present && !(held != nil && held[k]) {
			folds[k] = number[column.fold[row]]
		}
	}
	return folds, labels
}

// personColumn is the name of the column of ids: the one that is no key.
func (f *foldList) personColumn() string {
	for _, name := range f.Names() {
		if f.Has(name) && !slices.Contains([]string{"repeat", "fold", "inner_fold", "people_group"}, name) {
			return name
		}
	}
	return ""
}
