package study

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/twin"
)

// Plan is a study whose tables are read and whose names are resolved: all
// that a run needs, before anything is computed.
type Plan struct {
	Study  *config.Study
	Cohort *cohort.Cohort

	measures   []*measure
	sets       []measureSet
	predicting []measureSet // the sets of predict.sets
	groups     []group
	variables  []variable
	studyFile  cohort.InputFile
	foldTable  *cohort.FoldTable // nil without given folds
	foldFiles  []cohort.InputFile
	exclusions []tidy.Exclusion
	warnings   []tidy.Warning
}

// group is a group of traits that the same people have, and those people.
type group struct {
	traits []string
	rows   []int // people, by row of the people table
}

// variable is one whose variance is divided.
type variable struct {
	name      string
	role      string // measure, trait, confound
	transform config.Scale
	values    []float64 // one a person, NaN where missing
	measure   *measure  // nil unless it is one
	// covariates are those fitted with it, without itself.
	covariates columns
}

// valuesOf returns the values of some people, with ranks taken among them when
// the scale asks for it.
func (v *variable) valuesOf(rows []int) []float64 {
	if v.measure != nil {
		return v.measure.ranked(rows)
	}
	return pick(v.values, rows)
}

// Open reads a study file and its tables and resolves every name.
func Open(path string) (*Plan, error) {
	s, err := config.Load(path)
	if err != nil {
		return nil, unread(path, err)
	}
	c, err := cohort.Load(inputs(s))
	if err != nil {
		return nil, err
	}
	p, err := newPlan(s, c)
	if err != nil {
		return nil, err
	}
	if p.studyFile, err = digest(path); err != nil {
		return nil, unread(path, err)
	}
	return p, nil
}

// digest records the study file among the inputs, by its base name.
func digest(path string) (cohort.InputFile, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return cohort.InputFile{}, err
	}
	sum := sha256.Sum256(data)
	return cohort.InputFile{File: filepath.Base(path), SHA256: hex.EncodeToString(sum[:]), Bytes: int64(len(data))}, nil
}

// unread says why a study file could not be read at all; other errors are
// faults in it already.
func unread(path string, err error) error {
	message := ""
	switch {
	case errors.Is(err, fs.ErrNotExist):
		message = "there is no such study file; kindwell init writes one from a folder of tables"
	case errors.Is(err, fs.ErrPermission):
		message = "the study file may not be read"
	default:
		if info, statErr := os.Stat(path); statErr != nil || !info.IsDir() {
			return err
		}
		message = "is a folder; name the study file in it"
	}
	return &cohort.Fault{File: path, Message: message}
}

// newPlan resolves the names of a study against its tables.
func newPlan(s *config.Study, c *cohort.Cohort) (*Plan, error) {
	p := &Plan{Study: s, Cohort: c}
	for _, w := range c.Warnings {
		p.warn(w.Analysis, w.About, w.Message)
	}
	for _, e := range c.Exclusions {
		p.exclusions = append(p.exclusions, tidy.Exclusion(e))
	}
	var f faults
	p.checkColumns(&f)
	p.scaleMeasures(&f)
	p.resolveSets(&f)
	p.checkInbreeding(&f)
	if err := f.err(); err != nil {
		return nil, err
	}
	p.doubt()
	if s.Predict == nil && s.Heritability == nil {
		p.warn("study", "", "neither predict nor heritability is asked for: a run counts relations and nothing else")
	}
	if s.Predict != nil {
		p.choosePredicting()
		p.makeGroups()
		if err := p.readFolds(); err != nil {
			return nil, err
		}
	}
	if s.Heritability != nil {
		p.chooseVariables()
	}
	return p, nil
}

// inputs says which tables a study needs and what it needs of them.
func inputs(s *config.Study) cohort.Inputs {
	in := cohort.Inputs{
		Folder:       s.Path("."),
		MissingCodes: s.MissingCodes,
		People: cohort.PeopleInput{
			File:    s.People.File,
			Columns: peopleColumns(s.People.Columns),
			Session: s.People.Session,
			Rules:   rules(s.People),
		},
		Use: []string{},
	}
	if m := s.Measures; m != nil {
		in.Measures = &cohort.MeasuresInput{Files: m.Tables(), Person: m.Columns.Person, Session: m.Session, Use: []string{}}
		for _, set := range m.Sets {
			in.Measures.Use = append(in.Measures.Use, set.Patterns...)
		}
		for _, t := range m.Transform {
			in.Measures.Use = append(in.Measures.Use, t.Match...)
		}
	}
	if t := s.Traits; t != nil {
		for _, file := range t.Tables() {
			in.Traits = append(in.Traits, cohort.TableInput{File: file, Person: t.Columns.Person, Session: t.Session})
		}
		in.Use = append(in.Use, t.Use...)
		in.Numeric = t.Use
	}
	in.Use = append(in.Use, s.Confounds.Use...)
	in.Use = append(in.Use, s.People.StructureBy...)
	if s.Heritability != nil {
		in.Use = append(in.Use, s.Heritability.Covariates...)
	}
	return in
}

