package config

import (
	"errors"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// FuzzParse reads anything: it never panics, every fault has a place in the
// file, and what is accepted reads back the same after AsRun.
func FuzzParse(f *testing.F) {
	for _, name := range []string{"testdata/served.yaml", "testdata/whole.yaml"} {
		data, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	data, err := os.ReadFile(goldenFaults)
	if err != nil {
		f.Fatal(err)
	}
	for part := range strings.SplitSeq(string(data), "\n-- ") {
		_, text, _ := strings.Cut(part, "\n")
		f.Add([]byte(text))
	}
	f.Add([]byte("\ufeff---\r\nkindwell: 1\r\n"))
	f.Add([]byte(minimal + "title: \"\\u2028\\x41\"\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		study, err := Parse("study.yaml", data)
		if err == nil {
			again, err := Parse("study.yaml", study.AsRun())
			if err != nil {
				t.Fatalf("%v\n%s", err, study.AsRun())
			}
			if diff := cmp.Diff(study, again, inGo); diff != "" {
				t.Fatalf("%s\n%s", diff, study.AsRun())
			}
			return
		}
		var faults Faults
		if study != nil || !errors.As(err, &faults) || len(faults) == 0 {
			t.Fatalf("study %v, error %T", study, err)
		}
		if len(data) <= maxBytes {
			checkPlaces(t, data, err)
		}
	})
}
