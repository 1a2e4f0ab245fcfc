package twin

import (
	"fmt"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"kindwell/crossval"
)

// onto counts the ways to put the members of one family into the places of
// another with equal relations and marks, by trying all.
func onto(a, b crossval.Family) int {
	n := len(a.People)
	if n != len(b.People) {
		return 0
	}
	place := make([]int, 0, n)
	taken := make([]bool, n)
	var extend func() int
	extend = func() int {
		i := len(place)
		if i == n {
			return 1
		}
		ways := 0
		for to := range n {
			fits := !taken[to] && (a.Mark == nil || a.Mark[i] == b.Mark[to])
			for j := 0; fits && j < i; j++ {
				fits = a.Relation[i*n+j] == b.Relation[to*n+place[j]] && a.Relation[j*n+i] == b.Relation[place[j]*n+to]
			}
			if fits {
				taken[to] = true
				place = append(place, to)
				ways += extend()
				place = place[:i]
				taken[to] = false
			}
		}
		return ways
	}
	return extend()
}

// arrangements counts the allowed ones: for families of one structure, their
// orders times each one's own symmetries.
func arrangements(families []crossval.Family) int {
	count := 1
	for f, family := range families {
		count *= onto(family, family)
		alike := 1
		for _, before := range families[:f] {
			if onto(family, before) > 0 {
				alike++
			}
		}
		count *= alike
	}
	return count
}

// twins returns a family of a pair with the given zygosity and some siblings.
func twins(label string, z Zygosity, siblings int) []Person {
	people := []Person{{Family: label, TwinSet: label, Zygosity: z}, {Family: label, TwinSet: label, Zygosity: z}}
	for range siblings {
		people = append(people, Person{Family: label})
	}
	for i := range people {
		people[i].ID = fmt.Sprint(label, i)
		people[i].Mother, people[i].Father = label+"m", label+"f"
	}
	return people
}

