package cohort

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

func TestFaultText(t *testing.T) {
	for _, c := range []struct {
		fault Fault
		want  string
	}{
		{Fault{File: "people.csv", Row: 12, Column: "mother", Value: "P07", Message: "is nobody"}, `people.csv:12: column "mother": "P07": is nobody`},
		{Fault{File: "people.csv", Row: 12, Column: "mother", Message: "is missing"}, `people.csv:12: column "mother": is missing`},
		{Fault{File: "people.csv", Row: 12, Message: "is short"}, `people.csv:12: is short`},
		{Fault{File: "people.csv", Message: "is empty"}, `people.csv: is empty`},
		{Fault{File: "a.csv", Row: 2, Column: "x\ty", Value: "two\nlines", Message: "is odd"}, `a.csv:2: column "x\ty": "two\nlines": is odd`},
		{Fault{File: "a.csv", Row: 2, Value: strings.Repeat("ä", 61), Message: "is long"}, `a.csv:2: "` + strings.Repeat("ä", 60) + `…": is long`},
	} {
		if got := c.fault.Error(); got != c.want {
			t.Errorf("got %s, want %s", got, c.want)
		}
	}
}

func TestFaultsAreShownUpToTwenty(t *testing.T) {
	var s study
	s.people = "person,age\n" + letters("A%s,30\n", 26)
	s.traits = "person,score\n" + letters("A%s,1\n", 26) + strings.ReplaceAll(letters("A%s,x\n", 22), "A", "B")
	s.in = numeric("score")
	_, err := s.load(t)
	if err == nil {
		t.Fatal("was taken")
	}
	lines := strings.Split(err.Error(), "\n")
	if len(lines) != 21 || lines[20] != "and 2 more" || !strings.HasPrefix(lines[0], `traits.csv:28: column "score": "x"`) {
		t.Errorf("%d lines, the last %q", len(lines), lines[len(lines)-1])
	}
	var faults *Faults
	if !errors.As(fmt.Errorf("reading: %w", err), &faults) || len(faults.List) != 22 || faults.Unlisted != 0 {
		t.Error(faults)
	}
	var fault *Fault
	if !errors.As(err, &fault) || fault.Row != 28 || fault.Column != "score" || fault.Value != "x" || fault.File != "traits.csv" {
		t.Error(fault)
	}
}

// A table that is wrong all over does not fill the memory with faults, and none
// is lost from the count.
func TestFaultsAreKeptUpToAThousand(t *testing.T) {
	_, err := study{people: "person,family\n" + strings.Repeat("A \n", 1500)}.load(t)
	var faults *Faults
	if !errors.As(err, &faults) || len(faults.List) != 1000 || faults.Unlisted != 500 {
		t.Fatal(err)
	}
	if !strings.HasSuffix(err.Error(), "\nand 1480 more") {
		t.Error(err)
	}
}

// Faults of one table come by row, whatever column was looked at first.
func TestFaultsComeByRow(t *testing.T) {
	_, err := study{people: pair, measures: "person,a,b\nA,1,x\nB,y,2\nC,1,2\nD,1,2\nE,1,2\n"}.load(t)
	var faults *Faults
	if !errors.As(err, &faults) || len(faults.List) != 2 || faults.List[0].Row != 2 || faults.List[1].Row != 3 {
		t.Error(err)
	}
}
