package predict

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
)

// Score is one metric of one trait.
type Score struct {
	Metric Metric
	// Value is the unweighted mean over the folds of all repeats; over repeats
	// for R, Rho and calibration, and for all metrics where each family is a
	// fold of its own: these are computed over all held-out pairs of a repeat.
	Value float64
	// SE, Low and High are the corrected resampled t interval of a mean over
	// folds (Nadeau & Bengio 2003, crossval.ResampledT); NaN otherwise.
	SE, Low, High float64
	// ConstantFolds counts the folds (repeats) in which the prediction was
	// constant, or, for a correlation, the target: their correlation, or r2, is
	// 0.
	ConstantFolds int
	// Parts are the numbers of which Value is the mean, repeat by repeat and
	// fold by fold.
	Parts []float64
}

// scoreAll computes the scores of every trait. RByFold is left out where folds
// are too small for it, the raw scale where there are no confounds.
func (d *Design) scoreAll(f *Fit) [][]Score {
	_, traits := f.Repeats[0].Target.Dims()
	metrics := []Metric{RByFold, R, Rho, R2, MAE, RMSE, CalibrationSlope, CalibrationIntercept}
	if d.perFamily || d.sizes.least < 3 {
		metrics = metrics[1:]
	}
	if d.source.k > 1 {
		metrics = append(metrics, R2Confounds, R2Full, R2Added)
	}
	scores := make([][]Score, traits)
	for t := range scores {
		for _, m := range metrics {
			scores[t] = append(scores[t], d.score(f, m, t))
		}
	}
	return scores
}

func (d *Design) score(f *Fit, metric Metric, trait int) Score {
	s := Score{Metric: metric, SE: math.NaN(), Low: math.NaN(), High: math.NaN()}
	byFold := metric.perFold() && !d.perFamily
	for i, l := range d.layouts {
		step := 1
		if !byFold {
			step = l.outerCount()
		}
		for o := 0; o < l.outerCount(); o += step {
			value, constant := f.Repeats[i].part(l, metric, trait, o, o+step)
			s.Parts = append(s.Parts, value)
			if constant {
				s.ConstantFolds++
			}
		}
	}
	for _, v := range s.Parts {
		s.Value += v / float64(len(s.Parts))
	}
	if byFold {
		in := crossval.ResampledT(s.Parts, d.sizes.test/d.sizes.train, d.opt.Confidence)
		s.SE, s.Low, s.High = in.SE, in.Low, in.High
	}
	return s
}

// part computes a metric over the people of outer folds from..to-1.
func (r *Repeat) part(l *layout, metric Metric, trait, from, to int) (value float64, constant bool) {
	people := l.order[l.start[from]:l.start[to]]
	take := func(a *mat.Dense) []float64 {
		values := make([]float64, len(people))
		for i, person := range people {
			values[i] = a.At(person, trait)
		}
		return values
	}
	target, predicted := take(r.Target), take(r.Predicted)
	if !metric.Raw() {
		return scorePairs(metric, target, predicted)
	}
	// Deviations of the trait from the training mean of each person's fold.
	deviation, without, with := 0.0, 0.0, 0.0
	i := 0
	for o := from; o < to; o++ {
		for range l.start[o+1] - l.start[o] {
			d := r.Observed.At(people[i], trait) - r.Mean[o][trait]
			deviation += d * d
			without += target[i] * target[i]
			with += (target[i] - predicted[i]) * (target[i] - predicted[i])
			i++
		}
	}
	if deviation == 0 {
		return 0, true
	}
	switch metric {
	case R2Confounds:
		return 1 - without/deviation, false
	case R2Full:
		return 1 - with/deviation, false
	}
	return (without - with) / deviation, false
}
