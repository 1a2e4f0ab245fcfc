package twin

import (
	"slices"
	"strings"
	"testing"
)

// Who shares a home with whom, as a letter a person: equal letters share one.
func TestHomes(t *testing.T) {
	rows := func(people ...Person) []Person {
		for i := range people {
			people[i].ID = string(rune('a' + i))
		}
		return people
	}
	both, other := Rules{RearedWith: WithBoth}, Rules{UnknownParent: AssumeOtherParent}
	for _, c := range []struct {
		name   string
		rules  Rules
		people []Person
		want   string
		filled []int // people of the note about reared_in
	}{
		// The three children of checks that had no partition when any shared
		// parent made a home: (m1 f1), (m1 f2), (m2 f2).
		{"mother", Rules{}, rows(Person{Mother: "m1", Father: "f1"}, Person{Mother: "m1", Father: "f2"}, Person{Mother: "m2", Father: "f2"}), "xxy", nil},
		{"both", both, rows(Person{Mother: "m1", Father: "f1"}, Person{Mother: "m1", Father: "f2"}, Person{Mother: "m2", Father: "f2"}), "xyz", nil},
		{"both, full siblings", both, rows(Person{Mother: "m1", Father: "f1"}, Person{Mother: "m1", Father: "f1"}), "xx", nil},
		{"parents and children", Rules{}, rows(Person{Family: "F"}, Person{Family: "F"}, Person{Family: "F", Mother: "a", Father: "b"},
			Person{Family: "F", Mother: "a", Father: "b"}), "xyzz", nil},
		{"cousins", Rules{}, rows(Person{Mother: "m"}, Person{Mother: "m"}, Person{Mother: "a"}, Person{Mother: "b"}), "xxyz", nil},
		{"twins without parents", Rules{}, rows(Person{TwinSet: "T"}, Person{TwinSet: "T"}, Person{}), "xxy", nil},
		{"twins without parents, both", both, rows(Person{TwinSet: "T"}, Person{TwinSet: "T"}, Person{}), "xxy", nil},
		{"siblings by label", Rules{}, rows(Person{Family: "F"}, Person{Family: "F"}, Person{Family: "G"}), "xxy", nil},
		{"unrelated by label", Rules{UnknownParents: AssumeUnrelated}, rows(Person{Family: "F"}, Person{Family: "F"}), "xy", nil},
		{"father in common, the same mother", Rules{}, rows(Person{Father: "f"}, Person{Father: "f"}), "xx", nil},
		{"father in common, another mother", other, rows(Person{Father: "f"}, Person{Father: "f"}), "xy", nil},
		{"mother in common, another father", other, rows(Person{Mother: "m"}, Person{Mother: "m"}), "xx", nil},
		{"mother in common, another father, both", Rules{UnknownParent: AssumeOtherParent, RearedWith: WithBoth},
			rows(Person{Mother: "m"}, Person{Mother: "m"}), "xy", nil},

		{"stated: twins apart", Rules{}, rows(Person{Mother: "m", TwinSet: "T", RearedIn: "1"}, Person{Mother: "m", TwinSet: "T", RearedIn: "2"}), "xy", nil},
		{"stated: adopted", Rules{}, rows(Person{Mother: "m", RearedIn: "1"}, Person{Mother: "n", RearedIn: "1"}), "xx", nil},
		{"stated: nobody else states one", Rules{}, rows(Person{Mother: "m"}, Person{Mother: "m"}, Person{RearedIn: "1"}), "xxy", nil},
		{"stated: a sibling's home", Rules{}, rows(Person{Mother: "m", RearedIn: "1"}, Person{Mother: "m"}, Person{Mother: "n", RearedIn: "1"}), "xxx", []int{1}},
		{"stated: siblings of two homes", Rules{}, rows(Person{Mother: "m", RearedIn: "1"}, Person{Mother: "m"}, Person{Mother: "m", RearedIn: "2"},
			Person{Mother: "m"}), "xyzy", nil},
		{"stated: sibship and mother", both, rows(Person{Mother: "m", Father: "f", RearedIn: "1"}, Person{Mother: "m", Father: "f"},
			Person{Mother: "m", Father: "g"}), "xxy", []int{1}},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, notes := pedigree(t, c.people, c.rules)
			for i := range c.people {
				for j := range c.people {
					if got, want := p.SharedHome(i, j), c.want[i] == c.want[j]; got != want {
						t.Errorf("home of %d and %d shared: %v, want %v", i, j, got, want)
					}
					if p.SharedHome(i, j) && p.Family(i) != p.Family(j) {
						t.Errorf("%d and %d share a home but no family", i, j)
					}
				}
			}
			var filled []int
			for _, n := range notesAbout(notes, "reared_in") {
				filled = append(filled, n.People...)
				if !strings.Contains(n.Message, "siblings filled in") {
					t.Errorf("note says %q", n.Message)
				}
			}
			if !slices.Equal(filled, c.filled) {
				t.Errorf("homes filled in for %v, want %v", filled, c.filled)
			}
		})
	}
}

// Founders have no home, not even with each other's children.
func TestFoundersShareNoHome(t *testing.T) {
	p, _ := pedigree(t, []Person{{ID: "a", Mother: "m", Father: "f"}}, Rules{})
	m, f := p.Mother(0), p.Father(0)
	if p.SharedHome(m, f) || p.SharedHome(0, m) || p.SharedHome(f, 0) || !p.SharedHome(m, m) {
		t.Error("a founder shares a home with somebody else, or not with themselves")
	}
}
