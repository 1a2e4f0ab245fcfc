package config

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

// minimal is the shortest study that runs something.
const minimal = `kindwell: 1
seed: 7
people: {file: people.csv}
measures: {file: dynamics.csv, states_learned_on: no_states}
traits: {file: mood.csv, use: [wellbeing]}
`

// inGo compares what a study says, without where it says it.
var inGo = cmpopts.IgnoreUnexported(Study{})

func mustParse(t *testing.T, text string) *Study {
	t.Helper()
	study, err := Parse("study.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return study
}

// messages returns the faults of a text, each as line:column and message.
func messages(t *testing.T, text string) []string {
	t.Helper()
	_, err := Parse("study.yaml", []byte(text))
	if err == nil {
		return nil
	}
	var faults Faults
	if !errors.As(err, &faults) {
		t.Fatalf("%T is no Faults", err)
	}
	var lines []string
	for _, f := range faults {
		place, _, _ := strings.Cut(strings.TrimPrefix(f.Error(), "study.yaml:"), "\n")
		lines = append(lines, place)
	}
	return lines
}

func TestLoadServedExample(t *testing.T) {
	got, err := Load("testdata/served.yaml")
	if err != nil {
		t.Fatal(err)
	}
	want := &Study{
		Kindwell: 1, Title: "Saltmere families, resting EEG", Seed: 20260112,
		MissingCodes: []string{"-999", "1.10", "."},
		People: People{
			File: "people.csv", Columns: PeopleColumns{Person: "participant_id"},
			UnknownParents: FullSiblings, UnknownParent: SameParent, RearedWith: RearedWithMother,
			DZTwins: DZApart, StructureBy: []string{},
		},
		Measures: &Measures{
			File: "dynamics.csv", Session: "session", StatesLearnedOn: OtherPeople,
			Sets: Sets{
				{"occupancy", []string{"occupancy_*"}},
				{"timing", []string{"dwell_*", "interval_*", "switching_rate_hz"}},
				{"everything", []string{"*"}},
			},
			Transform: []Transform{
				{Match: []string{"occupancy_*"}, As: ScaleCLR, Composition: "occupancy", Zeros: 0.0005},
				{Match: []string{"dwell_*", "interval_*"}, As: ScaleLog},
			},
		},
		Traits: &Traits{
			Files: []string{"mood.csv", "/data/sleep.csv"},
			Use:   []string{"wellbeing", "fatigue", "sleep_quality"},
		},
		Confounds: Confounds{
			Use: []string{"age", "sex", "motion"}, Squares: []string{"age"},
			Products: [][2]string{{"age", "sex"}}, RareLevels: RareRefuse,
		},
		Missing: MissingDrop, PeopleOf: PeopleOfEach, Confidence: 0.95,
		Predict: &Predict{
			Sets:  []string{"occupancy", "timing", "everything"},
			Outer: Outer{Folds: 10, Repeats: 5}, Inner: Inner{Folds: 5},
			Penalties: Penalties{Low: 0.01, High: 1e6, Count: 25},
			Metric:    MetricRByFold, Permutations: 1000, Intervals: IntervalsResampled,
		},
		Heritability: &Heritability{
			Of: []Role{RoleMeasures, RoleTraits, RoleConfounds}, Full: ACE,
			Models: []Model{ACE, ADE, AE, CE, E}, Covariates: []string{"age", "sex"}, Likelihood: ML,
		},
		Output: Output{Folder: "results", IDs: IDsKeep},
	}
	if diff := cmp.Diff(want, got, inGo); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff([]string{"mood.csv", "/data/sleep.csv"}, got.Traits.Tables()); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff([]string{"dynamics.csv"}, got.Measures.Tables()); diff != "" {
		t.Error(diff)
	}
	if got, want := got.Path("mood.csv"), filepath.Join("testdata", "mood.csv"); got != want {
		t.Errorf("Path: %q, want %q", got, want)
	}
	if got, want := got.Path("/data/sleep.csv"), filepath.FromSlash("/data/sleep.csv"); got != want {
		t.Errorf("Path: %q, want %q", got, want)
	}
}

// TestWholeLayout reads a file that uses the whole layout: this version
// refuses exactly what it does not serve, and the structs hold all of it.
func TestWholeLayout(t *testing.T) {
	data, err := os.ReadFile("testdata/whole.yaml")
	if err != nil {
		t.Fatal(err)
	}
	want := []string{
		"22:3: `traits.binary` is not available in this version",
		"30:1: `primary` is not available in this version",
		"32:1: `associate` is not available in this version",
		"40:3: `predict.compare` is not available in this version",
		"41:3: `predict.negative_controls` is not available in this version",
		"47:3: `heritability.permutations` is not available in this version",
		"49:3: `heritability.pairs` is not available in this version",
	}
	if diff := cmp.Diff(want, messages(t, string(data))); diff != "" {
		t.Error(diff)
	}

	text := string(data) + `
metastates: {groups: groups.csv, per_fold: true}
alternatives: [{missing: training_mean}]
`
	text = strings.Replace(text, "questionnaires: {}", `questionnaires:
  mood: {file: items.csv, items: [m1, m2], reversed: [m2], range: [1, 5], score: mean, least_answered: 1}
`, 1)
	text = strings.Replace(text, "  file: dynamics.csv  ", "  sequences: {index: s.csv, rate_hz: 250, cut_visits: keep, events: e.csv, windows_s: [1, 2.5]}  ", 1)
	text = strings.Replace(text, "  negative_controls: true", `  negative_controls: true
  intervals: families
  subgroups: [sex]
  learning_curve: true
  fixed_penalty: 3
`, 1)
	study, faults := parse("study.yaml", []byte(text), true)
	if err := faults.Err(); err != nil {
		t.Fatal(err)
	}
	penalty := 3.0
	for _, c := range []struct{ got, want any }{
		{study.Questionnaires, Questionnaires{{Name: "mood", File: "items.csv", Items: []string{"m1", "m2"}, Reversed: []string{"m2"}, Range: [2]float64{1, 5}, Score: ScoreMean, Least: 1}}},
		{study.Metastates, &Metastates{Groups: "groups.csv", PerFold: true}},
		{study.Measures.Sequences, &Sequences{Index: "s.csv", RateHz: 250, CutVisits: CutVisitsKeep, Events: "e.csv", WindowsS: []float64{1, 2.5}}},
		{study.Primary, [][2]string{{"occupancy", "wellbeing"}}},
		{study.Associate, &Associate{Permutations: 10000, Bootstrap: 2000}},
		{study.Traits.Binary, []string{"insomnia"}},
		{study.Predict.Compare, [][2]string{{"occupancy", "everything"}}},
		{study.Predict.NegativeControls, true},
		{study.Predict.Intervals, IntervalsFamilies},
		{study.Predict.FixedPenalty, &penalty},
		{study.Heritability.Permutations, 1000},
		{study.Heritability.Pairs, [][2]string{{"occupancy_3", "wellbeing"}}},
	} {
		if diff := cmp.Diff(c.want, c.got); diff != "" {
			t.Error(diff)
		}
	}
}

func TestOffValuesOfLaterKeysAreAccepted(t *testing.T) {
	study := mustParse(t, `kindwell: 1
seed: 7
people: {file: people.csv}
measures: {file: dynamics.csv, states_learned_on: no_states, fold_files: {}}
traits: {file: mood.csv, use: [wellbeing], binary: []}
questionnaires: {}
primary: []
alternatives: []
confounds: {rare_levels: refuse}
predict: {compare: [], negative_controls: false, subgroups: [], learning_curve: false, intervals: resampled, outer: {stratify: false}}
heritability: {permutations: 0, repeated: false, pairs: [], extra_variance: [], liability: false, sex_differences: false, likelihood: ML}
output: {spreadsheet_safe: false}
`)
	if diff := cmp.Diff(mustParse(t, minimal+"predict: {}\nheritability: {}\n"), study, inGo); diff != "" {
		t.Error(diff)
	}
}

// TestTruthValues reads true and false where a later version will ask for
// them.
func TestTruthValues(t *testing.T) {
	for text, want := range map[string]string{
		"true": "", "false": "",
		`"true"`: "`heritability.repeated` must be true or false, found the text \"true\"; write `true`",
		"yes":    "`heritability.repeated` must be true or false, found the text \"yes\"; write `true`",
		"Off":    "`heritability.repeated` must be true or false, found the text \"Off\"; write `false`",
		"1":      "`heritability.repeated` must be true or false, found 1; write `true`",
		"maybe":  "`heritability.repeated` must be true or false, found the text \"maybe\"; ",
	} {
		study, faults := parse("study.yaml", []byte(minimal+"heritability: {repeated: "+text+"}\n"), true)
		got := ""
		if len(faults) == 1 {
			got = faults[0].Message + "; " + faults[0].Advice
		}
		if got != want || len(faults) > 1 || want == "" && study.Heritability.Repeated != (text == "true") {
			t.Errorf("%s: %q", text, faults)
		}
	}
}

func TestDefaultsThatFollow(t *testing.T) {
	base := "kindwell: 1\nseed: 7\npeople: {file: p.csv}\n"
	measures := "measures: {file: d.csv, states_learned_on: no_states}\n"
	traits := "traits: {use: [wellbeing]}\n"
	for _, c := range []struct {
		name, text string
		got        func(*Study) any
		want       any
	}{
		{"sets", base + measures, func(s *Study) any { return s.Measures.Sets }, Sets{{"everything", []string{"*"}}}},
		{"predict.sets", base + traits + "measures: {file: d.csv, states_learned_on: no_states, sets: {z: [a], b: [c]}}\npredict: {}\n",
			func(s *Study) any { return s.Predict.Sets }, []string{"z", "b"}},
		{"leave_out", base + measures + traits + "predict: {outer: {leave_out: family}}\n",
			func(s *Study) any { return []any{s.Predict.Outer, s.Predict.Metric} }, []any{Outer{LeaveOut: LeaveOutFamily}, MetricR2}},
		{"given folds", base + measures + traits + "predict: {outer: {file: f.csv}, inner: {file: i.csv}}\n",
			func(s *Study) any { return []any{s.Predict.Outer, s.Predict.Inner, s.Predict.Metric} },
			[]any{Outer{File: "f.csv"}, Inner{File: "i.csv"}, MetricRByFold}},
		{"repeats alone", base + measures + traits + "predict: {outer: {repeats: 2}}\n",
			func(s *Study) any { return s.Predict.Outer }, Outer{Folds: 10, Repeats: 2}},
		{"no test", base + measures + traits + "predict: {permutations: 0}\n",
			func(s *Study) any { return s.Predict.Permutations }, 0},
		{"of measures", base + measures + "heritability: {}\n", func(s *Study) any { return s.Heritability.Of }, []Role{RoleMeasures}},
		{"of traits", base + traits + "heritability: {}\n", func(s *Study) any { return s.Heritability.Of }, []Role{RoleTraits}},
		{"covariates", base + traits + "confounds: {use: [age, sex]}\nheritability: {}\n",
			func(s *Study) any { return s.Heritability.Covariates }, []string{"age", "sex"}},
		{"no covariates", base + traits + "confounds: {use: [age, sex]}\nheritability: {covariates: []}\n",
			func(s *Study) any { return s.Heritability.Covariates }, []string{}},
		{"traits of people", base + traits, func(s *Study) any { return s.Traits.Tables() }, []string(nil)},
		{"nothing to run", base + traits, func(s *Study) any { return s.Predict == nil && s.Heritability == nil }, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			study := mustParse(t, c.text)
			if diff := cmp.Diff(c.want, c.got(study)); diff != "" {
				t.Error(diff)
			}
			again, err := Parse("study.yaml", study.AsRun())
			if err != nil {
				t.Fatalf("%v\n%s", err, study.AsRun())
			}
			if diff := cmp.Diff(study, again, inGo); diff != "" {
				t.Error(diff)
			}
		})
	}
}

