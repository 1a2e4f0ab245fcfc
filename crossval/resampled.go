package crossval

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// ResampledInterval is the mean of the scores of held-out folds with its
// uncertainty.
type ResampledInterval struct {
	Mean float64
	// SE is the standard error with the overlap of training sets allowed for.
	SE float64
	// Low and High are the ends of the interval.
	Low, High float64
}

// ResampledT returns the mean of J fold scores over all repeats and its
// corrected resampled t interval (Nadeau & Bengio 2003),
//
//	SE^2 = (1/J + n_test/n_train) s^2,   mean +- t(J - 1) SE,
//
// s^2 the variance of the scores (divisor J - 1). testOverTrain is n_test over
// n_train (Folds.TestOverTrain), confidence the coverage asked, as .95.
//
// With one score SE, Low and High are NaN, without any all are; a NaN among
// the scores makes all NaN. Equal scores have SE 0. It panics when confidence
// is not inside (0, 1) or testOverTrain is negative or not finite.
func ResampledT(scores []float64, testOverTrain, confidence float64) ResampledInterval {
	if !(confidence > 0 && confidence < 1) {
		panic("crossval: confidence outside (0, 1)")
	}
	if !(testOverTrain >= 0) || math.IsInf(testOverTrain, 0) {
		panic("crossval: ratio of test to training people is no finite number of 0 or more")
	}
	switch len(scores) {
	case 0:
		return ResampledInterval{Mean: math.NaN(), SE: math.NaN(), Low: math.NaN(), High: math.NaN()}
	case 1:
		return ResampledInterval{Mean: scores[0], SE: math.NaN(), Low: math.NaN(), High: math.NaN()}
	}
	count := float64(len(scores))
	sum := 0.0
	for _, score := range scores {
		sum += score - scores[0] // exactly 0 when all are equal
	}
	mean := scores[0] + sum/count
	squares := 0.0
	for _, score := range scores {
		squares += (score - mean) * (score - mean)
	}
	se := math.Sqrt((1/count + testOverTrain) * squares / (count - 1))
	half := se * distuv.StudentsT{Mu: 0, Sigma: 1, Nu: count - 1}.Quantile((1+confidence)/2)
	return ResampledInterval{Mean: mean, SE: se, Low: mean - half, High: mean + half}
}
