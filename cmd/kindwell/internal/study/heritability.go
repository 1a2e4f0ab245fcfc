package study

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/crossval"
	"kindwell/internal/parallel"
	"kindwell/twin"
)

// divided holds the rows that the variance of one variable gives.
type divided struct {
	headline     tidy.Heritability
	components   []tidy.VarianceComponent
	models       []tidy.VarianceModel
	tests        []tidy.VarianceTest
	correlations []tidy.TwinCorrelation
	fixed        []tidy.FixedEffect
	exclusions   []tidy.Exclusion
	warnings     []tidy.Warning
}

// Flags of heritability.csv.
const (
	flagSameInTwins  = "same_in_twins"
	flagTwoValues    = "two_values"
	flagConstant     = "constant"
	flagDominance    = "suggests_dominance"
	flagNotConverged = "not_converged"
	flagNotFitted    = "not_fitted"
	flagNoSigned     = "no_signed_maximum"
	flagSignedCut    = "signed_interval_cut"
)

// divideVariances fits the variance models of every variable.
func (p *Plan) divideVariances(ctx context.Context, r *Results, opt Options) error {
	stage := opt.Progress.Stage("heritability", len(p.variables))
	defer stage.Done()
	parts := make([]divided, len(p.variables))
	err := parallel.Do(ctx, opt.Workers, len(p.variables), func(i, _ int) error {
		var err error
		parts[i], err = p.divide(&p.variables[i])
		stage.Step(1)
		return err
	})
	if err != nil {
		return err
	}
	var warnings []tidy.Warning
	for i := range parts {
		d := &parts[i]
		r.Heritability = append(r.Heritability, d.headline)
		r.VarianceComponents = append(r.VarianceComponents, d.components...)
		r.VarianceModels = append(r.VarianceModels, d.models...)
		r.VarianceTests = append(r.VarianceTests, d.tests...)
		r.TwinCorrelations = append(r.TwinCorrelations, d.correlations...)
		r.FixedEffects = append(r.FixedEffects, d.fixed...)
		r.Exclusions = append(r.Exclusions, d.exclusions...)
		warnings = append(warnings, d.warnings...)
	}
	r.Warnings = append(r.Warnings, merged(warnings)...)
	adjustVariances(r)
	return nil
}

// merged joins warnings that say the same of several variables.
func merged(warnings []tidy.Warning) []tidy.Warning {
	var rows []tidy.Warning
	place := map[string]int{}
	for _, w := range warnings {
		i, ok := place[w.Message]
		switch {
		case !ok:
			place[w.Message] = len(rows)
			rows = append(rows, w)
		case !slices.Contains(strings.Split(rows[i].About, ";"), w.About):
			rows[i].About += ";" + w.About
		}
	}
	return rows
}

// adjustVariances fills the false discovery rates: of the headline test over
// all variables, and of each other test over all variables.
func adjustVariances(r *Results) {
	p := make([]float64, len(r.Heritability))
	for i := range r.Heritability {
		p[i] = r.Heritability[i].P
	}
	for i, q := range crossval.BenjaminiHochberg(p) {
		r.Heritability[i].Q = q
	}
	byTest := map[string][]int{}
	var order []string
	for i := range r.VarianceTests {
		name := r.VarianceTests[i].NullModel + " " + r.VarianceTests[i].FullModel
		if byTest[name] == nil {
			order = append(order, name)
		}
		byTest[name] = append(byTest[name], i)
	}
	for _, name := range order {
		rows := byTest[name]
		p := make([]float64, len(rows))
		for k, i := range rows {
			p[k] = r.VarianceTests[i].P
		}
		for k, q := range crossval.BenjaminiHochberg(p) {
			r.VarianceTests[rows[k]].Q = q
		}
	}
}