// TestTextIsKept reads text that other readers turn into numbers and words.
func TestTextIsKept(t *testing.T) {
	study := mustParse(t, minimal+`missing_codes: [-999, 1.10, 1.0, 007, 0x1F, 1e3, +5, true, No, .5, 1_000, 2020-01-01, 12:30, .inf, "~", 'it''s', "\u00e9", "null"]
title: 1.10  # not 1.1
`)
	want := []string{"-999", "1.10", "1.0", "007", "0x1F", "1e3", "+5", "true", "No", ".5", "1_000", "2020-01-01", "12:30", ".inf", "~", "it's", "é", "null"}
	if diff := cmp.Diff(want, study.MissingCodes); diff != "" {
		t.Error(diff)
	}
	if study.Title != "1.10" {
		t.Errorf("title %q", study.Title)
	}
	folded := mustParse(t, minimal+"title: >\n  Saltmere families,\n  resting EEG\n")
	if folded.Title != "Saltmere families, resting EEG" {
		t.Errorf("title %q", folded.Title)
	}
	people := mustParse(t, strings.Replace(minimal, "people.csv", "12", 1))
	if people.People.File != "12" {
		t.Errorf("file %q", people.People.File)
	}
}

func TestMarksAndLineEnds(t *testing.T) {
	want := mustParse(t, minimal)
	for name, text := range map[string]string{
		"byte-order mark": "\ufeff" + minimal,
		"Windows":         strings.ReplaceAll(minimal, "\n", "\r\n"),
		"old Mac":         strings.ReplaceAll(minimal, "\n", "\r"),
		"document marks":  "---\n" + minimal + "...\n",
		"comments":        "# a\n\n" + minimal + "\n# b\n",
		"harmless tabs":   strings.ReplaceAll(minimal, "\n", "\t\n\t\n") + "\t# a\tb\n",
		"no end":          strings.TrimRight(minimal, "\n"),
		"one section":     "{kindwell: 1, seed: 7, people: {file: people.csv}, measures: {file: dynamics.csv, states_learned_on: no_states}, traits: {file: mood.csv, use: [wellbeing]}}",
		"seed in limits":  strings.Replace(minimal, "seed: 7", "seed: +7", 1),
	} {
		if diff := cmp.Diff(want, mustParse(t, text), inGo); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
	}
	for _, end := range []string{"\n", "\r\n", "\r"} {
		got := messages(t, strings.ReplaceAll(minimal+"\nbad: 1\n", "\n", end))
		if want := []string{"7:1: unknown key `bad` at the top of the file"}; !cmp.Equal(got, want) {
			t.Errorf("line end %q: %q", end, got)
		}
	}
	big := mustParse(t, strings.Replace(minimal, "seed: 7", "seed: 9223372036854775807", 1))
	if big.Seed != 1<<63-1 {
		t.Errorf("seed %d", big.Seed)
	}
}

