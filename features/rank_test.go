package features_test

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"

	"pgregory.net/rapid"

	"kindwell/features"
)

// rankCases reads the values and scores that R printed, case by case.
func rankCases(t *testing.T) (values, scores map[string][]float64) {
	t.Helper()
	file, err := os.Open(filepath.Join("..", "testdata", "rank_normal", "scores.csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	number := func(cell string) float64 {
		if cell == "NA" {
			return nan
		}
		v, err := strconv.ParseFloat(cell, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	values, scores = map[string][]float64{}, map[string][]float64{}
	for _, row := range rows[1:] {
		values[row[0]] = append(values[row[0]], number(row[1]))
		scores[row[0]] = append(scores[row[0]], number(row[2]))
	}
	return values, scores
}

// The source is testdata/rank_normal/make.R: rank and qnorm of R 4.2.2.
func TestRankNormalScoresAgainstR(t *testing.T) {
	values, scores := rankCases(t)
	if len(values) != 7 {
		t.Fatalf("%d cases read, want 7", len(values))
	}
	for name := range values {
		t.Run(name, func(t *testing.T) {
			before := slices.Clone(values[name])
			// The greatest of 2000 has a probability 3e-4 below 1, which R
			// holds to 1.1e-16; over the density there, 1e-3, that is 1e-13.
			if got := features.RankNormalScores(values[name]); !allNear(got, scores[name], 1e-12) {
				t.Errorf("got %v, want %v", got, scores[name])
			}
			if !allNear(before, values[name], 0) {
				t.Error("the argument was changed")
			}
			fit, err := features.FitRankNormal(values[name])
			if err != nil {
				t.Fatal(err)
			}
			if got := fit.Apply(values[name]); !allNear(got, scores[name], 1e-12) {
				t.Errorf("applied to its own training values: %v, want %v", got, scores[name])
			}
		})
	}
}

// A million people: the extreme score in both tails, qnorm(.625/1000000.25) of
// R 4.2.2.
func TestRankNormalTails(t *testing.T) {
	values := make([]float64, 1_000_000)
	for i := range values {
		values[i] = float64(i)
	}
	scores := features.RankNormalScores(values)
	const want = 4.8475429611560852
	if least, most := scores[0], scores[len(scores)-1]; !near(least, -want, 1e-14) || least != -most {
		t.Errorf("scores reach from %v to %v, want -/+ %v", least, most, want)
	}
}

func TestRankNormalApply(t *testing.T) {
	fit, err := features.FitRankNormal([]float64{30, nan, 10, 10, 20})
	if err != nil {
		t.Fatal(err)
	}
	// Ranks 1.5, 3, 4 of 4; by R 4.2.2:
	// qnorm((c(1.5, 3, 4) - .375) / 4.25) =
	// -0.62890421763219007  0.29930691046566704  1.0491313979639711
	const low, middle, high = -0.62890421763219007, 0.29930691046566704, 1.0491313979639711
	values := []float64{10, 20, 30, 15, 22.5, 9.99, -1e308, 31, math.Inf(1), math.Inf(-1), nan}
	want := []float64{low, middle, high, (low + middle) / 2, .75*middle + .25*high, low, low, high, high, low, nan}
	if got := fit.Apply(values); !allNear(got, want, 1e-14) {
		t.Errorf("got %v, want %v", got, want)
	}
}

func TestRankNormalApplyHugeRange(t *testing.T) {
	fit, err := features.FitRankNormal([]float64{-math.MaxFloat64, math.MaxFloat64})
	if err != nil {
		t.Fatal(err)
	}
	if got := fit.Apply([]float64{0})[0]; got != 0 {
		t.Errorf("the middle of the range has score %v", got)
	}
}

func TestFitRankNormalErrors(t *testing.T) {
	if _, err := features.FitRankNormal([]float64{nan, nan}); !errors.Is(err, features.ErrNoValues) {
		t.Errorf("got %v, want ErrNoValues", err)
	}
	var cell features.CellError
	if _, err := features.FitRankNormal([]float64{1, 2, math.Inf(-1)}); !errors.As(err, &cell) || cell.Row != 2 {
		t.Errorf("got %v, want a CellError in row 2", err)
	}
}

// Scores depend on the order of the values alone, mirror exactly, and the
// fitted map never decreases and never leaves the range of training scores.
func TestRankNormalProperties(t *testing.T) {
	value := rapid.Custom(func(t *rapid.T) float64 {
		if rapid.IntRange(0, 9).Draw(t, "kind") == 0 {
			return nan
		}
		return float64(rapid.IntRange(-8, 8).Draw(t, "value")) / 4 // many ties
	})
	rapid.Check(t, func(t *rapid.T) {
		values := rapid.SliceOfN(value, 1, 30).Draw(t, "values")
		scores := features.RankNormalScores(values)
		mirrored, stretched := make([]float64, len(values)), make([]float64, len(values))
		for i, v := range values {
			mirrored[i], stretched[i] = -v, math.Exp(v)
		}
		if !allNear(features.RankNormalScores(stretched), scores, 0) {
			t.Errorf("an increasing function changed the scores")
		}
		for i, s := range features.RankNormalScores(mirrored) {
			if !near(s, -scores[i], 0) {
				t.Errorf("mirrored score of row %d is %v, want %v", i, s, -scores[i])
			}
		}
		fit, err := features.FitRankNormal(values)
		if err != nil {
			if !slices.ContainsFunc(values, func(v float64) bool { return !math.IsNaN(v) }) {
				return
			}
			t.Fatal(err)
		}
		if !allNear(fit.Apply(values), scores, 0) {
			t.Errorf("the fitted map changes its own training values")
		}
		unseen := rapid.SliceOfN(rapid.Float64Range(-3, 3), 1, 30).Draw(t, "unseen")
		slices.Sort(unseen)
		applied := fit.Apply(unseen)
		ends := fit.Apply([]float64{math.Inf(-1), math.Inf(1)})
		if !slices.IsSorted(applied) || applied[0] < ends[0] || applied[len(applied)-1] > ends[1] {
			t.Errorf("applied to %v: %v within %v", unseen, applied, ends)
		}
	})
}
