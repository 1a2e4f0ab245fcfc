package cohort

import (
	"fmt"
	"sort"
	"strconv"
	"strings"
)

const (
	shownFaults = 20   // faults that an error message spells out
	keptFaults  = 1000 // faults of one table that are kept at all
	shownRunes  = 60   // length at which a value is cut in a message
)

// Fault is one thing wrong with an input table, with its address.
type Fault struct {
	// File is the table's name as the study gives it.
	File string
	// Row is the line of the file as an editor counts it, from 1, the header
	// being a line too; 0 when the whole file is meant.
	Row int
	// Column is the column's name in the file, empty when the row as a whole
	// is meant.
	Column string
	// Value is the offending cell, empty when there is none to show.
	Value string
	// Message says what is wrong and what to do. It is never empty.
	Message string
}

// Error prints the fault as file:row: column "x": "value": message, leaving out
// what the fault does not have.
func (f *Fault) Error() string {
	var b strings.Builder
	b.WriteString(f.File)
	if f.Row > 0 {
		b.WriteByte(':')
		b.WriteString(strconv.Itoa(f.Row))
	}
	b.WriteString(": ")
	if f.Column != "" {
		b.WriteString("column ")
		b.WriteString(quote(f.Column))
		b.WriteString(": ")
	}
	if f.Value != "" {
		b.WriteString(quote(f.Value))
		b.WriteString(": ")
	}
	b.WriteString(f.Message)
	return b.String()
}

// Faults is everything found wrong with the tables of a study, table by table
// and, in a table, by row. errors.As finds the first Fault in it.
type Faults struct {
	// List holds the faults, at most 1,000 of one table.
	List []*Fault
	// Unlisted counts the faults beyond those.
	Unlisted int
}

// Error prints up to 20 faults, a line each, and counts the rest.
func (f *Faults) Error() string {
	var b strings.Builder
	shown := min(len(f.List), shownFaults)
	for i, fault := range f.List[:shown] {
		if i > 0 {
			b.WriteByte('\n')
		}
		b.WriteString(fault.Error())
	}
	if more := len(f.List) - shown + f.Unlisted; more > 0 {
		fmt.Fprintf(&b, "\nand %d more", more)
	}
	return b.String()
}

// Unwrap returns the faults one by one, for errors.As and errors.Is.
func (f *Faults) Unwrap() []error {
	list := make([]error, len(f.List))
	for i, fault := range f.List {
		list[i] = fault
	}
	return list
}

// Warning is something the reader of the results has to know: a row of
// warnings.csv. Its message points at rows of files, never at a person's id, so
// that it can stand in a report.
type Warning struct {
	// Analysis is the part of the study that is concerned: people, measures,
	// traits.
	Analysis string
	// About is the column or table concerned.
	About string
	// Message says what was found and what is done about it.
	Message string
}

// Exclusion is a person left out of something: a row of exclusions.csv.
type Exclusion struct {
	// Analysis is the part of the study that is concerned.
	Analysis string
	// Variable is empty when all of that part is meant.
	Variable string
	// Person is the id as the file gives it.
	Person string
	// Reason says why.
	Reason string
}

// collector gathers the faults of one table.
type collector struct {
	list     []*Fault
	unlisted int
}

func (c *collector) add(f *Fault) {
	if len(c.list) >= keptFaults {
		c.unlisted++
		return
	}
	c.list = append(c.list, f)
}

func (c *collector) empty() bool { return len(c.list) == 0 }

// take moves the faults of one table into c, in order of row.
func (c *collector) take(table *collector) {
	sort.SliceStable(table.list, func(i, j int) bool { return table.list[i].Row < table.list[j].Row })
	c.list = append(c.list, table.list...)
	c.unlisted += table.unlisted
}

// err is nil when nothing was collected.
func (c *collector) err() error {
	if c.empty() {
		return nil
	}
	return &Faults{List: c.list, Unlisted: c.unlisted}
}

// quote puts a name or cell in double quotes, makes line breaks visible and
// cuts what is too long to read.
func quote(s string) string {
	if len(s) > shownRunes {
		if r := []rune(s); len(r) > shownRunes {
			s = string(r[:shownRunes]) + "…"
		}
	}
	return strconv.Quote(s)
}