// TestFaultsOfBytes are faults that the golden file cannot hold.
func TestFaultsOfBytes(t *testing.T) {
	for _, c := range []struct{ name, text, want string }{
		{"empty", "", "1:1: the file is empty"},
		{"blank lines", "\n\n", "1:1: the file is empty"},
		{"comments", "# kindwell: 1\n", "1:1: the file is empty"},
		{"mark alone", "\ufeff", "1:1: the file is empty"},
		{"document mark alone", "---\n", "1:1: the file is empty"},
		{"empty first document", "---\n---\n" + minimal, "2:1: a second document begins here"},
		{"after the end", minimal + "...\nseed: 8\n", "7:1: a second document begins here"},
		{"two empty documents", minimal + "---\n", "6:1: a second document begins here"},
		{"directive", "%YAML 1.2\n---\n" + minimal, "1:1: lines and values that begin with `%` have no meaning in a study file"},
		{"UTF-16", "\xff\xfek\x00", "1:1: the file is encoded as UTF-16"},
		{"Latin-1", "title: Andr\xe9\n", "1:12: this character is not UTF-8"},
		{"zero byte", "kindwell: 1\ntitle: a\x00b\n", "2:9: a study file cannot hold the character U+0000"},
		{"mark inside", "kindwell: 1\n\ufeffseed: 7\n", "2:1: a study file cannot hold the character U+FEFF"},
		{"a table", strings.Repeat("1,2,3\n", 1<<16), "1:1: the file has 393216 bytes; a study file has at most 131072"},
		{"deep", strings.Repeat("- ", 1<<15), "1:25: lists and sections are nested too deep"},
		{"deep lists", strings.Repeat("[", 1<<16), "1:25: lists and sections are nested too deep"},
		{"deep sections", strings.Repeat("{a: ", 1<<14), "1:97: lists and sections are nested too deep"},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := messages(t, c.text)
			if len(got) == 0 || got[0] != c.want {
				t.Errorf("%q, want %q", got, c.want)
			}
		})
	}
}

func TestLoadWithoutFile(t *testing.T) {
	_, err := Load(filepath.Join(t.TempDir(), "study.yaml"))
	if !errors.Is(err, os.ErrNotExist) {
		t.Errorf("error %v", err)
	}
	var faults Faults
	if errors.As(err, &faults) {
		t.Error("a missing file is no fault in a file")
	}
}
