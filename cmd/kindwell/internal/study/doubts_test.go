package study

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// doubtsOf opens the study of a cohort in which one file was changed, and
// returns the warnings as text.
func doubtsOf(t *testing.T, study, file string, change func(lines []string)) string {
	t.Helper()
	dir := cohortFiles(t, 24)
	if file != "" {
		path := filepath.Join(dir, file)
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		lines := strings.Split(strings.TrimSuffix(string(data), "\n"), "\n")
		change(lines)
		if err := os.WriteFile(path, []byte(strings.Join(lines, "\n")+"\n"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	p, err := Open(writeStudy(t, dir, study))
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	for _, w := range p.warnings {
		b.WriteString(w.Analysis + ", " + w.About + ": " + w.Message + "\n")
	}
	return b.String()
}

// setCell changes one cell of a comma-separated line.
func setCell(line string, column int, cell string) string {
	cells := strings.Split(line, ",")
	cells[column] = cell
	return strings.Join(cells, ",")
}

func TestDoubts(t *testing.T) {
	for _, c := range []struct {
		name   string
		study  string
		file   string
		change func([]string)
		want   string
	}{
		{"states of the same people", strings.Replace(wholeStudy, "other_people", "same_people", 1), "", nil,
			"measures, states_learned_on: the states were learned on people of this study"},
		{"a code in a trait", wholeStudy, "mood.csv", func(l []string) { l[4], l[9] = setCell(l[4], 1, "-999"), setCell(l[9], 1, "-999") },
			"traits, mood: -999 stands in 2 of its cells, far from all others; if it means missing, name it under missing_codes"},
		{"a code in a measure", strings.Replace(wholeStudy, "as: log", "as: none", 1), "dynamics.csv", func(l []string) { l[4] = setCell(l[4], 4, "-9") },
			"measures, dwell_s: -9 stands in 1 of its cells"},
		{"an unknown mother coded 0", wholeStudy, "people.csv", func(l []string) {
			for i := 1; i < len(l); i++ {
				if strings.HasPrefix(l[i], "00") {
					l[i] = setCell(l[i], 2, "0")
				}
			}
		}, `people, mother: "0" is the mother of`},
		{"a site in numbers", strings.Replace(wholeStudy, "use: [age, sex]\npredict", "use: [age, sex, site]\npredict", 1), "people.csv", func(l []string) {
			for i := 1; i < len(l); i++ {
				l[i] = setCell(l[i], 8, string(rune('1'+i%3)))
			}
		}, "people, site: confound site holds 3 different whole numbers"},
		{"twins without a twin set", wholeStudy, "people.csv", func(l []string) {
			for i := 1; i < len(l); i++ {
				l[i] = setCell(setCell(l[i], 4, ""), 5, "")
			}
		}, "pairs of full siblings are of the same age; if they are twins"},
		{"nothing asked", wholeStudy[:strings.Index(wholeStudy, "predict:")], "", nil, "neither predict nor heritability is asked for"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := doubtsOf(t, c.study, c.file, c.change); !strings.Contains(got, c.want) {
				t.Errorf("the warnings\n%s\nlack\n%s", got, c.want)
			}
		})
	}
	if got := doubtsOf(t, wholeStudy, "", nil); got != "heritability, sex: sex holds words; its variance is not divided\n" {
		t.Errorf("a sound cohort has warnings:\n%s", got)
	}
}

// TestCheckSaysThatAModelCannotBeFitted when there are no twins.
func TestCheckSaysThatAModelCannotBeFitted(t *testing.T) {
	dir := cohortFiles(t, 24)
	path := filepath.Join(dir, "people.csv")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(string(data), "\n")
	for i := 1; i < len(lines)-1; i++ {
		lines[i] = setCell(setCell(lines[i], 4, ""), 5, "")
	}
	if err := os.WriteFile(path, []byte(strings.Join(lines, "\n")), 0o644); err != nil {
		t.Fatal(err)
	}
	p, err := Open(writeStudy(t, dir, wholeStudy))
	if err != nil {
		t.Fatal(err)
	}
	c, err := p.Check()
	if err != nil {
		t.Fatal(err)
	}
	for _, n := range c.Warnings {
		if n.Analysis == "heritability" && strings.Contains(n.Message, "apart; nothing is reported under full: ACE, choose another") {
			return
		}
	}
	t.Errorf("warnings: %+v", c.Warnings)
}

// TestNamesWhatIsMissing when nobody is complete.
func TestNamesWhatIsMissing(t *testing.T) {
	dir := cohortFiles(t, 24)
	path := filepath.Join(dir, "mood.csv")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSuffix(string(data), "\n"), "\n")
	for i := 1; i < len(lines); i++ {
		lines[i] = setCell(lines[i], 2, "NA")
	}
	if err := os.WriteFile(path, []byte(strings.Join(lines, "\n")+"\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	p, err := Open(writeStudy(t, dir, wholeStudy))
	if err != nil {
		t.Fatal(err)
	}
	_, err = p.Check()
	if err == nil || !strings.Contains(err.Error(), "missing are sleep in 56") {
		t.Errorf("got %v", err)
	}
}
