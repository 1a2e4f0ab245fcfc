package predict

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// Worked by hand: target 1, -1, 2, 0 and prediction 2, 0, 1, 1 have means .5
// and 1, deviations (.5, -1.5, 1.5, -.5) and (1, -1, 0, 0), products 2, sums of
// squares 5 and 2; errors (-1, -1, 1, -1); ranks (3, 1, 4, 2) and
// (4, 1, 2.5, 2.5), deviations with products 3 and squares 5 and 4.5.
func TestScoresByHand(t *testing.T) {
	target, predicted := []float64{1, -1, 2, 0}, []float64{2, 0, 1, 1}
	m := newMoments(1)
	for i, v := range target {
		p := predicted[i]
		m.n[0]++
		m.t[0], m.tt[0], m.p[0], m.pp[0], m.tp[0] = m.t[0]+v, m.tt[0]+v*v, m.p[0]+p, m.pp[0]+p*p, m.tp[0]+v*p
	}
	for metric, want := range map[Metric]float64{
		R: 2 / math.Sqrt(10), RByFold: 2 / math.Sqrt(10), Rho: 3 / math.Sqrt(5*4.5),
		R2: 1 - 4./6, MAE: 1, RMSE: 1, CalibrationSlope: 1, CalibrationIntercept: -.5,
	} {
		if got, constant := scorePairs(metric, target, predicted); math.Abs(got-want) > 1e-15 || constant {
			t.Errorf("%v: %v, want %v", metric, got, want)
		}
		if metric == Rho || metric == MAE || metric > RMSE {
			continue
		}
		if got, constant := scoreSums(metric, m, 0); math.Abs(got-want) > 1e-15 || constant {
			t.Errorf("%v from sums: %v, want %v", metric, got, want)
		}
	}
}

// A prediction that says the same of everyone, though not 0.
func TestScoresOfAConstant(t *testing.T) {
	target, predicted := []float64{1, -1, 2, 0}, []float64{.1, .1, .1, .1}
	m := newMoments(1)
	m.n[0], m.t[0], m.tt[0], m.p[0], m.pp[0], m.tp[0] = 4, 2, 6, .4, .04, .2
	for metric, want := range map[Metric]float64{R: 0, RByFold: 0, Rho: 0, R2: 0, MAE: 1, RMSE: math.Sqrt((.81 + 1.21 + 3.61 + .01) / 4)} {
		if got, constant := scorePairs(metric, target, predicted); math.Abs(got-want) > 1e-15 || !constant {
			t.Errorf("%v: %v, %v, want %v", metric, got, constant, want)
		}
		if metric == Rho || metric == MAE {
			continue
		}
		if got, constant := scoreSums(metric, m, 0); math.Abs(got-want) > 1e-15 || !constant {
			t.Errorf("%v from sums: %v, %v, want %v", metric, got, constant, want)
		}
	}
	if slope, _ := scorePairs(CalibrationSlope, target, predicted); !math.IsNaN(slope) {
		t.Errorf("calibration slope %v", slope)
	}
	for _, metric := range []Metric{R, Rho} { // or the target
		if got, constant := scorePairs(metric, predicted, target); got != 0 || !constant {
			t.Errorf("%v of a constant target: %v, %v", metric, got, constant)
		}
	}
}

func TestMeanRanks(t *testing.T) {
	got := meanRanks([]float64{3, -1, 3, 7, 3, -1})
	for i, want := range []float64{4, 1.5, 4, 6, 4, 1.5} {
		if got[i] != want {
			t.Errorf("rank %d: %v, want %v", i, got[i], want)
		}
	}
}

func TestMetricNames(t *testing.T) {
	for m := RByFold; m <= R2Added; m++ {
		if got, err := ParseMetric(m.String()); err != nil || got != m {
			t.Errorf("%v is read as %v (%v)", m, got, err)
		}
	}
	if _, err := ParseMetric("accuracy"); err == nil {
		t.Error("accuracy passed")
	}
	if len(metricNames) != int(R2Added)+1 {
		t.Error("a metric has no name")
	}
	if RMSE.LowerIsBetter() != true || R2.LowerIsBetter() {
		t.Error("direction of metrics")
	}
}

