package twin

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"kindwell/crossval"
)

// BlockOptions say who may be exchanged beyond what relations tell.
type BlockOptions struct {
	// Marks are columns of codes, one code a row: a site, a group of
	// variance. Values move only to a place with the same codes. At most 64
	// columns; nil for none.
	Marks [][]int
	// DZWithSiblings lets fraternal twins and their siblings trade places, as
	// if all were siblings.
	DZWithSiblings bool
}

// tie is everything about a pair that an exchange must keep. All of it is read
// from the whole pedigree, whoever is present.
type tie struct {
	kinship   int64    // in units of 2^-40
	zygosity  Zygosity // of the pair: identical, fraternal, or neither
	twins     bool     // of one set
	home      bool     // grew up in one
	direction int      // 1 the first is a parent of the second, -1 a child
	equal     uint64   // one bit a mark: both have the same code
}

func (t tie) compare(u tie) int {
	return cmp.Or(
		cmp.Compare(t.kinship, u.kinship),
		cmp.Compare(t.zygosity, u.zygosity),
		compareBool(t.twins, u.twins),
		compareBool(t.home, u.home),
		cmp.Compare(t.direction, u.direction),
		cmp.Compare(t.equal, u.equal),
	)
}

func compareBool(a, b bool) int {
	switch {
	case a == b:
		return 0
	case b:
		return -1
	}
	return 1
}

// Blocks describes the people of an analysis for the exchange of their values.
// rows are distinct indices of people with a row, and the families returned
// hold places in rows, 0..len(rows)-1, by first appearance.
//
// The code of a pair stands for its kinship, the zygosity of twins, whether
// they are of one twin set and of one home, which is a parent of which, and in
// which marks they are equal, in the sense of the multi-level block rule
// (Winkler et al. 2015). Equal codes mean the same in every family. A person's
// Mark stands for their codes in opt.Marks and their inbreeding; it is nil for
// all when it would be the same for all. Codes and marks depend on the people,
// not on the order of rows.
//
// It panics on other rows, a column of marks of another length, and more than
// 64 columns.
func (p *Pedigree) Blocks(rows []int, opt BlockOptions) []crossval.Family {
	p.checkPeople("Blocks", rows)
	if len(opt.Marks) > 64 {
		panic("twin: Blocks with more than 64 columns of marks")
	}
	for c, column := range opt.Marks {
		if len(column) != len(rows) {
			panic(fmt.Sprintf("twin: Blocks with %d rows and %d marks in column %d", len(rows), len(column), c))
		}
	}

	seen := make(map[tie]int) // by first appearance
	var ties []tie
	code := func(t tie) int {
		k, ok := seen[t]
		if !ok {
			k = len(ties)
			seen[t] = k
			ties = append(ties, t)
		}
		return k
	}
	places := p.placesByFamily(rows)
	families := make([]crossval.Family, len(places))
	for f, people := range places {
		n := len(people)
		relation := make([]int, n*n)
		for a, first := range people {
			for b, second := range people[:a] {
				t := p.tie(rows[first], rows[second], opt.DZWithSiblings)
				for c, column := range opt.Marks {
					if column[first] == column[second] {
						t.equal |= 1 << c
					}
				}
				relation[a*n+b] = code(t)
				t.direction = -t.direction
				relation[b*n+a] = code(t)
			}
		}
		families[f] = crossval.Family{People: people, Relation: relation}
	}

	// Number the ties in their own order, which knows nothing of rows.
	sorted := slices.Clone(ties)
	slices.SortFunc(sorted, tie.compare)
	rank := make([]int, len(ties))
	for k, t := range sorted {
		rank[seen[t]] = k
	}
	marks := p.marks(rows, opt.Marks)
	for f := range families {
		family := &families[f]
		n := len(family.People)
		for a := range n {
			for b := range n {
				if a != b {
					family.Relation[a*n+b] = rank[family.Relation[a*n+b]]
				}
			}
		}
		if marks != nil {
			family.Mark = make([]int, n)
			for a, place := range family.People {
				family.Mark[a] = marks[place]
			}
		}
	}
	return families
}

// tie reads what an exchange must keep of two people, without their marks.
func (p *Pedigree) tie(i, j int, dzWithSiblings bool) tie {
	t := tie{kinship: fixed(p.Kinship(i, j)), home: p.SharedHome(i, j)}
	switch p.Relation(i, j) {
	case MZ:
		t.zygosity, t.twins = Monozygotic, true
	case DZSameSex, DZOppositeSex:
		if !dzWithSiblings {
			t.zygosity, t.twins = Dizygotic, true
		}
	case UnknownZygosity:
		t.twins = true
	case ParentChild:
		t.direction = 1
		if p.Mother(i) == j || p.Father(i) == j {
			t.direction = -1
		}
	}
	return t
}

// fixed rounds a kinship to a whole number of 2^-40, so that values which
// differ by rounding only are equal.
func fixed(kinship float64) int64 { return int64(math.Round(math.Ldexp(kinship, 40))) }

// marks returns one code a row for its inbreeding and its code in every
// column, nil when all are equal.
func (p *Pedigree) marks(rows []int, columns [][]int) []int {
	type state struct{ before, value int }
	states := make([]state, len(rows))
	marks := make([]int, len(rows))
	number := func() {
		sorted := slices.Clone(states)
		compare := func(a, b state) int {
			return cmp.Or(cmp.Compare(a.before, b.before), cmp.Compare(a.value, b.value))
		}
		slices.SortFunc(sorted, compare)
		sorted = slices.Compact(sorted)
		for k, s := range states {
			marks[k], _ = slices.BinarySearchFunc(sorted, s, compare)
		}
	}
	for k, i := range rows {
		states[k].value = int(fixed(p.inbred(p.genome[i])))
	}
	number()
	for _, column := range columns {
		for k := range states {
			states[k] = state{marks[k], column[k]}
		}
		number()
	}
	for _, m := range marks {
		if m != 0 {
			return marks
		}
	}
	return nil
}
