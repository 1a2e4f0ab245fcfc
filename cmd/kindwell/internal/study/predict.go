package study

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat"

	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/crossval"
	"kindwell/features"
	"kindwell/predict"
)

// fewPeople is the number below which scores are warned of: intervals are wide
// and chance findings large (Marek et al. 2022).
const fewPeople = 200

// fitted is one set of measures fitted to the traits of one group.
type fitted struct {
	set     measureSet
	fit     *predict.Fit
	weights [][]predict.Weight
	null    [][]float64 // [trait][arrangement], nil without a test
}

// predictTraits predicts the traits of every group from every set.
func (p *Plan) predictTraits(ctx context.Context, r *Results, opt Options) error {
	metric, err := predict.ParseMetric(string(p.Study.Predict.Metric))
	if err != nil {
		panic("study: " + err.Error()) // the study file knows no other metrics
	}
	tests := &testBook{plan: p, metric: metric}
	scores := map[string][]tidy.PredictionScore{} // by trait
	for i := range p.groups {
		if err := p.predictGroup(ctx, i, tests, scores, r, opt); err != nil {
			return err
		}
	}
	for _, trait := range p.Study.Traits.Use {
		r.PredictionScores = append(r.PredictionScores, scores[trait]...)
	}
	tests.adjust(r.PredictionScores)
	return nil
}

// predictGroup predicts the traits of group i.
func (p *Plan) predictGroup(ctx context.Context, i int, tests *testBook, scores map[string][]tidy.PredictionScore, r *Results, opt Options) error {
	g := &p.groups[i]
	if err := p.enoughPeople(g); err != nil {
		return err
	}
	r.Warnings = append(r.Warnings, p.groupWarnings(g)...)
	folds, err := p.foldsOf(i)
	if err != nil {
		return err
	}
	p.addFolds(i, folds, r)
	series, exchange, err := p.seriesOf(g, r)
	if err != nil {
		return err
	}
	confounds := designOf(p.Cohort, confoundColumns(p.Study.Confounds), g.rows)
	traits := p.traitMatrix(g)
	residuals, err := predict.Residuals(traits, confounds.matrix)
	if err != nil {
		return fmt.Errorf("%s: %s", strings.Join(g.traits, ", "), plain(err))
	}
	steps := len(p.predicting)
	if series != nil {
		steps *= series.Len()
	}
	r.Warnings = append(r.Warnings, emptyTraits(g, traits, residuals)...)
	stage := opt.Progress.Stage(fmt.Sprintf("prediction of %s", strings.Join(shorten(g.traits, 3), ", ")), steps)
	defer stage.Done()
	var all []fitted
	for _, set := range p.predicting {
		f, err := p.fitSet(ctx, g, set, folds, confounds, traits, residuals, series, tests.metric, stage, r, opt)
		if err != nil {
			return err
		}
		all = append(all, f)
		p.addFitted(g, folds, f, r)
	}
	for j, trait := range g.traits {
		for _, f := range all {
			scores[trait] = append(scores[trait], p.scoreRows(g, j, f, tests, series, exchange)...)
		}
	}
	tests.endGroup()
	return nil
}

// emptyTraits warns of traits that leave nothing to be predicted.
func emptyTraits(g *group, traits, residuals *mat.Dense) []tidy.Warning {
	var rows []tidy.Warning
	for j, name := range g.traits {
		message := ""
		switch {
		case distinct(mat.Col(nil, j, traits)) == 1:
			message = "the trait is constant: there is nothing to predict"
		case mat.Norm(residuals.ColView(j), 2) == 0:
			message = "the confounds explain the trait entirely: there is nothing left to predict"
		default:
			continue
		}
		rows = append(rows, tidy.Warning{Analysis: "prediction", About: name, Message: message})
	}
	return rows
}

// enoughPeople refuses a group in which nothing can be held out.
func (p *Plan) enoughPeople(g *group) error {
	if families := p.familyCount(g.rows); families < 4 {
		var f faults
		f.study(p.Study, "traits.use", fmt.Sprintf("%s: %d people in %d families have the trait, every confound and every measure; that is too few to hold families out",
			strings.Join(g.traits, ", "), len(g.rows), families), p.mostMissing(g.traits))
		return f.err()
	}
	return nil
}

