package features

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// CheckComposition says whether a composition of so many parts can be
// transformed with the given replacement of zeros: two parts or more, and
// 0 <= zeros < 1/parts, where 0 means that zeros are refused.
func CheckComposition(parts int, zeros float64) error {
	switch {
	case parts < 2:
		return fmt.Errorf("features: a composition needs two parts or more, not %d", parts)
	case math.IsNaN(zeros) || zeros < 0:
		return fmt.Errorf("features: the share that replaces a zero must be above 0, not %v", zeros)
	case float64(parts)*zeros >= 1:
		return fmt.Errorf("features: the share that replaces a zero must be below 1/%d for %d parts, not %v", parts, parts, zeros)
	}
	return nil
}

// CLR returns the centred log-ratios of compositions (Aitchison 1986, The
// statistical analysis of compositional data, section 4.6). parts is
// n x D, one composition a row, on any positive scale; row by row
//
//	clr_j = ln(x_j) - (ln(x_1) + ... + ln(x_D)) / D
//
// so that the n x D result adds to 0 in every row, up to rounding.
//
// Zeros are replaced multiplicatively (Martin-Fernandez et al. 2003): in a row
// closed to 1 with z zeros, each zero becomes the share zeros and every other
// part is multiplied by 1 - z*zeros. replaced counts the cells. With zeros = 0
// a zero is refused. Negative and infinite parts and rows that add to 0 are
// refused too; a refused row is NaN throughout, as is a row with a missing
// part, whose zeros are neither counted nor refused.
//
// CLR panics where CheckComposition has an error.
func CLR(parts *mat.Dense, zeros float64) (out *mat.Dense, replaced int, faults []CellError) {
	_, d := parts.Dims()
	return logRatios(parts, zeros, d, func(dst, logs []float64) {
		mean := 0.0
		for _, v := range logs {
			mean += v
		}
		mean /= float64(d)
		for j, v := range logs {
			dst[j] = v - mean
		}
	})
}

// ILR returns isometric log-ratios of compositions (Egozcue et al. 2003) in
// the pivot basis: part by part against the geometric mean of those after it,
//
//	ilr_j = sqrt((D-j) / (D-j+1)) * (ln(x_j) - (ln(x_j+1) + ... + ln(x_D)) / (D-j))
//
// for j = 1 to D-1. The n x (D-1) result has the same distances between rows
// as CLR and no redundant column. Zeros, refused and missing parts, and panics
// are those of CLR.
func ILR(parts *mat.Dense, zeros float64) (out *mat.Dense, replaced int, faults []CellError) {
	_, d := parts.Dims()
	return logRatios(parts, zeros, d-1, func(dst, logs []float64) {
		after := logs[d-1]
		for j := d - 2; j >= 0; j-- {
			n := float64(d - 1 - j)
			dst[j] = math.Sqrt(n/(n+1)) * (logs[j] - after/n)
			after += logs[j]
		}
	})
}

// logRatios fills a matrix of so many columns by ratio, which makes a row of
// the result from the logarithms of a closed row without zeros.
func logRatios(parts *mat.Dense, zeros float64, columns int, ratio func(dst, logs []float64)) (*mat.Dense, int, []CellError) {
	n, d := parts.Dims()
	if err := CheckComposition(d, zeros); err != nil {
		panic(err.Error())
	}
	out := mat.NewDense(n, columns, nil)
	logs := make([]float64, d)
	replaced := 0
	var faults []CellError
	for i := range n {
		row, dst := parts.RawRowView(i), out.RawRowView(i)
		bad := refusedParts(i, row, zeros)
		faults = append(faults, bad...)
		if bad != nil || anyMissing(row) {
			for j := range dst {
				dst[j] = math.NaN()
			}
			continue
		}
		replaced += logSharesTo(logs, row, zeros)
		ratio(dst, logs)
	}
	return out, replaced, faults
}

// refusedParts lists what is wrong with one composition.
func refusedParts(i int, row []float64, zeros float64) []CellError {
	var faults []CellError
	refuse := func(j int, v float64, reason string) {
		faults = append(faults, CellError{Row: i, Column: j, Value: v, Reason: reason})
	}
	missing, count := anyMissing(row), 0
	for j, v := range row {
		switch {
		case math.IsInf(v, 0):
			refuse(j, v, reasonInfinite)
		case v < 0:
			refuse(j, v, "a part of a composition is never negative")
		case v == 0:
			count++
		}
	}
	switch {
	case missing || count == 0:
	case count == len(row):
		refuse(WholeRow, 0, "all parts of the composition are 0")
	case zeros == 0:
		for j, v := range row {
			if v == 0 {
				refuse(j, v, "a part of 0 has no logarithm and no replacement for zeros is stated")
			}
		}
	}
	return faults
}

func anyMissing(row []float64) bool {
	for _, v := range row {
		if math.IsNaN(v) {
			return true
		}
	}
	return false
}

// logSharesTo writes the logarithms of the row's shares, after replacement of
// zeros, and returns how many zeros there were. Working with logarithms keeps
// a tiny share that a division would lose.
func logSharesTo(dst, row []float64, zeros float64) (count int) {
	largest := 0.0
	for _, v := range row {
		largest = max(largest, v)
		if v == 0 {
			count++
		}
	}
	total := 0.0
	for _, v := range row {
		total += v / largest
	}
	shift := math.Log(largest) + math.Log(total) - math.Log1p(-float64(count)*zeros)
	for j, v := range row {
		if v == 0 {
			dst[j] = math.Log(zeros)
		} else {
			dst[j] = math.Log(v) - shift
		}
	}
	return count
}
