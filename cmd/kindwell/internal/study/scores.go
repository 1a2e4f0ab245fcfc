package study

import (
	"math"

	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/crossval"
	"kindwell/predict"
)

// testBook keeps what corrections for many tests need: the observed scores
// and nulls of the group at hand, and the rows of each group before it.
type testBook struct {
	plan   *Plan
	metric predict.Metric

	keys     []scoreKey
	observed []float64
	null     [][]float64
	fwer     map[scoreKey]float64
	groups   int // with a test
}

type scoreKey struct{ trait, set string }

// add enters one tested score.
func (b *testBook) add(trait, set string, value float64, null []float64) {
	b.keys = append(b.keys, scoreKey{trait, set})
	b.observed = append(b.observed, value)
	b.null = append(b.null, null)
}

// endGroup corrects for all tests of one group of people by the largest
// statistic, and lets the nulls go. Correlations are compared as they are,
// other statistics in units of their own null.
func (b *testBook) endGroup() {
	if len(b.keys) == 0 {
		return
	}
	largest := crossval.LargestStandardized
	if b.metric == predict.R || b.metric == predict.RByFold {
		largest = crossval.LargestStatistic
	}
	if b.fwer == nil {
		b.fwer = map[scoreKey]float64{}
	}
	for i, p := range largest(b.observed, b.null, crossval.Upper) {
		b.fwer[b.keys[i]] = p
	}
	b.groups++
	b.keys, b.observed, b.null = nil, nil, nil
}

// adjust fills p_fwer, over the groups, and q, over all tested rows.
func (b *testBook) adjust(rows []tidy.PredictionScore) {
	var tested []int
	var p []float64
	for i := range rows {
		r := &rows[i]
		fwer, ok := b.fwer[scoreKey{r.Trait, r.Set}]
		if !r.Tested || !ok {
			continue
		}
		r.PFWER = crossval.AcrossGroups(fwer, b.groups)
		tested = append(tested, i)
		p = append(p, r.P)
	}
	for k, q := range crossval.BenjaminiHochberg(p) {
		rows[tested[k]].Q = q
	}
}

// scoreRows makes the rows of trait j of a group and one set.
func (p *Plan) scoreRows(g *group, j int, f fitted, tests *testBook, series *crossval.Series, exchange *crossval.Exchange) []tidy.PredictionScore {
	var rows []tidy.PredictionScore
	for _, s := range f.fit.Scores[j] {
		row := tidy.Blank[tidy.PredictionScore]()
		row.Trait, row.Set, row.Role, row.Level = g.traits[j], f.set.name, "study", "all"
		row.Scale, row.Metric = "residual", s.Metric.String()
		if s.Metric.Raw() {
			row.Scale = "raw"
		}
		row.People, row.Families = len(g.rows), p.familyCount(g.rows)
		row.Value, row.SE, row.Low, row.High = s.Value, s.SE, s.Low, s.High
		if !math.IsNaN(s.Low) {
			row.IntervalKind, row.Confidence = "resampled_t", p.Study.Confidence
		}
		row.ConstantFolds = tidy.Int(s.ConstantFolds)
		if row.Tested = s.Metric == tests.metric && f.null != nil; row.Tested {
			null := f.null[j]
			row.NullMean, row.NullSD = meanSD(null)
			row.P, row.Tail = crossval.PValue(s.Value, null, crossval.Upper), crossval.Upper.String()
			row.Permutations = tidy.Int(series.Len())
			row.Log10Arrangements, row.FamiliesFixed = exchange.Log10(), tidy.Int(exchange.FamiliesFixed())
			tests.add(row.Trait, row.Set, s.Value, null)
		}
		rows = append(rows, row)
	}
	return rows
}

// addFitted makes the rows of predictions, penalties and weights of a group
// and one set.
func (p *Plan) addFitted(g *group, folds *crossval.Folds, f fitted, r *Results) {
	for j, trait := range g.traits {
		for rep := range f.fit.Repeats {
			result := &f.fit.Repeats[rep]
			for i, row := range g.rows {
				r.Predictions = append(r.Predictions, tidy.Prediction{
					Trait: trait, Set: f.set.name, Repeat: rep + 1, Fold: folds.Repeats[rep].Outer[i] + 1,
					Person: p.Cohort.People[row], Family: p.Cohort.FamilyLabel[row],
					Observed: result.Observed.At(i, j), Baseline: result.Baseline.At(i, j),
					Target: result.Target.At(i, j), Predicted: result.Predicted.At(i, j),
				})
			}
			for o := range result.Choices {
				c := result.Choices[o][j]
				r.Penalties = append(r.Penalties, tidy.Penalty{
					Trait: trait, Set: f.set.name, Repeat: rep + 1, Fold: o + 1,
					Penalty: c.Penalty, InnerMSE: c.InnerMSE, AtEnd: c.End.String(),
				})
			}
		}
		for k, m := range f.set.measures {
			w := f.weights[j][k]
			r.Weights = append(r.Weights, tidy.Weight{
				Trait: trait, Set: f.set.name, Measure: p.measures[m].name,
				Weight: w.Weight, WeightSD: w.SD, SignAgreement: w.SignAgreement, Pattern: w.Pattern,
			})
		}
	}
}

// addFolds makes the rows of people_groups, folds and inner_folds of group i.
func (p *Plan) addFolds(i int, folds *crossval.Folds, r *Results) {
	g := &p.groups[i]
	r.PeopleGroups = append(r.PeopleGroups, tidy.PeopleGroup{
		PeopleGroup: i + 1, Traits: joined(g.traits), People: len(g.rows), Families: p.familyCount(g.rows),
	})
	for rep := range folds.Repeats {
		repeat := &folds.Repeats[rep]
		for k, row := range g.rows {
			r.Folds = append(r.Folds, tidy.Fold{
				PeopleGroup: i + 1, Repeat: rep + 1, Fold: repeat.Outer[k] + 1,
				Person: p.Cohort.People[row], Family: p.Cohort.FamilyLabel[row],
			})
		}
		for o := range repeat.Inner {
			for k, row := range g.rows {
				if inner := repeat.Inner[o][k]; inner >= 0 {
					r.InnerFolds = append(r.InnerFolds, tidy.InnerFold{
						PeopleGroup: i + 1, Repeat: rep + 1, Fold: o + 1, InnerFold: inner + 1,
						Person: p.Cohort.People[row], Family: p.Cohort.FamilyLabel[row],
					})
				}
			}
		}
	}
}
