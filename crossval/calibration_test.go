package crossval_test

import (
	"math"
	"testing"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// Two measures without any association, each alike in twins (intraclass
// correlation .8). Rearranging people one by one takes the pairs apart and
// rejects far too often: the correlation of n people has variance
// (1 + .8 x .8) / n, but (1 + 0) / n in what is rearranged, so that a test at
// .05 rejects 2 Phi(-1.96 / sqrt(1.64)) = .126. Arrangements that keep
// relations hold .05. With 400 data sets a rate has a standard error of .011
// to .017.
func TestArrangementsHoldTheErrorRate(t *testing.T) {
	const (
		pairs        = 60
		sets         = 400
		permutations = 99
	)
	var c cohort
	for range pairs {
		c.add(2, all(mz))
	}
	kept := c.exchange(t)
	free := func() *crossval.Exchange {
		var alone cohort
		for range c.people {
			alone.add(1, nil)
		}
		return alone.exchange(t)
	}()
	draw := func(s *stream.Stream) []float64 {
		v := make([]float64, c.people)
		for f := range pairs {
			shared := math.Sqrt(.8) * s.Norm()
			for i := range 2 {
				v[2*f+i] = shared + math.Sqrt(.2)*s.Norm()
			}
		}
		return v
	}
	rate := func(e *crossval.Exchange) float64 {
		rejected := 0
		to := make([]int, c.people)
		null := make([]float64, permutations)
		for set := range uint64(sets) {
			s := stream.New(2, "test data", set)
			x, y := draw(s), draw(s)
			series, err := e.Series(permutations, set, "test arrangements")
			if err != nil {
				t.Fatal(err)
			}
			// Sums of products have the order of correlations once x is
			// centred: neither standard deviation changes.
			mean := 0.0
			for _, v := range x {
				mean += v / float64(len(x))
			}
			for i := range x {
				x[i] -= mean
			}
			statistic := func(to []int) float64 {
				sum := 0.0
				for place, person := range to {
					sum += x[place] * y[person]
				}
				return sum
			}
			for i := range null {
				series.At(i, to)
				null[i] = statistic(to)
			}
			if crossval.PValue(statistic(upTo(c.people)), null, crossval.TwoSided) <= .05 {
				rejected++
			}
		}
		return float64(rejected) / sets
	}
	if got := rate(kept); got < .02 || got > .08 {
		t.Errorf("arrangements that keep relations reject %.3f at .05", got)
	}
	if got := rate(free); got < .085 || got > .175 {
		t.Errorf("arrangements that ignore relations reject %.3f, expected about .126", got)
	}
}
