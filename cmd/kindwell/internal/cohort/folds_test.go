package cohort

import (
	"slices"
	"strings"
	"testing"
)

// Four families: A1 and A2, B1 and B2, C, D.
const foldPeople = "person,family\nA1,A\nA2,A\nB1,B\nB2,B\nC,C\nD,D\n"

func readFolds(t *testing.T, outer, inner string) (*Cohort, *FoldTable, error) {
	t.Helper()
	c := mustLoad(t, study{people: foldPeople, raw: map[string]string{"folds.csv": outer, "inner.csv": inner}})
	in := FoldsInput{Outer: "folds.csv"}
	if inner != "" {
		in.Inner = "inner.csv"
	}
	f, _, err := c.ReadFolds(in)
	return c, f, err
}

func mustReadFolds(t *testing.T, outer, inner string) (*Cohort, *FoldTable) {
	t.Helper()
	c, f, err := readFolds(t, outer, inner)
	if err != nil {
		t.Fatal(err)
	}
	return c, f
}

func TestGivenFolds(t *testing.T) {
	_, f := mustReadFolds(t, `person,repeat,fold
D,2,10
A1,1,2
A2,1,2
B1,1,10
B2,1,10
C,1,9
D,1,9
A1,2,2
A2,2,2
B1,2,10
B2,2,10
C,2,3
nobody,1,4
`, "")
	repeats, err := f.For("", []int{5, 0, 2, 3})
	if err != nil {
		t.Fatal(err)
	}
	if len(repeats) != 2 || repeats[0].Label != "1" || repeats[1].Label != "2" {
		t.Fatal(repeats)
	}
	want(t, "labels of repeat 1", repeats[0].Labels, []string{"2", "9", "10"})
	want(t, "folds of repeat 1", repeats[0].Outer, []int{1, 0, 2, 2})
	want(t, "labels of repeat 2", repeats[1].Labels, []string{"2", "10"})
	want(t, "folds of repeat 2", repeats[1].Outer, []int{1, 0, 1, 1})
	if repeats[0].Inner != nil {
		t.Error("inner folds of nowhere")
	}
}

func TestGivenInnerFolds(t *testing.T) {
	_, f := mustReadFolds(t, "repeat,fold,person\n1,x,A1\n1,x,A2\n1,y,B1\n1,y,B2\n1,x,C\n1,y,D\n",
		"repeat,fold,inner_fold,person\n1,x,1,B1\n1,x,1,B2\n1,x,2,D\n1,y,5,A1\n1,y,5,A2\n1,y,1,C\n")
	repeats, err := f.For("any", []int{0, 1, 2, 3, 4, 5})
	if err != nil {
		t.Fatal(err)
	}
	r := repeats[0]
	want(t, "outer", r.Outer, []int{0, 0, 1, 1, 0, 1})
	want(t, "inner of x", r.Inner[0], []int{-1, -1, 0, 0, -1, 1})
	want(t, "inner of y", r.Inner[1], []int{1, 1, -1, -1, 0, -1})
	if !slices.Equal(r.InnerLabels[1], []string{"1", "5"}) {
		t.Error(r.InnerLabels)
	}
}

func TestGivenFoldsByGroupOfPeople(t *testing.T) {
	_, f := mustReadFolds(t, "people_group,repeat,fold,person\n1,1,1,C\n1,1,2,D\n2,1,1,A1\n2,1,1,A2\n2,1,2,B1\n", "")
	repeats, err := f.For("2", []int{0, 1, 2})
	if err != nil {
		t.Fatal(err)
	}
	want(t, "folds", repeats[0].Outer, []int{0, 0, 1})
	if _, err := f.For("3", []int{0}); err == nil || err.Error() != `folds.csv: column "people_group": has no group "3"; its groups are "1", "2"` {
		t.Error(err)
	}
}

func TestBrokenFoldTables(t *testing.T) {
	const header = "repeat,fold,person\n"
	const outer = header + "1,x,A1\n1,x,A2\n1,y,B1\n1,y,B2\n1,x,C\n1,y,D\n"
	const innerHeader = "repeat,fold,inner_fold,person\n"
	for _, c := range []struct{ name, outer, inner, want string }{
		{"no fold column", "repeat,folds,person\n1,1,A1\n", "",
			`folds.csv:1: there is no column "fold"; the nearest name is "folds"; a table of folds has repeat, fold (and inner_fold) and person`},
		{"no person column", "repeat,fold,id\n1,1,A1\n", "",
			`folds.csv:1: there is no column "person"; its columns are "repeat", "fold", "id"; name it, or map it (folds: {columns: {person: NAME}})`},
		{"missing cells", header + "1,,A1\n,1,A2\n1,1,\n", "",
			"folds.csv:2: column \"fold\": is missing; every row of a table of folds names person and folds in full\n" +
				"folds.csv:3: column \"repeat\": is missing; every row of a table of folds names person and folds in full\n" +
				`folds.csv:4: column "person": is missing; every row of a table of folds names person and folds in full`},
		{"person twice", header + "1,1,A1\n1,2,A1\n", "",
			`folds.csv:3: column "person": "A1": is in the same repeat on row 2 already; a person has one fold`},
		{"person not in it", header + "1,x,A1\n1,x,A2\n1,y,B1\n1,y,B2\n1,x,C\n", "",
			`folds.csv: column "person": "D": has no row in repeat "1", but is in the study (row 7 of the people table)`},
		{"family on two sides", header + "1,x,A1\n1,y,A2\n1,y,B1\n1,y,B2\n1,x,C\n1,x,D\n", "",
			`folds.csv:3: column "person": "A2": is in fold "y", but family "A" is in fold "x" on row 2 (repeat "1"); families are never split`},
		{"one fold", header + "1,x,A1\n1,x,A2\n1,x,B1\n1,x,B2\n1,x,C\n1,x,D\n", "",
			`folds.csv: repeat "1" has all these people in fold "x"; at least two folds are needed`},
		{"inner fold of a person held out", outer, innerHeader + "1,x,1,A1\n1,x,1,B1\n1,x,1,B2\n1,x,2,D\n1,y,1,A1\n1,y,1,A2\n1,y,2,C\n",
			`inner.csv:2: column "person": "A1": is held out in repeat "1", outer fold "x" and cannot have an inner fold there`},
		{"no inner folds for an outer one", outer, innerHeader + "1,x,1,B1\n1,x,1,B2\n1,x,2,D\n",
			`inner.csv: has no rows for repeat "1", outer fold "y"`},
		{"family on two sides of inner folds", outer, innerHeader + "1,x,1,B1\n1,x,2,B2\n1,x,2,D\n1,y,1,A1\n1,y,1,A2\n1,y,2,C\n",
			`inner.csv:3: column "person": "B2": is in fold "2", but family "B" is in fold "1" on row 2 (repeat "1", outer fold "x"); families are never split`},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, f, err := readFolds(t, c.outer, c.inner)
			if err == nil {
				_, err = f.For("", []int{0, 1, 2, 3, 4, 5})
			}
			if err == nil {
				t.Fatal("was taken")
			}
			if got := strings.TrimSpace(err.Error()); got != c.want {
				t.Errorf("got\n%s\nwant\n%s", got, c.want)
			}
		})
	}
}
