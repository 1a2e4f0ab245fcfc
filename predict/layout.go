package predict

import (
	"cmp"
	"errors"
	"fmt"
	"slices"

	"kindwell/crossval"
)

// layout is one repeat with the people put in an order in which every outer
// fold, and every cell where inner folds are made of cells, is one stretch of
// rows.
type layout struct {
	repeat int
	order  []int // person of each row
	start  []int // outer fold o is rows start[o]..start[o+1]-1
	// cells[o], where inner folds are made of cells, are its cells with people.
	cells [][]stretch
	inner [][]innerRows // the inner folds of outer fold o that hold people
}

// stretch is rows from..to-1, all of one cell.
type stretch struct{ cell, from, to int }

// innerRows are the rows of one inner fold.
type innerRows struct {
	fold int
	rows []int
}

func (l *layout) people() int { return len(l.order) }

func (l *layout) outerCount() int { return len(l.start) - 1 }

// outside returns the rows that are not in outer fold o.
func (l *layout) outside(o int) []int {
	rows := make([]int, 0, l.people())
	for r := range l.people() {
		if r < l.start[o] || r >= l.start[o+1] {
			rows = append(rows, r)
		}
	}
	return rows
}

// inside returns the rows of outer fold o.
func (l *layout) inside(o int) []int {
	rows := make([]int, 0, l.start[o+1]-l.start[o])
	for r := l.start[o]; r < l.start[o+1]; r++ {
		rows = append(rows, r)
	}
	return rows
}

// splits returns the split of outer fold o and those of its inner folds.
func (l *layout) splits(o int) (outer split, inner []split) {
	outer = split{repeat: l.repeat, outer: o, inner: -1, train: l.outside(o), held: l.inside(o)}
	for _, f := range l.inner[o] {
		in := make([]bool, l.people())
		for _, r := range f.rows {
			in[r] = true
		}
		train := make([]int, 0, len(outer.train)-len(f.rows))
		for _, r := range outer.train {
			if !in[r] {
				train = append(train, r)
			}
		}
		inner = append(inner, split{repeat: l.repeat, outer: o, inner: f.fold, train: train, held: f.rows})
	}
	return outer, inner
}

// newLayouts checks the folds of so many people and orders every repeat.
func newLayouts(folds *crossval.Folds, people int, search bool) ([]*layout, error) {
	layouts := make([]*layout, len(folds.Repeats))
	for i := range folds.Repeats {
		l, err := newLayout(&folds.Repeats[i], people, search)
		if err != nil {
			return nil, fmt.Errorf("predict: repeat %d: %w", i, err)
		}
		l.repeat = i
		layouts[i] = l
	}
	return layouts, nil
}

func newLayout(r *crossval.Repeat, people int, search bool) (*layout, error) {
	if err := checkRepeat(r, people, search); err != nil {
		return nil, err
	}
	l := &layout{order: make([]int, people)}
	for i := range l.order {
		l.order[i] = i
	}
	slices.SortStableFunc(l.order, func(a, b int) int {
		if c := cmp.Compare(r.Outer[a], r.Outer[b]); c != 0 || r.Cell == nil {
			return c
		}
		return cmp.Compare(r.Cell[a], r.Cell[b])
	})
	for row, person := range l.order {
		for len(l.start) <= r.Outer[person] {
			l.start = append(l.start, row)
		}
	}
	l.start = append(l.start, people)
	if r.Cell != nil {
		l.findCells(r)
	}
	l.findInner(r)
	return l, nil
}

func (l *layout) findCells(r *crossval.Repeat) {
	l.cells = make([][]stretch, l.outerCount())
	for o := range l.cells {
		for row := l.start[o]; row < l.start[o+1]; row++ {
			cell, known := r.Cell[l.order[row]], len(l.cells[o])
			if known > 0 && l.cells[o][known-1].cell == cell {
				l.cells[o][known-1].to = row + 1
			} else {
				l.cells[o] = append(l.cells[o], stretch{cell, row, row + 1})
			}
		}
	}
}

// findInner lists the inner folds, the largest last: its sums are what the
// others leave of the whole.
func (l *layout) findInner(r *crossval.Repeat) {
	l.inner = make([][]innerRows, l.outerCount())
	for o := range l.inner {
		if o >= len(r.Inner) || r.Inner[o] == nil {
			continue
		}
		folds := make([]innerRows, r.InnerCount[o])
		for f := range folds {
			folds[f].fold = f
		}
		for _, row := range l.outside(o) {
			f := r.Inner[o][l.order[row]]
			folds[f].rows = append(folds[f].rows, row)
		}
		folds = slices.DeleteFunc(folds, func(f innerRows) bool { return len(f.rows) == 0 })
		slices.SortStableFunc(folds, func(a, b innerRows) int { return cmp.Compare(len(a.rows), len(b.rows)) })
		l.inner[o] = folds
	}
}

// checkRepeat says what is wrong with one repeat. Inner folds may be absent
// when no penalty is searched for.
func checkRepeat(r *crossval.Repeat, people int, search bool) error {
	if len(r.Outer) != people {
		return fmt.Errorf("outer folds of %d people, %d are expected", len(r.Outer), people)
	}
	if r.OuterCount < 2 {
		return fmt.Errorf("%d outer folds; two are the least", r.OuterCount)
	}
	size := make([]int, r.OuterCount)
	for i, o := range r.Outer {
		if o < 0 || o >= r.OuterCount {
			return fmt.Errorf("person %d is in outer fold %d of %d", i, o, r.OuterCount)
		}
		size[o]++
	}
	for o, n := range size {
		if n == 0 {
			return fmt.Errorf("outer fold %d is empty", o)
		}
	}
	if len(r.Inner) == 0 && !search {
		if r.Cell != nil {
			return errors.New("cells without inner folds")
		}
		return nil
	}
	if len(r.Inner) != r.OuterCount || len(r.InnerCount) != r.OuterCount {
		return fmt.Errorf("inner folds for %d and %d outer folds, %d are expected", len(r.Inner), len(r.InnerCount), r.OuterCount)
	}
	for o := range r.Inner {
		if err := checkInner(r, o, people); err != nil {
			return fmt.Errorf("outer fold %d: %w", o, err)
		}
	}
	return nil
}

func checkInner(r *crossval.Repeat, o, people int) error {
	if len(r.Inner[o]) != people || (r.Cell != nil && len(r.Cell) != people) {
		return fmt.Errorf("inner folds of %d people, %d are expected", len(r.Inner[o]), people)
	}
	used := map[int]bool{}
	for i, f := range r.Inner[o] {
		switch {
		case r.Outer[i] == o && f != -1:
			return fmt.Errorf("person %d is held out and has the inner fold %d", i, f)
		case r.Outer[i] == o:
			continue
		case f < 0 || f >= r.InnerCount[o]:
			return fmt.Errorf("person %d is in inner fold %d of %d", i, f, r.InnerCount[o])
		case r.Cell != nil && r.Cell[i] != f:
			return fmt.Errorf("person %d is of cell %d and in inner fold %d", i, r.Cell[i], f)
		}
		used[f] = true
	}
	if len(used) < 2 {
		return errors.New("fewer than two inner folds hold people")
	}
	return nil
}
