package features

import (
	"errors"
	"math"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"
)

// RankNormalScores returns rank-based normal scores (Blom 1958): the normal
// quantile of
//
//	(rank - 3/8) / (n + 1/4)
//
// where n counts the values that are not missing and equal values share the
// mean of their ranks. NaN stays NaN. Infinite values rank as the extremes
// they are. Scores of mirrored values are exactly mirrored.
func RankNormalScores(values []float64) []float64 {
	order := presentInOrder(values)
	out := make([]float64, len(values))
	for i := range out {
		out[i] = math.NaN()
	}
	for first := 0; first < len(order); {
		next := endOfTies(values, order, first)
		score := blomScore(first, next, len(order))
		for _, i := range order[first:next] {
			out[i] = score
		}
		first = next
	}
	return out
}

// RankNormal is the map from values to rank-based normal scores that a set of
// training values defines. It does not change after FitRankNormal and may be
// used by several goroutines.
type RankNormal struct {
	values []float64 // distinct training values, ascending
	scores []float64 // the score of each
}

// ErrNoValues says that there is no training value to rank.
var ErrNoValues = errors.New("features: rank_normal has no training value: all are missing")

// FitRankNormal learns the scores of the training values; NaN is left out.
// The error is ErrNoValues when nothing is left, and a CellError for an
// infinite value.
func FitRankNormal(training []float64) (*RankNormal, error) {
	for i, v := range training {
		if math.IsInf(v, 0) {
			return nil, CellError{Row: i, Value: v, Reason: reasonInfinite}
		}
	}
	order := presentInOrder(training)
	if len(order) == 0 {
		return nil, ErrNoValues
	}
	r := &RankNormal{}
	for first := 0; first < len(order); {
		next := endOfTies(training, order, first)
		r.values = append(r.values, training[order[first]])
		r.scores = append(r.scores, blomScore(first, next, len(order)))
		first = next
	}
	return r, nil
}

// Apply returns the score of each value: that of the training value where it
// equals one, on the straight line between the two neighbouring training
// values where it lies between, and the least or greatest training score
// beyond them. NaN stays NaN.
func (r *RankNormal) Apply(values []float64) []float64 {
	out := make([]float64, len(values))
	for i, v := range values {
		out[i] = r.score(v)
	}
	return out
}

func (r *RankNormal) score(v float64) float64 {
	if math.IsNaN(v) {
		return v
	}
	above := sort.SearchFloat64s(r.values, v) // first training value >= v
	switch {
	case above == len(r.values):
		return r.scores[above-1]
	case above == 0 || r.values[above] == v:
		return r.scores[above]
	}
	low, high := r.values[above-1], r.values[above]
	from, to := r.scores[above-1], r.scores[above]
	// Halves, lest the difference of two huge values overflow.
	part := (v/2 - low/2) / (high/2 - low/2)
	return min(from+part*(to-from), to)
}

// presentInOrder returns the rows that are not missing, by ascending value.
func presentInOrder(values []float64) []int {
	order := make([]int, 0, len(values))
	for i, v := range values {
		if !math.IsNaN(v) {
			order = append(order, i)
		}
	}
	sort.SliceStable(order, func(a, b int) bool { return values[order[a]] < values[order[b]] })
	return order
}

// endOfTies returns the first place after first whose value differs.
func endOfTies(values []float64, order []int, first int) int {
	next := first + 1
	for next < len(order) && values[order[next]] == values[order[first]] {
		next++
	}
	return next
}

// blomScore is the score of the values at places first..next-1, from 0, of n
// values in order. The upper half is computed from the top, where the
// probability itself, and not its distance from 1, keeps its digits.
func blomScore(first, next, n int) float64 {
	rank := float64(first+1+next) / 2
	fromTop := float64(n+1) - rank
	if fromTop < rank {
		return -distuv.UnitNormal.Quantile((fromTop - 0.375) / (float64(n) + 0.25))
	}
	return distuv.UnitNormal.Quantile((rank - 0.375) / (float64(n) + 0.25))
}
