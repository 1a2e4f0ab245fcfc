package cohort

import (
	"math"
	"slices"
	"strings"
	"testing"

	"kindwell/twin"
)

func want[T comparable](t *testing.T, what string, got, want []T) {
	t.Helper()
	if !slices.Equal(got, want) {
		t.Errorf("%s: got %v, want %v", what, got, want)
	}
}

// numbersOf gives a variable's numbers with NaN as -1, to be compared.
func numbersOf(t *testing.T, c *Cohort, name string) []float64 {
	t.Helper()
	v := c.Variables[name]
	if v == nil || !v.Numeric {
		t.Fatalf("%s is no variable of numbers: %+v", name, v)
	}
	values := slices.Clone(v.Values)
	for i, x := range values {
		if math.IsNaN(x) {
			values[i] = -1
		}
	}
	return values
}

// levelsOf gives a variable's categories, "" where missing.
func levelsOf(t *testing.T, c *Cohort, name string) []string {
	t.Helper()
	v := c.Variables[name]
	if v == nil || v.Numeric {
		t.Fatalf("%s is no variable of categories: %+v", name, v)
	}
	cells := make([]string, len(v.Codes))
	for i, code := range v.Codes {
		if code >= 0 {
			cells[i] = v.Levels[code]
		}
	}
	return cells
}

// relation finds two people by id.
func relation(t *testing.T, c *Cohort, a, b string) twin.Relation {
	t.Helper()
	i, ok := c.Index(a)
	j, too := c.Index(b)
	if !ok || !too {
		t.Fatalf("%q or %q is nobody", a, b)
	}
	return c.Pedigree.Relation(i, j)
}

