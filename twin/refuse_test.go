package twin

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

// faults takes the joined error apart.
func faults(t *testing.T, err error) []*PersonError {
	t.Helper()
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok {
		t.Fatalf("error %v is not joined", err)
	}
	var all []*PersonError
	for _, e := range joined.Unwrap() {
		var fault *PersonError
		if !errors.As(e, &fault) {
			t.Fatalf("%v is no PersonError", e)
		}
		all = append(all, fault)
	}
	return all
}

// Each case is refused with exactly these faults: person, field, other and a
// part of the message.
func TestRefusals(t *testing.T) {
	const mz, dz = Monozygotic, Dizygotic
	cases := []struct {
		name   string
		people []Person
		want   []PersonError
	}{
		{"repeated id", []Person{{ID: "a"}, {ID: "b"}, {ID: "a"}, {ID: "a"}},
			[]PersonError{{2, "person", 0, `"a" is not unique`}, {3, "person", 0, `"a" is not unique`}}},
		{"no id", []Person{{ID: "a"}, {}}, []PersonError{{1, "person", -1, "empty"}}},
		{"own parent", []Person{{ID: "a", Mother: "a"}, {ID: "b", Father: "b"}},
			[]PersonError{{0, "mother", -1, `"a" is named as their own mother`}, {1, "father", -1, `"b" is named as their own father`}}},
		{"own grandparent", []Person{{ID: "a", Mother: "b"}, {ID: "b", Father: "a"}},
			[]PersonError{{0, "mother", 1, `"a" is their own ancestor; child to parent: "a", "b", "a"`}}},
		{"two loops and a descendant", []Person{
			{ID: "x", Mother: "c"}, {ID: "c", Father: "b"}, {ID: "b", Mother: "a"}, {ID: "a", Mother: "c"}, {ID: "d", Father: "e"}, {ID: "e", Father: "d"}},
			[]PersonError{{1, "father", 2, `"c", "b", "a", "c"`}, {4, "father", 5, `"d", "e", "d"`}}},
		{"own ancestor by a co-twin's parent", []Person{
			{ID: "a", TwinSet: "T", Zygosity: mz}, {ID: "b", TwinSet: "T", Zygosity: mz, Mother: "c"}, {ID: "c", Mother: "a"}},
			[]PersonError{{0, "mother", 2, `"a", "c", "a"`}}},
		{"mother and father", []Person{{ID: "a", Mother: "p"}, {ID: "b"}, {ID: "c", Father: "p"}, {ID: "d", Father: "p"}},
			[]PersonError{{2, "father", 0, `"p" is the father of "c" and the mother of "a"`}}},
		{"mother and father of one", []Person{{ID: "a", Mother: "p", Father: "p"}},
			[]PersonError{{0, "father", 0, "nobody is both"}}},
		{"twins of two mothers", []Person{{ID: "a", Mother: "m", TwinSet: "T"}, {ID: "b", TwinSet: "T"}, {ID: "c", Mother: "n", TwinSet: "T"}},
			[]PersonError{{2, "mother", 0, `"c" has the mother "n", the co-twin "a" has "m"`}}},
		{"twins of two fathers", []Person{{ID: "a", Mother: "m", Father: "f", TwinSet: "T"}, {ID: "b", Mother: "m", Father: "g", TwinSet: "T"}},
			[]PersonError{{1, "father", 0, "one father"}}},
		{"twin of the own mother", []Person{{ID: "a", TwinSet: "T"}, {ID: "b", Mother: "a", TwinSet: "T"}},
			[]PersonError{{1, "twin_set", 0, `own mother, "a"`}}},
		{"identical, different sex", []Person{{ID: "a", TwinSet: "T", Zygosity: mz, Sex: Male}, {ID: "b", TwinSet: "T", Zygosity: mz, Sex: Female}},
			[]PersonError{{1, "sex", 0, `"b" is female, the identical twin "a" is male`}}},
		{"identical by a co-twin's zygosity, different sex", []Person{{ID: "a", TwinSet: "T", Sex: Male}, {ID: "b", TwinSet: "T", Zygosity: mz, Sex: Female}},
			[]PersonError{{1, "sex", 0, "female"}}},
		{"identical by mz_set, different sex", []Person{{ID: "a", TwinSet: "T", MZSet: "1", Sex: Male}, {ID: "b", TwinSet: "T", MZSet: "2"},
			{ID: "c", TwinSet: "T", MZSet: "1", Sex: Female}},
			[]PersonError{{2, "sex", 0, "female"}}},
		{"zygosity without a twin set", []Person{{ID: "a", Zygosity: dz}}, []PersonError{{0, "zygosity", -1, `"a" is DZ without`}}},
		{"mz_set without a twin set", []Person{{ID: "a", MZSet: "1"}}, []PersonError{{0, "mz_set", -1, `mz_set "1" without`}}},
		{"a pair of two zygosities", []Person{{ID: "a", TwinSet: "T", Zygosity: dz}, {ID: "b", TwinSet: "T", Zygosity: mz}},
			[]PersonError{{1, "zygosity", 0, `"b" is MZ, "a" of the same twin set is DZ`}}},
		{"three of two zygosities", []Person{{ID: "a", TwinSet: "T", Zygosity: mz}, {ID: "b", TwinSet: "T", Zygosity: mz}, {ID: "c", TwinSet: "T", Zygosity: dz}},
			[]PersonError{{2, "zygosity", 1, "an mz_set must say who is identical"}}},
		{"three, one unknown", []Person{{ID: "a", TwinSet: "T", Zygosity: mz}, {ID: "b", TwinSet: "T"}, {ID: "c", TwinSet: "T", Zygosity: mz}},
			[]PersonError{{1, "zygosity", 2, "an mz_set must say who is identical"}}},
		{"DZ in an mz_set", []Person{{ID: "a", TwinSet: "T", MZSet: "1", Zygosity: dz}, {ID: "b", TwinSet: "T", MZSet: "1", Zygosity: mz}},
			[]PersonError{{0, "zygosity", 1, `DZ but shares the mz_set "1" with "b"`}}},
		{"MZ without the mz_set of the others", []Person{{ID: "a", TwinSet: "T", MZSet: "1", Zygosity: mz}, {ID: "b", TwinSet: "T", MZSet: "1", Zygosity: mz},
			{ID: "c", TwinSet: "T", Zygosity: mz}},
			[]PersonError{{2, "mz_set", -1, "without an mz_set"}}},
		{"everything at once", []Person{
			{ID: "a", Zygosity: mz}, {ID: "b", Mother: "c"}, {ID: "c", Mother: "b", Father: "b"}, {ID: "a"},
			{ID: "t", TwinSet: "T", Zygosity: mz, Sex: Male}, {ID: "u", TwinSet: "T", Zygosity: mz, Sex: Female}},
			[]PersonError{{0, "zygosity", -1, ""}, {1, "mother", 2, ""}, {2, "father", 2, ""}, {3, "person", 0, ""}, {5, "sex", 4, ""}}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			p, notes, err := NewPedigree(c.people, Rules{})
			if err == nil {
				t.Fatal("not refused")
			}
			if p != nil || notes != nil {
				t.Error("a pedigree or notes beside the error")
			}
			got := faults(t, err)
			if len(got) != len(c.want) {
				t.Fatalf("%d faults, want %d: %v", len(got), len(c.want), err)
			}
			for k, want := range c.want {
				if got[k].Person != want.Person || got[k].Field != want.Field || got[k].Other != want.Other ||
					!strings.Contains(got[k].Message, want.Message) {
					t.Errorf("fault %d is %+v, want %+v", k, *got[k], want)
				}
				if text := fmt.Sprintf("person %d, %s: %s", got[k].Person, got[k].Field, got[k].Message); got[k].Error() != text {
					t.Errorf("text is %q", got[k].Error())
				}
			}
		})
	}
}

// A long loop is told by its ends.
func TestLongLoopIsShortened(t *testing.T) {
	const n = 30
	people := make([]Person, n)
	for i := range people {
		people[i] = Person{ID: fmt.Sprint("g", i), Mother: fmt.Sprint("g", (i+1)%n)}
	}
	_, _, err := NewPedigree(people, Rules{})
	if got := faults(t, err); len(got) != 1 || !strings.HasSuffix(got[0].Message, `"g0", "g1", "g2", "g3", ..., "g28", "g29", "g0"`) {
		t.Errorf("%v", err)
	}
}
