package study

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestNamesThatMeanNothing: each change of the study file is refused with its
// place and the nearest name, and several at once.
func TestNamesThatMeanNothing(t *testing.T) {
	dir := cohortFiles(t, 24)
	for _, c := range []struct {
		name string
		old  string
		new  string
		want []string
	}{
		{"trait", "use: [mood, sleep]", "use: [mod, sleep]",
			[]string{`study.yaml:18:9: "mod" is no column of the people or traits tables`, `did you mean "mood"?`}},
		{"confound", "use: [age, sex]\npredict", "use: [agee, sex]\npredict",
			[]string{`study.yaml:20:9: "agee" is no column`, `did you mean "age"?`}},
		{"both at once", "use: [mood, sleep]\nconfounds:\n  use: [age, sex]", "use: [mod, sleep]\nconfounds:\n  use: [agee, sex]",
			[]string{`study.yaml:18:9: "mod"`, `study.yaml:20:9: "agee"`}},
		{"set", "dwell: [dwell_s]", "dwell: [\"dwel_*\"]",
			[]string{`study.yaml:12:13: "dwel_*" matches no column of the measures`}},
		{"transform", "match: [dwell_s], as: log", "match: [dwell], as: log",
			[]string{`"dwell" matches no column of the measures`, `did you mean "dwell_s"?`}},
		{"measure matched twice", "match: [dwell_s], as: log", "match: [\"*\"], as: log",
			[]string{`"*" matches measure "occupancy_1", which transform 1 matches too`, "let each measure be matched by one transform"}},
		{"trait and confound", "use: [age, sex]\npredict", "use: [age, mood]\npredict",
			[]string{"`mood` is a trait and a confound"}},
		{"square of words", "use: [age, sex]\npredict", "use: [age, sex]\n  squares: [sex]\npredict",
			[]string{`"sex" holds words and has no square`}},
		{"one part of a whole", `match: ["occupancy_*"], as: clr`, `match: ["occupancy_1"], as: clr`,
			[]string{`composition "occupancy": a composition needs two parts or more, not 1`, "match all parts of one whole"}},
		{"inner folds alone", "inner: {folds: 3}", "inner: {file: inner.csv}",
			[]string{"study.yaml:23:17: inner folds are given without outer folds", "give outer folds, too"}},
		{"log of a share", "match: [dwell_s], as: log", "match: [dwell_s], as: logit",
			nil}, // dwell times below 1 s have a logit: valid
	} {
		t.Run(c.name, func(t *testing.T) {
			if !strings.Contains(wholeStudy, c.old) {
				t.Fatalf("the study does not contain %q", c.old)
			}
			_, err := Open(writeStudy(t, dir, strings.Replace(wholeStudy, c.old, c.new, 1)))
			if len(c.want) == 0 {
				if err != nil {
					t.Fatalf("refused: %v", err)
				}
				return
			}
			if err == nil {
				t.Fatal("accepted")
			}
			for _, want := range c.want {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("the message\n%s\nlacks\n%s", err, want)
				}
			}
		})
	}
}

// TestCellsThatAScaleRefuses: file, line, column and value, all at once.
func TestCellsThatAScaleRefuses(t *testing.T) {
	dir := cohortFiles(t, 24)
	path := filepath.Join(dir, "dynamics.csv")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(string(data), "\n")
	for i, cells := range map[int]string{2: "0,1,0.5", 3: "0.2,0.8,-0.5"} {
		at := strings.SplitN(lines[i], ",", 3)
		lines[i] = at[0] + "," + at[1] + "," + cells
	}
	if err := os.WriteFile(path, []byte(strings.Join(lines, "\n")), 0o644); err != nil {
		t.Fatal(err)
	}
	_, err = Open(writeStudy(t, dir, wholeStudy))
	if err == nil {
		t.Fatal("accepted")
	}
	for _, want := range []string{
		`dynamics.csv:4: column "dwell_s": "-0.5": log: `,
		`dynamics.csv:3: column "occupancy_1": "0": composition occupancy: `,
	} {
		if !strings.Contains(err.Error(), want) {
			t.Errorf("the message\n%s\nlacks\n%s", err, want)
		}
	}
}

// TestTooManyFolds says how many families there are.
func TestTooManyFolds(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, strings.Replace(wholeStudy, "folds: 5", "folds: 30", 1)))
	if err != nil {
		t.Fatal(err)
	}
	_, err = p.Run(context.Background(), Options{})
	want := "mood: 30 outer folds asked of 24 families; families are never split, so ask for 24 or fewer"
	if err == nil || !strings.Contains(err.Error(), want) || !strings.Contains(err.Error(), "study.yaml:22") {
		t.Errorf("got %v", err)
	}
	if _, again := p.Check(); again == nil || again.Error() != err.Error() {
		t.Errorf("check says %v", again)
	}
}

// TestInbreedingRefusesDominance by row, where ADE is named; without a list of
// models it is left out with a warning.
func TestInbreedingRefusesDominance(t *testing.T) {
	dir := cohortFiles(t, 24)
	path := filepath.Join(dir, "people.csv")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	// Two full siblings of another family have a child.
	text := string(data) + "zm,900,gm,gf,,,50,female,north\nzf,900,gm,gf,,,52,male,north\nzc,900,zm,zf,,,20,female,north\n"
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	row := strings.Count(text, "\n")
	asked := strings.Replace(wholeStudy, "  full: ACE\n", "  full: ACE\n  models: [ACE, ADE, CE]\n", 1)
	_, err = Open(writeStudy(t, dir, asked))
	want := fmt.Sprintf(`people.csv:%d: column "person": "zc": has parents who are related`, row)
	if err == nil || !strings.Contains(err.Error(), want) {
		t.Errorf("got %v, want %s", err, want)
	}
	p, err := Open(writeStudy(t, dir, wholeStudy))
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range p.Study.Heritability.Models {
		if m == "ADE" {
			t.Error("ADE is still there")
		}
	}
}
