package cohort

import (
	"fmt"
	"math"
	"slices"
)

// Variable is a column of the people table or of a trait table, one value a
// person.
type Variable struct {
	// Name is the variable's name: our name for the columns that the study maps,
	// else the file's.
	Name string
	// File and Column are where it comes from.
	File, Column string
	// Numeric tells numbers from categories.
	Numeric bool
	// Values are the numbers, NaN where missing; nil for categories.
	Values []float64
	// Levels are the categories that occur, sorted as text; nil for numbers.
	Levels []string
	// Codes are places in Levels, -1 where missing; nil for numbers.
	Codes []int
	// Lines are the lines of the file, each person's first row, 0 for people
	// who are not in it. Variables of one table share them.
	Lines []int
}

// Missing tells whether a person has no value.
func (v *Variable) Missing(person int) bool {
	if v.Numeric {
		return math.IsNaN(v.Values[person])
	}
	return v.Codes[person] < 0
}

// Groups gives every person the place of their value in a list of the values
// that occur, -1 where missing: the levels of categories, the different numbers
// in ascending order. Sites and schools, by which people are grouped, may be
// written either way.
func (v *Variable) Groups() (codes []int, labels []string) {
	if !v.Numeric {
		return v.Codes, v.Levels
	}
	var distinct []float64
	for _, x := range v.Values {
		if !math.IsNaN(x) {
			distinct = append(distinct, x)
		}
	}
	slices.Sort(distinct)
	distinct = slices.Compact(distinct)
	labels = make([]string, len(distinct))
	for k, x := range distinct {
		labels[k] = formatNumber(x)
	}
	codes = make([]int, len(v.Values))
	for i, x := range v.Values {
		if math.IsNaN(x) {
			codes[i] = -1
			continue
		}
		codes[i], _ = slices.BinarySearch(distinct, x)
	}
	return codes, labels
}

// Fault is a fault with the address of a person's value.
func (v *Variable) Fault(person int, format string, args ...any) *Fault {
	f := &Fault{File: v.File, Row: v.Lines[person], Column: v.Column, Message: fmt.Sprintf(format, args...)}
	switch {
	case v.Missing(person):
	case v.Numeric:
		f.Value = formatNumber(v.Values[person])
	default:
		f.Value = v.Levels[v.Codes[person]]
	}
	return f
}

// categorical makes categories of text, "" being missing.
func (v *Variable) categorical(text []string) {
	seen := make(map[string]int)
	for _, cell := range text {
		if cell != "" {
			seen[cell] = 0
		}
	}
	v.Levels = make([]string, 0, len(seen))
	for level := range seen {
		v.Levels = append(v.Levels, level)
	}
	slices.Sort(v.Levels)
	for k, level := range v.Levels {
		seen[level] = k
	}
	v.Codes = make([]int, len(text))
	for i, cell := range text {
		if cell == "" {
			v.Codes[i] = -1
			continue
		}
		v.Codes[i] = seen[cell]
	}
}
