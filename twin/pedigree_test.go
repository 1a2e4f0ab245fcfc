package twin

import (
	"slices"
	"strings"
	"testing"
)

// pedigree reads people who must be without fault.
func pedigree(t testing.TB, people []Person, rules Rules) (*Pedigree, []Note) {
	t.Helper()
	given := slices.Clone(people)
	p, notes, err := NewPedigree(people, rules)
	if err != nil {
		t.Fatalf("NewPedigree: %v", err)
	}
	if !slices.Equal(given, people) {
		t.Fatal("NewPedigree changed its people")
	}
	return p, notes
}

// at finds a person by id.
func at(t testing.TB, people []Person, id string) int {
	t.Helper()
	i := slices.IndexFunc(people, func(p Person) bool { return p.ID == id })
	if i < 0 {
		t.Fatalf("no person %q", id)
	}
	return i
}

// noteAbout returns the notes about a rule or column.
func notesAbout(notes []Note, about string) []Note {
	return slices.DeleteFunc(slices.Clone(notes), func(n Note) bool { return n.About != about })
}

// The shape of the gut microbiome families: mothers with a row, twins who
// know their mother only, one label a family. A mother without parent ids must
// not become a sibling of her children.
func TestMotherWithRowBesideHerTwins(t *testing.T) {
	people := []Person{
		{ID: "TS3", Family: "F01", Sex: Female},
		{ID: "TS1", Family: "F01", Mother: "TS3", TwinSet: "T01", Zygosity: Monozygotic, Sex: Female},
		{ID: "TS2", Family: "F01", Mother: "TS3", TwinSet: "T01", Zygosity: Monozygotic, Sex: Female},
		{ID: "TS6", Family: "F02", Sex: Female},
		{ID: "TS4", Family: "F02", Mother: "TS6", TwinSet: "T02", Zygosity: Dizygotic, Sex: Female},
		{ID: "TS5", Family: "F02", Mother: "TS6", TwinSet: "T02", Zygosity: Dizygotic, Sex: Female},
		// A pair whose mother has no row and no id.
		{ID: "TS7", Family: "F03", TwinSet: "T03", Zygosity: Dizygotic, Sex: Female},
		{ID: "TS8", Family: "F03", TwinSet: "T03", Zygosity: Dizygotic, Sex: Female},
	}
	p, notes := pedigree(t, people, Rules{})
	if len(notes) != 0 {
		t.Errorf("notes without cause: %+v", notes)
	}
	if p.Len() != 8 || p.Families() != 3 || p.Founders() != 4 {
		t.Errorf("%d people, %d families, %d founders; want 8, 3 and 4", p.Len(), p.Families(), p.Founders())
	}
	for _, c := range []struct {
		a, b               int
		relation           Relation
		kinship, dominance float64
		home               bool
	}{
		{0, 1, ParentChild, .5, 0, false},
		{0, 2, ParentChild, .5, 0, false},
		{1, 2, MZ, 1, 1, true},
		{3, 4, ParentChild, .5, 0, false},
		{4, 5, DZSameSex, .5, .25, true},
		{6, 7, DZSameSex, .5, .25, true},
		{0, 3, Unrelated, 0, 0, false},
		{1, 4, Unrelated, 0, 0, false},
	} {
		if r := p.Relation(c.a, c.b); r != c.relation {
			t.Errorf("relation of %d and %d is %v, want %v", c.a, c.b, r, c.relation)
		}
		if k := p.Kinship(c.a, c.b); k != c.kinship {
			t.Errorf("kinship of %d and %d is %v, want %v", c.a, c.b, k, c.kinship)
		}
		if d := p.Dominance(c.a, c.b); d != c.dominance {
			t.Errorf("dominance of %d and %d is %v, want %v", c.a, c.b, d, c.dominance)
		}
		if h := p.SharedHome(c.a, c.b); h != c.home {
			t.Errorf("shared home of %d and %d is %v, want %v", c.a, c.b, h, c.home)
		}
	}
	for i, want := range []int{-1, 0, 0, -1, 1, 1, 2, 2} {
		if s := p.Sibship(i); s != want {
			t.Errorf("sibship of %d is %d, want %d", i, s, want)
		}
	}
}