// groupWarnings are what a reader should know of the people of a group.
func (p *Plan) groupWarnings(g *group) []tidy.Warning {
	about := joined(g.traits)
	var rows []tidy.Warning
	if n := len(g.rows); n < fewPeople {
		rows = append(rows, tidy.Warning{Analysis: "prediction", About: about,
			Message: fmt.Sprintf("%d people are few for prediction: intervals are wide, and what stands out in so few is mostly luck; need %d or more", n, fewPeople)})
	}
	for _, name := range p.Study.Confounds.Use {
		if v := p.Cohort.Variables[name]; !v.Numeric {
			rows = append(rows, p.rareLevels(about, name, g)...)
		}
	}
	if tests := len(p.Study.Traits.Use) * len(p.predicting); p.Study.Predict.Permutations > 0 {
		if least := float64(tests) / float64(p.Study.Predict.Permutations+1); least > detectAlpha {
			rows = append(rows, tidy.Warning{Analysis: "prediction", About: about,
				Message: fmt.Sprintf("with %d tests and %d permutations a lone effect cannot have q below %.2f; %d permutations would allow .05",
					tests, p.Study.Predict.Permutations, least, int(math.Ceil(float64(tests)/detectAlpha))-1)})
		}
	}
	return rows
}

// rareLevels names the levels of a confound that fewer than three families
// have.
func (p *Plan) rareLevels(about, name string, g *group) []tidy.Warning {
	v := p.Cohort.Variables[name]
	families := map[int]map[int]bool{}
	for _, row := range g.rows {
		if families[v.Codes[row]] == nil {
			families[v.Codes[row]] = map[int]bool{}
		}
		families[v.Codes[row]][p.Cohort.Pedigree.Family(row)] = true
	}
	var rows []tidy.Warning
	for _, level := range levelsPresent(v, g.rows) {
		if n := len(families[level]); n < 3 {
			rows = append(rows, tidy.Warning{Analysis: "prediction", About: about,
				Message: fmt.Sprintf("level %q of confound %s is held by %d families only; folds may not keep it in every training set", v.Levels[level], name, n)})
		}
	}
	return rows
}

// seriesOf draws up the arrangements of a group. Families that allow none but
// the one observed leave the series nil, with a warning.
func (p *Plan) seriesOf(g *group, r *Results) (*crossval.Series, *crossval.Exchange, error) {
	asked := p.Study.Predict.Permutations
	if asked == 0 {
		return nil, nil, nil
	}
	exchange, err := p.exchangeOf(g)
	if err != nil {
		return nil, nil, fmt.Errorf("arrangements of %s: %s", strings.Join(g.traits, ", "), plain(err))
	}
	series, err := exchange.Series(asked, p.Study.Seed, arrangementPurpose)
	if errors.Is(err, crossval.ErrOneArrangement) {
		r.Warnings = append(r.Warnings, tidy.Warning{Analysis: "prediction", About: joined(g.traits),
			Message: "these families allow no arrangement but the one observed, so that nothing can be tested by rearranging; p is left empty"})
		return nil, exchange, nil
	}
	if err != nil {
		return nil, nil, fmt.Errorf("arrangements of %s: %s", strings.Join(g.traits, ", "), plain(err))
	}
	return series, exchange, nil
}

// fitSet fits one set of measures to the traits of a group, as observed and
// rearranged.
func (p *Plan) fitSet(ctx context.Context, g *group, set measureSet, folds *crossval.Folds, confounds design, traits, residuals *mat.Dense, series *crossval.Series, metric predict.Metric, stage Stage, r *Results, opt Options) (fitted, error) {
	f := fitted{set: set}
	about := set.name
	d, err := predict.NewDesign(p.measureMatrix(g, set), confounds.matrix, folds, predict.Options{
		Penalties: penalties(p.Study.Predict.Penalties), Metric: metric, Confidence: p.Study.Confidence, Workers: opt.Workers,
		Scalers: p.scalers(set),
	})
	if err != nil {
		return f, p.designTrouble(err, g, set, confounds)
	}
	p.noteDesign(d.Notes(), set, confounds, r)
	if f.fit, err = d.Fit(ctx, traits); err != nil {
		return f, trouble(ctx, err, about)
	}
	if f.weights, err = f.fit.Weights(p.compositions(set)...); err != nil {
		return f, trouble(ctx, err, about)
	}
	if series == nil {
		stage.Step(1)
		return f, nil
	}
	before := 0
	f.null, err = d.Null(ctx, residuals, series, func(done int) {
		stage.Step(done - before)
		before = done
	})
	return f, trouble(ctx, err, about)
}

// trouble puts what it is about before an error, unless the run was stopped.
func trouble(ctx context.Context, err error, about string) error {
	if err == nil || ctx.Err() != nil {
		return err
	}
	return fmt.Errorf("%s: %s", about, plain(err))
}

