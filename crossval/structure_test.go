package crossval_test

import (
	"fmt"
	"math/big"
	"testing"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// graph relates the pairs for which joined holds by one code and the others by
// another.
func graph(joined func(i, j int) bool) func(i, j int) (int, int) {
	return func(i, j int) (int, int) {
		if joined(i, j) {
			return sibling, sibling
		}
		return other, other
	}
}

func cube(i, j int) bool { d := i ^ j; return d&(d-1) == 0 }

func petersen(i, j int) bool { // an outer and an inner ring, spokes between
	switch {
	case j < 5:
		return j-i == 1 || j-i == 4
	case i >= 5:
		return j-i == 2 || j-i == 3
	}
	return j-i == 5
}

func paley(p int) func(i, j int) bool {
	square := make([]bool, p)
	for x := 1; x < p; x++ {
		square[x*x%p] = true
	}
	return func(i, j int) bool { return square[(j-i)%p] }
}

// rings has a ring of ten in the even members and two of five in the odd
// ones. All have two neighbours, so that colours tell none of them apart.
func rings(i, j int) bool {
	switch a, b := i/2, j/2; {
	case i%2 != j%2:
		return false
	case i%2 == 0:
		return b-a == 1 || b-a == 9
	default:
		return a/5 == b/5 && (b-a == 1 || b-a == 4)
	}
}

func rook(i, j int) bool { return i/4 == j/4 || i%4 == j%4 }

func shrikhande(i, j int) bool {
	a, b := (j/4-i/4+4)%4, (j%4-i%4+4)%4
	switch [2]int{a, b} {
	case [2]int{1, 0}, [2]int{3, 0}, [2]int{0, 1}, [2]int{0, 3}, [2]int{1, 1}, [2]int{3, 3}:
		return true
	}
	return false
}

// Graphs whose groups are known (Godsil & Royle 2001, Algebraic Graph Theory;
// for the Paley graph of prime order p it has p (p-1) / 2 elements), of which
// colours alone tell little or nothing.
func TestSymmetriesOfKnownGraphs(t *testing.T) {
	for _, c := range []struct {
		name   string
		size   int
		joined func(i, j int) bool
		order  int64
	}{
		{"cube of 3 dimensions", 8, cube, 48},
		{"cube of 4 dimensions", 16, cube, 384},
		{"cube of 5 dimensions", 32, cube, 3840},
		{"Petersen", 10, petersen, 120},
		{"Paley of order 13", 13, paley(13), 78},
		{"Paley of order 37", 37, paley(37), 666},
		{"rook on a board of 4 by 4", 16, rook, 1152},
		{"Shrikhande", 16, shrikhande, 192},
		{"a ring of ten between two of five: 20 x 10^2 2!", 20, rings, 4000},
	} {
		t.Run(c.name, func(t *testing.T) {
			var made cohort
			made.add(c.size, graph(c.joined))
			e := made.exchange(t)
			if got := e.Structures()[0].Symmetries; got.Cmp(big.NewInt(c.order)) != 0 {
				t.Errorf("%v symmetries, want %d", got, c.order)
			}
			g := newJudge(made.people, made.families)
			series, err := e.Series(int(c.order), 1, "test")
			if err != nil {
				t.Fatal(err)
			}
			seen := make(map[string]bool)
			to := make([]int, c.size)
			for i := range series.Len() {
				series.At(i, to)
				if !g.allows(to) {
					t.Fatalf("arrangement %v", to)
				}
				seen[fmt.Sprint(to)] = true
			}
			if len(seen) != int(c.order)-1 {
				t.Errorf("%d different arrangements", len(seen))
			}
		})
	}
}

// Two families that agree in everything that counting neighbours can say, and
// are not alike; beside them the like of each, members in another order.
func TestFamiliesThatOnlyLookAlike(t *testing.T) {
	var c cohort
	c.add(16, graph(rook))
	c.add(16, graph(shrikhande))
	for f := range 2 {
		order := make([]int, 16)
		stream.New(uint64(f), "test").PermTo(order)
		like := relisted(c.families[f], order)
		for i := range like.People {
			like.People[i] += 32
		}
		c.families = append(c.families, like)
		c.people += 16
	}
	e := c.exchange(t)
	structures := e.Structures()
	if len(structures) != 2 || structures[0].Families != 2 || structures[1].Families != 2 || structures[1].First != 1 {
		t.Fatalf("structures %+v", structures)
	}
	if got := e.Count().Int64(); got != 2*1152*1152*2*192*192 {
		t.Errorf("%d arrangements", got)
	}
	to := make([]int, c.people)
	e.DrawTo(to, stream.New(1, "test"))
	if !newJudge(c.people, c.families).allows(to) {
		t.Error("the arrangement drawn is not allowed")
	}
}

// Families far beyond the usual size.
func TestLargeFamilies(t *testing.T) {
	factorial := func(n int64) *big.Int { return new(big.Int).MulRange(1, n) }
	power := func(base, n int64) *big.Int { return new(big.Int).Exp(big.NewInt(base), big.NewInt(n), nil) }
	times := func(a, b *big.Int) *big.Int { return new(big.Int).Mul(a, b) }
	for _, c := range []struct {
		name    string
		size    int
		related func(i, j int) (int, int)
		order   *big.Int
	}{
		{"two parents and 15 children", 17, parentsFirst, times(big.NewInt(2), factorial(15))},
		{"300 siblings", 300, all(sibling), factorial(300)},
		{"a father, 40 mothers, two children each", 121, donor, times(factorial(40), power(2, 40))},
		{"60 MZ pairs", 120, func(i, j int) (int, int) {
			if i/2 == j/2 {
				return mz, mz
			}
			return sibling, sibling
		}, times(factorial(60), power(2, 60))},
		{"a binary tree of 8 generations", 255, func(i, j int) (int, int) {
			if j == 2*i+1 || j == 2*i+2 {
				return parentOf, childOf
			}
			return other, other
		}, power(2, 127)},
		{"a line of descent of 200", 200, func(i, j int) (int, int) {
			if j == i+1 {
				return parentOf, childOf
			}
			return other, other
		}, big.NewInt(1)},
	} {
		t.Run(c.name, func(t *testing.T) {
			var made cohort
			made.add(c.size, c.related)
			e := made.exchange(t)
			if got := e.Structures()[0].Symmetries; got.Cmp(c.order) != 0 {
				t.Errorf("%v symmetries, want %v", got, c.order)
			}
			to := make([]int, c.size)
			e.DrawTo(to, stream.New(1, "test"))
			if !newJudge(made.people, made.families).allows(to) {
				t.Error("the arrangement drawn is not allowed")
			}
		})
	}
}

// donor is a father of two children by each of some mothers: he comes first,
// then mothers with their children in turn.
func donor(i, j int) (int, int) {
	switch mother := i%3 == 1; {
	case i == 0 && j%3 == 1:
		return spouse, spouse
	case i == 0:
		return parentOf, childOf
	case (i-1)/3 != (j-1)/3:
		return other, other
	case mother:
		return parentOf, childOf
	}
	return sibling, sibling
}

// A tenth of a million pairs, some listed with the twins the other way round
// and a few families of three between them.
func TestManyFamilies(t *testing.T) {
	var c cohort
	for f := range 100_000 {
		switch f % 10 {
		case 0:
			c.add(3, pairAnd(mz))
		case 1:
			c.add(2, func(int, int) (int, int) { return parentOf, childOf })
		case 2:
			c.add(2, func(int, int) (int, int) { return childOf, parentOf })
		default:
			c.add(2, all(dz))
		}
	}
	e := c.exchange(t)
	structures := e.Structures()
	if len(structures) != 3 || structures[0].Families != 10_000 || structures[1].Families != 20_000 || structures[2].Families != 70_000 {
		t.Fatalf("structures %+v", structures)
	}
	to := make([]int, c.people)
	e.DrawTo(to, stream.New(1, "test"))
	home := make([]int, c.people)
	at := make([]int, c.people)
	for f, family := range c.families {
		for i, person := range family.People {
			home[person], at[person] = f, i
		}
	}
	taken := make([]bool, c.people)
	for f, family := range c.families {
		from := home[to[family.People[0]]]
		if len(c.families[from].People) != len(family.People) {
			t.Fatalf("family %d gets the values of a family of another size", f)
		}
		size := len(family.People)
		for i, p := range family.People {
			if taken[to[p]] || home[to[p]] != from {
				t.Fatalf("person %d is given twice or families are torn", to[p])
			}
			taken[to[p]] = true
			for j, q := range family.People {
				if i != j && c.families[from].Relation[at[to[p]]*size+at[to[q]]] != family.Relation[i*size+j] {
					t.Fatalf("relation of places %d and %d is not kept", p, q)
				}
			}
		}
	}
}

// cohortOf is a mix of families as a twin registry has them, members listed in
// any order.
func cohortOf(families int) *cohort {
	c := new(cohort)
	s := stream.New(1, "benchmark")
	for f := range families {
		switch f % 5 {
		case 0:
			c.add(2, all(mz))
		case 1:
			c.add(3, pairAnd(dz))
		case 2:
			c.add(4, pairAnd(mz))
		case 3:
			c.add(6, parentsFirst)
		case 4:
			c.add(1, nil)
		}
		last := &c.families[f]
		order := make([]int, len(last.People))
		s.PermTo(order)
		*last = relisted(*last, order)
	}
	return c
}

func BenchmarkNewExchange(b *testing.B) {
	for _, families := range []int{500, 5000, 50000} {
		c := cohortOf(families)
		b.Run(fmt.Sprint(families), func(b *testing.B) {
			for b.Loop() {
				if _, err := crossval.NewExchange(c.people, c.families); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	b.Run("million pairs", func(b *testing.B) {
		c := new(cohort)
		for range 1_000_000 {
			c.add(2, all(mz))
		}
		for b.Loop() {
			if _, err := crossval.NewExchange(c.people, c.families); err != nil {
				b.Fatal(err)
			}
		}
	})
	for name, related := range map[string]func(i, j int) (int, int){
		"parents and 10 children": parentsFirst,
		"ring of 12":              ring(12, sibling, sibling),
		"all different":           func(i, j int) (int, int) { return 12*i + j, 12*j + i },
	} {
		var c cohort
		c.add(12, related)
		b.Run("12 members/"+name, func(b *testing.B) {
			for b.Loop() {
				if _, err := crossval.NewExchange(c.people, c.families); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkDrawTo(b *testing.B) {
	for _, families := range []int{500, 5000, 50000} {
		c := cohortOf(families)
		e := c.exchange(b)
		to := make([]int, c.people)
		b.Run(fmt.Sprint(families), func(b *testing.B) {
			s := stream.New(1, "benchmark")
			for b.Loop() {
				e.DrawTo(to, s)
			}
		})
	}
}
