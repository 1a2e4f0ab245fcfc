package study

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// foldStudy replaces the folds of the study.
func foldStudy(outer string) string {
	return strings.Replace(strings.Replace(wholeStudy, "outer: {folds: 5, repeats: 2}", outer, 1), "use: [mood, sleep]", "use: [mood]", 1)
}

// TestGivenFolds: folds from a table come back in folds.csv as they were
// given, under numbers.
func TestGivenFolds(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, foldStudy("outer: {folds: 5, repeats: 2}")))
	if err != nil {
		t.Fatal(err)
	}
	var table strings.Builder
	table.WriteString("repeat,fold,person\n")
	want := map[string]int{}
	for i, person := range p.Cohort.People {
		fold := 1 + p.Cohort.Pedigree.Family(i)%4
		want[person] = fold
		fmt.Fprintf(&table, "1,%d,%s\n", fold, person)
	}
	if err := os.WriteFile(filepath.Join(dir, "folds.csv"), []byte(table.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	r := runStudy(t, writeStudy(t, dir, foldStudy("outer: {file: folds.csv}")), 2)
	if len(r.Folds) != len(want) {
		t.Fatalf("%d rows", len(r.Folds))
	}
	for _, f := range r.Folds {
		if f.Fold != want[f.Person] {
			t.Errorf("%s is in fold %d, want %d", f.Person, f.Fold, want[f.Person])
		}
	}
	found := false
	for _, in := range r.record.Inputs {
		found = found || in.File == "folds.csv"
	}
	if !found {
		t.Error("the record does not name folds.csv")
	}
}

// TestFamilyOnTwoSides: given folds that split a family are refused by name.
func TestFamilyOnTwoSides(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, foldStudy("outer: {folds: 5, repeats: 2}")))
	if err != nil {
		t.Fatal(err)
	}
	var table strings.Builder
	table.WriteString("repeat,fold,person\n")
	for i, person := range p.Cohort.People {
		fmt.Fprintf(&table, "1,%d,%s\n", 1+i%4, person)
	}
	if err := os.WriteFile(filepath.Join(dir, "folds.csv"), []byte(table.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	p, err = Open(writeStudy(t, dir, foldStudy("outer: {file: folds.csv}")))
	if err == nil {
		_, err = p.Run(context.Background(), Options{})
	}
	if err == nil || !strings.Contains(err.Error(), "folds.csv") || !strings.Contains(err.Error(), "000b") {
		t.Errorf("got %v", err)
	}
}

// TestLeaveOneFamilyOut has as many folds as families and no r_by_fold.
func TestLeaveOneFamilyOut(t *testing.T) {
	dir := cohortFiles(t, 24)
	r := runStudy(t, writeStudy(t, dir, foldStudy("outer: {leave_out: family}")), 2)
	folds := map[int]string{}
	for _, f := range r.Folds {
		if other, ok := folds[f.Fold]; ok && other != f.Family {
			t.Errorf("fold %d holds families %s and %s", f.Fold, other, f.Family)
		}
		folds[f.Fold] = f.Family
	}
	if len(folds) != r.PeopleGroups[0].Families {
		t.Errorf("%d folds for %d families", len(folds), r.PeopleGroups[0].Families)
	}
	for _, s := range r.PredictionScores {
		if s.Metric == "r_by_fold" {
			t.Error("r_by_fold in a design of one family a fold")
		}
		if s.Metric == "r2" && (!s.Tested || s.P != s.P || s.Low == s.Low) {
			t.Errorf("r2 is tested and has no interval here: %+v", s)
		}
	}
}

// TestGivenInnerFolds: inner folds come from a table, too.
func TestGivenInnerFolds(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, foldStudy("outer: {folds: 5, repeats: 2}")))
	if err != nil {
		t.Fatal(err)
	}
	outer, inner := strings.Builder{}, strings.Builder{}
	outer.WriteString("repeat,fold,person\n")
	inner.WriteString("repeat,fold,inner_fold,person\n")
	want := map[string]int{}
	for i, person := range p.Cohort.People {
		family := p.Cohort.Pedigree.Family(i)
		fmt.Fprintf(&outer, "1,%d,%s\n", 1+family%3, person)
		for fold := range 3 {
			if fold != family%3 {
				want[fmt.Sprint(fold+1, " ", person)] = 1 + family/3%2
				fmt.Fprintf(&inner, "1,%d,%d,%s\n", fold+1, 1+family/3%2, person)
			}
		}
	}
	for name, text := range map[string]string{"folds.csv": outer.String(), "inner.csv": inner.String()} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	text := strings.Replace(foldStudy("outer: {file: folds.csv}"), "inner: {folds: 3}", "inner: {file: inner.csv}", 1)
	r := runStudy(t, writeStudy(t, dir, text), 2)
	if len(r.InnerFolds) != len(want) {
		t.Fatalf("%d rows, want %d", len(r.InnerFolds), len(want))
	}
	for _, f := range r.InnerFolds {
		if f.InnerFold != want[fmt.Sprint(f.Fold, " ", f.Person)] {
			t.Errorf("%s is in inner fold %d of fold %d", f.Person, f.InnerFold, f.Fold)
		}
	}
}
