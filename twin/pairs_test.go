package twin

import (
	"slices"
	"testing"
)

// pairPeople are two families with every kind of pair.
func pairPeople() []Person {
	return []Person{
		{ID: "a1", Family: "A", Mother: "am", Father: "af", TwinSet: "T1", Zygosity: Monozygotic, Sex: Female},
		{ID: "b1", Family: "B", Mother: "bm", Father: "bf", TwinSet: "T2", Zygosity: Dizygotic, Sex: Female},
		{ID: "am", Family: "A", Sex: Female},
		{ID: "a2", Family: "A", Mother: "am", Father: "af", TwinSet: "T1", Zygosity: Monozygotic, Sex: Female},
		{ID: "b2", Family: "B", Mother: "bm", Father: "bf", TwinSet: "T2", Zygosity: Dizygotic, Sex: Male},
		{ID: "af", Family: "A", Sex: Male},
		{ID: "a3", Family: "A", Mother: "am", Father: "af"},
		{ID: "a4", Family: "A", Mother: "am", Father: "x"},
		{ID: "b3", Family: "B", Mother: "x2", Father: "bf"},
		{ID: "b4", Family: "B", Mother: "b1", Father: "x3"},
		{ID: "b5", Family: "B", Mother: "b1", Father: "x3"},
	}
}

func TestPairCounts(t *testing.T) {
	p, _ := pedigree(t, pairPeople(), Rules{})
	for _, c := range []struct {
		name string
		rows []int
		want []PairCount
	}{
		// By hand. Siblings: a3 with both twins; b4-b5. Half-siblings: a4 with a1,
		// a2, a3 (one mother, so one home); b3 with b1, b2. Parents: am with 4,
		// af with 3, b1 with 2. Others: b4, b5 with b2 (uncle) and b3 (half-aunt
		// or -uncle).
		{"all", []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10}, []PairCount{
			{MZ, 1, 1, 1}, {DZOppositeSex, 1, 1, 1}, {FullSibling, 3, 2, 3}, {HalfSibling, 5, 2, 3},
			{ParentChild, 9, 2, 0}, {Spouse, 1, 1, 0}, {OtherKin, 4, 1, 0}}},
		// Relations come from the whole pedigree, though parents are away.
		{"no parents", []int{10, 8, 4, 0}, []PairCount{{HalfSibling, 1, 1, 0}, {OtherKin, 2, 1, 0}}},
		{"one person", []int{3}, nil},
		{"nobody", nil, nil},
	} {
		if got := p.PairCounts(c.rows); !slices.Equal(got, c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

func TestPairsInOrder(t *testing.T) {
	p, _ := pedigree(t, pairPeople(), Rules{})
	rows := []int{6, 1, 5, 0, 4}
	got := slices.Collect(p.Pairs(rows))
	want := []Pair{{6, 5, ParentChild}, {6, 0, FullSibling}, {5, 0, ParentChild}, {1, 4, DZOppositeSex}}
	if !slices.Equal(got, want) {
		t.Errorf("pairs are %v, want %v", got, want)
	}
	for pair := range p.Pairs(rows) {
		if pair != want[0] {
			t.Errorf("first pair is %v", pair)
		}
		break
	}
}

func TestRowsThatPanic(t *testing.T) {
	p, _ := pedigree(t, pairPeople(), Rules{})
	for name, call := range map[string]func(){
		"twice":           func() { p.PairCounts([]int{1, 2, 1}) },
		"founder":         func() { p.PairCounts([]int{p.Len()}) },
		"negative":        func() { p.Pairs([]int{-1}) },
		"blocks twice":    func() { p.Blocks([]int{0, 0}, BlockOptions{}) },
		"mark too short":  func() { p.Blocks([]int{0, 1}, BlockOptions{Marks: [][]int{{1}}}) },
		"too many marks":  func() { p.Blocks(nil, BlockOptions{Marks: make([][]int, 65)}) },
		"blocks, founder": func() { p.Blocks([]int{p.Len()}, BlockOptions{}) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			call()
		}()
	}
}
