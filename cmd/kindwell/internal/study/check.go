package study

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"strings"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"kindwell/cmd/kindwell/internal/report"
	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/predict"
	"kindwell/twin"
)

// Effects that a sample can see are those found with this power at this level.
const (
	detectAlpha = 0.05
	detectPower = 0.80
)

// Check says what a study holds and what a run of it would do. It makes the
// folds and counts the arrangements, but fits nothing.
func (p *Plan) Check() (report.Checked, error) {
	c := p.Cohort
	checked := report.Checked{
		Title: p.Study.Title, People: len(c.People), Families: c.Pedigree.Families(),
		Sibships: p.sibships(), Measures: len(p.measures), Sessions: p.sessions(),
		Variables: len(p.variables), DetectableA2: report.Float(math.NaN()),
		Files: []report.CheckedFile{}, Relations: []report.Relation{}, Missing: []report.Missing{},
		Groups: []report.CheckedGroup{}, Work: []string{},
	}
	for _, r := range p.relations() {
		checked.Relations = append(checked.Relations, report.Relation(r))
	}
	checked.Missing = append(checked.Missing, p.missingValues()...)
	warnings := append([]tidy.Warning(nil), p.warnings...)
	for i := range p.groups {
		g, notes, err := p.checkGroup(i)
		if err != nil {
			return checked, err
		}
		checked.Groups = append(checked.Groups, g)
		warnings = append(warnings, notes...)
	}
	for _, f := range p.inputFiles() {
		checked.Files = append(checked.Files, report.CheckedFile{Name: f.File, SHA256: f.SHA256, Bytes: f.Bytes})
	}
	if p.Study.Heritability != nil {
		warnings = append(warnings, p.checkFullModel()...)
		pairs := p.countPairs(p.everyone())
		checked.DetectableA2 = report.Float(twin.DetectableA2(len(pairs.mz), len(pairs.dz), detectAlpha, detectPower))
	}
	checked.Work = append(checked.Work, p.work()...)
	checked.Warnings = report.Notes(warnings)
	return checked, nil
}

// checkGroup looks at one group of people: folds, arrangements, confounds.
func (p *Plan) checkGroup(i int) (report.CheckedGroup, []tidy.Warning, error) {
	g := &p.groups[i]
	checked := report.CheckedGroup{Traits: g.traits, People: len(g.rows), Families: p.familyCount(g.rows), DetectableR: report.Float(detectableR(len(g.rows)))}
	if err := p.enoughPeople(g); err != nil {
		return checked, nil, err
	}
	if _, err := p.foldsOf(i); err != nil {
		return checked, nil, err
	}
	notes := p.groupWarnings(g)
	exchange, err := p.exchangeOf(g)
	if err != nil {
		return checked, nil, err
	}
	checked.Log10Arrangements = exchange.Log10()
	checked.FamiliesFixed = exchange.FamiliesFixed()
	for _, s := range exchange.Structures() {
		checked.Structures = append(checked.Structures, report.Structure{Size: s.Size, Families: s.Families, Symmetries: shortInt(s.Symmetries)})
	}
	confounds := designOf(p.Cohort, confoundColumns(p.Study.Confounds), g.rows)
	traits := p.traitMatrix(g)
	residuals, err := predict.Residuals(traits, confounds.matrix)
	if err != nil {
		return checked, nil, fmt.Errorf("%s: %s", strings.Join(g.traits, ", "), plain(err))
	}
	notes = append(notes, emptyTraits(g, traits, residuals)...)
	if confounds.matrix != nil {
		shares, err := predict.ExplainedShare(traits, confounds.matrix)
		if err != nil {
			return checked, nil, fmt.Errorf("confounds: %s", plain(err))
		}
		for _, s := range shares {
			checked.Explained = append(checked.Explained, report.Float(s))
		}
	}
	return checked, notes, nil
}

