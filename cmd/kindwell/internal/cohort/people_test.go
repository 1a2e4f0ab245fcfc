package cohort

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"maps"
	"reflect"
	"slices"
	"strings"
	"testing"

	"kindwell/twin"
)

// messages prints warnings one a line.
func messages(warnings []Warning) string {
	var b strings.Builder
	for _, w := range warnings {
		fmt.Fprintf(&b, "%s, %s: %s\n", w.Analysis, w.About, w.Message)
	}
	return b.String()
}

func checkMessages(t *testing.T, got []Warning, want string) {
	t.Helper()
	if text := messages(got); text != want {
		t.Errorf("warnings\n%s\nwant\n%s", text, want)
	}
}

func mustLoad(t *testing.T, s study) *Cohort {
	t.Helper()
	c, err := s.load(t)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// Twins, most of their mothers, no fathers, ages that contradict each other: an
// invented table in the shape of real ones.
const twinsAndMothers = `person,family,mother,twin_set,zygosity,role,age,sex,ancestry
M1,F01,,,,mother,25.0,female,A
P1,F01,M1,T01,MZ,twin,24.0,female,A
P2,F01,M1,T01,MZ,twin,51.0,female,A
M2,F02,,,,mother,24.0,female,A
P3,F02,M2,T02,MZ,twin,24.0,female,A
P4,F02,M2,T02,MZ,twin,25.0,female,A
P5,F03,,T03,DZ,twin,31.0,female,B
P6,F03,,T03,DZ,twin,31.0,female,B
M4,F04,,,,mother,56.0,male,B
P7,F04,M4,T04,DZ,twin,30.0,female,B
P8,F05,,T05,DZ,twin,,female,B
`

func TestTwinsAndMothers(t *testing.T) {
	c := mustLoad(t, study{people: twinsAndMothers})
	counts := make(map[twin.Relation]int)
	for i := range c.People {
		for j := range i {
			counts[c.Pedigree.Relation(i, j)]++
		}
	}
	delete(counts, twin.Unrelated)
	if want := map[twin.Relation]int{twin.MZ: 2, twin.DZSameSex: 1, twin.ParentChild: 5}; !maps.Equal(counts, want) {
		t.Errorf("relations %v, want %v", counts, want)
	}
	if got := c.Pedigree.Families(); got != 5 {
		t.Error("families:", got)
	}
	want(t, "labels", c.FamilyLabel, strings.Fields("F01 F01 F01 F02 F02 F02 F03 F03 F04 F04 F05"))
	want(t, "names", c.Names, strings.Fields("zygosity role age sex ancestry"))
	checkMessages(t, c.Warnings, `people, twin_set: 2 twins without a co-twin in the table (people.csv, rows 11 and 12)
people, mother: 1 mother of children recorded as male (people.csv, row 10)
people, age: people.csv, child on row 3 (age 24), mother on row 2 (age 25): the mother is less than 12 years older than the child
people, age: people.csv, child on row 4 (age 51), mother on row 2 (age 25): the child is older than the mother
people, age: people.csv, child on row 6 (age 24), mother on row 5 (age 24): the child is as old as the mother
people, age: people.csv, child on row 7 (age 25), mother on row 5 (age 24): the child is older than the mother
people, age: people.csv, rows 3 and 4: twins of different age (24 and 51)
people, age: people.csv, row 6: 1 twin set whose ages differ by a year at most (asked on different days?)
`)
	for _, w := range c.Warnings {
		for _, id := range c.People {
			if strings.Contains(w.Message, id) {
				t.Errorf("a warning names %s: %s", id, w.Message)
			}
		}
	}
}

// Children with the heights of parents who have no row of their own.
func TestSibshipsWithoutParentsRows(t *testing.T) {
	c := mustLoad(t, study{people: `person,family,father,mother,gender,childHeight,midparentHeight
001-1,001,001-f,001-m,male,73.2,75.43
001-2,001,001-f,001-m,female,69.2,75.43
001-3,001,001-f,001-m,female,69,75.43
136A-1,136A,136A-f,136A-m,male,70,68.5
136A-2,136A,136A-f,136A-m,female,62.5,68.5
`})
	if got := c.Pedigree.Families(); got != 2 {
		t.Error("families:", got)
	}
	if got := c.Pedigree.Founders(); got != 4 {
		t.Error("founders:", got)
	}
	for _, p := range [][2]string{{"001-1", "001-3"}, {"136A-1", "136A-2"}} {
		if got := relation(t, c, p[0], p[1]); got != twin.FullSibling {
			t.Error(p, got)
		}
	}
	want(t, "height", numbersOf(t, c, "childHeight"), []float64{73.2, 69.2, 69, 70, 62.5})
	checkMessages(t, c.Warnings, "")
}

func TestPeopleWithSessions(t *testing.T) {
	c := mustLoad(t, study{people: `person,visit,mother,twin_set,zygosity,sex,age,site,height
A,2,,T,mz,f,31,south,170
B,1,M,T,MZ,F,30,north,
A,1,M,T,MZ,female,30.5,north,170
B,2,,,,,31,north,171
M,10,,,,f,62,,160
M,9,,,,f,61,,NA
`, in: sessions("visit", "", "")})
	want(t, "people", c.People, []string{"A", "B", "M"})
	want(t, "lines", c.Lines, []int{4, 3, 7})
	want(t, "age", numbersOf(t, c, "age"), []float64{30.75, 30.5, 61.5})
	want(t, "height", numbersOf(t, c, "height"), []float64{170, 171, 160})
	want(t, "site", levelsOf(t, c, "site"), []string{"north", "north", ""})
	if c.Variables["visit"] != nil {
		t.Error("the session is a variable")
	}
	if got := relation(t, c, "A", "B"); got != twin.MZ {
		t.Error(got)
	}
	checkMessages(t, c.Warnings, `people, age: people.csv, rows 4 and 2 of one person: 30.5 and 31, the mean of the sessions is taken (30.75)
people, age: people.csv, rows 3 and 5 of one person: 30 and 31, the mean of the sessions is taken (30.5)
people, age: people.csv, rows 7 and 6 of one person: 61 and 62, the mean of the sessions is taken (61.5)
people, site: people.csv, rows 4 and 2 of one person: "north" and "south", the first session's is taken
people, age: people.csv, row 4: 1 twin set whose ages differ by a year at most (asked on different days?)
`)
}

// Ages of different sessions say nothing about each other.
func TestAgesAreComparedInOneSession(t *testing.T) {
	c := mustLoad(t, study{people: `person,visit,mother,twin_set,zygosity,age
A,1,M,T,MZ,20
A,2,M,T,MZ,30
B,1,M,T,MZ,20
M,2,,,,41
`, in: sessions("visit", "", "")})
	checkMessages(t, c.Warnings, `people, age: people.csv, rows 2 and 3 of one person: 20 and 30, the mean of the sessions is taken (25)
people, age: people.csv, child on row 2 (age 30), mother on row 5 (age 41): the mother is less than 12 years older than the child
`)
}

// Sessions that are no numbers go as the rows stand.
func TestSessionsInWords(t *testing.T) {
	c := mustLoad(t, study{people: "person,visit,site\nA,pre,north\nA,post,south\n", in: sessions("visit", "", "")})
	want(t, "site", levelsOf(t, c, "site"), []string{"north"})
}

// Twins who were asked on different days differ by a year at most.
func TestTwinsOfSlightlyDifferentAge(t *testing.T) {
	c := mustLoad(t, study{people: "person,twin_set,age\nA,T,20\nB,T,21\nC,U,20\nD,U,21.25\nE,V,20\nF,V,20.5\nG,W,20\nH,W,NA\nI,X,7\nJ,X,7\nK,X,9\n"})
	var about []Warning
	for _, w := range c.Warnings {
		if w.About == "age" {
			about = append(about, w)
		}
	}
	checkMessages(t, about, `people, age: people.csv, rows 4 and 5: twins of different age (20 and 21.25)
people, age: people.csv, rows 10 and 12: twins of different age (7 and 9)
people, age: people.csv, rows 2 and 6: 2 twin sets whose ages differ by a year at most (asked on different days?)
`)
}

// A person without any value stays missing, and many rows are counted.
func TestManyRows(t *testing.T) {
	text := "person,visit,height,sex\n"
	for i := range 13 {
		text += fmt.Sprintf("P%d,1,NA,other\nP%d,2,,other\n", i, i)
	}
	c := mustLoad(t, study{people: text, in: sessions("visit", "", "")})
	want(t, "height", numbersOf(t, c, "height"), slices.Repeat([]float64{-1}, 13))
	if !strings.HasPrefix(c.Warnings[0].Message, "people.csv, rows 2, 3, 4, 5, 6, 7, 8, 9, 10, 11 and 16 more: 26 cells") {
		t.Error(c.Warnings[0].Message)
	}
}

func TestAgeAsATrait(t *testing.T) {
	s := study{people: "person,age\nA,30\nB,x\nC,31\n", in: numeric("age")}
	_, err := s.load(t)
	if err == nil || !strings.HasPrefix(err.Error(), `people.csv:3: column "age": "x": is not a number`) {
		t.Error(err)
	}
	s.in = func(in *Inputs) { in.Categories = []string{"age"} }
	want(t, "age", mustLoad(t, s).Variables["age"].Levels, []string{"30", "31", "x"})
}

func TestColumnsUnderAnotherSpelling(t *testing.T) {
	c := mustLoad(t, study{people: "person,Mother,father_id,twinset,zygosty,Birth order,fam,sage\nA,M,P,T,MZ,1,F1,x\n"})
	checkMessages(t, c.Warnings, `people, mother: people.csv has no column mother; if "Mother" is meant, map it (people: {columns: {mother: Mother}})
people, father: people.csv has no column father; if "father_id" is meant, map it (people: {columns: {father: father_id}})
people, twin_set: people.csv has no column twin_set; if "twinset" is meant, map it (people: {columns: {twin_set: twinset}})
people, zygosity: people.csv has no column zygosity; if "zygosty" is meant, map it (people: {columns: {zygosity: zygosty}})
people, birth_order: people.csv has no column birth_order; if "Birth order" is meant, map it (people: {columns: {birth_order: Birth order}})
people, family: people.csv has none of the columns family, mother, father and twin_set: everybody counts as a family of their own
`)
}

func TestRulesReachThePedigree(t *testing.T) {
	s := study{people: "person,family\nA,F\nB,F\n"}
	c := mustLoad(t, s)
	if got := relation(t, c, "A", "B"); got != twin.FullSibling {
		t.Error(got)
	}
	s.in = func(in *Inputs) { in.People.Rules.UnknownParents = twin.AssumeUnrelated }
	c = mustLoad(t, s)
	if got := relation(t, c, "A", "B"); got != twin.Unrelated {
		t.Error(got)
	}
}

func TestFamilyLabels(t *testing.T) {
	c := mustLoad(t, study{people: "person,family,mother\nA,,M\nB,F2,M\nC,F3,M\nD,,N\nE,,N\nF,,\n"})
	want(t, "labels", c.FamilyLabel, []string{"F2", "F2", "F2", "D", "D", "F"})
	if !strings.Contains(messages(c.Warnings), "people, family: ") {
		t.Error("no word of two labels made one:", messages(c.Warnings))
	}
}

// The same tables give the same cohort, and what goes in is not changed.
func TestLoadIsRepeatable(t *testing.T) {
	in := Inputs{
		Folder: folderWith(t, map[string]string{"people.csv": twinsAndMothers, "measures.csv": "person,x\nP1,1\nQ,2\nP2,3\n", "traits.csv": "person,mood\nP1,1\n"}),
		People: PeopleInput{File: "people.csv", Columns: map[string]string{"age": "age"}}, MissingCodes: []string{"-9"},
		Measures: &MeasuresInput{Files: []string{"measures.csv"}, Use: []string{"*"}}, Traits: []TableInput{{File: "traits.csv"}},
		Use: []string{"age", "mood"}, Numeric: []string{"mood"}, Categories: []string{},
	}
	before := in
	before.People.Columns, before.MissingCodes = maps.Clone(in.People.Columns), slices.Clone(in.MissingCodes)
	before.Measures = &MeasuresInput{Files: []string{"measures.csv"}, Use: []string{"*"}}
	before.Traits, before.Use, before.Numeric = slices.Clone(in.Traits), slices.Clone(in.Use), slices.Clone(in.Numeric)
	first, err := Load(in)
	if err != nil {
		t.Fatal(err)
	}
	second, err := Load(in)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(in, before) {
		t.Error("the inputs changed")
	}
	if !reflect.DeepEqual(first.Warnings, second.Warnings) || !reflect.DeepEqual(first.Names, second.Names) || !reflect.DeepEqual(first.InputFiles, second.InputFiles) {
		t.Error("two readings differ")
	}
	digest := sha256.Sum256([]byte(twinsAndMothers))
	if len(first.InputFiles) != 3 || first.InputFiles[0] != (InputFile{"people.csv", hex.EncodeToString(digest[:]), int64(len(twinsAndMothers))}) {
		t.Error(first.InputFiles)
	}
}