// The shape of Galton's families: children whose parents are columns of their
// row, once without and once with rows of the parents.
func TestParentsWithAndWithoutRows(t *testing.T) {
	children := []Person{
		{ID: "c1", Family: "001", Mother: "001m", Father: "001f", Sex: Male},
		{ID: "c2", Family: "001", Mother: "001m", Father: "001f", Sex: Female},
		{ID: "c3", Family: "001", Mother: "001m", Father: "001f", Sex: Female},
		{ID: "c4", Family: "002", Mother: "002m", Father: "002f", Sex: Male},
	}
	parents := []Person{
		{ID: "001m", Family: "001", Sex: Female}, {ID: "001f", Family: "001", Sex: Male},
		{ID: "002m", Family: "002", Sex: Female}, {ID: "002f", Family: "002", Sex: Male},
	}
	p, notes := pedigree(t, children, Rules{})
	if len(notes) != 0 || p.Founders() != 4 || p.Families() != 2 {
		t.Errorf("without rows: notes %v, %d founders, %d families", notes, p.Founders(), p.Families())
	}
	q, notes := pedigree(t, slices.Concat(parents, children), Rules{})
	if len(notes) != 0 || q.Founders() != 0 || q.Families() != 2 {
		t.Errorf("with rows: notes %v, %d founders, %d families", notes, q.Founders(), q.Families())
	}
	for i := range children {
		for j := range children {
			want := FullSibling
			if i == j || i == 3 || j == 3 {
				want = Unrelated
			}
			if a, b := p.Relation(i, j), q.Relation(i+4, j+4); a != want || b != want {
				t.Errorf("relation of children %d and %d is %v without and %v with parents' rows, want %v", i, j, a, b, want)
			}
		}
	}
	if r := q.Relation(0, 1); r != Spouse {
		t.Errorf("parents are %v, want spouse", r)
	}
	if r := q.Relation(1, 0); r != Spouse {
		t.Errorf("parents the other way are %v, want spouse", r)
	}
	if r := q.Relation(0, 3); r != Unrelated {
		t.Errorf("wife and other husband are %v", r)
	}
	if r := p.Relation(0, p.Mother(0)); r != ParentChild {
		t.Errorf("child and founder mother are %v", r)
	}
	if s := q.Sibship(7); s < 0 || s == q.Sibship(4) {
		t.Errorf("an only child's sibship is %d", s)
	}
}

