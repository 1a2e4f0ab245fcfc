package crossval_test

import (
	"fmt"
	"math"
	"testing"

	"kindwell/crossval"
)

var tenScores = []float64{.10, .14, .08, .12, .16, .11, .09, .13, .15, .12}

// References: R, s the scores above,
//
//	v <- (1/10 + ratio) * var(s); h <- qt((1 + conf)/2, 9) * sqrt(v)
//	format(c(v, mean(s) - h, mean(s) + h, mean(s)/sqrt(v)), digits = 17)
func TestResampledTReferences(t *testing.T) {
	for _, c := range []struct {
		ratio, confidence, variance, low, high, t float64
	}{
		{1. / 9, .95, 0.00014074074074074076, 0.093163078838233798, 0.14683692116176619, 10.115126765082293},
		{1. / 9, .99, 0.00014074074074074076, 0.081445835129098115, 0.15855416487090188, 10.115126765082293},
		{1. / 9, .50, 0.00014074074074074076, 0.11166331183300073, 0.12833668816699925, 10.115126765082293},
		{1. / 4, .95, 0.00023333333333333336, 0.085444978558635615, 0.15455502144136438, 7.855844048495725},
		{1, .95, 0.00073333333333333345, 0.058740494440350198, 0.18125950555964979, 4.4312936752559775},
		{0, .95, 6.6666666666666683e-05, 0.101529564110541, 0.13847043588945901, 14.696938456699066},
	} {
		t.Run(fmt.Sprintf("ratio %.3f confidence %v", c.ratio, c.confidence), func(t *testing.T) {
			got := crossval.ResampledT(tenScores, c.ratio, c.confidence)
			near(t, "mean", got.Mean, .12, 1e-15)
			near(t, "variance", got.SE*got.SE, c.variance, 1e-15)
			near(t, "low", got.Low, c.low, 1e-11)
			near(t, "high", got.High, c.high, 1e-11)
			near(t, "t", got.Mean/got.SE, c.t, 1e-12)
		})
	}
}

// Two scores: t with one degree of freedom is a Cauchy quantile, R's
// qt(.975, 1) = 12.706204736174694; scores 0 and 2 have variance 2.
func TestResampledTOfTwoScores(t *testing.T) {
	got := crossval.ResampledT([]float64{0, 2}, .5, .95)
	near(t, "se", got.SE, math.Sqrt2, 1e-15)
	near(t, "high", got.High, 1+12.706204736174694*math.Sqrt2, 1e-9)
}

func TestResampledTDegenerate(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		name   string
		scores []float64
		want   crossval.ResampledInterval
	}{
		{"none", nil, crossval.ResampledInterval{Mean: nan, SE: nan, Low: nan, High: nan}},
		{"one", []float64{.3}, crossval.ResampledInterval{Mean: .3, SE: nan, Low: nan, High: nan}},
		{"equal", []float64{.1, .1, .1}, crossval.ResampledInterval{Mean: .1, SE: 0, Low: .1, High: .1}},
		{"not a number", []float64{.1, nan, .3}, crossval.ResampledInterval{Mean: nan, SE: nan, Low: nan, High: nan}},
	} {
		got := crossval.ResampledT(c.scores, .25, .95)
		for _, pair := range [][2]float64{{got.Mean, c.want.Mean}, {got.SE, c.want.SE}, {got.Low, c.want.Low}, {got.High, c.want.High}} {
			if !same(pair[0], pair[1]) {
				t.Errorf("%s: got %+v, want %+v", c.name, got, c.want)
				break
			}
		}
	}
}

func TestResampledTRefusesNonsense(t *testing.T) {
	for _, c := range [][2]float64{{.1, 0}, {.1, 1}, {-.1, .95}, {math.NaN(), .95}, {math.Inf(1), .95}, {.1, math.NaN()}} {
		mustPanic(t, func() { crossval.ResampledT(tenScores, c[0], c[1]) })
	}
}

// Ten scores of ten folds: a ninth of the people is held out for every one
// trained on.
func ExampleResampledT() {
	scores := []float64{.10, .14, .08, .12, .16, .11, .09, .13, .15, .12}
	r := crossval.ResampledT(scores, 1./9, .95)
	fmt.Printf("%.2f [%.3f, %.3f]\n", r.Mean, r.Low, r.High)
	// Output: 0.12 [0.093, 0.147]
}
