package crossval_test

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// The whole group against all orders of up to seven people: the number, that
// each arrangement of the exhaustive series is allowed and comes once, and who
// is moved by none.
func TestAgainstAllOrders(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		people, families := drawCohort(t, 7, 6)
		e, err := crossval.NewExchange(people, families)
		if err != nil {
			t.Fatal(err)
		}
		g := newJudge(people, families)
		count := 0
		moved := make([]bool, people)
		every(people, func(to []int) {
			if g.allows(to) {
				count++
				for i, a := range to {
					moved[i] = moved[i] || i != a
				}
			}
		})
		if got := e.Count(); got.Cmp(big.NewInt(int64(count))) != 0 {
			t.Fatalf("%v arrangements, %d of all orders are allowed", got, count)
		}
		if got, want := e.Log10(), math.Log10(float64(count)); got != want {
			t.Fatalf("logarithm %v, want %v", got, want)
		}
		fixed, familiesFixed := 0, 0
		for _, f := range families {
			still := 0
			for _, i := range f.People {
				if !moved[i] {
					still++
				}
			}
			fixed += still
			if still == len(f.People) {
				familiesFixed++
			}
		}
		if e.PeopleFixed() != fixed || e.FamiliesFixed() != familiesFixed {
			t.Fatalf("%d people in %d families fixed, want %d in %d", e.PeopleFixed(), e.FamiliesFixed(), fixed, familiesFixed)
		}
		series, err := e.Series(count, 1, "test")
		if count == 1 {
			if !errors.Is(err, crossval.ErrOneArrangement) {
				t.Fatalf("one arrangement: %v", err)
			}
			return
		}
		if err != nil || !series.Exhaustive() || series.Len() != count-1 {
			t.Fatalf("%v: %d arrangements of %d", err, series.Len(), count-1)
		}
		seen := make(map[string]bool)
		to := make([]int, people)
		for i := range series.Len() {
			series.At(i, to)
			if !g.allows(to) || slices.IsSorted(to) {
				t.Fatalf("arrangement %v", to)
			}
			seen[fmt.Sprint(to)] = true
		}
		if len(seen) != count-1 {
			t.Fatalf("%d of %d arrangements differ", len(seen), count-1)
		}
	})
}

// Larger families: what is drawn is allowed, nothing given is changed, and
// neither the order of members nor that of families matters to the number.
func TestDrawsKeepEveryRelation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		people, families := drawCohort(t, 40, 8)
		before := fmt.Sprint(families)
		e, err := crossval.NewExchange(people, families)
		if err != nil {
			t.Fatal(err)
		}
		g := newJudge(people, families)
		to := make([]int, people)
		s := stream.New(rapid.Uint64().Draw(t, "seed"), "test")
		for range 20 {
			e.DrawTo(to, s)
			if !g.allows(to) {
				t.Fatalf("arrangement %v is not allowed", to)
			}
		}
		if fmt.Sprint(families) != before {
			t.Fatal("families were changed")
		}
		total := 0
		for _, structure := range e.Structures() {
			total += structure.Size * structure.Families
			if len(families[structure.First].People) != structure.Size {
				t.Fatalf("structure %+v", structure)
			}
		}
		if total != people {
			t.Fatalf("structures hold %d of %d people", total, people)
		}
		again := rapid.Permutation(families).Draw(t, "order of families")
		for f := range again {
			again[f] = relisted(again[f], rapid.Permutation(upTo(len(again[f].People))).Draw(t, "order of members"))
		}
		e2, err := crossval.NewExchange(people, again)
		if err != nil {
			t.Fatal(err)
		}
		if e.Count().Cmp(e2.Count()) != 0 || len(e.Structures()) != len(e2.Structures()) {
			t.Fatalf("%v arrangements, %v with members in another order", e.Count(), e2.Count())
		}
	})
}