// What ids leave open. Each case names the relation of pairs under each rule.
func TestWhatIDsLeaveOpen(t *testing.T) {
	full := Rules{}
	unrelated := Rules{UnknownParents: AssumeUnrelated}
	other := Rules{UnknownParent: AssumeOtherParent}
	type pair struct {
		a, b string
		want Relation
	}
	cases := []struct {
		name   string
		rules  Rules
		people []Person
		pairs  []pair
		notes  []string // About of the notes
	}{
		{"label only", full,
			[]Person{{ID: "a", Family: "F"}, {ID: "b", Family: "F"}, {ID: "c", Family: "G"}},
			[]pair{{"a", "b", FullSibling}, {"a", "c", Unrelated}}, []string{"unknown_parents"}},
		{"label only, unrelated", unrelated,
			[]Person{{ID: "a", Family: "F"}, {ID: "b", Family: "F"}},
			[]pair{{"a", "b", Unrelated}}, []string{"unknown_parents"}},
		{"no label", full,
			[]Person{{ID: "a"}, {ID: "b"}},
			[]pair{{"a", "b", Unrelated}}, nil},
		{"twins and a sibling by label", full,
			[]Person{{ID: "a", Family: "F", TwinSet: "T", Zygosity: Dizygotic, Sex: Male},
				{ID: "b", Family: "F", TwinSet: "T", Zygosity: Dizygotic, Sex: Female}, {ID: "c", Family: "F"}},
			[]pair{{"a", "b", DZOppositeSex}, {"a", "c", FullSibling}, {"b", "c", FullSibling}}, []string{"unknown_parents"}},
		{"twins and a sibling by label, unrelated", unrelated,
			[]Person{{ID: "a", Family: "F", TwinSet: "T", Zygosity: Monozygotic},
				{ID: "b", Family: "F", TwinSet: "T", Zygosity: Monozygotic}, {ID: "c", Family: "F"}},
			[]pair{{"a", "b", MZ}, {"a", "c", Unrelated}}, []string{"unknown_parents"}},
		{"twins of two labels join the labels' siblings", full,
			[]Person{{ID: "a", Family: "F", TwinSet: "T", Zygosity: Monozygotic},
				{ID: "b", Family: "G", TwinSet: "T", Zygosity: Monozygotic}, {ID: "c", Family: "F"}, {ID: "d", Family: "G"}},
			[]pair{{"a", "d", FullSibling}, {"c", "d", FullSibling}}, []string{"unknown_parents", "family"}},
		{"husband and wife with a child", full,
			[]Person{{ID: "m", Family: "F"}, {ID: "f", Family: "F"}, {ID: "c", Family: "F", Mother: "m", Father: "f"}},
			[]pair{{"m", "f", Spouse}, {"c", "m", ParentChild}, {"c", "f", ParentChild}}, nil},
		{"a father whom no child names", full,
			[]Person{{ID: "m", Family: "F"}, {ID: "f", Family: "F"}, {ID: "c", Family: "F", Mother: "m"}},
			[]pair{{"m", "f", Unrelated}, {"f", "c", Unrelated}, {"m", "c", ParentChild}}, []string{"unknown_parents"}},
		{"child without label makes a parent too", full,
			[]Person{{ID: "m", Family: "F"}, {ID: "a", Family: "F"}, {ID: "b", Family: "F"}, {ID: "c", Mother: "m"}},
			[]pair{{"m", "a", Unrelated}, {"a", "b", FullSibling}}, []string{"unknown_parents"}},
		{"sisters under one label, a child under another", full,
			[]Person{{ID: "m", Family: "F"}, {ID: "aunt", Family: "F"}, {ID: "c", Family: "G", Mother: "m"}},
			[]pair{{"m", "aunt", FullSibling}, {"c", "aunt", OtherKin}}, []string{"unknown_parents", "family"}},
		{"a twin who is a parent", full,
			[]Person{{ID: "a", Family: "F", TwinSet: "T", Zygosity: Monozygotic}, {ID: "b", Family: "F", TwinSet: "T"},
				{ID: "c", Family: "F", Mother: "a"}, {ID: "d", Family: "F"}},
			[]pair{{"a", "b", MZ}, {"b", "c", OtherKin}, {"b", "d", Unrelated}, {"a", "d", Unrelated}},
			[]string{"zygosity", "unknown_parents"}},
		{"siblings of known parents and one without", full,
			[]Person{{ID: "a", Family: "F", Mother: "m", Father: "f"}, {ID: "b", Family: "F", Mother: "m", Father: "f"},
				{ID: "c", Family: "F"}},
			[]pair{{"a", "b", FullSibling}, {"a", "c", Unrelated}}, []string{"unknown_parents"}},
		{"one of known mother and one without", full,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "F"}},
			[]pair{{"a", "b", Unrelated}}, []string{"unknown_parents"}},
		{"one of known mother and twins without", full,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "F", TwinSet: "T", Zygosity: Monozygotic},
				{ID: "c", Family: "F", TwinSet: "T", Zygosity: Monozygotic}},
			[]pair{{"a", "b", Unrelated}, {"b", "c", MZ}}, []string{"unknown_parents"}},
		{"mother in common, father unknown", full,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "F", Mother: "m"}},
			[]pair{{"a", "b", FullSibling}}, []string{"unknown_parent"}},
		{"mother in common, father unknown, no label", full,
			[]Person{{ID: "a", Mother: "m"}, {ID: "b", Mother: "m"}},
			[]pair{{"a", "b", FullSibling}}, []string{"unknown_parent"}},
		{"father in common, mother unknown", full,
			[]Person{{ID: "a", Family: "F", Father: "f"}, {ID: "b", Father: "f"}},
			[]pair{{"a", "b", FullSibling}}, []string{"unknown_parent"}},
		{"other parent", other,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "F", Mother: "m"}},
			[]pair{{"a", "b", HalfSibling}}, []string{"unknown_parent"}},
		{"other parent, twins share theirs", other,
			[]Person{{ID: "a", Mother: "m", TwinSet: "T", Zygosity: Dizygotic, Sex: Male},
				{ID: "b", Mother: "m", TwinSet: "T", Zygosity: Dizygotic, Sex: Male}, {ID: "c", Mother: "m"}},
			[]pair{{"a", "b", DZSameSex}, {"a", "c", HalfSibling}, {"b", "c", HalfSibling}}, []string{"unknown_parent"}},
		{"labels that differ", full,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "G", Mother: "m"}, {ID: "c", Family: "G", Mother: "m"}},
			[]pair{{"a", "b", HalfSibling}, {"b", "c", FullSibling}}, []string{"unknown_parent", "unknown_parent", "family"}},
		{"labels that differ and no label", full,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "G", Mother: "m"}, {ID: "c", Mother: "m"}, {ID: "d", Mother: "m"}},
			[]pair{{"a", "b", HalfSibling}, {"a", "c", HalfSibling}, {"b", "c", HalfSibling}, {"c", "d", FullSibling}},
			[]string{"unknown_parent", "unknown_parent", "family"}},
		{"a label and no label", full,
			[]Person{{ID: "c", Mother: "m"}, {ID: "a", Family: "F", Mother: "m"}, {ID: "d", Mother: "m"}, {ID: "b", Family: "F", Mother: "m"}},
			[]pair{{"a", "b", FullSibling}, {"a", "c", FullSibling}, {"c", "d", FullSibling}, {"b", "d", FullSibling}},
			[]string{"unknown_parent"}},
		{"father unknown for one only", full,
			[]Person{{ID: "a", Family: "F", Mother: "m", Father: "f"}, {ID: "b", Family: "F", Mother: "m"}, {ID: "c", Family: "F", Mother: "m"}},
			[]pair{{"a", "b", HalfSibling}, {"b", "c", FullSibling}}, []string{"unknown_parent", "unknown_parent"}},
		{"one known mother, one known father", full,
			[]Person{{ID: "a", Family: "F", Mother: "m"}, {ID: "b", Family: "F", Father: "f"}},
			[]pair{{"a", "b", Unrelated}}, nil},
		{"co-twin's parents", full,
			[]Person{{ID: "a", Mother: "m", TwinSet: "T", Zygosity: Monozygotic}, {ID: "b", Father: "f", TwinSet: "T", Zygosity: Monozygotic},
				{ID: "c", Mother: "m", Father: "f"}},
			[]pair{{"a", "b", MZ}, {"b", "c", FullSibling}, {"a", "c", FullSibling}}, []string{"twin_set"}},
		{"no zygosity, opposite sex", full,
			[]Person{{ID: "a", TwinSet: "T", Sex: Male}, {ID: "b", TwinSet: "T", Sex: Female}},
			[]pair{{"a", "b", DZOppositeSex}}, []string{"zygosity"}},
		{"no zygosity, same sex", full,
			[]Person{{ID: "a", TwinSet: "T", Sex: Male}, {ID: "b", TwinSet: "T", Sex: Male}},
			[]pair{{"a", "b", UnknownZygosity}}, []string{"zygosity"}},
		{"no zygosity, no sex", full,
			[]Person{{ID: "a", TwinSet: "T", Sex: Male}, {ID: "b", TwinSet: "T"}},
			[]pair{{"a", "b", UnknownZygosity}}, []string{"zygosity"}},
		{"DZ without sex", full,
			[]Person{{ID: "a", TwinSet: "T", Zygosity: Dizygotic}, {ID: "b", TwinSet: "T", Zygosity: Dizygotic, Sex: Male}},
			[]pair{{"a", "b", DZSameSex}}, []string{"sex"}},
		{"co-twin's zygosity", full,
			[]Person{{ID: "a", TwinSet: "T", Zygosity: Dizygotic, Sex: Male}, {ID: "b", TwinSet: "T", Sex: Male}},
			[]pair{{"a", "b", DZSameSex}}, []string{"zygosity"}},
		{"identical triplets", full,
			[]Person{{ID: "a", TwinSet: "T", Zygosity: Monozygotic}, {ID: "b", TwinSet: "T", Zygosity: Monozygotic}, {ID: "c", TwinSet: "T", Zygosity: Monozygotic}},
			[]pair{{"a", "b", MZ}, {"b", "c", MZ}, {"a", "c", MZ}}, nil},
		{"a pair of three identical", full,
			[]Person{{ID: "a", TwinSet: "T", Zygosity: Dizygotic, Sex: Male}, {ID: "b", TwinSet: "T", Zygosity: Monozygotic, MZSet: "1", Sex: Male},
				{ID: "c", TwinSet: "T", Zygosity: Monozygotic, MZSet: "1", Sex: Male}},
			[]pair{{"a", "b", DZSameSex}, {"b", "c", MZ}, {"a", "c", DZSameSex}}, nil},
		{"mz_set without zygosity", full,
			[]Person{{ID: "a", TwinSet: "T", MZSet: "2", Sex: Male}, {ID: "b", TwinSet: "T", MZSet: "1", Sex: Male},
				{ID: "c", TwinSet: "T", MZSet: "1", Sex: Male}},
			[]pair{{"a", "b", DZSameSex}, {"b", "c", MZ}, {"a", "c", DZSameSex}}, []string{"zygosity"}},
		{"two identical pairs of four", full,
			[]Person{{ID: "a", TwinSet: "T", Zygosity: Monozygotic, MZSet: "2", Sex: Male}, {ID: "b", TwinSet: "T", Zygosity: Monozygotic, MZSet: "1", Sex: Female},
				{ID: "c", TwinSet: "T", Zygosity: Monozygotic, MZSet: "1", Sex: Female}, {ID: "d", TwinSet: "T", Zygosity: Monozygotic, MZSet: "2", Sex: Male}},
			[]pair{{"a", "b", DZOppositeSex}, {"b", "c", MZ}, {"a", "d", MZ}}, nil},
		{"triplets of unknown zygosity", full,
			[]Person{{ID: "a", TwinSet: "T", Sex: Male}, {ID: "b", TwinSet: "T", Sex: Female}, {ID: "c", TwinSet: "T", Sex: Male}},
			[]pair{{"a", "b", DZOppositeSex}, {"b", "c", DZOppositeSex}, {"a", "c", UnknownZygosity}}, []string{"zygosity", "zygosity"}},
		{"triplets of whom one is DZ", full,
			[]Person{{ID: "a", TwinSet: "T", Sex: Male, Zygosity: Dizygotic}, {ID: "b", TwinSet: "T", Sex: Male}, {ID: "c", TwinSet: "T", Sex: Male}},
			[]pair{{"a", "b", DZSameSex}, {"a", "c", DZSameSex}, {"b", "c", UnknownZygosity}}, []string{"zygosity"}},
		{"triplets of whom two are DZ", full,
			[]Person{{ID: "a", TwinSet: "T", Sex: Male, Zygosity: Dizygotic}, {ID: "b", TwinSet: "T", Sex: Male, Zygosity: Dizygotic}, {ID: "c", TwinSet: "T", Sex: Male}},
			[]pair{{"a", "b", DZSameSex}, {"a", "c", DZSameSex}, {"b", "c", DZSameSex}}, []string{"zygosity"}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			p, notes := pedigree(t, c.people, c.rules)
			for _, pair := range c.pairs {
				a, b := at(t, c.people, pair.a), at(t, c.people, pair.b)
				if r := p.Relation(a, b); r != pair.want {
					t.Errorf("%s and %s are %v, want %v", pair.a, pair.b, r, pair.want)
				}
				if r := p.Relation(b, a); r != pair.want {
					t.Errorf("%s and %s are %v, want %v", pair.b, pair.a, r, pair.want)
				}
			}
			var about []string
			for _, n := range notes {
				about = append(about, n.About)
				if len(n.People) == 0 || !slices.IsSorted(n.People) || !strings.HasSuffix(n.Message, ".") {
					t.Errorf("note out of form: %+v", n)
				}
			}
			if !slices.Equal(about, c.notes) {
				t.Errorf("notes about %v, want %v: %+v", about, c.notes, notes)
			}
		})
	}
}

