package config

import (
	"fmt"
	"slices"
	"strings"
)

// Position is a place in a study file.
type Position struct {
	File   string // the file as it was named to Load or Parse
	Line   int    // from 1; 0 when the place is not known
	Column int    // from 1, in characters
	Source string // the line, without its end
}

// Fault is one thing that is wrong in a study file.
type Fault struct {
	Position
	Message string // what is wrong
	Advice  string // what to do about it; may be empty
}

// Faults are all that is wrong in a study file. As an error, they print in
// the order of the file. errors.As finds Faults, and each Fault in it.
type Faults []Fault

// Add appends a fault. Advice may be empty.
func (f *Faults) Add(at Position, message, advice string) {
	*f = append(*f, Fault{Position: at, Message: message, Advice: advice})
}

// Err returns nil when there is no fault, and otherwise the faults in the
// order of their lines and columns.
func (f Faults) Err() error {
	if len(f) == 0 {
		return nil
	}
	sorted := slices.Clone(f)
	slices.SortStableFunc(sorted, func(a, b Fault) int {
		if a.Line != b.Line {
			return a.Line - b.Line
		}
		return a.Column - b.Column
	})
	return sorted
}

// maxPrinted is the number of faults that are printed; a file with more is no
// study file.
const maxPrinted = 200

// Error prints the faults, with an empty line between two of them.
func (f Faults) Error() string {
	var texts []string
	for i := range f {
		if i == maxPrinted {
			texts = append(texts, fmt.Sprintf("and %d more", len(f)-i))
			break
		}
		texts = append(texts, f[i].Error())
	}
	return strings.Join(texts, "\n\n")
}

// Unwrap returns the faults one by one.
func (f Faults) Unwrap() []error {
	each := make([]error, len(f))
	for i := range f {
		each[i] = f[i]
	}
	return each
}

// Error prints the fault: place and message, the line with a marker under the
// column, and the advice.
func (f Fault) Error() string {
	var b strings.Builder
	b.WriteString(f.File)
	if f.Line > 0 {
		fmt.Fprintf(&b, ":%d:%d", f.Line, f.Column)
	}
	b.WriteString(": " + f.Message)
	if f.Source != "" {
		line, marker := excerpt(f.Source, f.Column)
		number := fmt.Sprintf("%5d", f.Line)
		fmt.Fprintf(&b, "\n%s | %s\n%s | %s", number, line, strings.Repeat(" ", len(number)), marker)
	}
	if f.Advice != "" {
		b.WriteString("\n      " + f.Advice)
	}
	return b.String()
}
