package study

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestDraftRuns: the study file that is written from the tables of a folder
// finds the whole, the sessions, the traits and the confounds, and runs.
func TestDraftRuns(t *testing.T) {
	dir := cohortFiles(t, 36)
	d, err := Draft(dir)
	if err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(d.Path)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"file: people.csv", "file: dynamics.csv", "session: session", "files: [mood.csv]", "use: [mood, sleep]",
		"use: [age, sex, site]", "match: [dwell_s], as: log", "full: ACE",
	} {
		if !strings.Contains(string(text), want) {
			t.Errorf("the file lacks %q:\n%s", want, text)
		}
	}
	if _, err := Open(d.Path); err != nil {
		t.Errorf("the file does not run: %v\n%s", err, text)
	}
	if _, err := Draft(dir); err == nil || !strings.Contains(err.Error(), "exists already") {
		t.Errorf("a second draft: %v", err)
	}
}

// TestDraftRecognisesAWhole of three parts that add to one, with zeros.
func TestDraftRecognisesAWhole(t *testing.T) {
	dir := t.TempDir()
	for name, text := range map[string]string{
		"who.tsv":    "participant_id\tfamily\tmother\tage\np1\t1\tm1\t20\np2\t1\tm1\t23\np3\t2\tm2\t30\np4\t2\tm2\t31\n",
		"shares.csv": "participant_id,share_a,share_b,share_c\np1,0.2,0.3,0.5\np2,0,0.4,0.6\np3,0.1,0.1,0.8\np4,0.3,0.3,0.4\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	d, err := Draft(dir)
	if err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(d.Path)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		`as: clr, composition: share, zeros: 0.05`, "columns: {person: participant_id}", "file: who.tsv", "full: AE",
	} {
		if !strings.Contains(string(text), want) {
			t.Errorf("the file lacks %q:\n%s", want, text)
		}
	}
}

// TestDraftRefuses folders it can make nothing of.
func TestDraftRefuses(t *testing.T) {
	for _, c := range []struct{ name, file, text, want string }{
		{"empty folder", "", "", "holds no CSV or TSV table"},
		{"no kinship", "a.csv", "person,x\np1,3\n", "no table says who is related to whom"},
		{"people alone", "a.csv", "person,family\np1,1\n", "none of measures or traits"},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir := t.TempDir()
			if c.file != "" {
				if err := os.WriteFile(filepath.Join(dir, c.file), []byte(c.text), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			_, err := Draft(dir)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v", err)
			}
			if _, err := os.Stat(filepath.Join(dir, draftName)); err == nil {
				t.Error("a study file was written")
			}
		})
	}
}