func TestFamilies(t *testing.T) {
	people := []Person{
		{ID: "a", Family: "F"},
		{ID: "x"},
		{ID: "b", Family: "G", Mother: "a"},
		{ID: "c", Family: "H", TwinSet: "T", Zygosity: Monozygotic},
		{ID: "d", Family: "G", TwinSet: "T", Zygosity: Monozygotic},
		{ID: "e", Mother: "outside"},
		{ID: "f", Mother: "outside"},
		{ID: "g", Family: "x"},
		{ID: "x_"},
	}
	p, notes := pedigree(t, people, Rules{})
	for i, want := range []int{0, 1, 0, 0, 0, 2, 2, 3, 4} {
		if f := p.Family(i); f != want {
			t.Errorf("family of %s is %d, want %d", people[i].ID, f, want)
		}
	}
	if f := p.Family(p.Mother(5)); f != 2 {
		t.Errorf("family of the founder is %d, want 2", f)
	}
	// The id of x is a label of others, so that the family of x needs another.
	for f, want := range []string{"F", "x_", "e", "x", "x__"} {
		if label := p.FamilyLabel(f); label != want {
			t.Errorf("label of family %d is %q, want %q", f, label, want)
		}
	}
	if m := p.Members(0); !slices.Equal(m, []int{0, 2, 3, 4}) {
		t.Errorf("members of the first family: %v", m)
	}
	joined := notesAbout(notes, "family")
	if len(joined) != 1 || !strings.Contains(joined[0].Message, "1 family ") || !strings.Contains(joined[0].Message, "F = G = H") ||
		!slices.Equal(joined[0].People, []int{0, 2, 3, 4}) {
		t.Errorf("notes on joined labels: %+v", joined)
	}
}