// designTrouble says what is wrong with a design in the names of the study.
func (p *Plan) designTrouble(err error, g *group, set measureSet, confounds design) error {
	message := plain(err)
	var confound *predict.ConfoundError
	if errors.As(err, &confound) && confound.Confound < len(confounds.names) {
		message = fmt.Sprintf("confound %q is constant, or follows from the others, among the training people of repeat %d, fold %d, but not among all people; leave it out or give folds that keep it",
			confounds.names[confound.Confound], confound.Repeat+1, confound.Outer+1)
	}
	var f faults
	f.study(p.Study, "predict", fmt.Sprintf("%s from %s: %s", strings.Join(g.traits, ", "), set.name, message), "")
	return f.err()
}

// noteDesign turns the notes of a design into warnings.
func (p *Plan) noteDesign(n predict.Notes, set measureSet, confounds design, r *Results) {
	warn := func(format string, args ...any) {
		r.Warnings = append(r.Warnings, tidy.Warning{Analysis: "prediction", About: set.name, Message: fmt.Sprintf(format, args...)})
	}
	for _, z := range n.ZeroWeights {
		name := p.measures[set.measures[z.Measure]].name
		if fits := z.ConstantOuter + z.ConstantInner; fits > 0 {
			warn("measure %s is constant in %d training sets and has weight 0 there", name, fits)
		}
		if fits := z.ExplainedOuter + z.ExplainedInner; fits > 0 {
			warn("measure %s is explained by the confounds in %d training sets and has weight 0 there", name, fits)
		}
	}
	for _, c := range n.PassedOver {
		warn("confound %s is constant or follows from the others; leaving it out changes nothing", confounds.names[c])
	}
	if n.IllConditioned {
		warn("the lowest penalty is very small for collinear measures: predictions at it keep few digits; raise predict.penalties.low")
	}
}

// measureMatrix holds the measures of a set, a row a person of the group.
func (p *Plan) measureMatrix(g *group, set measureSet) *mat.Dense {
	m := mat.NewDense(len(g.rows), len(set.measures), nil)
	for k, j := range set.measures {
		m.SetCol(k, pick(p.measures[j].values, g.rows))
	}
	return m
}

// scalers learn normal scores of ranks in every training set, for the measures
// of a set that are on that scale; nil when none is.
func (p *Plan) scalers(set measureSet) []predict.Scaler {
	scalers := make([]predict.Scaler, len(set.measures))
	any := false
	for k, j := range set.measures {
		if p.measures[j].scale == config.ScaleRankNormal {
			scalers[k], any = rankScaler, true
		}
	}
	if !any {
		return nil
	}
	return scalers
}

// rankScaler scores the ranks of the training people, and puts the held-out
// people between them. Without two different training values there is no
// scale, and the measure is left as it is, to get weight 0.
func rankScaler(training, held []float64) (trainingScaled, heldScaled []float64) {
	scale, err := features.FitRankNormal(training)
	if err != nil {
		return training, held
	}
	return scale.Apply(training), scale.Apply(held)
}

// compositions lists, by place in the set, the parts of each whole that is in
// the set with all its parts.
func (p *Plan) compositions(set measureSet) [][]int {
	size := map[string]int{}
	for _, m := range p.measures {
		size[m.composition]++
	}
	var wholes [][]int
	var names []string
	for k, j := range set.measures {
		name := p.measures[j].composition
		if name == "" {
			continue
		}
		i := slices.Index(names, name)
		if i < 0 {
			i = len(names)
			names, wholes = append(names, name), append(wholes, nil)
		}
		wholes[i] = append(wholes[i], k)
	}
	var complete [][]int
	for i, name := range names {
		if len(wholes[i]) == size[name] {
			complete = append(complete, wholes[i])
		}
	}
	return complete
}

// penalties spaces the grid evenly in the logarithm, both ends included.
func penalties(g config.Penalties) []float64 {
	grid := make([]float64, g.Count)
	low, high := math.Log10(g.Low), math.Log10(g.High)
	for i := range grid {
		grid[i] = math.Pow(10, low+(high-low)*float64(i)/float64(g.Count-1))
	}
	grid[0], grid[g.Count-1] = g.Low, g.High
	return grid
}

// meanSD is the mean and standard deviation (divisor n - 1) of a null.
func meanSD(null []float64) (mean, sd float64) {
	if len(null) == 0 {
		return math.NaN(), math.NaN()
	}
	return stat.MeanStdDev(null, nil)
}
