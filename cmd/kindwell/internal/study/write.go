package study

import (
	"encoding/json"
	"fmt"
	"runtime"
	"time"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/report"
	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/internal/dense"
)

// record is run.json: what decides the numbers of a run, and what it took.
type record struct {
	Kindwell string          `json:"kindwell"`
	Go       string          `json:"go"`
	Machine  string          `json:"machine"`
	Study    string          `json:"study"`
	Seed     uint64          `json:"seed"`
	Parts    []string        `json:"parts"`
	Inputs   []recordedInput `json:"inputs"`
	Started  string          `json:"started"`
	Seconds  float64         `json:"seconds"`
	Workers  int             `json:"workers"`
	Kernel   string          `json:"kernel"` // of matrix products
	Counts   map[string]int  `json:"counts"`
}

type recordedInput struct {
	File   string `json:"file"`
	SHA256 string `json:"sha256"`
	Bytes  int64  `json:"bytes"`
}

// newRecord makes the record of a run that has just ended.
func (p *Plan) newRecord(opt Options, started time.Time, r *Results) record {
	parts := opt.Only
	if len(parts) == 0 {
		parts = Parts()
	}
	rec := record{
		Kindwell: opt.Version, Go: runtime.Version(), Machine: runtime.GOOS + "/" + runtime.GOARCH,
		Study: p.Study.Title, Seed: p.Study.Seed, Parts: parts,
		Started: started.UTC().Format(time.RFC3339), Seconds: time.Since(started).Seconds(), Workers: opt.Workers, Kernel: dense.Kernel(),
		Counts: map[string]int{
			"people": len(p.Cohort.People), "families": p.Cohort.Pedigree.Families(), "measures": len(p.measures),
			"people_groups": len(r.PeopleGroups), "prediction_scores": len(r.PredictionScores),
			"variables": len(r.Heritability), "exclusions": len(r.Exclusions), "warnings": len(r.Warnings),
		},
	}
	for _, f := range p.inputFiles() {
		rec.Inputs = append(rec.Inputs, recordedInput(f))
	}
	return rec
}

// inputFiles are the study file and all tables that were read.
func (p *Plan) inputFiles() []cohort.InputFile {
	files := append([]cohort.InputFile{p.studyFile}, p.Cohort.InputFiles...)
	return append(files, p.foldFiles...)
}

// Reserve begins the results folder, so that a folder that cannot be written
// is refused before the work and not after it.
func (p *Plan) Reserve(overwrite bool) (*tidy.Folder, error) {
	f, err := tidy.Create(p.Study.Path(p.Study.Output.Folder), overwrite)
	if err != nil {
		return nil, err
	}
	f.Title = p.Study.Title
	return f, nil
}

// Write writes all tables and the record, and puts the folder in its place.
func (r *Results) Write(f *tidy.Folder) error {
	text, err := json.MarshalIndent(r.record, "", "  ")
	if err != nil {
		return err
	}
	for _, write := range []func() error{
		func() error { return tidy.WriteTable(f, r.Relations) },
		func() error { return tidy.WriteTable(f, r.PeopleGroups) },
		func() error { return tidy.WriteTable(f, r.PredictionScores) },
		func() error { return tidy.WriteTable(f, r.Predictions) },
		func() error { return tidy.WriteTable(f, r.Penalties) },
		func() error { return tidy.WriteTable(f, r.Folds) },
		func() error { return tidy.WriteTable(f, r.InnerFolds) },
		func() error { return tidy.WriteTable(f, r.Weights) },
		func() error { return tidy.WriteTable(f, r.Heritability) },
		func() error { return tidy.WriteTable(f, r.VarianceComponents) },
		func() error { return tidy.WriteTable(f, r.VarianceModels) },
		func() error { return tidy.WriteTable(f, r.VarianceTests) },
		func() error { return tidy.WriteTable(f, r.TwinCorrelations) },
		func() error { return tidy.WriteTable(f, r.FixedEffects) },
		func() error { return tidy.WriteTable(f, r.Exclusions) },
		func() error { return tidy.WriteTable(f, r.Warnings) },
		func() error { return f.File("study_as_run.yaml", r.plan.asRun()) },
		func() error { return f.File(tidy.RecordName, append(text, '\n')) },
		func() error { return f.Commit() },
	} {
		if err := write(); err != nil {
			return err
		}
	}
	return nil
}

// asRun is the study with every default written out, under a line that says
// where its file names count from.
func (p *Plan) asRun() []byte {
	head := "# The study as it was run. File names count from the folder of the study file:\n" +
		"# to run it again, put this file beside that one and name another output folder.\n"
	return append([]byte(head), p.Study.AsRun()...)
}

// warnOfFormulas names the identifier cells that a spreadsheet would run.
func (r *Results) warnOfFormulas() {
	var cells []tidy.FormulaCell
	for _, found := range [][]tidy.FormulaCell{
		tidy.FormulaCells(r.PeopleGroups), tidy.FormulaCells(r.PredictionScores), tidy.FormulaCells(r.Predictions),
		tidy.FormulaCells(r.Penalties), tidy.FormulaCells(r.Folds), tidy.FormulaCells(r.InnerFolds), tidy.FormulaCells(r.Weights),
		tidy.FormulaCells(r.Heritability), tidy.FormulaCells(r.VarianceComponents), tidy.FormulaCells(r.VarianceModels),
		tidy.FormulaCells(r.VarianceTests), tidy.FormulaCells(r.TwinCorrelations), tidy.FormulaCells(r.FixedEffects),
		tidy.FormulaCells(r.Exclusions), tidy.FormulaCells(r.Warnings),
	} {
		cells = append(cells, found...)
	}
	type place struct{ table, column string }
	count := map[place]int{}
	var order []place
	for _, c := range cells {
		at := place{c.Table, c.Column}
		if count[at] == 0 {
			order = append(order, at)
		}
		count[at]++
	}
	for _, at := range order {
		r.Warnings = append(r.Warnings, tidy.Warning{Analysis: "tables", About: at.table + ".csv",
			Message: fmt.Sprintf("%d cells of column %s start like a formula; a spreadsheet would run them", count[at], at.column)})
	}
}

// Headline is what the end of a run shows.
func (r *Results) Headline() report.Found {
	p := r.plan
	found := report.Found{
		Title: p.Study.Title, Folder: p.Study.Path(p.Study.Output.Folder),
		People: len(p.Cohort.People), Families: p.Cohort.Pedigree.Families(),
		Scores: r.PredictionScores, Heritability: r.Heritability,
		Warnings: len(r.Warnings), Exclusions: len(r.Exclusions),
	}
	if p.Study.Predict != nil {
		found.Metric = string(p.Study.Predict.Metric)
	}
	if p.Study.Heritability != nil {
		found.Covariates = p.Study.Heritability.Covariates
	}
	return found
}