// checkFullModel fits the full model to one variable, to say early that these
// families cannot tell its components apart.
func (p *Plan) checkFullModel() []tidy.Warning {
	for i := range p.variables {
		var d divided
		v := &p.variables[i]
		rows := p.withKnownZygosity(v, p.variableRows(v, &d), &d)
		if sameInTwins(v.values, p.countPairs(rows)) != "" {
			continue
		}
		covariates := designOf(p.Cohort, v.covariates, rows)
		sample, err := twin.NewSample(p.Cohort.Pedigree, rows, v.valuesOf(rows), covariates.matrix, covariates.names)
		if err != nil {
			continue
		}
		full, err := twin.ParseModel(string(p.Study.Heritability.Full))
		if err != nil {
			panic("study: " + err.Error()) // the study file knows no other models
		}
		_, err = sample.Fit(full, twin.FitOptions{})
		var unidentified *twin.UnidentifiedError
		if errors.As(err, &unidentified) {
			return []tidy.Warning{{Analysis: "heritability", About: "full", Message: fmt.Sprintf("%s; nothing is reported under full: %s, choose another", unidentified, full)}}
		}
		return nil
	}
	return nil
}

// shortInt writes a number of symmetries, in powers of ten when it is long.
func shortInt(n *big.Int) string {
	text := n.String()
	if len(text) <= 9 {
		return text
	}
	return fmt.Sprintf("%c.%se%d", text[0], text[1:3], len(text)-1)
}

// detectableR is the least correlation that n independent people show with a
// power of 0.8 in a two-sided test at .05, by Fisher's z (1921).
func detectableR(n int) float64 {
	if n <= 3 {
		return math.NaN()
	}
	z := distuv.UnitNormal.Quantile(1-detectAlpha/2) + distuv.UnitNormal.Quantile(detectPower)
	return math.Tanh(z / math.Sqrt(float64(n-3)))
}

// sibships counts the sibships of two people or more.
func (p *Plan) sibships() int {
	sizes := map[int]int{}
	n := 0
	for i := range p.Cohort.People {
		if s := p.Cohort.Pedigree.Sibship(i); s >= 0 {
			if sizes[s]++; sizes[s] == 2 {
				n++
			}
		}
	}
	return n
}

// sessions says how many sessions people have.
func (p *Plan) sessions() *report.Sessions {
	if p.Study.Measures == nil || p.Study.Measures.Session == "" {
		return nil
	}
	count := map[int]int{}
	for _, r := range p.Cohort.Measures.Rows {
		count[r.Person]++
	}
	several := 0
	for _, n := range count {
		if n > 1 {
			several++
		}
	}
	return &report.Sessions{Sessions: len(p.Cohort.Measures.Rows), People: len(count), Several: several}
}

// missingValues counts who lacks a variable, for those that anybody lacks.
func (p *Plan) missingValues() []report.Missing {
	var found []report.Missing
	for _, name := range p.Cohort.Names {
		v, n := p.Cohort.Variables[name], 0
		for row := range p.Cohort.People {
			if v.Missing(row) {
				n++
			}
		}
		if n > 0 {
			found = append(found, report.Missing{Variable: name, People: n})
		}
	}
	for _, m := range p.measures {
		n := 0
		for _, v := range m.values {
			if math.IsNaN(v) {
				n++
			}
		}
		if n > 0 {
			found = append(found, report.Missing{Variable: m.name, People: n})
		}
	}
	return found
}

// work counts what a run computes.
func (p *Plan) work() []string {
	var lines []string
	if s := p.Study.Predict; s != nil {
		traits := 0
		for _, g := range p.groups {
			traits += len(g.traits)
		}
		arrangements := "without a test"
		if s.Permutations > 0 {
			arrangements = fmt.Sprintf("each again for up to %d arrangements of the trait", s.Permutations)
		}
		lines = append(lines, fmt.Sprintf("predictions of traits (%d) from sets of measures (%d), %s", traits, len(p.predicting), arrangements))
	}
	if s := p.Study.Heritability; s != nil {
		lines = append(lines, fmt.Sprintf("variance models (%d) of variables (%d)", len(s.Models), len(p.variables)))
	}
	return lines
}

// familyCount counts the families of some people.
func (p *Plan) familyCount(rows []int) int {
	seen := map[int]bool{}
	for _, row := range rows {
		seen[p.Cohort.Pedigree.Family(row)] = true
	}
	return len(seen)
}

// traitMatrix holds the traits of a group, a row a person.
func (p *Plan) traitMatrix(g *group) *mat.Dense {
	m := mat.NewDense(len(g.rows), len(g.traits), nil)
	for j, name := range g.traits {
		m.SetCol(j, pick(p.Cohort.Variables[name].Values, g.rows))
	}
	return m
}
