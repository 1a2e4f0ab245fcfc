package crossval

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"sort"
)

// LargestStatistic returns for each test the p-value that holds the chance of
// even one false finding over all tests at its level (single-step maximum:
// Westfall & Young 1993). observed has one statistic a test and null[t][i] is
// that of test t under arrangement i, the same arrangement for every test:
//
//	p_t = (1 + number of i with max over u of null[u][i] >= observed_t) / (m + 1)
//
// for Upper; Lower takes minima, TwoSided absolute values. Ties are those of
// PValue. The statistics have to be on one scale, as correlations of the same
// people are; LargestStandardized brings others there.
//
// A test whose observed value is NaN gets NaN and takes no part. A NaN in the
// null of a test that takes part counts as the largest of its arrangement. All
// p are NaN when m = 0. LargestStatistic panics when null has not one row of
// the same length for each test.
func LargestStatistic(observed []float64, null [][]float64, tail Tail) []float64 {
	arrangements := width(observed, null)
	p := make([]float64, len(observed))
	largest := newMaxima(arrangements)
	for t, row := range null {
		if !math.IsNaN(observed[t]) {
			largest.take(row, tail, 0, 1)
		}
	}
	slices.Sort(largest)
	for t, value := range observed {
		p[t] = math.NaN()
		if !math.IsNaN(value) && arrangements > 0 {
			p[t] = largest.p(tail.extremity(value))
		}
	}
	return p
}

// LargestStandardized is LargestStatistic for statistics on different scales:
// each is first taken as its distance from the mean of its own m + 1 values
// (observed and null), in units of their standard deviation.
//
// A test whose m + 1 values are all equal, up to a share of 1e-12, gets p = 1
// and takes no part. A test with an infinite or NaN value among its null has
// no scale; it gets NaN and takes no part.
func LargestStandardized(observed []float64, null [][]float64, tail Tail) []float64 {
	arrangements := width(observed, null)
	p := make([]float64, len(observed))
	centre := make([]float64, len(observed))
	spread := make([]float64, len(observed))
	largest := newMaxima(arrangements)
	for t, row := range null {
		p[t] = math.NaN()
		if arrangements == 0 {
			continue
		}
		size := 0.0
		centre[t], spread[t], size = moments(observed[t], row)
		switch {
		case math.IsNaN(spread[t]):
		case spread[t] <= tie*size:
			spread[t], p[t] = math.NaN(), 1
		default:
			largest.take(row, tail, centre[t], spread[t])
		}
	}
	slices.Sort(largest)
	for t, value := range observed {
		if arrangements > 0 && !math.IsNaN(spread[t]) {
			p[t] = largest.p(tail.extremity((value - centre[t]) / spread[t]))
		}
	}
	return p
}

// width checks that null has a row for each test, all of one length, and
// returns it.
func width(observed []float64, null [][]float64) int {
	if len(null) != len(observed) {
		panic(fmt.Sprintf("crossval: %d tests with null values of %d", len(observed), len(null)))
	}
	if len(null) == 0 {
		return 0
	}
	for t, row := range null {
		if len(row) != len(null[0]) {
			panic(fmt.Sprintf("crossval: test %d has %d null values, test 0 has %d", t, len(row), len(null[0])))
		}
	}
	return len(null[0])
}

// moments returns mean and standard deviation (divisor their number) of one
// value and a row, and the largest absolute value; all NaN when a value is not
// finite.
func moments(value float64, row []float64) (mean, sd, size float64) {
	n := float64(len(row) + 1)
	mean, size = value, math.Abs(value)
	for _, v := range row {
		mean += v
		size = max(size, math.Abs(v))
	}
	mean /= n
	sum := (value - mean) * (value - mean)
	for _, v := range row {
		sum += (v - mean) * (v - mean)
	}
	if math.IsNaN(sum) || math.IsInf(sum, 0) {
		return math.NaN(), math.NaN(), math.NaN()
	}
	return mean, math.Sqrt(sum / n), size
}

// maxima holds the largest extremity of each arrangement.
type maxima []float64

func newMaxima(arrangements int) maxima {
	m := make(maxima, arrangements)
	for i := range m {
		m[i] = math.Inf(-1)
	}
	return m
}

func (m maxima) take(row []float64, tail Tail, centre, spread float64) {
	for i, value := range row {
		m[i] = max(m[i], tail.extremity((value-centre)/spread))
	}
}

// p needs the maxima in ascending order.
func (m maxima) p(extremity float64) float64 {
	reach := len(m) - sort.SearchFloat64s(m, threshold(extremity))
	return float64(1+reach) / float64(len(m)+1)
}

// AcrossGroups returns min(1, groups x p): a p-value that holds over all tests
// of one group of people, made to hold over several groups, whose arrangements
// are drawn apart (Bonferroni). NaN stays NaN; it panics when groups < 1.
func AcrossGroups(p float64, groups int) float64 {
	if groups < 1 {
		panic("crossval: fewer than one group of people")
	}
	return min(1, float64(groups)*p)
}

// BenjaminiHochberg returns for each p the smallest false discovery rate at
// which its test is called a finding (Benjamini & Hochberg 1995): with the k
// values in ascending order,
//
//	q_(i) = min over j >= i of min(1, k p_(j) / j).
//
// NaN stays NaN and is not counted.
func BenjaminiHochberg(p []float64) []float64 {
	q := make([]float64, len(p))
	var order []int
	for t, value := range p {
		q[t] = math.NaN()
		if !math.IsNaN(value) {
			order = append(order, t)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(p[a], p[b]) })
	least := 1.0
	for rank := len(order); rank >= 1; rank-- {
		t := order[rank-1]
		least = min(least, p[t]*float64(len(order))/float64(rank))
		q[t] = least
	}
	return q
}