// The texts of notes: counts, rule, ids, and no more ids than help.
func TestNotesSayWhatWasDone(t *testing.T) {
	var people []Person
	for _, id := range []string{"p1", "p2", "p3", "p4", "p5", "p6", "p7"} {
		people = append(people, Person{ID: id, Family: "F"})
	}
	people = append(people,
		Person{ID: "s", TwinSet: "T", Zygosity: Dizygotic},
		Person{ID: "mum", Sex: Male}, Person{ID: "dad", Sex: Female},
		Person{ID: "kid", Mother: "mum", Father: "dad"},
	)
	_, notes := pedigree(t, people, Rules{})
	want := []Note{
		{"twin_set", []int{7}, "1 twin without a co-twin in the table: s."},
		{"unknown_parents", []int{0, 1, 2, 3, 4, 5, 6}, "7 people without parent ids taken as full siblings of those with the " +
			"same family label (unknown_parents: full_siblings): p1, p2, p3, p4, p5 and 2 more."},
		{"mother", []int{8}, "1 mother of children recorded as male: mum."},
		{"father", []int{9}, "1 father of children recorded as female: dad."},
	}
	if !slices.EqualFunc(notes, want, func(a, b Note) bool {
		return a.About == b.About && a.Message == b.Message && slices.Equal(a.People, b.People)
	}) {
		t.Errorf("notes are\n%+v\nwant\n%+v", notes, want)
	}
}

