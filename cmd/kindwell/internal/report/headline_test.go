package report

import (
	"encoding/json"
	"errors"
	"math"
	"strings"
	"testing"

	"kindwell/cmd/kindwell/internal/tidy"
)

func score(trait string, value, p, fwer float64) tidy.PredictionScore {
	s := tidy.Blank[tidy.PredictionScore]()
	s.Trait, s.Set, s.Metric, s.Tested = trait, "all", "r_by_fold", true
	s.Value, s.P, s.PFWER, s.Permutations, s.Confidence = value, p, fwer, tidy.Int(999), 0.9
	s.Low, s.High = value-0.1, value+0.1
	return s
}

// TestHeadlineOrder: the clearest first, a missing p last, untested rows not at
// all, and no more than twelve rows.
func TestHeadlineOrder(t *testing.T) {
	untested := score("untested", 0.9, 0.001, 0.001)
	untested.Metric = "r2"
	f := Found{Metric: "r_by_fold", Scores: []tidy.PredictionScore{
		score("missing", 0.5, math.NaN(), math.NaN()), untested,
		score("second", 0.2, 0.01, 0.05), score("first", 0.3, 0.01, 0.05), score("third", 0.4, 0.02, 0.06),
	}}
	for range 10 {
		f.Scores = append(f.Scores, score("filler", 0.01, 0.5, 0.9))
	}
	var b strings.Builder
	if err := Headline(&b, f); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	at := -1
	for _, word := range []string{"first", "second", "third", "filler"} {
		next := strings.Index(text, word)
		if next <= at {
			t.Errorf("%s is out of order in\n%s", word, text)
		}
		at = next
	}
	if strings.Contains(text, "untested") || strings.Contains(text, "missing") {
		t.Errorf("rows that should not be there:\n%s", text)
	}
	for _, want := range []string{"and 2 more in prediction_scores.csv", "r_by_fold, 999 arrangements", "90 %", "For research only"} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is missing in\n%s", want, text)
		}
	}
}

// TestHeadlineShowsD for a model with dominance, and leaves out what was not
// fitted.
func TestHeadlineShowsD(t *testing.T) {
	fitted, left := tidy.Blank[tidy.Heritability](), tidy.Blank[tidy.Heritability]()
	fitted.Variable, fitted.Model, fitted.A2, fitted.D2, fitted.E2, fitted.P = "height", "ADE", 0.4, 0.35, 0.25, 3e-7
	left.Variable, left.Model, left.Flags = "age", "ADE", "same_in_twins"
	var b strings.Builder
	if err := Headline(&b, Found{Heritability: []tidy.Heritability{left, fitted}, Covariates: []string{"sex"}}); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	for _, want := range []string{"model ADE, covariates sex", "d2", "0.35", "3e-07"} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is missing in\n%s", want, text)
		}
	}
	if !strings.Contains(text, "no estimates for 1: age (same_in_twins)") || strings.Count(text, "age") != 1 {
		t.Errorf("a variable that was not fitted is named at the end, once:\n%s", text)
	}
}

type brokenWriter struct{}

var errBroken = errors.New("broken pipe")

func (brokenWriter) Write([]byte) (int, error) { return 0, errBroken }

func TestWritersThatFail(t *testing.T) {
	if err := Headline(brokenWriter{}, Found{}); !errors.Is(err, errBroken) {
		t.Errorf("headline: %v", err)
	}
	if err := CheckText(brokenWriter{}, Checked{}); !errors.Is(err, errBroken) {
		t.Errorf("check: %v", err)
	}
}

// TestCheckJSON: a missing number is null and lists are never null.
func TestCheckJSON(t *testing.T) {
	var b strings.Builder
	c := Checked{DetectableA2: Float(math.NaN()), Warnings: []Note{}, Groups: []CheckedGroup{{DetectableR: 0.25, Structures: []Structure{{2, 3, "8"}}}}}
	if err := CheckJSON(&b, c); err != nil {
		t.Fatal(err)
	}
	var back map[string]any
	if err := json.Unmarshal([]byte(b.String()), &back); err != nil {
		t.Fatal(err)
	}
	if back["detectable_a2"] != nil {
		t.Errorf("detectable_a2 is %v", back["detectable_a2"])
	}
	group := back["people_groups"].([]any)[0].(map[string]any)
	if group["detectable_r"] != 0.25 {
		t.Errorf("group: %v", group)
	}
}

// TestCheckTextCountsWarnings of one kind after the first few.
func TestCheckTextCountsWarnings(t *testing.T) {
	c := Checked{}
	for range 11 {
		c.Warnings = append(c.Warnings, Note{"people", "age", "too old"})
	}
	c.Warnings = append(c.Warnings, Note{"traits", "", "another"})
	var b strings.Builder
	if err := CheckText(&b, c); err != nil {
		t.Fatal(err)
	}
	if n := strings.Count(b.String(), "too old"); n != 8 {
		t.Errorf("%d warnings are spelled out", n)
	}
	for _, want := range []string{"Warnings (12)", "people, age: and 3 more", "traits: another"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("%q is missing in\n%s", want, b.String())
		}
	}
}

func TestChance(t *testing.T) {
	for _, c := range []struct {
		p    float64
		want string
	}{{math.NaN(), "-"}, {1, "1.00"}, {0.25, "0.25"}, {0.0123, "0.012"}, {0.001, "0.001"}, {3.2e-9, "3e-09"}} {
		if got := chance(c.p); got != c.want {
			t.Errorf("%v is shown as %s, want %s", c.p, got, c.want)
		}
	}
}
