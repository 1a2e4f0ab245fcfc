package features

import (
	"fmt"
	"math"
)

// CellError is one value that a transform refuses.
type CellError struct {
	// Row is the index, from 0, in the slice or matrix given.
	Row int
	// Column is the index, from 0, in the matrix given; 0 for a single
	// column, and WholeRow where no single part is at fault.
	Column int
	// Value is what stands there (the sum, for a whole row).
	Value float64
	// Reason says what is wrong, without the place.
	Reason string
}

// WholeRow is the Column of a CellError about all parts of a row together.
const WholeRow = -1

// Error gives place, value and reason; rows and columns count from 0.
func (e CellError) Error() string {
	if e.Column == WholeRow {
		return fmt.Sprintf("features: row %d: %s", e.Row, e.Reason)
	}
	return fmt.Sprintf("features: row %d, column %d: %v: %s", e.Row, e.Column, e.Value, e.Reason)
}

// reasonInfinite is said of an infinite value by every transform.
const reasonInfinite = "the value is infinite"

// LogColumn returns the natural logarithm of each value. Values of 0 or less
// and infinite ones are refused: their cells are NaN in the result and listed
// in row order.
func LogColumn(values []float64) ([]float64, []CellError) {
	return transformColumn(values, math.Log, func(v float64) string {
		switch {
		case math.IsInf(v, 0):
			return reasonInfinite
		case v <= 0:
			return "log needs a value above 0"
		}
		return ""
	})
}

// LogitColumn returns
//
//	ln(v / (1 - v))
//
// of each value, a share of the open interval from 0 to 1. Values of 0 or
// less and of 1 or more are refused: their cells are NaN in the result and
// listed in row order.
func LogitColumn(values []float64) ([]float64, []CellError) {
	logit := func(v float64) float64 { return math.Log(v / (1 - v)) }
	return transformColumn(values, logit, func(v float64) string {
		switch {
		case math.IsInf(v, 0):
			return reasonInfinite
		case v <= 0 || v >= 1:
			return "logit needs a value between 0 and 1, both excluded"
		}
		return ""
	})
}

// transformColumn applies f where refuse has no objection.
func transformColumn(values []float64, f func(float64) float64, refuse func(float64) string) ([]float64, []CellError) {
	out := make([]float64, len(values))
	var faults []CellError
	for i, v := range values {
		out[i] = math.NaN()
		if math.IsNaN(v) {
			continue
		}
		if reason := refuse(v); reason != "" {
			faults = append(faults, CellError{Row: i, Value: v, Reason: reason})
			continue
		}
		out[i] = f(v)
	}
	return out, faults
}

// MeanBy returns the mean of the values of each group, as from the sessions
// of each person. group[i], from 0 to groups-1, is the group of values[i].
// NaN is left out; a group without values has the mean NaN.
//
// MeanBy panics when the slices differ in length or a group is out of range.
func MeanBy(group []int, groups int, values []float64) []float64 {
	if len(group) != len(values) {
		panic(fmt.Sprintf("features: %d group labels for %d values", len(group), len(values)))
	}
	means := make([]float64, groups)
	counts := make([]int, groups)
	for i, v := range values {
		g := group[i]
		if g < 0 || g >= groups {
			panic(fmt.Sprintf("features: group %d of row %d is not in 0..%d", g, i, groups-1))
		}
		if !math.IsNaN(v) {
			means[g] += v
			counts[g]++
		}
	}
	for g := range means {
		means[g] /= float64(counts[g]) // 0/0 is NaN: a group without values
	}
	return means
}