// The number of allowed arrangements, each by hand: orders of the families of
// one structure times the symmetries of each.
func TestArrangementsThatBlocksAllow(t *testing.T) {
	const mz, dz = Monozygotic, Dizygotic
	single := func(id string) []Person { return []Person{{ID: id}} }
	for _, c := range []struct {
		name   string
		people []Person
		opt    BlockOptions
		want   int
	}{
		{"3 MZ pairs, 2 DZ pairs, 4 single people", slices.Concat(
			twins("A", mz, 0), twins("B", dz, 0), single("s1"), twins("C", mz, 0), single("s2"), twins("D", mz, 0), twins("E", dz, 0), single("s3"), single("s4")),
			BlockOptions{}, 9216}, // 3! 2^3 x 2! 2^2 x 4!
		{"MZ pair and sibling twice", slices.Concat(twins("A", mz, 1), twins("B", mz, 1)), BlockOptions{}, 8},                   // 2! 2^2
		{"DZ pair and sibling twice", slices.Concat(twins("A", dz, 1), twins("B", dz, 1)), BlockOptions{}, 8},                   // 2! 2^2
		{"the same with siblings", slices.Concat(twins("A", dz, 1), twins("B", dz, 1)), BlockOptions{DZWithSiblings: true}, 72}, // 2! (3!)^2
		{"MZ pairs never with siblings", twins("A", mz, 1), BlockOptions{DZWithSiblings: true}, 2},
		{"unknown zygosity is its own", slices.Concat(twins("A", ZygosityUnknown, 0), twins("B", dz, 0), twins("C", mz, 0)), BlockOptions{}, 8},
		{"unknown zygosity not with siblings", twins("A", ZygosityUnknown, 1), BlockOptions{DZWithSiblings: true}, 2},
		{"one of each structure", slices.Concat(single("s"), []Person{
			{ID: "m"}, {ID: "c", Mother: "m"}, // mother and child
			{ID: "g"}, {ID: "d", Mother: "g"}, {ID: "e", Mother: "d"}, // three generations
			{ID: "g2"}, {ID: "d2", Mother: "g2"}, {ID: "e2", Mother: "d2"}, {ID: "f2", Mother: "e2"},
		}), BlockOptions{}, 1},
		{"parents and two children", []Person{{ID: "m"}, {ID: "f"}, {ID: "a", Mother: "m", Father: "f"}, {ID: "b", Mother: "m", Father: "f"}}, BlockOptions{}, 4},
		{"full and half-siblings", []Person{{ID: "a", Mother: "m", Father: "f"}, {ID: "b", Mother: "m", Father: "f"}, {ID: "c", Mother: "m", Father: "g"}}, BlockOptions{}, 2},
		{"half-siblings by mother or father differ in home", []Person{
			{ID: "a", Mother: "m", Father: "f"}, {ID: "b", Mother: "m", Father: "g"},
			{ID: "c", Mother: "k", Father: "h"}, {ID: "d", Mother: "l", Father: "h"}}, BlockOptions{}, 4}, // 2 x 2, no exchange
		{"siblings of two homes", []Person{{ID: "a", Mother: "m", Father: "f", RearedIn: "1"}, {ID: "b", Mother: "m", Father: "f", RearedIn: "1"},
			{ID: "c", Mother: "m", Father: "f", RearedIn: "2"}}, BlockOptions{}, 2},
		{"marks", slices.Concat(twins("A", dz, 0), twins("B", dz, 0), single("s1"), single("s2"), single("s3")),
			BlockOptions{Marks: [][]int{{7, 7, 7, 9, 7, 7, 9}}}, 4}, // A swaps, B does not; s1 with s2
		{"two columns of marks", slices.Concat(single("s1"), single("s2"), single("s3"), single("s4")),
			BlockOptions{Marks: [][]int{{1, 1, 2, 2}, {5, 5, 5, 6}}}, 2},
		{"an inbred person", []Person{{ID: "s1"}, {ID: "a", Mother: "m", Father: "f"}, {ID: "s2"}}, BlockOptions{}, 6},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, _ := pedigree(t, c.people, Rules{})
			families := p.Blocks(indices(p.Len()), c.opt)
			if got := arrangements(families); got != c.want {
				t.Errorf("%d arrangements, want %d", got, c.want)
			}
			exchange, err := crossval.NewExchange(p.Len(), families)
			if err != nil {
				t.Fatal(err)
			}
			if got := exchange.Count(); !got.IsInt64() || got.Int64() != int64(c.want) {
				t.Errorf("%v arrangements counted by crossval, want %d", got, c.want)
			}
		})
	}
}

// A person whose parents are related has another variance, and trades places
// with nobody whose parents are not.
func TestInbredPersonIsMarked(t *testing.T) {
	people := []Person{{ID: "a", Mother: "m", Father: "f"}, {ID: "b", Mother: "m", Father: "f"}, {ID: "c", Mother: "a", Father: "b"}, {ID: "s"}, {ID: "t"}}
	p, _ := pedigree(t, people, Rules{})
	families := p.Blocks([]int{2, 3, 4}, BlockOptions{})
	if got := arrangements(families); got != 2 {
		t.Errorf("%d arrangements, want 2: %+v", got, families)
	}
}

func TestBlocksHoldPlacesInRows(t *testing.T) {
	p, _ := pedigree(t, pairPeople(), Rules{})
	families := p.Blocks([]int{6, 1, 0, 4, 3}, BlockOptions{})
	if len(families) != 2 || !slices.Equal(families[0].People, []int{0, 2, 4}) || !slices.Equal(families[1].People, []int{1, 3}) {
		t.Fatalf("families %+v", families)
	}
	r := families[0].Relation // a3, a1, a2
	if r[1] != r[2] || r[1] != r[3] || r[5] != r[7] || r[5] == r[1] {
		t.Errorf("codes of a sibling and identical twins: %v", r)
	}
	if d := families[1].Relation[1]; d == r[1] || d == r[5] || d != families[1].Relation[2] {
		t.Errorf("code of DZ twins is %d beside %v", d, r)
	}
	if families[0].Mark != nil || families[1].Mark != nil {
		t.Error("marks without cause")
	}
	same := p.Blocks([]int{6, 1}, BlockOptions{Marks: [][]int{{3, 3}}})
	if same[0].Mark != nil {
		t.Error("marks that are all equal")
	}
}

