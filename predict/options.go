package predict

import (
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
)

// Metric says how predictions are scored. Every metric compares, for people
// who were held out, the target (the trait after the training confounds) with
// the prediction.
type Metric int

const (
	// RByFold is Pearson's correlation inside each outer fold, averaged
	// without weights over folds and repeats.
	RByFold Metric = iota
	// R is Pearson's correlation over all held-out pairs of a repeat, averaged
	// over repeats.
	R
	// Rho is Spearman's correlation (mean ranks for ties) over all held-out
	// pairs of a repeat, averaged over repeats.
	Rho
	// R2 is 1 - sum (target - predicted)^2 / sum target^2. The target is about
	// the training mean, so that 0 is what predicting that mean reaches; it can
	// be negative.
	R2
	// MAE is the mean absolute error, in the trait's units.
	MAE
	// RMSE is the root of the mean squared error, in the trait's units.
	RMSE

	// CalibrationSlope and CalibrationIntercept are of the regression of target
	// on prediction over all held-out pairs of a repeat, averaged over repeats:
	// 1 and 0 when predictions are neither too bold nor too timid. Fit reports
	// them and those below; Null does not know them.
	CalibrationSlope
	CalibrationIntercept
	// R2Confounds is what the confounds alone predict of the trait itself:
	// 1 - sum (y - baseline)^2 / sum (y - training mean of y)^2.
	R2Confounds
	// R2Full is the same with the prediction added to the baseline.
	R2Full
	// R2Added is what the measures add on that scale, R2Full - R2Confounds:
	// (sum target^2 - sum (target - predicted)^2) / sum (y - training mean)^2.
	R2Added
)

var metricNames = [...]string{
	"r_by_fold", "r", "rho", "r2", "mae", "rmse",
	"calibration_slope", "calibration_intercept", "r2_confounds", "r2_full", "r2_added",
}

// Metrics lists the metrics that Null knows.
func Metrics() []Metric { return []Metric{RByFold, R, Rho, R2, MAE, RMSE} }

// String returns the name of the metric in tables and configuration.
func (m Metric) String() string {
	if !m.known() {
		return fmt.Sprintf("Metric(%d)", int(m))
	}
	return metricNames[m]
}

// ParseMetric returns the metric of the given name.
func ParseMetric(name string) (Metric, error) {
	if i := slices.Index(metricNames[:], name); i >= 0 {
		return Metric(i), nil
	}
	return 0, fmt.Errorf("predict: no metric is called %q; there are %v", name, metricNames)
}

// LowerIsBetter is true for errors, false for correlations and r2.
func (m Metric) LowerIsBetter() bool { return m == MAE || m == RMSE }

func (m Metric) known() bool { return m >= 0 && int(m) < len(metricNames) }

// perFold is true for metrics that, in designs of K folds, are computed in
// each fold and averaged.
func (m Metric) perFold() bool {
	return m != R && m != Rho && m != CalibrationSlope && m != CalibrationIntercept
}

// Raw is true for metrics of the trait itself, before the confounds are taken
// out.
func (m Metric) Raw() bool { return m == R2Confounds || m == R2Full || m == R2Added }

// Options are the settings of a Design.
type Options struct {
	// Penalties are the candidates for the multiplier of the sum of squared
	// weights against the sum of squared errors: positive, strictly ascending,
	// at least one. With a single one nothing is searched.
	Penalties []float64
	// Metric is what Null computes; Fit reports all of them. Default RByFold.
	Metric Metric
	// Confidence is the level of the intervals of scores, in (0, 1); 0 means
	// 0.95.
	Confidence float64
	// FillMissing lets measures hold NaN for a value that is missing: it takes
	// the mean of the people of the training set who have one, in each
	// training set anew. Otherwise NaN is refused.
	FillMissing bool
	// Scalers is nil or holds a Scaler, or nil, for each measure: its scale is
	// learnt in each training set anew, outer and inner, before missing values
	// are filled and confounds are taken out. The design then costs what
	// NewLearnedDesign says.
	Scalers []Scaler
	// Workers is how many goroutines compute; 0 means one a processor. Results
	// do not depend on it.
	Workers int
}

// Validate says what is wrong with the options, or nil.
func (o Options) Validate() error {
	if len(o.Penalties) == 0 {
		return errors.New("predict: at least one penalty is needed")
	}
	for i, v := range o.Penalties {
		if !(v > 0) || math.IsInf(v, 0) {
			return fmt.Errorf("predict: penalty %d is %v; penalties are positive and finite", i, v)
		}
		if i > 0 && v <= o.Penalties[i-1] {
			return fmt.Errorf("predict: penalty %d (%v) does not exceed the one before it (%v)", i, v, o.Penalties[i-1])
		}
	}
	if !slices.Contains(Metrics(), o.Metric) {
		return fmt.Errorf("predict: %v cannot be tested; %v can", o.Metric, Metrics())
	}
	if o.Confidence < 0 || o.Confidence >= 1 || math.IsNaN(o.Confidence) {
		return fmt.Errorf("predict: confidence %v is not between 0 and 1", o.Confidence)
	}
	if o.Workers < 0 {
		return fmt.Errorf("predict: %d workers", o.Workers)
	}
	return nil
}

// filled returns a copy with the defaults in place of zeros.
func (o Options) filled() Options {
	o.Penalties = slices.Clone(o.Penalties)
	if o.Confidence == 0 {
		o.Confidence = 0.95
	}
	if o.Workers == 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	return o
}