func TestWordsOfRules(t *testing.T) {
	got := []string{
		AssumeFullSiblings.String(), AssumeUnrelated.String(), AssumeSameParent.String(), AssumeOtherParent.String(),
		WithMother.String(), WithBoth.String(), SexUnknown.String(), Female.String(), Male.String(),
		ZygosityUnknown.String(), Monozygotic.String(), Dizygotic.String(),
	}
	want := []string{"full_siblings", "unrelated", "same", "other", "mother", "both", "", "female", "male", "", "MZ", "DZ"}
	if !slices.Equal(got, want) {
		t.Errorf("words are %v, want %v", got, want)
	}
	var relations []string
	for r := Unrelated; r < relationCount; r++ {
		relations = append(relations, r.String())
	}
	words := []string{"unrelated", "mz", "dz_same_sex", "dz_opposite_sex", "unknown_zygosity", "full_sibling",
		"half_sibling", "parent_child", "spouse", "other_kin"}
	if !slices.Equal(relations, words) {
		t.Errorf("relations are %v, want %v", relations, words)
	}
	for r := Unrelated; r < relationCount; r++ {
		if r.Twins() != (r == MZ || r == DZSameSex || r == DZOppositeSex || r == UnknownZygosity) {
			t.Errorf("%v: twins is %v", r, r.Twins())
		}
	}
}

func TestRuleOutOfRangePanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("no panic")
		}
	}()
	_, _, _ = NewPedigree(nil, Rules{RearedWith: 2})
}

func TestNoPeople(t *testing.T) {
	p, notes := pedigree(t, nil, Rules{})
	if p.Len() != 0 || p.Families() != 0 || len(notes) != 0 || len(p.Blocks(nil, BlockOptions{})) != 0 {
		t.Errorf("an empty table gives %+v and %v", p, notes)
	}
}