// divide divides the variance of one variable.
func (p *Plan) divide(v *variable) (divided, error) {
	var d divided
	complete := p.variableRows(v, &d)
	rows := p.withKnownZygosity(v, complete, &d)
	counts := p.countPairs(rows)
	d.headline = p.blankHeadline(v, rows, counts)
	refuse := func(flag, reason string) (divided, error) {
		d.headline.Flags = flag
		d.exclusions = append(d.exclusions, tidy.Exclusion{Analysis: "heritability", Variable: v.name, Reason: reason})
		return d, nil
	}
	if distinct(pick(v.values, rows)) == 1 {
		return refuse(flagConstant, "not fitted: the variable is constant")
	}
	if zygosity := sameInTwins(v.values, counts); zygosity != "" {
		return refuse(flagSameInTwins, fmt.Sprintf("not fitted: equal in both twins of 95 %% or more of the %s pairs, so that the likelihood has no maximum", zygosity))
	}
	y := v.valuesOf(rows)
	if distinct(y) == 2 {
		return refuse(flagTwoValues, "not fitted: two values only; a variance model is for a continuous variable")
	}
	covariates := designOf(p.Cohort, v.covariates, rows)
	sample, err := twin.NewSample(p.Cohort.Pedigree, rows, y, covariates.matrix, covariates.names)
	if err != nil {
		return refuse(flagNotFitted, "not fitted: "+plain(err))
	}
	fits := p.fitModels(v, sample, &d)
	p.addCorrelations(v, complete, sample, &d)
	p.addTests(v, sample, fits, &d)
	p.fillHeadline(v, sample, fits, &d)
	return d, nil
}

// sameInTwins names a zygosity whose twins cannot differ in the variable.
func sameInTwins(values []float64, c pairCounts) string {
	switch {
	case twin.SameInTwins(values, c.mz):
		return "MZ"
	case twin.SameInTwins(values, c.dz):
		return "DZ"
	}
	return ""
}

// variableRows returns the people who have the variable and its covariates;
// the others have a row each in the exclusions.
func (p *Plan) variableRows(v *variable, d *divided) []int {
	var rows []int
	for row, person := range p.Cohort.People {
		var missing []string
		if math.IsNaN(v.values[row]) {
			missing = append(missing, v.name)
		}
		for _, name := range v.covariates.use {
			if p.Cohort.Variables[name].Missing(row) {
				missing = append(missing, name)
			}
		}
		if len(missing) == 0 {
			rows = append(rows, row)
			continue
		}
		d.exclusions = append(d.exclusions, tidy.Exclusion{
			Analysis: "heritability", Variable: v.name, Person: person,
			Reason: "missing: " + strings.Join(missing, ", "),
		})
	}
	return rows
}

// withKnownZygosity leaves out twins of unknown zygosity whose co-twin is
// there: a variance model needs to know how many genes a pair shares. The
// exclusions say so.
func (p *Plan) withKnownZygosity(v *variable, rows []int, d *divided) []int {
	unknown := map[int]bool{}
	for pair := range p.Cohort.Pedigree.Pairs(rows) {
		if pair.Relation == twin.UnknownZygosity {
			unknown[pair.First], unknown[pair.Second] = true, true
		}
	}
	if len(unknown) == 0 {
		return rows
	}
	var known []int
	for _, row := range rows {
		if !unknown[row] {
			known = append(known, row)
			continue
		}
		d.exclusions = append(d.exclusions, tidy.Exclusion{
			Analysis: "heritability", Variable: v.name, Person: p.Cohort.People[row],
			Reason: "twin of unknown zygosity: in the twin correlations, left out of variance models",
		})
	}
	return known
}

// pairCounts are the pairs that are complete in a variable.
type pairCounts struct {
	mz, dz                        [][2]int
	dzSame, dzOpposite, sibling   int
	singleTwins, families, people int
}

func (p *Plan) countPairs(rows []int) pairCounts {
	c := pairCounts{people: len(rows)}
	ped := p.Cohort.Pedigree
	for pair := range ped.Pairs(rows) {
		both := [2]int{pair.First, pair.Second}
		switch pair.Relation {
		case twin.MZ:
			c.mz = append(c.mz, both)
		case twin.DZSameSex:
			c.dz = append(c.dz, both)
			c.dzSame++
		case twin.DZOppositeSex:
			c.dz = append(c.dz, both)
			c.dzOpposite++
		case twin.FullSibling:
			c.sibling++
		}
	}
	sets, families := map[int]int{}, map[int]bool{}
	for _, row := range rows {
		families[ped.Family(row)] = true
		if set := ped.TwinSet(row); set >= 0 {
			sets[set]++
		}
	}
	for _, present := range sets {
		if present == 1 {
			c.singleTwins++
		}
	}
	c.families = len(families)
	return c
}

