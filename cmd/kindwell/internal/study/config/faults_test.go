package config

import (
	"bytes"
	"errors"
	"flag"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

var update = flag.Bool("update", false, "write golden files and generated pages anew")

// faulty is a study file and the whole text of its faults.
type faulty struct{ name, file, faults string }

const goldenFaults = "testdata/faults.txt"

// readFaulty reads the golden file: lines "-- name --" and "-- faults --"
// begin a study file and the text of its faults.
func readFaulty(t *testing.T) (introduction string, cases []faulty) {
	t.Helper()
	data, err := os.ReadFile(goldenFaults)
	if err != nil {
		t.Fatal(err)
	}
	to := &introduction
	for line := range strings.Lines(string(data)) {
		name, ok := strings.CutPrefix(line, "-- ")
		name, ends := strings.CutSuffix(name, " --\n")
		switch {
		case !ok || !ends:
			*to += line
		case name == "faults":
			to = &cases[len(cases)-1].faults
		default:
			cases = append(cases, faulty{name: name})
			to = &cases[len(cases)-1].file
		}
	}
	return introduction, cases
}

// TestFaults compares all faults of faulty study files with their golden text.
func TestFaults(t *testing.T) {
	introduction, cases := readFaulty(t)
	if len(cases) < 40 {
		t.Fatalf("%d study files in %s, want 40 or more", len(cases), goldenFaults)
	}
	for i := range cases {
		c := &cases[i]
		t.Run(c.name, func(t *testing.T) {
			study, err := Parse("study.yaml", []byte(c.file))
			if err == nil || study != nil {
				t.Fatal("accepted")
			}
			got := err.Error() + "\n"
			if *update {
				c.faults = got
				return
			}
			if diff := cmp.Diff(c.faults, got); diff != "" {
				t.Error(diff)
			}
			checkPlaces(t, []byte(c.file), err)
		})
	}
	if *update {
		var out strings.Builder
		out.WriteString(introduction)
		for _, c := range cases {
			out.WriteString("-- " + c.name + " --\n" + c.file + "-- faults --\n" + c.faults)
		}
		if err := os.WriteFile(goldenFaults, []byte(out.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// checkPlaces tests that faults are in the order of the file, inside it, and
// show the line that they are about.
func checkPlaces(t *testing.T, file []byte, err error) {
	t.Helper()
	var faults Faults
	if !errors.As(err, &faults) || len(faults) == 0 {
		t.Fatalf("%T is no Faults", err)
	}
	text, _ := cleanText(file)
	lines := strings.Split(text, "\n")
	for i, f := range faults {
		if f.Line < 1 || f.Line > len(lines) || f.Source != lines[f.Line-1] ||
			f.Column < 1 || f.Column > len([]rune(f.Source))+1 {
			t.Errorf("fault at %d:%d, %q, is not in the file", f.Line, f.Column, f.Source)
		}
		if i > 0 && (f.Line < faults[i-1].Line || f.Line == faults[i-1].Line && f.Column < faults[i-1].Column) {
			t.Errorf("fault at %d:%d stands after %d:%d", f.Line, f.Column, faults[i-1].Line, faults[i-1].Column)
		}
		if f.Message == "" {
			t.Errorf("fault without a message: %q", f.Error())
		}
	}
	if !bytes.HasPrefix([]byte(err.Error()), []byte("study.yaml:")) {
		t.Errorf("no address: %q", err.Error())
	}
}