// Counting by hand: families! x symmetries^families over structures.
func TestCounts(t *testing.T) {
	for _, c := range []struct {
		name          string
		build         func(*cohort)
		count         int64
		fixed, people int // families and people that nothing moves
	}{
		{"3 MZ pairs, 2 DZ pairs, 4 singles: (3! 2^3)(2! 2^2) 4!", func(c *cohort) {
			for range 3 {
				c.add(2, all(mz))
			}
			for range 2 {
				c.add(2, all(dz))
			}
			for range 4 {
				c.add(1, nil)
			}
		}, 9216, 0, 0},
		{"MZ pair and a sibling, twice: 2! 2^2", func(c *cohort) {
			c.add(3, pairAnd(mz))
			c.add(3, pairAnd(mz))
		}, 8, 0, 0},
		{"DZ pair and two siblings: 2! 2!", func(c *cohort) { c.add(4, pairAnd(dz)) }, 4, 0, 0},
		{"parents and three children, a single: 3!", func(c *cohort) {
			c.add(5, func(i, j int) (int, int) {
				if j == 1 {
					return spouse, other // a marriage in which sides differ
				}
				return parentsFirst(i, j)
			})
			c.add(1, nil)
		}, 6, 1, 3},
		{"two MZ pairs in one family: 2! 2^2", func(c *cohort) {
			c.add(4, func(i, j int) (int, int) {
				if i/2 == j/2 {
					return mz, mz
				}
				return sibling, sibling
			})
		}, 8, 0, 0},
		{"mother and child", func(c *cohort) { c.add(2, func(int, int) (int, int) { return parentOf, childOf }) }, 1, 1, 2},
		{"ring with a direction", func(c *cohort) { c.add(5, ring(5, parentOf, childOf)) }, 5, 0, 0},
		{"ring without", func(c *cohort) { c.add(7, ring(7, sibling, sibling)) }, 14, 0, 0},
		{"different codes both ways: 2", func(c *cohort) {
			c.add(2, func(int, int) (int, int) { return parentOf, childOf })
			c.add(2, func(int, int) (int, int) { return childOf, parentOf })
		}, 2, 0, 0},
		{"one person", func(c *cohort) { c.add(1, nil) }, 1, 1, 1},
		{"nobody", func(*cohort) {}, 1, 0, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			var made cohort
			c.build(&made)
			e := made.exchange(t)
			if got := e.Count(); got.Cmp(big.NewInt(c.count)) != 0 {
				t.Errorf("%v arrangements, want %d", got, c.count)
			}
			if e.FamiliesFixed() != c.fixed || e.PeopleFixed() != c.people {
				t.Errorf("%d families, %d people fixed, want %d, %d", e.FamiliesFixed(), e.PeopleFixed(), c.fixed, c.people)
			}
		})
	}
}

// Ten families of different structure in which nobody can move.
func TestOneArrangementIsRefused(t *testing.T) {
	var c cohort
	for size := 2; size < 12; size++ {
		c.add(size, func(int, int) (int, int) { return parentOf, childOf })
	}
	e := c.exchange(t)
	if _, err := e.Series(1000, 1, "test"); !errors.Is(err, crossval.ErrOneArrangement) {
		t.Errorf("got %v", err)
	}
	if e.FamiliesFixed() != 10 || e.PeopleFixed() != c.people || e.Log10() != 0 {
		t.Errorf("%d families and %d of %d people fixed, logarithm %v", e.FamiliesFixed(), e.PeopleFixed(), c.people, e.Log10())
	}
	if _, err := e.Series(0, 1, "test"); err == nil || errors.Is(err, crossval.ErrOneArrangement) {
		t.Errorf("no permutation asked: %v", err)
	}
}

func TestMarksKeepPeopleApart(t *testing.T) {
	var c cohort
	for range 4 {
		c.add(2, all(dz))
	}
	for range 3 {
		c.add(1, nil)
	}
	if got := c.exchange(t).Count().Int64(); got != 24*16*6 {
		t.Fatalf("without marks %d", got)
	}
	// A site each for two and two pairs, two and one singles.
	for f, site := range []int{1, 1, 2, 2, 1, 1, 2} {
		c.families[f].Mark = slices.Repeat([]int{site}, len(c.families[f].People))
	}
	if got := c.exchange(t).Count().Int64(); got != 2*2*16*2 {
		t.Errorf("with a site each %d", got)
	}
	// No mark is the mark 0.
	c.families[0].Mark, c.families[1].Mark = nil, []int{0, 0}
	if got := c.exchange(t).Count().Int64(); got != 2*2*16*2 {
		t.Errorf("with a site of mark 0 %d", got)
	}
	// A mark of its own for each: everyone stays inside.
	for f := range c.families {
		c.families[f].Mark = slices.Repeat([]int{f}, len(c.families[f].People))
	}
	e := c.exchange(t)
	if got := e.Count().Int64(); got != 16 || e.PeopleFixed() != 3 {
		t.Errorf("inside families %d, %d people fixed", got, e.PeopleFixed())
	}
	// Twins of different mark stay where they are.
	c.families[0].Mark = []int{0, 7}
	if got := c.exchange(t).Count().Int64(); got != 8 {
		t.Errorf("with one pair held %d", got)
	}
}