// Scores of a fit by their definitions, from the predictions it reports.
func TestScoresAreOfTheirFolds(t *testing.T) {
	q := invent(shapes()["repeats"], 8)
	fit, err := q.design(t, Options{Confidence: 0.9}).Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	var folds, repeats []float64 // r2 by fold, r by repeat
	var confounds, full, added []float64
	for r, repeat := range q.folds.Repeats {
		got := fit.Repeats[r]
		r, _ := pearson(mat.Col(nil, 0, got.Target), mat.Col(nil, 0, got.Predicted))
		repeats = append(repeats, r)
		for o := range repeat.OuterCount {
			mean, n := 0.0, 0.0
			for i, f := range repeat.Outer {
				if f != o {
					mean, n = mean+q.traits.At(i, 0), n+1
				}
			}
			mean /= n
			if math.Abs(got.Mean[o][0]-mean) > 1e-12*math.Abs(mean) {
				t.Errorf("training mean %v, want %v", got.Mean[o][0], mean)
			}
			tt, tp, yy, yb, yf := 0.0, 0.0, 0.0, 0.0, 0.0
			for i, f := range repeat.Outer {
				if f == o {
					y, base, p := q.traits.At(i, 0), got.Baseline.At(i, 0), got.Predicted.At(i, 0)
					tt += (y - base) * (y - base)
					tp += (y - base - p) * (y - base - p)
					yy += (y - mean) * (y - mean)
					yb += (y - base) * (y - base)
					yf += (y - base - p) * (y - base - p)
				}
			}
			folds = append(folds, 1-tp/tt)
			confounds, full, added = append(confounds, 1-yb/yy), append(full, 1-yf/yy), append(added, (tt-tp)/yy)
		}
	}
	mean := func(x []float64) float64 { m, _, _ := aboutMean(x); return m }
	for metric, want := range map[Metric][]float64{R: repeats, R2: folds, R2Confounds: confounds, R2Full: full, R2Added: added} {
		s := scoreOf(t, fit, 0, metric)
		if !near(s.Value, mean(want), 1e-12) {
			t.Errorf("%v: %v, want %v", metric, s.Value, mean(want))
		}
		for i, v := range want {
			if !near(s.Parts[i], v, 1e-12) {
				t.Errorf("%v, part %d: %v, want %v", metric, i, s.Parts[i], v)
			}
		}
	}
	s := scoreOf(t, fit, 0, R2)
	in := crossval.ResampledT(folds, q.folds.TestOverTrain(), 0.9)
	if !near(s.SE, in.SE, 1e-12) || !near(s.Low, in.Low, 1e-12) || !near(s.High, in.High, 1e-12) {
		t.Errorf("interval %v %v %v, want %+v", s.SE, s.Low, s.High, in)
	}
	if s := scoreOf(t, fit, 0, R); !math.IsNaN(s.SE) || !math.IsNaN(s.Low) || !math.IsNaN(s.High) {
		t.Errorf("pooled r has the interval %v %v", s.Low, s.High)
	}
}

// Leaving one person out, the training mean correlates -1 with the trait, and
// is no better than itself: the trap of pooled correlations, and why targets
// are about the training mean.
func TestLeaveOneOut(t *testing.T) {
	n := 10
	st := stream.New(3, "test")
	x, y := mat.NewDense(n, 1, nil), mat.NewDense(n, 1, nil)
	r := crossval.Repeat{OuterCount: n}
	for i := range n {
		x.Set(i, 0, 2) // measures that say nothing
		y.Set(i, 0, st.Norm())
		r.Outer = append(r.Outer, i)
	}
	folds := &crossval.Folds{Repeats: []crossval.Repeat{r}, PerFamily: true}
	d, err := NewDesign(x, nil, folds, Options{Penalties: []float64{1}, Metric: R2})
	if err != nil {
		t.Fatal(err)
	}
	fit, err := d.Fit(context.Background(), y)
	if err != nil {
		t.Fatal(err)
	}
	baseline := fit.Repeats[0].Baseline
	if r, _ := pearson(mat.Col(nil, 0, y), mat.Col(nil, 0, baseline)); math.Abs(r+1) > 1e-12 {
		t.Errorf("trait and training mean correlate %v, want -1", r)
	}
	_, total, _ := aboutMean(mat.Col(nil, 0, y))
	errors := 0.0
	for i := range n {
		if p := fit.Repeats[0].Predicted.At(i, 0); p != 0 {
			t.Errorf("person %d is predicted %v, want 0", i, p)
		}
		errors += math.Pow(y.At(i, 0)-baseline.At(i, 0), 2)
	}
	// 1 - (n / (n - 1))^2 about the mean of everyone.
	if got := 1 - errors/total; math.Abs(got+.234567901234568) > 1e-12 {
		t.Errorf("r squared about the whole mean %v", got)
	}
	for _, s := range fit.Scores[0] {
		switch s.Metric {
		case RByFold:
			t.Error("r_by_fold is reported")
		case R, Rho, R2:
			if s.Value != 0 || s.ConstantFolds != 1 || !math.IsNaN(s.Low) {
				t.Errorf("%v of constant predictions: %+v", s.Metric, s)
			}
		}
	}
	if c := fit.Repeats[0].Choices[3][0]; !math.IsNaN(c.InnerMSE) || c.End != Inside || c.Penalty != 1 {
		t.Errorf("choice without a search: %+v", c)
	}
}