func TestAwkwardInputs(t *testing.T) {
	for _, a := range []struct {
		study
		check func(t *testing.T, c *Cohort)
	}{
		{study{name: "ids that look like numbers",
			people: "person,mother\n007,1e5\n7,0x10\n1e5,\n100000,\n0x10,\nTRUE,1e5\n9223372036854775808,\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "people", c.People, []string{"007", "7", "1e5", "100000", "0x10", "TRUE", "9223372036854775808"})
				if got := relation(t, c, "007", "1e5"); got != twin.ParentChild {
					t.Error("007 and 1e5:", got)
				}
				if got := relation(t, c, "007", "100000"); got != twin.Unrelated {
					t.Error("007 and 100000:", got)
				}
				if got := relation(t, c, "007", "TRUE"); got != twin.FullSibling {
					t.Error("007 and TRUE:", got)
				}
			}},
		{study{name: "ids that look like missing cells", people: "person,family\nNA1,none\nnull,none\n-,.\n?,.\nn.a.,x\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "people", c.People, []string{"NA1", "null", "-", "?", "n.a."})
				want(t, "families", c.FamilyLabel, []string{"none", "none", ".", ".", "x"})
			}},
		{study{name: "quotes, commas and line breaks inside cells",
			people: "person,mother,\"street, town\"\n\"Smith, \"\"Jo\"\"\",\"Ann\nSmith\",\"1 High St,\nYork\"\n\"Ann\nSmith\",,\"\"\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "people", c.People, []string{`Smith, "Jo"`, "Ann\nSmith"})
				want(t, "lines", c.Lines, []int{2, 5})
				want(t, "street", levelsOf(t, c, "street, town"), []string{"1 High St,\nYork", ""})
				if got := relation(t, c, `Smith, "Jo"`, "Ann\nSmith"); got != twin.ParentChild {
					t.Error(got)
				}
			}},
		{study{name: "other scripts", people: "person,mother,région\n王小明,母亲,Zürich\n母亲,,Zürich\nأحمد,母亲,القاهرة\nе\u0301ва,,😀\n"},
			func(t *testing.T, c *Cohort) {
				if got := relation(t, c, "王小明", "أحمد"); got != twin.FullSibling {
					t.Error(got)
				}
				want(t, "région", levelsOf(t, c, "région"), []string{"Zürich", "Zürich", "القاهرة", "😀"})
			}},
		{study{name: "Windows line ends", people: strings.ReplaceAll(pair, "\n", "\r\n")},
			func(t *testing.T, c *Cohort) {
				want(t, "age", numbersOf(t, c, "age"), []float64{30, 30})
				want(t, "sex", levelsOf(t, c, "sex"), []string{"female", "female"})
			}},
		{study{name: "byte-order mark before a quoted name", people: "\ufeff\"person\",\"age\"\nA,30\n"},
			func(t *testing.T, c *Cohort) { want(t, "age", numbersOf(t, c, "age"), []float64{30}) }},
		{study{name: "packed tabs", raw: map[string]string{"people.TSV.gz": packed(strings.ReplaceAll(pair, ",", "\t"))}, in: peopleFile("people.TSV.gz")},
			func(t *testing.T, c *Cohort) {
				if got := relation(t, c, "A", "B"); got != twin.MZ {
					t.Error(got)
				}
			}},
		{study{name: "no line feed at the end, empty rows of a spreadsheet", people: "\n\nperson,age,site\n\nA,30,x\n,,\n,,,,\n  \nB,31,y\n,,\n\n\nC,32,x"},
			func(t *testing.T, c *Cohort) {
				want(t, "people", c.People, []string{"A", "B", "C"})
				want(t, "lines", c.Lines, []int{5, 9, 13})
			}},
		{study{name: "blanks after commas", people: "person, age , site, sex\nA, 30 , north ,f \nB,31,north,F\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "names", c.Names, []string{"age", "site", "sex"})
				want(t, "age", numbersOf(t, c, "age"), []float64{30, 31})
				want(t, "site", levelsOf(t, c, "site"), []string{"north", "north"})
				want(t, "sex", levelsOf(t, c, "sex"), []string{"female", "female"})
			}},
		{study{name: "every kind of missing cell", people: "person,age,site,mother\nA,,x,NA\nB,NA,n/a,N/A\nC,nan,NaN,\nD,N/a,,na\nE,-999.0,-999,M\nF,none,none,none\nG,30,y,M\n",
			in: func(in *Inputs) { in.MissingCodes = []string{"-999", " none "} }},
			func(t *testing.T, c *Cohort) {
				want(t, "age", numbersOf(t, c, "age"), []float64{-1, -1, -1, -1, -1, -1, 30})
				want(t, "site", levelsOf(t, c, "site"), []string{"x", "", "", "", "", "", "y"})
				for i, who := range c.Records {
					if (who.Mother != "") != (i == 4 || i == 6) {
						t.Errorf("mother of %s: %q", who.ID, who.Mother)
					}
				}
				if c.Pedigree.Founders() == 0 {
					t.Error("M is no founder")
				}
			}},
		{study{name: "fifteen siblings, triplets and people alone", people: "person,family,mother,father,twin_set,zygosity,mz_set\n" +
			letters("C%s,F,M,P,,,\n", 15) + "T1,G,N,Q,T,,1\nT2,G,N,Q,T,,1\nT3,G,N,Q,T,DZ,\nalone,H,,,,,\nalso alone,,,,,,\n"},
			func(t *testing.T, c *Cohort) {
				if got := c.Pedigree.Families(); got != 4 {
					t.Error("families:", got)
				}
				if got := relation(t, c, "Ca", "Co"); got != twin.FullSibling {
					t.Error("siblings:", got)
				}
				if got := relation(t, c, "T1", "T2"); got != twin.MZ {
					t.Error("T1 and T2:", got)
				}
				if got := relation(t, c, "T1", "T3"); !got.Twins() || got == twin.MZ {
					t.Error("T1 and T3:", got)
				}
				want(t, "labels of the last three", c.FamilyLabel[17:], []string{"G", "H", "also alone"})
			}},
		{study{name: "constant and empty columns", people: "person,cohort,empty,one\nA,2020,,x\nB,2020,NA,x\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "cohort", numbersOf(t, c, "cohort"), []float64{2020, 2020})
				want(t, "empty", numbersOf(t, c, "empty"), []float64{-1, -1})
				want(t, "one", c.Variables["one"].Levels, []string{"x"})
			}},
		{study{name: "zygosity and sex in many spellings", people: "person,twin_set,zygosity,sex\nA,T,mz,M\nB,T,Mz,male\nC,U,dz,f\nD,U,DZ,Male\nE,,,intersex\nF,,,\n"},
			func(t *testing.T, c *Cohort) {
				if relation(t, c, "A", "B") != twin.MZ || relation(t, c, "C", "D") != twin.DZOppositeSex {
					t.Error(relation(t, c, "A", "B"), relation(t, c, "C", "D"))
				}
				want(t, "sex", levelsOf(t, c, "sex"), []string{"male", "male", "female", "male", "intersex", ""})
				want(t, "zygosity", levelsOf(t, c, "zygosity"), []string{"MZ", "MZ", "DZ", "DZ", "", ""})
				if len(c.Warnings) == 0 || c.Warnings[0] != (Warning{"people", "sex", `people.csv, row 6: 1 cell of column "sex" neither male nor female (m, f): kept as a category, counted as unknown for parents and twins`}) {
					t.Error(c.Warnings)
				}
			}},
		{study{name: "one column", people: "person\nA\nB\n\n\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "people", c.People, []string{"A", "B"})
				if len(c.Warnings) != 1 || !strings.Contains(c.Warnings[0].Message, "everybody counts as a family of their own") {
					t.Error(c.Warnings)
				}
			}},
		{study{name: "oldest ages put together", people: "person,age\nA,89+\nB,88\nC,90 +\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "age", numbersOf(t, c, "age"), []float64{89, 88, 90})
				if c.Warnings[0] != (Warning{"people", "age", "people.csv, rows 2 and 4: 2 cells like 89+, taken as the number before the plus"}) {
					t.Error(c.Warnings)
				}
			}},
		{study{name: "mapped columns, and the mapped id in other tables", people: "participant_id,mum,Age at scan\nA,M,30\nB,M,31\n",
			measures: "participant_id,dwell\nB,2\nA,1\n", traits: "person,mood\nA,5\n",
			in: peopleColumns("person", "participant_id", "mother", "mum", "age", "Age at scan", "father", "")},
			func(t *testing.T, c *Cohort) {
				want(t, "age", numbersOf(t, c, "age"), []float64{30, 31})
				if c.Variables["age"].Column != "Age at scan" {
					t.Error(c.Variables["age"])
				}
				want(t, "dwell", []float64{c.Measures.Values.At(0, 0), c.Measures.Values.At(1, 0)}, []float64{1, 2})
				want(t, "mood", numbersOf(t, c, "mood"), []float64{5, -1})
			}},
		{study{name: "numbers in every form", people: pair, traits: "person,a,b,c,d,e,f\nA,+1.5,.5,5.,1E3,-0,0.1234567890123456789\nB,-1.5,0,00012,2.5e-3,0e-400,9007199254740993\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "a", numbersOf(t, c, "a"), []float64{1.5, -1.5})
				want(t, "b", numbersOf(t, c, "b"), []float64{.5, 0})
				want(t, "c", numbersOf(t, c, "c"), []float64{5, 12})
				want(t, "d", numbersOf(t, c, "d"), []float64{1000, .0025})
				want(t, "e", numbersOf(t, c, "e"), []float64{0, 0})
				want(t, "f", numbersOf(t, c, "f"), []float64{0.1234567890123456789, 9007199254740993})
			}},
		{study{name: "categories that look like numbers, numbers that group people", people: "person,site,school\nA,10,3\nB,2,1.50\nC,NA,3.0\nD,2,\n",
			in: func(in *Inputs) { in.Categories = []string{"site"} }},
			func(t *testing.T, c *Cohort) {
				want(t, "site", levelsOf(t, c, "site"), []string{"10", "2", "", "2"})
				codes, labels := c.Variables["school"].Groups()
				want(t, "groups", codes, []int{1, 0, 1, -1})
				want(t, "labels", labels, []string{"1.5", "3"})
				codes, labels = c.Variables["site"].Groups()
				want(t, "groups of categories", codes, []int{0, 1, -1, 1})
				want(t, "labels of categories", labels, []string{"10", "2"})
			}},
		{study{name: "a column of mixed text and numbers is categories", people: "person,band\n" + letters("A%s,30\n", 8) + "B,31-40\nC,NA\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "levels", c.Variables["band"].Levels, []string{"30", "31-40"})
			}},
		{study{name: "a line break in a name", people: "person,\"age\n(years)\"\nA,30\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "age", numbersOf(t, c, "age\n(years)"), []float64{30})
				want(t, "lines", c.Lines, []int{3})
			}},
		{study{name: "unused columns are not looked at", people: "person,height,notes,age\n" + letters("A%s,170,x,30\n", 10) + "B,tall,y,31\n",
			in: func(in *Inputs) { in.Use = []string{"age", "family"} }},
			func(t *testing.T, c *Cohort) {
				want(t, "names", c.Names, []string{"age"})
				want(t, "available", c.Available, []string{"height", "notes", "age"})
			}},
		{study{name: "a label of families as a variable", people: "person,family\nA,F1\nB,F2\nC,\n", in: func(in *Inputs) { in.Use = []string{"family"} }},
			func(t *testing.T, c *Cohort) {
				want(t, "family", levelsOf(t, c, "family"), []string{"F1", "F2", ""})
			}},
		{study{name: "other tables that repeat the columns of people", people: pair, traits: "person,family,twin_set,mood\nA,F9,T1,1\nB,F9,T1,2\n"},
			func(t *testing.T, c *Cohort) {
				want(t, "mood", numbersOf(t, c, "mood"), []float64{1, 2})
				want(t, "labels", c.FamilyLabel, []string{"F1", "F1"})
			}},
	} {
		t.Run(a.name, func(t *testing.T) {
			c, err := a.load(t)
			if err != nil {
				t.Fatal(err)
			}
			a.check(t, c)
		})
	}
}

// letters repeats a line with a, b, c ... in it.
func letters(format string, n int) string {
	var b strings.Builder
	for k := range n {
		b.WriteString(strings.ReplaceAll(format, "%s", string(rune('a'+k))))
	}
	return b.String()
}