func (p *Plan) blankHeadline(v *variable, rows []int, c pairCounts) tidy.Heritability {
	h := tidy.Blank[tidy.Heritability]()
	h.Variable, h.Role, h.Transform, h.Scale = v.name, v.role, string(v.transform), "observed"
	h.Model, h.Covariates = string(p.Study.Heritability.Full), v.covariates.describe()
	h.People, h.Families = c.people, c.families
	h.MZPairs, h.DZSamePairs, h.DZOppositePairs, h.SiblingPairs, h.SingleTwins = len(c.mz), c.dzSame, c.dzOpposite, c.sibling, c.singleTwins
	h.DetectableA2 = twin.DetectableA2(len(c.mz), len(c.dz), detectAlpha, detectPower)
	return h
}

// fitModels fits the models asked, and those that the headline test needs
// beside them, and makes the rows of the ones asked.
func (p *Plan) fitModels(v *variable, sample *twin.Sample, d *divided) map[string]*twin.Fit {
	fits := map[string]*twin.Fit{}
	var asked []*twin.Fit
	fit := func(name string) *twin.Fit {
		if f, ok := fits[name]; ok {
			return f
		}
		model, err := twin.ParseModel(name)
		if err != nil {
			panic("study: " + err.Error()) // the study file knows no other models
		}
		f, err := sample.Fit(model, twin.FitOptions{})
		if err != nil {
			fits[name] = nil
			d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: "model " + name + " was not fitted: " + plain(err)})
			return nil
		}
		fits[name] = f
		return f
	}
	for _, name := range p.Study.Heritability.Models {
		if f := fit(string(name)); f != nil {
			asked = append(asked, f)
		}
	}
	full, err := twin.ParseModel(string(p.Study.Heritability.Full))
	if err == nil {
		if null, against, ok := twin.HeadlineTest(full); ok {
			fit(null.String())
			fit(against.String())
		}
	}
	lowest := -1
	for i, f := range asked {
		if f.Converged && (lowest < 0 || f.AIC < asked[lowest].AIC) {
			lowest = i
		}
	}
	for i, f := range asked {
		p.addFit(v, sample, f, i == lowest, d)
	}
	if lowest >= 0 {
		d.headline.LowestAIC = asked[lowest].Model.String()
	}
	return fits
}

// addFit makes the rows of one model.
func (p *Plan) addFit(v *variable, sample *twin.Sample, f *twin.Fit, lowest bool, d *divided) {
	model := f.Model.String()
	d.models = append(d.models, tidy.VarianceModel{
		Variable: v.name, Role: v.role, Model: model, LogLikelihood: f.LogLik, Parameters: f.Parameters,
		AIC: f.AIC, BIC: f.BIC, Converged: f.Converged, Evaluations: f.Evaluations, LowestAIC: lowest,
	})
	if !f.Converged {
		d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: "model " + model + " did not converge; its estimates are left empty"})
		return
	}
	quantities := map[twin.Component]twin.Quantity{twin.A: twin.ShareA, twin.C: twin.ShareC, twin.D: twin.ShareD, twin.E: twin.ShareE}
	for _, e := range f.Components {
		row := tidy.VarianceComponent{
			Variable: v.name, Role: v.role, Model: model, Component: e.Component.String(),
			Variance: e.Variance, Share: e.Share, AtBound: e.AtBound,
			SignedVariance: e.SignedVariance, SignedShare: e.SignedShare,
		}
		limits := p.interval(v, sample, f, quantities[e.Component], d)
		row.Low, row.High = limits.Low, limits.High
		d.components = append(d.components, row)
	}
	for _, e := range f.Fixed {
		if e.Dropped != "" {
			d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: fmt.Sprintf("covariate %s has no coefficient of its own: %s", e.Term, e.Dropped)})
			continue
		}
		d.fixed = append(d.fixed, tidy.FixedEffect{Variable: v.name, Role: v.role, Model: model, Term: e.Term, Estimate: e.Estimate, SE: e.SE})
	}
}

// interval returns the profile interval of a quantity, its limits empty with a
// warning when they are not found. A model of E alone has nothing to profile.
func (p *Plan) interval(v *variable, sample *twin.Sample, f *twin.Fit, q twin.Quantity, d *divided) twin.Interval {
	i, err := sample.Interval(f, q, p.Study.Confidence)
	if err != nil {
		d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: "no " + plain(err)})
		return twin.Interval{Low: math.NaN(), High: math.NaN()}
	}
	return i
}