// Predictions that are constant, for each reason there is.
func TestConstantPredictions(t *testing.T) {
	for name, spoil := range map[string]func(q problem){
		"constant measures": func(q problem) {
			for i := range 90 {
				for j := range 7 {
					q.measures.Set(i, j, float64(j))
				}
			}
		},
		"trait of confounds": func(q problem) {
			for i := range 90 {
				q.traits.Set(i, 0, 3+q.confounds.At(i, 0)/3-2*q.confounds.At(i, 1))
			}
		},
		"constant trait": func(q problem) {
			for i := range 90 {
				q.traits.Set(i, 0, 0.1)
			}
		},
	} {
		t.Run(name, func(t *testing.T) {
			q := invent(shapes()["given folds"], 1)
			spoil(q)
			residuals, err := Residuals(q.traits, q.confounds)
			if err != nil {
				t.Fatal(err)
			}
			for _, metric := range []Metric{RByFold, R, Rho, R2} {
				d := q.design(t, Options{Metric: metric})
				fit, err := d.Fit(context.Background(), q.traits)
				if err != nil {
					t.Fatal(err)
				}
				s := scoreOf(t, fit, 0, metric)
				if s.Value != 0 || s.ConstantFolds != len(s.Parts) || s.SE > 0 {
					t.Errorf("%v: %+v", metric, s)
				}
				for i := range 90 {
					if p := fit.Repeats[0].Predicted.At(i, 0); p != 0 {
						t.Fatalf("person %d is predicted %v", i, p)
					}
				}
				for o, c := range fit.Repeats[0].Choices {
					if c[0].Penalty != 1000 || c[0].End != HighEnd {
						t.Errorf("fold %d: %+v, want the largest penalty", o, c[0])
					}
				}
				null, err := d.Null(context.Background(), residuals, drawn{3, 1}, nil)
				if err != nil {
					t.Fatal(err)
				}
				for a, v := range null[0] {
					if v != 0 {
						t.Errorf("%v of arrangement %d: %v", metric, a, v)
					}
				}
			}
		})
	}
}

// A trait that is constant in one training set, as a rare yes or no may be.
func TestTraitConstantInTraining(t *testing.T) {
	q := invent(shapes()["no confounds"], 1)
	r := q.folds.Repeats[0]
	for i := range 60 {
		v := 0.3
		if r.Outer[i] == 1 && i%2 == 0 {
			v = 1.7
		}
		q.traits.Set(i, 0, v)
	}
	q.folds.Repeats = q.folds.Repeats[:1]
	fit, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	for i, f := range r.Outer {
		if p := fit.Repeats[0].Predicted.At(i, 0); f == 1 && p != 0 {
			t.Errorf("person %d is predicted %v", i, p)
		}
	}
	if s := scoreOf(t, fit, 0, RByFold); s.Parts[1] != 0 || s.ConstantFolds < 1 {
		t.Errorf("r_by_fold %+v", s)
	}
}

// Noise must score about 0: neither below, as it does when confounds are taken
// out over all people, nor above.
func TestNoiseScoresNothing(t *testing.T) {
	st := stream.New(11, "test noise")
	n, traits := 200, 40
	q := invent(shape{people: n, measures: 10, confounds: 5, traits: 1, repeats: 1, outer: 10, inner: 5, cells: true}, 7)
	y := mat.NewDense(n, traits, nil)
	for i := range n {
		for j := range traits {
			y.Set(i, j, st.Norm())
		}
	}
	fit, err := q.design(t, Options{}).Fit(context.Background(), y)
	if err != nil {
		t.Fatal(err)
	}
	mean := 0.0
	for j := range traits {
		mean += scoreOf(t, fit, j, RByFold).Value / float64(traits)
	}
	// The mean of 10 correlations of 20 people has a deviation of about .07, of
	// 40 traits .011.
	if math.Abs(mean) > 0.035 {
		t.Errorf("mean r_by_fold of noise %v", mean)
	}
	// With a penalty too small for noise r2 is below 0.
	q.penalties = []float64{1e-3}
	fit, err = q.design(t, Options{}).Fit(context.Background(), y)
	if err != nil {
		t.Fatal(err)
	}
	for j := range traits {
		if s := scoreOf(t, fit, j, R2); s.Value > 0.2 || (j == 0 && s.Value >= 0) {
			t.Errorf("r2 of noise %v", s.Value)
		}
	}
}
