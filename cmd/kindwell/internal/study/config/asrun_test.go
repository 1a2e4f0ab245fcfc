package config

import (
	"fmt"
	"reflect"
	"strings"
	"testing"
	"unicode"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// odd is text that readers of YAML are tempted to take for something else.
var odd = []string{
	"1.10", "007", "-999", "true", "No", "null", "~", "*", "dwell_*", "a: b", "a #b", "#", "- a", "-", "[a]", "{a}",
	"'", "\"", "\\", "it's", "100 %", "%", "@x", "`", "!tag", "&a", "?", "a,b", " lead", "trail ", "1e3", ".inf",
	"2020-01-01", "12:30", "日本", "é", "a\u2028b", "\u00a0", "😀", "=", "<<", "|", ">", "y", "0x1F", "_", "...", "---",
}

func drawText() *rapid.Generator[string] {
	anyText := rapid.StringOfN(rapid.Rune().Filter(func(r rune) bool {
		return !unicode.IsControl(r) && r != '\ufeff' && r != unicode.ReplacementChar
	}), 1, 12, -1)
	return rapid.OneOf(rapid.SampledFrom(odd), rapid.StringMatching(`[a-z_]{1,8}`), anyText)
}

// drawNames draws between least and 5 different texts.
func drawNames(t *rapid.T, label string, least int) []string {
	return rapid.SliceOfNDistinct(drawText(), least, 5, rapid.ID[string]).Draw(t, label)
}

// maybe draws text or none.
func maybe(t *rapid.T, label string) string {
	if rapid.Bool().Draw(t, label+" given") {
		return drawText().Draw(t, label)
	}
	return ""
}

// drawWord draws a word that this version serves, narrowed to some.
func drawWord[W interface {
	~string
	chooser
}](t *rapid.T, some ...string) W {
	var zero W
	return W(rapid.SampledFrom(servedNames(choicesOf(reflect.TypeOf(zero), some))).Draw(t, fmt.Sprintf("%T", zero)))
}

func drawPositive(t *rapid.T, label string) float64 {
	return rapid.Float64Range(1e-300, 1e300).Draw(t, label)
}

// drawStudy draws a study that breaks no rule.
func drawStudy(t *rapid.T) *Study {
	s := &Study{
		Kindwell: 1, Title: maybe(t, "title"), Seed: rapid.Uint64Max(1<<63-1).Draw(t, "seed"),
		MissingCodes: drawNames(t, "missing_codes", 0),
		People: People{
			File:           drawText().Draw(t, "people.file"),
			UnknownParents: drawWord[UnknownParents](t), UnknownParent: drawWord[UnknownParent](t),
			RearedWith: drawWord[RearedWith](t), DZTwins: drawWord[DZTwins](t),
			StructureBy: drawNames(t, "structure_by", 0),
		},
		Missing: drawWord[Missing](t), PeopleOf: drawWord[PeopleOf](t),
		Confidence: rapid.Float64Range(1e-12, 1-1e-12).Draw(t, "confidence"),
		Output:     Output{Folder: "results-" + drawText().Draw(t, "folder"), IDs: IDsKeep},
		Confounds:  drawConfounds(t),
	}
	columns := rapid.SliceOfNDistinct(drawText(), 3, 3, rapid.ID[string]).Draw(t, "columns")
	s.People.Columns.Person, s.People.Columns.TwinSet, s.People.Session = columns[0], columns[1], columns[2]
	s.Traits = &Traits{Session: maybe(t, "traits.session")}
	for _, name := range drawNames(t, "traits.use", 1) {
		s.Traits.Use = append(s.Traits.Use, "trait "+name)
	}
	if rapid.Bool().Draw(t, "traits.files given") {
		s.Traits.Files = drawNames(t, "traits.files", 1)
	}
	if rapid.Bool().Draw(t, "measures given") {
		s.Measures = drawMeasures(t)
		if rapid.Bool().Draw(t, "predict given") {
			s.Predict = drawPredict(t, s.Measures.Sets.Names())
		}
	}
	if rapid.Bool().Draw(t, "heritability given") {
		s.Heritability = drawHeritability(t, s)
	}
	return s
}

func drawConfounds(t *rapid.T) Confounds {
	c := Confounds{Use: drawNames(t, "confounds.use", 0), Squares: []string{}, Products: [][2]string{}, RareLevels: RareRefuse}
	if len(c.Use) > 1 {
		c.Squares = append(c.Squares, c.Use[1])
		c.Products = append(c.Products, [2]string{c.Use[1], c.Use[0]})
	}
	return c
}

func drawMeasures(t *rapid.T) *Measures {
	m := &Measures{File: drawText().Draw(t, "measures.file"), Session: maybe(t, "measures.session"), StatesLearnedOn: drawWord[LearnedOn](t), Transform: []Transform{}}
	for _, name := range drawNames(t, "sets", 1) {
		m.Sets = append(m.Sets, Set{name, drawNames(t, "patterns", 1)})
	}
	for i, pattern := range drawNames(t, "match", 0) {
		rule := Transform{Match: []string{pattern}, As: drawWord[Scale](t)}
		if rule.As == ScaleCLR {
			rule.Composition = fmt.Sprint(drawText().Draw(t, "composition"), i)
			if rapid.Bool().Draw(t, "zeros given") {
				rule.Zeros = rapid.Float64Range(1e-9, 0.1).Draw(t, "zeros")
			}
		}
		m.Transform = append(m.Transform, rule)
	}
	return m
}

func drawPredict(t *rapid.T, sets []string) *Predict {
	low := drawPositive(t, "low")
	p := &Predict{
		Sets: sets[:rapid.IntRange(1, len(sets)).Draw(t, "sets of predict")],
		Penalties: Penalties{Low: low, High: low * rapid.Float64Range(1.001, 1e7).Draw(t, "ratio"),
			Count: rapid.IntRange(2, 1000).Draw(t, "count")},
		Metric:       drawWord[Metric](t),
		Permutations: rapid.OneOf(rapid.Just(0), rapid.IntRange(19, 10000000)).Draw(t, "permutations"),
		Intervals:    IntervalsResampled,
		Inner:        Inner{Folds: rapid.IntRange(2, 50).Draw(t, "inner folds")},
	}
	switch rapid.IntRange(0, 2).Draw(t, "outer") {
	case 0:
		p.Outer = Outer{Folds: rapid.IntRange(2, 50).Draw(t, "folds"), Repeats: rapid.IntRange(1, 100).Draw(t, "repeats")}
	case 1:
		p.Outer, p.Metric = Outer{LeaveOut: LeaveOutFamily}, MetricR2
	case 2:
		p.Outer, p.Inner = Outer{File: drawText().Draw(t, "outer.file")}, Inner{File: drawText().Draw(t, "inner.file")}
	}
	return p
}

func drawHeritability(t *rapid.T, s *Study) *Heritability {
	h := &Heritability{Of: []Role{RoleTraits}, Full: drawWord[Model](t, "ACE", "ADE", "AE", "CE"), Likelihood: ML, Covariates: drawNames(t, "covariates", 0)}
	if s.Measures != nil {
		h.Of = append(h.Of, RoleMeasures)
	}
	if len(s.Confounds.Use) > 0 {
		h.Of = append(h.Of, RoleConfounds)
	}
	h.Models = []Model{h.Full, E}
	return h
}

// TestAsRunReadsBack writes drawn studies and reads them back: the study is
// the same, the schema accepts it, and every value stands where At says.
func TestAsRunReadsBack(t *testing.T) {
	schema := compiledSchema(t)
	rapid.Check(t, func(t *rapid.T) {
		want := drawStudy(t)
		text := want.AsRun()
		got, err := Parse("study.yaml", text)
		if err != nil {
			t.Fatalf("%v\n%s", err, text)
		}
		if diff := cmp.Diff(want, got, inGo); diff != "" {
			t.Fatalf("%s\n%s", diff, text)
		}
		if again := got.AsRun(); string(again) != string(text) {
			t.Fatalf("written anew it differs:\n%s\n%s", text, again)
		}
		if err := schema.Validate(instance(t, text)); err != nil {
			t.Fatalf("%v\n%s", err, text)
		}
		checkAt(t, got, reflect.ValueOf(got).Elem(), "")
	})
}

type fataler interface {
	Helper()
	Fatalf(string, ...any)
}

// checkAt tests that each value that is written stands where At says.
func checkAt(t fataler, s *Study, v reflect.Value, path string) {
	t.Helper()
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() {
			checkAt(t, s, v.Elem(), path)
		}
		return
	case reflect.Struct:
		for _, f := range fieldsOf(v.Type()) {
			if shows(&f, v.Field(f.index)) {
				checkAt(t, s, v.Field(f.index), join(path, f.name))
			}
		}
		return
	case reflect.Slice, reflect.Array:
		list, isNamed := namedOf(v.Type())
		for i := range v.Len() {
			if isNamed {
				e := v.Index(i)
				checkAt(t, s, e.Field(list.value), join(path, e.Field(list.name).String()))
				continue
			}
			checkAt(t, s, v.Index(i), element(path, i))
		}
		return
	}
	var w writer
	w.flow(v)
	at := s.At(path)
	if !s.Given(path) || at.Column < 1 || !strings.HasPrefix(string([]rune(at.Source)[at.Column-1:]), w.String()) {
		t.Fatalf("%s is %s, and at %d:%d stands %q", path, w.String(), at.Line, at.Column, at.Source)
	}
}