// addTests makes the rows of every test between two fitted models.
func (p *Plan) addTests(v *variable, sample *twin.Sample, fits map[string]*twin.Fit, d *divided) {
	for _, pair := range [][2]twin.Model{
		{twin.ModelCE, twin.ModelACE}, {twin.ModelAE, twin.ModelACE}, {twin.ModelAE, twin.ModelADE},
		{twin.ModelE, twin.ModelAE}, {twin.ModelE, twin.ModelCE}, {twin.ModelE, twin.ModelACE}, {twin.ModelE, twin.ModelADE},
	} {
		null, full := fits[pair[0].String()], fits[pair[1].String()]
		if null == nil || full == nil || !null.Converged || !full.Converged {
			continue
		}
		t, err := sample.Test(null, full)
		if err != nil {
			d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: fmt.Sprintf("no test of %s against %s: %s", pair[0], pair[1], plain(err))})
			continue
		}
		row := tidy.Blank[tidy.VarianceTest]()
		row.Variable, row.Role, row.NullModel, row.FullModel = v.name, v.role, t.Null.String(), t.Full.String()
		row.Statistic, row.DF = t.Statistic, tidy.Int(t.DF)
		row.Weight0, row.Weight1, row.Weight2 = t.Weights[0], t.Weights[1], t.Weights[2]
		row.PMixture, row.Method, row.P = t.PMixture, t.Method.String(), t.P
		d.tests = append(d.tests, row)
	}
}

// fillHeadline fills the row of heritability.csv from the full model.
// Its share of A and its test are those of the other tables.
func (p *Plan) fillHeadline(v *variable, sample *twin.Sample, fits map[string]*twin.Fit, d *divided) {
	h := &d.headline
	f := fits[h.Model]
	if f == nil {
		h.Flags = flagNotFitted
		return
	}
	if !f.Converged {
		h.Flags = flagNotConverged
		return
	}
	var flags []string
	h.E2 = f.Share(twin.E)
	h.Familial, h.H2Broad = 0, 0
	for _, e := range f.Components {
		switch e.Component {
		case twin.A:
			h.A2, h.A2Signed = e.Share, e.SignedShare
			for _, c := range d.components {
				if c.Model == h.Model && c.Component == e.Component.String() {
					h.A2Low, h.A2High = c.Low, c.High
				}
			}
			if f.SignedConverged {
				i := p.interval(v, sample, f, twin.SignedA, d)
				h.A2SignedLow, h.A2SignedHigh = i.Low, i.High
				if i.LowAtBound || i.HighAtBound {
					flags = append(flags, flagSignedCut)
				}
			} else {
				flags = append(flags, flagNoSigned)
			}
		case twin.C:
			h.C2 = e.Share
		case twin.D:
			h.D2 = e.Share
		}
		if e.Component != twin.E {
			h.Familial += e.Share
		}
		if e.Component == twin.A || e.Component == twin.D {
			h.H2Broad += e.Share
		}
	}
	familial := p.interval(v, sample, f, twin.Familial, d)
	h.FamilialLow, h.FamilialHigh = familial.Low, familial.High
	if null, against, ok := twin.HeadlineTest(f.Model); ok {
		for _, t := range d.tests {
			if t.NullModel == null.String() && t.FullModel == against.String() {
				h.P, h.Tail = t.P, crossval.Upper.String()
			}
		}
	}
	// Identical twins more than twice as alike as fraternal ones: the signed
	// share of C, 2 r_dz - r_mz, is below 0 by more than its interval.
	if ace := fits[twin.ModelACE.String()]; ace != nil && ace.Converged {
		if i, err := sample.Interval(ace, twin.SignedC, p.Study.Confidence); err == nil && i.High < 0 {
			flags = append(flags, flagDominance)
		}
	}
	h.Flags = strings.Join(flags, ";")
}

// distinct counts the different values, up to three.
func distinct(values []float64) int {
	seen := map[float64]bool{}
	for _, v := range values {
		if seen[v] = true; len(seen) > 2 {
			break
		}
	}
	return len(seen)
}
