package crossval_test

import (
	"math"

	"pgregory.net/rapid"

	"kindwell/crossval"
)

// Codes of relations, as far as these tests are concerned.
const (
	mz = iota + 1
	dz
	sibling
	parentOf
	childOf
	spouse
	other
)

// cohort gathers families of people numbered in the order they come.
type cohort struct {
	people   int
	families []crossval.Family
}

// add adds a family of a size whose relations between members i < j are those
// of related, as seen from i and from j.
func (c *cohort) add(size int, related func(i, j int) (ij, ji int)) {
	family := crossval.Family{Relation: make([]int, size*size)}
	for i := range size {
		family.People = append(family.People, c.people)
		c.people++
		for j := i + 1; j < size; j++ {
			family.Relation[i*size+j], family.Relation[j*size+i] = related(i, j)
		}
	}
	c.families = append(c.families, family)
}

// all says that every two members are related by one code.
func all(code int) func(i, j int) (int, int) {
	return func(int, int) (int, int) { return code, code }
}

// pairAnd is a family of twins of a kind and siblings of theirs.
func pairAnd(code int) func(i, j int) (int, int) {
	return func(i, j int) (int, int) {
		if j == 1 {
			return code, code
		}
		return sibling, sibling
	}
}

// parentsFirst is two parents and their children.
func parentsFirst(i, j int) (int, int) {
	switch {
	case j == 1:
		return spouse, spouse
	case i <= 1:
		return parentOf, childOf
	}
	return sibling, sibling
}

// ring is a cycle: neighbours are related by one code forwards and one
// backwards.
func ring(size, forwards, backwards int) func(i, j int) (int, int) {
	return func(i, j int) (int, int) {
		switch {
		case j == i+1:
			return forwards, backwards
		case i == 0 && j == size-1:
			return backwards, forwards
		}
		return other, other
	}
}

func (c *cohort) exchange(t interface{ Fatal(...any) }) *crossval.Exchange {
	e, err := crossval.NewExchange(c.people, c.families)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

// judge says whether an arrangement is allowed, pair by pair of all people.
type judge struct {
	relation [][]int // 0: unrelated
	mark     []int
}

func newJudge(people int, families []crossval.Family) judge {
	g := judge{relation: make([][]int, people), mark: make([]int, people)}
	for i := range g.relation {
		g.relation[i] = make([]int, people)
	}
	for _, f := range families {
		for a, i := range f.People {
			if f.Mark != nil {
				g.mark[i] = f.Mark[a]
			}
			for b, j := range f.People {
				if i != j {
					g.relation[i][j] = f.Relation[a*len(f.People)+b]
				}
			}
		}
	}
	return g
}

func (g judge) allows(to []int) bool {
	taken := make([]bool, len(to))
	for i, a := range to {
		if a < 0 || a >= len(to) || taken[a] || g.mark[a] != g.mark[i] {
			return false
		}
		taken[a] = true
		for j, b := range to[:i] {
			if g.relation[a][b] != g.relation[i][j] || g.relation[b][a] != g.relation[j][i] {
				return false
			}
		}
	}
	return true
}

// every calls f with every order of 0..n-1.
func every(n int, f func(to []int)) {
	to := make([]int, n)
	for i := range to {
		to[i] = i
	}
	var from func(at int)
	from = func(at int) {
		if at == n {
			f(to)
			return
		}
		for i := at; i < n; i++ {
			to[at], to[i] = to[i], to[at]
			from(at + 1)
			to[at], to[i] = to[i], to[at]
		}
	}
	from(0)
}

// drawKin draws a family in which symmetries are likely: members are of a few
// kinds, placed in a few houses, and their relation depends on these alone,
// with some pairs changed at random.
func drawKin(t *rapid.T, size int) crossval.Family {
	kinds := rapid.SliceOfN(rapid.IntRange(0, 1), size, size).Draw(t, "kinds")
	houses := rapid.SliceOfN(rapid.IntRange(0, 2), size, size).Draw(t, "houses")
	table := rapid.SliceOfN(rapid.IntRange(1, 3), 8, 8).Draw(t, "table")
	f := crossval.Family{Relation: make([]int, size*size)}
	for i := range size {
		f.Relation[i*size+i] = rapid.IntRange(-5, 5).Draw(t, "diagonal") // not read
		for j := range size {
			if i == j {
				continue
			}
			at := 4*kinds[i] + 2*kinds[j]
			if houses[i] == houses[j] {
				at++
			}
			f.Relation[i*size+j] = table[at]
		}
	}
	if size > 1 {
		for range rapid.IntRange(0, 2).Draw(t, "changes") {
			i := rapid.IntRange(0, size-1).Draw(t, "i")
			j := rapid.IntRange(0, size-1).Draw(t, "j")
			if i != j {
				f.Relation[i*size+j] = rapid.IntRange(1, 3).Draw(t, "code")
			}
		}
	}
	if rapid.IntRange(0, 3).Draw(t, "marked") == 0 {
		f.Mark = rapid.SliceOfN(rapid.IntRange(0, 1), size, size).Draw(t, "marks")
	}
	return f
}

// relisted is a family with its members listed in another order.
func relisted(f crossval.Family, order []int) crossval.Family {
	size := len(order)
	out := crossval.Family{Relation: make([]int, size*size)}
	if f.Mark != nil {
		out.Mark = make([]int, size)
	}
	for a, i := range order {
		if f.People != nil {
			out.People = append(out.People, f.People[i])
		}
		if f.Mark != nil {
			out.Mark[a] = f.Mark[i]
		}
		for b, j := range order {
			out.Relation[a*size+b] = f.Relation[i*size+j]
		}
	}
	return out
}

func upTo(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = i
	}
	return out
}

// drawCohort draws families, some of them the like of an earlier one with its
// members in another order, with people numbered at random.
func drawCohort(t *rapid.T, most, largest int) (people int, families []crossval.Family) {
	for people < most {
		if len(families) > 0 && rapid.Bool().Draw(t, "again") {
			like := families[rapid.IntRange(0, len(families)-1).Draw(t, "like")]
			size := int(math.Sqrt(float64(len(like.Relation))))
			if people+size > most {
				break
			}
			families = append(families, relisted(like, rapid.Permutation(upTo(size)).Draw(t, "order")))
			people += size
			continue
		}
		size := rapid.IntRange(1, min(largest, most-people)).Draw(t, "size")
		families = append(families, drawKin(t, size))
		people += size
		if rapid.IntRange(0, 4).Draw(t, "stop") == 0 {
			break
		}
	}
	number := rapid.Permutation(upTo(people)).Draw(t, "people")
	for f := range families {
		size := int(math.Sqrt(float64(len(families[f].Relation))))
		families[f].People, number = number[:size:size], number[size:]
	}
	return people, families
}
