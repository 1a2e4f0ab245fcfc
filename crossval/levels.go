package crossval

import "slices"

// level is one code of one categorical column and the families that have it.
type level struct {
	column, code int
	people       []int
	families     []int // ascending
}

// levelsOf lists the levels of a column by code.
func levelsOf(r *roster, column int, codes []int) []level {
	number := make(map[int]int)
	var levels []level
	for i, code := range codes {
		at, seen := number[code]
		if !seen {
			at = len(levels)
			number[code] = at
			levels = append(levels, level{column: column, code: code})
		}
		levels[at].people = append(levels[at].people, i)
	}
	slices.SortFunc(levels, func(a, b level) int { return a.code - b.code })
	for at := range levels {
		l := &levels[at]
		for _, i := range l.people {
			l.families = append(l.families, r.of[i])
		}
		slices.Sort(l.families)
		l.families = slices.Compact(l.families)
	}
	return levels
}

// fault makes the error of a level that is missing somewhere.
func (l level) fault(repeat, drawn int) *LevelError {
	return &LevelError{
		Column: l.column, Level: l.code, People: slices.Clone(l.people), Families: len(l.families),
		Repeat: repeat, Tries: drawn,
	}
}

// inEveryCellTraining says whether the level is in every training set of folds
// made of cells: for no outer fold o and cell c does every family that has the
// level lie in o or in c.
func (l level) inEveryCellTraining(outer, cell []int, folds, cells int) bool {
	both := make([]int, folds*cells)
	inFold := make([]int, folds)
	inCell := make([]int, cells)
	for _, f := range l.families {
		both[outer[f]*cells+cell[f]]++
		inFold[outer[f]]++
		inCell[cell[f]]++
	}
	for o := range folds {
		for c := range cells {
			if inFold[o]+inCell[c]-both[o*cells+c] == len(l.families) {
				return false
			}
		}
	}
	return true
}

// inEveryOuterTraining says whether no outer fold holds all families that have
// the level.
func (l level) inEveryOuterTraining(outer []int) bool {
	for _, f := range l.families[1:] {
		if outer[f] != outer[l.families[0]] {
			return true
		}
	}
	return false
}

// inEveryTraining says whether the level is in every training set of a repeat
// whose inner folds may be any.
func (l level) inEveryTraining(r *roster, p *Repeat) bool {
	for o := range p.OuterCount {
		training := 0
		in := make([]int, p.InnerCount[o])
		for _, f := range l.families {
			if i := p.Inner[o][r.first[f]]; i >= 0 {
				in[i]++
				training++
			}
		}
		if slices.Contains(in, training) { // training = 0 is an inner fold of 0, too
			return false
		}
	}
	return true
}

// inEveryOuter says whether every outer fold holds someone of the level.
func (l level) inEveryOuter(r *roster, outer []int, folds int) bool {
	seen := make([]bool, folds)
	left := folds
	for _, i := range l.people {
		if o := outer[r.of[i]]; !seen[o] {
			seen[o] = true
			left--
		}
	}
	return left == 0
}
