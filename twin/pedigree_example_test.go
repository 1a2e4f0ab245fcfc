package twin_test

import (
	"fmt"

	"kindwell/twin"
)

// A family of identical twins, their brother and their mother, of whom the
// brother's row names no father, and a cousin under another label.
func ExampleNewPedigree() {
	people := []twin.Person{
		{ID: "ada", Family: "1", Sex: twin.Female},
		{ID: "bea", Family: "1", Mother: "ada", TwinSet: "t1", Zygosity: twin.Monozygotic},
		{ID: "cat", Family: "1", Mother: "ada", TwinSet: "t1", Zygosity: twin.Monozygotic},
		{ID: "dan", Family: "1", Mother: "ada"},
		{ID: "eve", Family: "2", Mother: "cat"},
	}
	p, notes, err := twin.NewPedigree(people, twin.Rules{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, pair := range [][2]int{{0, 1}, {1, 2}, {1, 3}, {1, 4}, {3, 4}} {
		i, j := pair[0], pair[1]
		fmt.Println(people[i].ID, people[j].ID, p.Relation(i, j), p.Kinship(i, j), p.SharedHome(i, j))
	}
	for _, n := range notes {
		fmt.Println(n.Message)
	}
	// Output:
	// ada bea parent_child 0.5 false
	// bea cat mz 1 true
	// bea dan full_sibling 0.5 true
	// bea eve other_kin 0.5 false
	// dan eve other_kin 0.25 false
	// 3 people share one parent, the other being unknown for all of them, with no two family labels: taken as full siblings (unknown_parent: same): bea, cat, dan.
	// 1 family of several labels, tied by a parent, a twin set or a stated home, each made one under its first label: 1 = 2.
}

// Contradictions are found all at once, each with person and field.
func ExampleNewPedigree_faults() {
	people := []twin.Person{
		{ID: "a", Mother: "b"},
		{ID: "b", Mother: "a"},
		{ID: "c", Zygosity: twin.Dizygotic},
	}
	_, _, err := twin.NewPedigree(people, twin.Rules{})
	fmt.Println(err)
	// Output:
	// person 0, mother: "a" is their own ancestor; child to parent: "a", "b", "a"
	// person 2, zygosity: "c" is DZ without a twin set
}

func ExamplePedigree_PairCounts() {
	people := []twin.Person{
		{ID: "a", Mother: "m", Father: "f", TwinSet: "t", Zygosity: twin.Dizygotic, Sex: twin.Male},
		{ID: "b", Mother: "m", Father: "f", TwinSet: "t", Zygosity: twin.Dizygotic, Sex: twin.Female},
		{ID: "c", Mother: "m", Father: "f"},
		{ID: "m"},
	}
	p, _, err := twin.NewPedigree(people, twin.Rules{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, c := range p.PairCounts([]int{0, 1, 2, 3}) {
		fmt.Println(c.Relation, c.Pairs, c.Families, c.SharingHome)
	}
	// Output:
	// dz_opposite_sex 1 1 1
	// full_sibling 2 1 2
	// parent_child 3 1 0
}

// Two pairs of identical twins and a sibling of one of them: each pair may be
// turned, but the families differ and keep their places.
func ExamplePedigree_Blocks() {
	people := []twin.Person{
		{ID: "a1", Mother: "m", Father: "f", TwinSet: "a", Zygosity: twin.Monozygotic},
		{ID: "a2", Mother: "m", Father: "f", TwinSet: "a", Zygosity: twin.Monozygotic},
		{ID: "a3", Mother: "m", Father: "f"},
		{ID: "b1", TwinSet: "b", Zygosity: twin.Monozygotic},
		{ID: "b2", TwinSet: "b", Zygosity: twin.Monozygotic},
	}
	p, _, err := twin.NewPedigree(people, twin.Rules{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, family := range p.Blocks([]int{0, 1, 2, 3, 4}, twin.BlockOptions{}) {
		fmt.Println(family.People, family.Relation)
	}
	// Output:
	// [0 1 2] [0 1 0 1 0 0 0 0 0]
	// [3 4] [0 1 1 0]
}
