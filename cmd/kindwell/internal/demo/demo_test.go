package demo

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"kindwell/testdata/saltmere"
	"kindwell/testdata/saltmere/invent"
)

func names(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var all []string
	for _, e := range entries {
		all = append(all, e.Name())
	}
	return all
}

func TestWriteTo(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "new", "saltmere")
	if err := WriteTo(dir, false); err != nil {
		t.Fatal(err)
	}
	want := []string{"README.md", "dynamics.csv", "mood.csv", "people.csv", "sleep.csv", "study.yaml"}
	if got := names(t, dir); !slices.Equal(got, want) {
		t.Fatalf("wrote %v, want %v", got, want)
	}
	files, err := load(saltmere.Files())
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		got, err := os.ReadFile(filepath.Join(dir, f.name))
		if err != nil || !bytes.Equal(got, f.data) {
			t.Errorf("%s is not the demo's (%v)", f.name, err)
		}
	}

	// Again: nothing changes, and what else lies there stays.
	mine := filepath.Join(dir, "mine.txt")
	if err := os.WriteFile(mine, []byte("x"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := WriteTo(dir, false); err != nil {
		t.Error(err)
	}

	// A study that was edited is kept, and nothing else is repaired either.
	study, people := filepath.Join(dir, "study.yaml"), filepath.Join(dir, "people.csv")
	if err := errors.Join(os.WriteFile(study, []byte("edited"), 0o644), os.Remove(people)); err != nil {
		t.Fatal(err)
	}
	err = WriteTo(dir, false)
	if err == nil || !strings.HasPrefix(err.Error(), study+" exists and differs from the demo's") {
		t.Errorf("an edited study: %v", err)
	}
	if _, err := os.Stat(people); err == nil {
		t.Error("a refused call wrote a file")
	}
	if got, _ := os.ReadFile(study); string(got) != "edited" {
		t.Errorf("the edited study now holds %q", got)
	}

	if err := WriteTo(dir, true); err != nil {
		t.Error(err)
	}
	if got := names(t, dir); !slices.Equal(got, append([]string{"README.md", "dynamics.csv", "mine.txt"}, want[2:]...)) {
		t.Errorf("after overwriting there is %v", got)
	}
	if got, _ := os.ReadFile(study); !bytes.HasPrefix(got, []byte("# A study of the Saltmere families.")) {
		t.Errorf("the study was not overwritten: %.40q", got)
	}
}

func TestWriteToPlacesThatFail(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "file")
	if err := os.WriteFile(file, []byte("x"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := WriteTo(file, true); err == nil {
		t.Error("a file was taken for a folder")
	}
	// A folder where a file belongs: refused, and nothing half-written stays.
	if err := os.MkdirAll(filepath.Join(dir, "d", "sleep.csv"), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := WriteTo(filepath.Join(dir, "d"), true); err == nil {
		t.Error("a folder was taken for a file")
	}
	if got := names(t, filepath.Join(dir, "d")); !slices.Equal(got, []string{"sleep.csv"}) {
		t.Errorf("there is %v", got)
	}
	if err := replace(filepath.Join(dir, "d", "sleep.csv"), []byte("x")); err == nil {
		t.Error("a folder was replaced by a file")
	}
	if got := names(t, filepath.Join(dir, "d")); !slices.Equal(got, []string{"sleep.csv"}) {
		t.Errorf("a failed replacement left %v", got)
	}
}

// The committed tables are what the generator makes, byte for byte, on any
// machine.
func TestTablesAreGenerated(t *testing.T) {
	files, err := load(saltmere.Files())
	if err != nil {
		t.Fatal(err)
	}
	made := invent.Tables(invent.Seed, 1)
	size := 0
	for _, f := range files {
		size += len(f.data)
		want, ok := made[f.name]
		if !ok {
			continue
		}
		delete(made, f.name)
		if !bytes.Equal(f.data, want) {
			t.Errorf("%s is not what the generator makes; run go generate in testdata/saltmere", f.name)
		}
	}
	for name := range made {
		t.Errorf("%s is made but not part of the demo", name)
	}
	if size > 400_000 {
		t.Errorf("the demo takes %d bytes of the program", size)
	}
}