// Codes are equal exactly when all that an exchange must keep is, in whatever
// order rows come, and marked people keep their marks.
func TestCodesMeanTheSameEverywhere(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, _, err := NewPedigree(drawPeople(t), drawRules(t))
		if err != nil {
			t.Fatal(err)
		}
		rows := rapid.Permutation(indices(p.Len())).Draw(t, "rows")
		rows = rows[:rapid.IntRange(0, len(rows)).Draw(t, "present")]
		site := make([]int, p.Len()) // by person
		for i := range site {
			site[i] = rapid.IntRange(0, 2).Draw(t, "site")
		}
		sites := func(rows []int) [][]int {
			column := make([]int, len(rows))
			for place, i := range rows {
				column[place] = site[i]
			}
			return [][]int{column}
		}
		type kept struct {
			k        float64
			relation Relation // of twins only
			home     bool
			parent   int
			site     bool
		}
		keep := func(i, j int) kept {
			all := kept{k: p.Kinship(i, j), home: p.SharedHome(i, j), site: site[i] == site[j]}
			switch r := p.Relation(i, j); r {
			case MZ, UnknownZygosity, DZSameSex:
				all.relation = r
			case DZOppositeSex:
				all.relation = DZSameSex
			}
			switch {
			case p.Mother(j) == i || p.Father(j) == i:
				all.parent = 1
			case p.Mother(i) == j || p.Father(i) == j:
				all.parent = 2
			}
			return all
		}
		codes, meanings := map[kept]int{}, map[int]kept{}
		byPair, markOf := map[[2]int]int{}, map[int]int{}
		members := 0
		for _, f := range p.Blocks(rows, BlockOptions{Marks: sites(rows)}) {
			members += len(f.People)
			for a, first := range f.People {
				if f.Mark != nil {
					markOf[rows[first]] = f.Mark[a]
				}
				for b, second := range f.People {
					if a == b {
						continue
					}
					i, j := rows[first], rows[second]
					code, all := f.Relation[a*len(f.People)+b], keep(i, j)
					byPair[[2]int{i, j}] = code
					if c, ok := codes[all]; ok && c != code {
						t.Errorf("%+v has the codes %d and %d", all, c, code)
					}
					if m, ok := meanings[code]; ok && m != all {
						t.Errorf("code %d means %+v and %+v", code, m, all)
					}
					codes[all], meanings[code] = code, all
				}
			}
		}
		if members != len(rows) {
			t.Errorf("%d members of families, %d rows", members, len(rows))
		}
		slices.Sort(rows)
		for _, f := range p.Blocks(rows, BlockOptions{Marks: sites(rows)}) {
			for a, first := range f.People {
				if f.Mark != nil && markOf[rows[first]] != f.Mark[a] {
					t.Errorf("mark of %d moved from %d to %d", rows[first], markOf[rows[first]], f.Mark[a])
				}
				for b, second := range f.People {
					if a != b && byPair[[2]int{rows[first], rows[second]}] != f.Relation[a*len(f.People)+b] {
						t.Errorf("code of %d and %d depends on the order of rows", rows[first], rows[second])
					}
				}
			}
		}
		if len(markOf) == 0 {
			for _, i := range rows {
				if site[i] != site[rows[0]] {
					t.Errorf("sites differ without marks")
				}
			}
		}
	})
}
