package predict

import (
	"cmp"
	"math"
	"slices"
)

// noSpread is the share of their own mean square below which values count as
// constant.
const noSpread = 1e-12

// scoreSums computes a metric other than Rho and MAE from the moments of
// column c, and tells whether the prediction (or, for a correlation, the
// target) is constant: a correlation and r2 are then 0.
func scoreSums(metric Metric, m moments, c int) (value float64, constant bool) {
	n, t, tt, p, pp, tp := m.n[c], m.t[c], m.tt[c], m.p[c], m.pp[c], m.tp[c]
	spread, spreadTarget := pp-p*p/n, tt-t*t/n
	constant = spread <= noSpread*pp
	errors := max(0, tt-2*tp+pp)
	switch metric {
	case R, RByFold:
		if constant || spreadTarget <= noSpread*tt {
			return 0, true
		}
		r := (tp - t*p/n) / math.Sqrt(spread*spreadTarget)
		return min(1, max(-1, r)), false
	case R2:
		if constant || tt == 0 {
			return 0, true
		}
		return 1 - errors/tt, false
	case RMSE:
		return math.Sqrt(errors / n), constant
	}
	panic("predict: no sums for " + metric.String())
}

// scorePairs computes a metric from targets and predictions of the same
// people, by the definitions and in two passes.
func scorePairs(metric Metric, target, predicted []float64) (value float64, constant bool) {
	constant = isConstant(predicted)
	n := float64(len(target))
	switch metric {
	case R, RByFold:
		return pearson(target, predicted)
	case Rho:
		if constant || isConstant(target) {
			return 0, true
		}
		return pearson(meanRanks(target), meanRanks(predicted))
	case R2:
		errors, squares := 0.0, 0.0
		for i, t := range target {
			errors += (t - predicted[i]) * (t - predicted[i])
			squares += t * t
		}
		if constant || squares == 0 {
			return 0, true
		}
		return 1 - errors/squares, false
	case MAE:
		return absoluteError(target, predicted) / n, constant
	case RMSE:
		errors := 0.0
		for i, t := range target {
			errors += (t - predicted[i]) * (t - predicted[i])
		}
		return math.Sqrt(errors / n), constant
	case CalibrationSlope, CalibrationIntercept:
		intercept, slope := calibration(target, predicted)
		if metric == CalibrationSlope {
			return slope, constant
		}
		return intercept, constant
	}
	panic("predict: no pairs for " + metric.String())
}

// calibration is the regression of target on prediction; NaN when the
// prediction is constant.
func calibration(target, predicted []float64) (intercept, slope float64) {
	if isConstant(predicted) {
		return math.NaN(), math.NaN()
	}
	meanTarget, _, _ := aboutMean(target)
	mean, spread, _ := aboutMean(predicted)
	for i, p := range predicted {
		slope += (p - mean) * (target[i] - meanTarget) / spread
	}
	return meanTarget - slope*mean, slope
}

func absoluteError(target, predicted []float64) float64 {
	sum := 0.0
	for i, t := range target {
		sum += math.Abs(t - predicted[i])
	}
	return sum
}

// aboutMean returns the mean, the sum of squares about it and the sum of
// squares about 0.
func aboutMean(x []float64) (mean, spread, squares float64) {
	for _, v := range x {
		mean += v
	}
	mean /= float64(len(x))
	for _, v := range x {
		spread += (v - mean) * (v - mean)
		squares += v * v
	}
	return mean, spread, squares
}

func isConstant(x []float64) bool {
	_, spread, squares := aboutMean(x)
	return spread <= noSpread*squares
}

// pearson returns the correlation, 0 with constant set when either side is
// constant.
func pearson(x, y []float64) (r float64, constant bool) {
	meanX, xx, squaresX := aboutMean(x)
	meanY, yy, squaresY := aboutMean(y)
	if xx <= noSpread*squaresX || yy <= noSpread*squaresY {
		return 0, true
	}
	xy := 0.0
	for i, v := range x {
		xy += (v - meanX) * (y[i] - meanY)
	}
	return min(1, max(-1, xy/math.Sqrt(xx*yy))), false
}

// meanRanks returns ranks from 1, equal values sharing the mean of theirs.
func meanRanks(x []float64) []float64 {
	order := make([]int, len(x))
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(a, b int) int { return cmp.Compare(x[a], x[b]) })
	ranks := make([]float64, len(x))
	for from := 0; from < len(order); {
		to := from + 1
		for to < len(order) && x[order[to]] == x[order[from]] {
			to++
		}
		for _, i := range order[from:to] {
			ranks[i] = float64(from+1+to) / 2
		}
		from = to
	}
	return ranks
}