// TestAsRunOfExample compares the whole text for one study.
func TestAsRunOfExample(t *testing.T) {
	study, err := Load("testdata/served.yaml")
	if err != nil {
		t.Fatal(err)
	}
	const want = `# The study as it was run: every default is filled in.
kindwell: 1
title: "Saltmere families, resting EEG"
seed: 20260112
missing_codes: ["-999", "1.10", "."]
people:
  file: people.csv
  columns:
    person: participant_id
  unknown_parents: full_siblings
  unknown_parent: same
  reared_with: mother
  dz_twins: apart
  structure_by: []
measures:
  file: dynamics.csv
  session: session
  states_learned_on: other_people
  sets:
    occupancy: ["occupancy_*"]
    timing: ["dwell_*", "interval_*", switching_rate_hz]
    everything: ["*"]
  transform:
    - {match: ["occupancy_*"], as: clr, composition: occupancy, zeros: 0.0005}
    - {match: ["dwell_*", "interval_*"], as: log}
traits:
  files: [mood.csv, "/data/sleep.csv"]
  use: [wellbeing, fatigue, sleep_quality]
confounds:
  use: [age, sex, motion]
  squares: [age]
  products: [[age, sex]]
  rare_levels: refuse
missing: drop
people_of: each
confidence: 0.95
predict:
  sets: [occupancy, timing, everything]
  outer:
    folds: 10
    repeats: 5
  inner:
    folds: 5
  penalties:
    low: 0.01
    high: 1e+06
    count: 25
  metric: r_by_fold
  permutations: 1000
  intervals: resampled
heritability:
  of: [measures, traits, confounds]
  full: ACE
  models: [ACE, ADE, AE, CE, E]
  covariates: [age, sex]
  likelihood: ML
output:
  folder: results
  ids: keep
`
	if diff := cmp.Diff(want, string(study.AsRun())); diff != "" {
		t.Error(diff)
	}
}
