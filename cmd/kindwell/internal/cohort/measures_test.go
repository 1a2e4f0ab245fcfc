package cohort

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// cellsOf prints measures a row a line: person, session, lines, values.
func cellsOf(c *Cohort, m *Measures) string {
	var b strings.Builder
	for i, row := range m.Rows {
		b.WriteString(c.People[row.Person] + " " + row.Session)
		for j := range m.Names {
			b.WriteString(" ")
			if v := m.Values.At(i, j); math.IsNaN(v) {
				b.WriteString("NA")
			} else {
				b.WriteString(formatNumber(v))
			}
		}
		b.WriteString("\n")
	}
	return b.String()
}

func TestMeasuresAreJoinedByPersonAndSession(t *testing.T) {
	c := mustLoad(t, study{
		people: "person\nA\nB\nC\nD\n",
		raw: map[string]string{
			"one.csv": "person,session,reads,share_a,share_b\nB,10,5,.1,.9\nB,9,6,.2,.8\nA,9,7,.3,.7\nX,9,0,.5,.5\n",
			"two.tsv": "dwell\tsession\tperson\n1.5\t9\tB\n2.5\t9\tC\n3.5\t10\tB\nNA\t9\tA\n",
		},
		in: func(in *Inputs) {
			in.Measures = &MeasuresInput{Files: []string{"one.csv", "two.tsv"}, Session: "session", Use: []string{"share_*", "dwell"}}
		},
	})
	want(t, "names", c.Measures.Names, []string{"share_a", "share_b", "dwell"})
	if got, want := cellsOf(c, c.Measures), "A 9 0.3 0.7 NA\nB 9 0.2 0.8 1.5\nB 10 0.1 0.9 3.5\nC 9 NA NA 2.5\n"; got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
	want(t, "lines of B in session 9", c.Measures.Rows[1].Lines, []int{3, 2})
	want(t, "lines of C", c.Measures.Rows[3].Lines, []int{0, 3})
	want(t, "exclusions", c.Exclusions, []Exclusion{{"measures", "", "X", "not in people.csv"}})
	checkMessages(t, c.Warnings[1:], "measures, one.csv: one.csv, row 5: 1 person (1 row) who is not in people.csv: left out\n")

	for _, f := range []struct {
		row, measure int
		want         string
	}{
		{2, 1, `one.csv:2: column "share_b": "0.9": is refused`},
		{1, 2, `two.tsv:2: column "dwell": "1.5": is refused`},
		{0, 2, `two.tsv:5: column "dwell": is refused`},
		{3, 0, `one.csv:1: column "share_a": is refused`},
	} {
		if got := c.Measures.Fault(f.row, f.measure, "is %s", "refused").Error(); got != f.want {
			t.Errorf("got %s, want %s", got, f.want)
		}
	}
}

func TestMeasuresWithoutSessions(t *testing.T) {
	c := mustLoad(t, study{people: pair, measures: "person,x\nB,2\n"})
	if got := cellsOf(c, c.Measures); got != "B  2\n" {
		t.Error(got)
	}
}

// The order of the rows of a file, and of its columns, says nothing.
func TestMeasuresDoNotDependOnTheOrderOfRows(t *testing.T) {
	header := []string{"person,session,x"}
	lines := []string{"A,1,1", "A,2,2", "A,10,3", "B,1,4", "C,2,5", "C,1,NA"}
	load := func(t testing.TB, lines []string) string {
		c, err := study{people: "person\nA\nB\nC\n", measures: strings.Join(append(header, lines...), "\n"), in: sessions("", "session", "")}.load(t)
		if err != nil {
			t.Fatal(err)
		}
		return cellsOf(c, c.Measures)
	}
	first := load(t, lines)
	if first != "A 1 1\nA 2 2\nA 10 3\nB 1 4\nC 1 NA\nC 2 5\n" {
		t.Error(first)
	}
	for range 20 {
		shuffled := rapid.Permutation(lines).Example()
		if got := load(t, shuffled); got != first {
			t.Errorf("rows %v give\n%s", shuffled, got)
		}
	}
}

func TestReadMeasuresOfAFold(t *testing.T) {
	s := study{people: pair, measures: "person,x\nA,1\nB,2\n", raw: map[string]string{"fold_1.csv": "person,x\nB,20\nA,10\nZ,0\n", "bad.csv": "person,x\nA,?\n"}}
	c := mustLoad(t, s)
	files, warnings := len(c.InputFiles), len(c.Warnings)
	m, found, err := c.ReadMeasures(MeasuresInput{Files: []string{"fold_1.csv"}})
	if err != nil {
		t.Fatal(err)
	}
	if got := cellsOf(c, m); got != "A  10\nB  20\n" {
		t.Error(got)
	}
	if len(found.Warnings) != 1 || len(found.Exclusions) != 1 || len(found.InputFiles) != 1 {
		t.Error(found)
	}
	if len(c.Warnings) != warnings || len(c.InputFiles) != files {
		t.Error("the cohort changed")
	}
	if _, _, err := c.ReadMeasures(MeasuresInput{Files: []string{"bad.csv"}}); err == nil || !strings.HasPrefix(err.Error(), `bad.csv:2: column "x": "?": `) {
		t.Error(err)
	}
}

func TestTraitsWithSessionsAndStrangers(t *testing.T) {
	c := mustLoad(t, study{people: "person\nA\nB\nC\n", raw: map[string]string{
		"mood.csv":  "person,wave,mood,doctor\nX,1,9,y\nC,2,4,no\nC,1,2,yes\nA,1,1,\nA,2,NA,no\nY,1,9,y\n",
		"sleep.csv": "hours,person\n8,B\n",
	}, in: func(in *Inputs) { in.Traits = []TableInput{{File: "mood.csv", Session: "wave"}, {File: "sleep.csv"}} }})
	want(t, "mood", numbersOf(t, c, "mood"), []float64{1, -1, 3})
	want(t, "doctor", levelsOf(t, c, "doctor"), []string{"no", "", "yes"})
	want(t, "hours", numbersOf(t, c, "hours"), []float64{-1, 8, -1})
	want(t, "lines", c.Variables["mood"].Lines, []int{5, 0, 4})
	want(t, "exclusions", c.Exclusions, []Exclusion{{"traits", "", "X", "not in people.csv"}, {"traits", "", "Y", "not in people.csv"}})
	checkMessages(t, c.Warnings[1:], `traits, mood.csv: mood.csv, rows 2 and 7: 2 people (2 rows) who are not in people.csv: left out
traits, mood: mood.csv, rows 4 and 3 of one person: 2 and 4, the mean of the sessions is taken (3)
traits, doctor: mood.csv, rows 4 and 3 of one person: "yes" and "no", the first session's is taken
`)
	if got := c.Variables["mood"].Fault(2, "is %d", 1).Error(); got != `mood.csv:4: column "mood": "3": is 1` {
		t.Error(got)
	}
	if got := c.Variables["doctor"].Fault(0, "is odd").Error(); got != `mood.csv:5: column "doctor": "no": is odd` {
		t.Error(got)
	}
	if got := c.Variables["mood"].Fault(1, "is odd").Error(); got != `mood.csv: column "mood": is odd` {
		t.Error(got)
	}
}
