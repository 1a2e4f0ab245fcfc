package predict

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
)

// A Scaler puts one measure on a scale that is learnt from the people of a
// training set: it returns the values of the training people and of the held-out
// people on that scale, of the same lengths, and must not change its arguments.
// NaN, a missing value, stays NaN.
//
// The values it sees are those of the measure about some origin and in some
// unit, so that only scales that depend on neither make sense: ranks, and what
// is made of them. It is called from several goroutines.
type Scaler func(training, held []float64) (trainingScaled, heldScaled []float64)

// scaled reports whether any measure has a scaler.
func (o Options) scaled() bool {
	for _, s := range o.Scalers {
		if s != nil {
			return true
		}
	}
	return false
}

// checkScalers says what is wrong with the scalers of p measures, or nil.
func (o Options) checkScalers(p int) error {
	if len(o.Scalers) != 0 && len(o.Scalers) != p {
		return fmt.Errorf("predict: %d scalers for %d measures", len(o.Scalers), p)
	}
	return nil
}

// rescale puts the active measures that have a scaler on their scale, on both
// sides of the split, missing values then filled with the training mean. It
// updates the sums of squares about the training means.
func (s *sources) rescale(g *geometry, sp *split, before []float64) {
	if s.scalers == nil {
		return
	}
	for a, j := range g.active {
		scaler := s.scalers[j]
		if scaler == nil {
			continue
		}
		training, held := scaler(s.withMissing(g.x, sp.train, a, j), s.withMissing(g.held, sp.held, a, j))
		mean, count := 0.0, 0.0
		for _, v := range training {
			if !math.IsNaN(v) {
				mean += v
				count++
			}
		}
		mean /= count // an active measure has a training value
		before[a] = 0
		setFilled(g.x, a, training, mean)
		setFilled(g.held, a, held, mean)
		for _, v := range training {
			if !math.IsNaN(v) {
				before[a] += (v - mean) * (v - mean)
			}
		}
		g.fill[a] = mean
	}
}

// withMissing returns column a of x, measure j of the given people, with NaN
// where a missing value was filled.
func (s *sources) withMissing(x blas64.General, people []int, a, j int) []float64 {
	values := make([]float64, len(people))
	for i, r := range people {
		values[i] = row(x, i)[a]
		if m := s.markerOf[j]; m >= 0 && row(s.all, r)[s.k+s.p+m] != 0 {
			values[i] = math.NaN()
		}
	}
	return values
}

// setFilled puts values into column a of x, and fill where they are missing.
func setFilled(x blas64.General, a int, values []float64, fill float64) {
	if len(values) != x.Rows {
		panic(fmt.Sprintf("predict: a scaler returned %d values for %d people", len(values), x.Rows))
	}
	for i, v := range values {
		if math.IsNaN(v) {
			v = fill
		}
		row(x, i)[a] = v
	}
}