func TestFamiliesThatDoNotFit(t *testing.T) {
	pair := func(a, b int) crossval.Family {
		return crossval.Family{People: []int{a, b}, Relation: []int{0, 1, 1, 0}}
	}
	for _, c := range []struct {
		name     string
		people   int
		families []crossval.Family
		want     string
	}{
		{"fewer than no people", -1, nil, "crossval: -1 people"},
		{"left out", 5, []crossval.Family{pair(0, 4)}, "crossval: 3 people are in no family, the first is person 1"},
		{"twice", 3, []crossval.Family{pair(0, 1), pair(1, 2)}, "crossval: person 1 is in two families or twice in one, the second time in family 1"},
		{"unknown", 2, []crossval.Family{pair(0, 2)}, "crossval: family 0 has person 2 of 2 people"},
		{"empty", 0, []crossval.Family{{}}, "crossval: family 0 has no members"},
		{"relations", 2, []crossval.Family{{People: []int{0, 1}, Relation: []int{1}}}, "crossval: family 0 of 2 members has 1 relations"},
		{"marks", 2, []crossval.Family{{People: []int{0, 1}, Relation: []int{0, 1, 1, 0}, Mark: []int{1}}}, "crossval: family 0 of 2 members has 1 marks"},
	} {
		if _, err := crossval.NewExchange(c.people, c.families); err == nil || err.Error() != c.want {
			t.Errorf("%s: got %v", c.name, err)
		}
	}
}

// The logarithm of a number that no float64 holds.
func TestLog10OfManyFamilies(t *testing.T) {
	var c cohort
	for f := range 900 {
		switch f % 3 {
		case 0:
			c.add(2, all(mz))
		case 1:
			c.add(5, parentsFirst)
		case 2:
			c.add(5, ring(5, sibling, sibling))
		}
	}
	e := c.exchange(t)
	// 300!^3 2^300 (2! 3!)^300 10^300
	text := e.Count().String()
	want := float64(len(text)-1) + math.Log10(float64(text[0]-'0')+float64(text[1]-'0')/10+float64(text[2]-'0')/100+float64(text[3]-'0')/1000+float64(text[4]-'0')/1e4+float64(text[5]-'0')/1e5)
	if got := e.Log10(); math.Abs(got-want) > 1e-5 {
		t.Errorf("logarithm %v, want %v", got, want)
	}
	lgamma, _ := math.Lgamma(301)
	near(t, "logarithm", e.Log10(), 3*lgamma/math.Ln10+300*math.Log10(2*12*10), 1e-13)
}

// Three pairs of identical twins, two pairs of fraternal twins and four single
// people can be rearranged in (3! x 2^3)(2! x 2^2) 4! = 9216 ways.
func ExampleNewExchange() {
	const identical, fraternal = 1, 2
	pair := func(i, kind int) crossval.Family {
		return crossval.Family{People: []int{i, i + 1}, Relation: []int{0, kind, kind, 0}}
	}
	families := []crossval.Family{
		pair(0, identical), pair(2, identical), pair(4, identical),
		pair(6, fraternal), pair(8, fraternal),
	}
	for i := 10; i < 14; i++ {
		families = append(families, crossval.Family{People: []int{i}, Relation: []int{0}})
	}
	e, err := crossval.NewExchange(14, families)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(e.Count(), "arrangements")
	to := make([]int, 14)
	e.DrawTo(to, stream.New(20260112, "arrangements", 0))
	fmt.Println("identical:", to[:6], "fraternal:", to[6:10], "single:", to[10:])
	// Output:
	// 9216 arrangements
	// identical: [0 1 5 4 3 2] fraternal: [9 8 7 6] single: [12 11 13 10]
}
