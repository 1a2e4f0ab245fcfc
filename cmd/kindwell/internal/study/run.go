package study

import (
	"context"
	"runtime"
	"slices"
	"strings"
	"time"

	"kindwell/cmd/kindwell/internal/tidy"
)

// Options are the choices of a run that change none of its tables.
type Options struct {
	// Only names the parts to run (see Parts); nil runs all that the study
	// has a section for.
	Only []string
	// Workers is the number of goroutines, 0 for all cores.
	Workers int
	// Version is the program's own, for the record.
	Version string
	// Progress is told of the stages; nil shows nothing.
	Progress Progress
}

// The parts of a run that can be asked for.
const (
	partPredict      = "predict"
	partHeritability = "heritability"
)

// Parts names the parts of a run, as --only takes them.
func Parts() []string { return []string{partPredict, partHeritability} }

// Lacks names the first of the asked parts that the study has no section for,
// or nothing.
func (p *Plan) Lacks(parts []string) string {
	for _, part := range parts {
		if part == partPredict && p.Study.Predict == nil || part == partHeritability && p.Study.Heritability == nil {
			return part
		}
	}
	return ""
}

// Results are the rows of every table of a run.
type Results struct {
	plan   *Plan
	record record

	Relations          []tidy.Relation
	PeopleGroups       []tidy.PeopleGroup
	PredictionScores   []tidy.PredictionScore
	Predictions        []tidy.Prediction
	Penalties          []tidy.Penalty
	Folds              []tidy.Fold
	InnerFolds         []tidy.InnerFold
	Weights            []tidy.Weight
	Heritability       []tidy.Heritability
	VarianceComponents []tidy.VarianceComponent
	VarianceModels     []tidy.VarianceModel
	VarianceTests      []tidy.VarianceTest
	TwinCorrelations   []tidy.TwinCorrelation
	FixedEffects       []tidy.FixedEffect
	Exclusions         []tidy.Exclusion
	Warnings           []tidy.Warning
}

// Run does the work of a study. An ended context stops it at the next step
// with the context's error.
func (p *Plan) Run(ctx context.Context, opt Options) (*Results, error) {
	if opt.Progress == nil {
		opt.Progress = Silent{}
	}
	if opt.Workers == 0 {
		opt.Workers = runtime.GOMAXPROCS(0)
	}
	started := time.Now()
	r := &Results{plan: p, Relations: p.relations()}
	r.Exclusions = slices.Clone(p.exclusions)
	r.Warnings = slices.Clone(p.warnings)
	wanted := func(part string) bool { return len(opt.Only) == 0 || slices.Contains(opt.Only, part) }
	if p.Study.Predict != nil && wanted(partPredict) {
		if err := p.predictTraits(ctx, r, opt); err != nil {
			return nil, err
		}
	}
	if p.Study.Heritability != nil && wanted(partHeritability) {
		if err := p.divideVariances(ctx, r, opt); err != nil {
			return nil, err
		}
	}
	if len(opt.Only) > 0 {
		r.Warnings = append(r.Warnings, tidy.Warning{Analysis: "study", Message: "only " + strings.Join(opt.Only, ", ") + " was asked for on the command line; tables of other analyses are empty"})
	}
	r.warnOfFormulas()
	r.record = p.newRecord(opt, started, r)
	return r, nil
}

// relations counts the pairs of every relation among all people.
func (p *Plan) relations() []tidy.Relation {
	var rows []tidy.Relation
	for _, c := range p.Cohort.Pedigree.PairCounts(p.everyone()) {
		rows = append(rows, tidy.Relation{Relation: c.Relation.String(), Pairs: c.Pairs, Families: c.Families, SharingHome: c.SharingHome})
	}
	return rows
}

// everyone lists all people by row.
func (p *Plan) everyone() []int {
	rows := make([]int, len(p.Cohort.People))
	for i := range rows {
		rows[i] = i
	}
	return rows
}