func peopleColumns(c config.PeopleColumns) map[string]string {
	return map[string]string{
		"person": c.Person, "family": c.Family, "mother": c.Mother, "father": c.Father,
		"twin_set": c.TwinSet, "zygosity": c.Zygosity, "mz_set": c.MZSet, "reared_in": c.RearedIn,
		"birth_order": c.BirthOrder, "sex": c.Sex, "age": c.Age,
	}
}

// rules turns the words of the study file into those of the pedigree.
func rules(p config.People) twin.Rules {
	var r twin.Rules
	if p.UnknownParents == config.Unrelated {
		r.UnknownParents = twin.AssumeUnrelated
	}
	if p.UnknownParent == config.OtherParent {
		r.UnknownParent = twin.AssumeOtherParent
	}
	if p.RearedWith == config.RearedWithBoth {
		r.RearedWith = twin.WithBoth
	}
	return r
}

// warn adds a row of warnings.csv.
func (p *Plan) warn(analysis, about, message string) {
	p.warnings = append(p.warnings, tidy.Warning{Analysis: analysis, About: about, Message: message})
}

// checkColumns checks that traits, confounds and covariates are columns, and
// that traits are numbers.
func (p *Plan) checkColumns(f *faults) {
	s, c := p.Study, p.Cohort
	names := c.Available
	known := func(name, path string) *cohort.Variable {
		v := c.Variables[name]
		if v == nil {
			f.name(s, path, fmt.Sprintf("%q is no column of the people or traits tables", name), name, names)
		}
		return v
	}
	if s.Traits != nil {
		for i, name := range s.Traits.Use {
			path := fmt.Sprintf("traits.use[%d]", i)
			v := known(name, path)
			if v != nil && !v.Numeric {
				f.study(s, path, fmt.Sprintf("trait %q holds words, not numbers", name), "code it as numbers; categories can be confounds")
			}
		}
	}
	for i, name := range s.Confounds.Use {
		known(name, fmt.Sprintf("confounds.use[%d]", i))
	}
	for i, name := range s.Confounds.Squares {
		path := fmt.Sprintf("confounds.squares[%d]", i)
		if v := known(name, path); v != nil && !v.Numeric {
			f.study(s, path, fmt.Sprintf("%q holds words and has no square", name), "")
		}
	}
	for i, name := range s.People.StructureBy {
		known(name, fmt.Sprintf("people.structure_by[%d]", i))
	}
	if s.Predict != nil && s.Predict.Inner.File != "" && s.Predict.Outer.File == "" {
		f.study(s, "predict.inner.file", "inner folds are given without outer folds, inside which they would lie", "give outer folds, too (outer: {file: NAME}), or a number of inner folds (inner: {folds: 5})")
	}
	if s.Heritability != nil && s.Given("heritability.covariates") {
		for i, name := range s.Heritability.Covariates {
			known(name, fmt.Sprintf("heritability.covariates[%d]", i))
		}
	}
}

// checkInbreeding refuses models with dominance where somebody's parents are
// related. Where no model was named, they are left out of the default list.
func (p *Plan) checkInbreeding(f *faults) {
	h := p.Study.Heritability
	person, found := p.Cohort.Pedigree.Inbred()
	if h == nil || !found || !slices.Contains(h.Models, config.ADE) {
		return
	}
	fault := &cohort.Fault{
		File: p.Study.People.File, Row: p.Cohort.Lines[person], Column: "person", Value: p.Cohort.People[person],
		Message: "has parents who are related, and dominance (model ADE) is not defined then; leave ADE out of heritability.models",
	}
	if h.Full == config.ADE {
		fault.Message = "has parents who are related, and dominance (full: ADE) is not defined then; choose full: ACE or AE"
	}
	if shared := p.Cohort.SharedParents(); len(shared) > 0 {
		fault.Message += fmt.Sprintf("; but first look at %s %q, who %s", shared[0].Role, shared[0].ID, shared[0])
	}
	if p.Study.Given("heritability.models") || h.Full == config.ADE {
		f.cells = append(f.cells, fault)
		return
	}
	h.Models = slices.DeleteFunc(slices.Clone(h.Models), func(m config.Model) bool { return m == config.ADE })
	p.warn("heritability", "models", fmt.Sprintf("%s, row %d: a person has parents who are related; model ADE is not defined then and left out", fault.File, fault.Row))
}

// choosePredicting finds the sets that predict.
func (p *Plan) choosePredicting() {
	for _, name := range p.Study.Predict.Sets {
		i := slices.IndexFunc(p.sets, func(s measureSet) bool { return s.name == name })
		p.predicting = append(p.predicting, p.sets[i])
	}
}
