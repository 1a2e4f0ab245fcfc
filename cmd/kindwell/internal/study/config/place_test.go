package config

import (
	"errors"
	"strings"
	"testing"
	"unicode/utf8"

	"kindwell/internal/names"
)

func TestAt(t *testing.T) {
	study, err := Load("testdata/served.yaml")
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		path, text string // of the line, from the column on
		line       int
		given      bool
	}{
		{"kindwell", "1  ", 1, true},
		{"people.columns.person", "participant_id}", 7, true},
		{"measures", "measures:", 9, true},
		{"measures.sets", "sets:", 13, true},
		{"measures.sets.timing", "timing:", 15, true},
		{"measures.sets.timing[1]", `"interval_*"`, 15, true},
		{"measures.transform[1]", `match: ["dwell`, 19, true},
		{"measures.transform[1].as", "log}", 19, true},
		{"traits.use[2]", "sleep_quality]", 22, true},
		{"confounds.products[0][1]", "sex]]", 27, true},
		{"predict.outer.folds", "10, repeats", 33, true},
		{"predict.penalties.high", "1.0e6", 35, true},
		// Not in the file: the section that it would be in.
		{"predict.intervals", "predict:", 31, false},
		{"predict.inner.file", "inner:", 34, false},
		{"measures.sets.timing[7]", "timing:", 15, false},
		{"title.x.y[3]", "Saltmere", 2, false},
		{"nowhere", "kindwell:", 1, false},
		{"", "kindwell:", 1, true},
	} {
		at := study.At(c.path)
		if at.Line != c.line || !strings.HasPrefix(string([]rune(at.Source)[at.Column-1:]), c.text) || at.File != "testdata/served.yaml" {
			t.Errorf("At(%q) is %s:%d:%d %q", c.path, at.File, at.Line, at.Column, at.Source)
		}
		if study.Given(c.path) != c.given {
			t.Errorf("Given(%q) is %v", c.path, !c.given)
		}
	}
	inGo := &Study{}
	if inGo.At("seed") != (Position{}) || inGo.Given("seed") || inGo.Path("a/../b.csv") != "b.csv" {
		t.Error("a study made in Go has no places")
	}
}

// TestFaultsOfTheCaller adds faults to a study that was read, as is done for
// names that match no column of a table.
func TestFaultsOfTheCaller(t *testing.T) {
	study := mustParse(t, minimal+"confounds: {use: [age, sexx]}\n")
	var faults Faults
	if faults.Err() != nil {
		t.Error("no fault is an error")
	}
	faults.Add(study.At("confounds.use[1]"), "`sexx` is no column of people.csv", "did you mean `"+names.Nearest("sexx", []string{"age", "sex"})+"`?")
	faults.Add(study.At("traits.use[0]"), "`wellbeing` is no column of mood.csv or people.csv", "")
	err := faults.Err()
	const want = "study.yaml:5:32: `wellbeing` is no column of mood.csv or people.csv\n" +
		"    5 | traits: {file: mood.csv, use: [wellbeing]}\n" +
		"      |                                ^\n\n" +
		"study.yaml:6:24: `sexx` is no column of people.csv\n" +
		"    6 | confounds: {use: [age, sexx]}\n" +
		"      |                        ^\n" +
		"      did you mean `sex`?"
	if err.Error() != want {
		t.Errorf("%s\nwant\n%s", err, want)
	}
	var one Fault
	if !errors.As(err, &one) || one.Line != 5 || one.Column != 32 {
		t.Errorf("the first fault is %+v", one)
	}
	if faults[0].Line != 6 {
		t.Error("Err changed the order of its receiver")
	}
	many := make(Faults, maxPrinted+3)
	if text := many.Err().Error(); !strings.HasSuffix(text, "\n\nand 3 more") || strings.Count(text, "\n\n") != maxPrinted {
		t.Error("many faults are not cut")
	}
}

func TestExcerpt(t *testing.T) {
	long := strings.Repeat("x", 150) + "日本" + strings.Repeat("y", 150)
	for _, c := range []struct {
		line         string
		column       int
		text, marker string
	}{
		{"a: 1", 4, "a: 1", "   ^"},
		{"a: 1", 5, "a: 1", "    ^"},
		{"\ta: 1", 2, "\ta: 1", "\t^"},
		{"日本: 1", 5, "日本: 1", "      ^"},
		{"e\u0301: 1", 5, "e\u0301: 1", "   ^"},
		{"", 1, "", "^"},
		{"a\x01b", 3, "a\ufffdb", "  ^"},
		{long, 1, strings.Repeat("x", 100) + "...", "^"},
		{long, 153, "..." + strings.Repeat("x", 48) + "日本" + strings.Repeat("y", 50) + "...", strings.Repeat(" ", 3+48+4) + "^"},
		{long, 303, "..." + strings.Repeat("y", 100), strings.Repeat(" ", 103) + "^"},
	} {
		text, marker := excerpt(c.line, c.column)
		if text != c.text || marker != c.marker {
			t.Errorf("excerpt(%q, %d) is\n%q\n%q, want\n%q\n%q", c.line, c.column, text, marker, c.text, c.marker)
		}
		if !utf8.ValidString(text) {
			t.Errorf("excerpt(%q, %d) is no text", c.line, c.column)
		}
	}
}
