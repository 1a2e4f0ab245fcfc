package study

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/internal/stream"
)

// cohortFiles writes an invented cohort of twins with siblings into a folder:
// a measure of two parts of a whole and a dwell time, in two sessions; a trait
// that goes with the dwell time, one that goes with nothing and lacks a few
// people, and a site.
func cohortFiles(t *testing.T, families int) string {
	t.Helper()
	dir := t.TempDir()
	s := stream.New(11, "study test")
	people := []string{"person,family,mother,father,twin_set,zygosity,age,sex,site"}
	measures := []string{"person,session,occupancy_1,occupancy_2,dwell_s"}
	traits := []string{"person,mood,sleep"}
	for f := range families {
		shared, age := s.Norm(), 20+s.IntN(30)
		zygosity := [2]string{"MZ", "DZ"}[f%2]
		for k := range 2 + f%3/2 {
			id := fmt.Sprintf("%03d%c", f, 'a'+k)
			set, zyg, years := fmt.Sprintf("t%d", f), zygosity, age
			own := s.Norm()
			if k == 0 || zygosity == "DZ" {
				own = s.Norm()
			}
			if k == 2 {
				set, zyg, years = "", "", age+3
			}
			people = append(people, fmt.Sprintf("%s,%d,m%d,f%d,%s,%s,%d,%s,%s", id, f, f, f, set, zyg, years, [2]string{"female", "male"}[f/2%2], [2]string{"north", "south"}[f%2]))
			level := 0.8*shared + 0.6*own
			for session := range 2 {
				share := 0.5 + 0.1*s.Float64() - 0.05
				measures = append(measures, fmt.Sprintf("%s,%d,%.4f,%.4f,%.4f", id, session+1, share, 1-share, 0.2+0.05*(level+0.3*s.Norm()+4)))
			}
			sleep := fmt.Sprintf("%.3f", s.Norm())
			if f%9 == 0 {
				sleep = "NA"
			}
			traits = append(traits, fmt.Sprintf("%s,%.3f,%s", id, 5+level+s.Norm(), sleep))
		}
	}
	for name, lines := range map[string][]string{"people.csv": people, "dynamics.csv": measures, "mood.csv": traits} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(strings.Join(lines, "\n")+"\n"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

const wholeStudy = `kindwell: 1
title: A test
seed: 5
people:
  file: people.csv
measures:
  file: dynamics.csv
  session: session
  states_learned_on: other_people
  sets:
    occupancy: ["occupancy_*"]
    dwell: [dwell_s]
  transform:
    - {match: ["occupancy_*"], as: clr, composition: occupancy}
    - {match: [dwell_s], as: log}
traits:
  files: [mood.csv]
  use: [mood, sleep]
confounds:
  use: [age, sex]
predict:
  outer: {folds: 5, repeats: 2}
  inner: {folds: 3}
  penalties: {low: 0.1, high: 1.0e4, count: 6}
  permutations: 99
heritability:
  full: ACE
  of: [measures, traits, confounds]
  covariates: [age, sex]
`

func writeStudy(t *testing.T, dir, text string) string {
	t.Helper()
	path := filepath.Join(dir, "study.yaml")
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

func runStudy(t *testing.T, path string, workers int) *Results {
	t.Helper()
	p, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	r, err := p.Run(context.Background(), Options{Workers: workers, Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// folderOf writes results and returns the folder.
func folderOf(t *testing.T, r *Results, overwrite bool) string {
	t.Helper()
	f, err := r.plan.Reserve(overwrite)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abort()
	if err := r.Write(f); err != nil {
		t.Fatal(err)
	}
	return f.Path()
}

// TestSameBytesForAnyNumberOfWorkers: every file but the record, which holds
// times, is the same.
func TestSameBytesForAnyNumberOfWorkers(t *testing.T) {
	dir := cohortFiles(t, 36)
	path := writeStudy(t, dir, wholeStudy)
	var first map[string][]byte
	for _, workers := range []int{1, 2, 8} {
		folder := folderOf(t, runStudy(t, path, workers), workers > 1)
		files := map[string][]byte{}
		entries, err := os.ReadDir(folder)
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range entries {
			data, err := os.ReadFile(filepath.Join(folder, e.Name()))
			if err != nil {
				t.Fatal(err)
			}
			if e.Name() != tidy.RecordName && e.Name() != tidy.PackageName {
				files[e.Name()] = data
			}
		}
		if len(files) < len(tidy.Tables()) {
			t.Fatalf("%d files of %d tables", len(files), len(tidy.Tables()))
		}
		if first == nil {
			first = files
			continue
		}
		for name, data := range files {
			if !bytes.Equal(data, first[name]) {
				t.Errorf("%s differs with %d workers", name, workers)
			}
		}
	}
}

// TestWhatARunHolds checks the joints: counts of rows, groups of people, who
// is tested, and corrections over groups.
func TestWhatARunHolds(t *testing.T) {
	dir := cohortFiles(t, 36)
	r := runStudy(t, writeStudy(t, dir, wholeStudy), 2)
	people := len(r.plan.Cohort.People)
	if len(r.PeopleGroups) != 2 {
		t.Fatalf("groups: %+v", r.PeopleGroups)
	}
	mood, sleep := r.PeopleGroups[0], r.PeopleGroups[1]
	if mood.People != people || sleep.People >= people || mood.Traits != "mood" {
		t.Errorf("groups: %+v", r.PeopleGroups)
	}
	if want := (mood.People + sleep.People) * 2 * 2; len(r.Predictions) != want {
		t.Errorf("%d predictions, want %d", len(r.Predictions), want)
	}
	if want := (mood.People + sleep.People) * 2; len(r.Folds) != want {
		t.Errorf("%d rows of folds, want %d", len(r.Folds), want)
	}
	if want := (mood.People + sleep.People) * 2 * 4; len(r.InnerFolds) != want {
		t.Errorf("%d rows of inner folds, want %d", len(r.InnerFolds), want)
	}
	tested := 0
	for _, s := range r.PredictionScores {
		if !s.Tested {
			if s.P == s.P {
				t.Errorf("an untested row has a p: %+v", s)
			}
			continue
		}
		tested++
		if s.Metric != "r_by_fold" || s.Permutations.Value != 99 || !(s.P >= 0.01 && s.P <= 1) {
			t.Errorf("tested row: %+v", s)
		}
		if s.PFWER < s.P-1e-12 || s.Q < s.P-1e-12 {
			t.Errorf("corrected values below p: %+v", s)
		}
		if s.Trait == "mood" && s.Set == "dwell" && (s.Value < 0.3 || s.P > 0.01) {
			t.Errorf("the planted effect was not found: %+v", s)
		}
	}
	if tested != 4 {
		t.Errorf("%d tested rows, want 4", tested)
	}
	flags := map[string]string{}
	for _, h := range r.Heritability {
		flags[h.Variable] = h.Flags
		if h.Variable == "dwell_s" && !(h.A2+h.C2 > 0.3 && h.RMZ > 0.5 && h.P == h.P) {
			t.Errorf("dwell_s: %+v", h)
		}
	}
	if flags["age"] != flagSameInTwins {
		t.Errorf("age, equal in all twins, has flags %q", flags["age"])
	}
	// Every person without the trait has a row with the reason.
	missing := 0
	for _, e := range r.Exclusions {
		if e.Analysis == "prediction" && e.Variable == "sleep" {
			missing++
			if e.Reason != "missing: sleep" {
				t.Errorf("reason: %q", e.Reason)
			}
		}
	}
	if missing != people-sleep.People {
		t.Errorf("%d exclusions of sleep, want %d", missing, people-sleep.People)
	}
}

// TestWeightsOfAWholeAddToZero: weights of the parts of a composition are per
// unit of the log part about their mean.
func TestWeightsOfAWholeAddToZero(t *testing.T) {
	dir := cohortFiles(t, 36)
	r := runStudy(t, writeStudy(t, dir, wholeStudy), 2)
	sum, n := 0.0, 0
	for _, w := range r.Weights {
		if w.Trait == "mood" && w.Set == "occupancy" {
			sum += w.Weight
			n++
		}
	}
	if n != 2 || sum > 1e-12 || sum < -1e-12 {
		t.Errorf("%d weights add to %v", n, sum)
	}
}

// TestPeopleOfCommon makes one group of all traits.
func TestPeopleOfCommon(t *testing.T) {
	dir := cohortFiles(t, 24)
	r := runStudy(t, writeStudy(t, dir, strings.Replace(wholeStudy, "confounds:", "people_of: common\nconfounds:", 1)), 2)
	if len(r.PeopleGroups) != 1 || r.PeopleGroups[0].Traits != "mood;sleep" {
		t.Errorf("groups: %+v", r.PeopleGroups)
	}
}

// TestOnly runs one part and leaves the tables of the other empty.
func TestOnly(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, wholeStudy))
	if err != nil {
		t.Fatal(err)
	}
	r, err := p.Run(context.Background(), Options{Only: []string{partHeritability}})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.PredictionScores) > 0 || len(r.Heritability) == 0 {
		t.Errorf("%d scores, %d heritabilities", len(r.PredictionScores), len(r.Heritability))
	}
}

// TestLacks names a part that the study file does not ask for.
func TestLacks(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, wholeStudy[:strings.Index(wholeStudy, "heritability:")]))
	if err != nil {
		t.Fatal(err)
	}
	if got := p.Lacks([]string{partPredict, partHeritability}); got != partHeritability {
		t.Errorf("lacks %q", got)
	}
	if got := p.Lacks(nil); got != "" {
		t.Errorf("lacks %q", got)
	}
}

// TestStopped: an ended context ends a run with its error and no results.
func TestStopped(t *testing.T) {
	dir := cohortFiles(t, 24)
	p, err := Open(writeStudy(t, dir, wholeStudy))
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if r, err := p.Run(ctx, Options{}); err != context.Canceled || r != nil {
		t.Errorf("got %v, %v", r, err)
	}
}
