package predict

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// midRank scales a value by the share of training values below it, ties by
// half: it depends on the training people, and on no origin or unit.
func midRank(training, held []float64) (a, b []float64) {
	score := func(values []float64) []float64 {
		out := make([]float64, len(values))
		for i, v := range values {
			below, count := 0.0, 0.0
			for _, w := range training {
				switch {
				case math.IsNaN(w):
					continue
				case w < v:
					below++
				case w == v:
					below += 0.5
				}
				count++
			}
			out[i] = below / count
			if math.IsNaN(v) {
				out[i] = v
			}
		}
		return out
	}
	return score(training), score(held)
}

// TestScalersAgainstTextbook: the scale of a measure is learnt in every
// training set, outer and inner, from its people alone.
func TestScalersAgainstTextbook(t *testing.T) {
	for _, name := range []string{"cells", "no confounds", "missing", "wide"} {
		t.Run(name, func(t *testing.T) {
			s := shapes()[name]
			q := invent(s, 7)
			scalers := make([]Scaler, s.measures)
			for j := 0; j < s.measures; j += 2 {
				scalers[j] = midRank
			}
			fit, err := q.design(t, Options{Scalers: scalers}).Fit(context.Background(), q.traits)
			if err != nil {
				t.Fatal(err)
			}
			plain, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
			if err != nil {
				t.Fatal(err)
			}
			book := textbook{measures: q.measures, confounds: q.confounds, penalties: q.penalties, scalers: scalers}
			moved := 0.0
			for r := range q.folds.Repeats {
				for trait := range s.traits {
					want := book.fit(mat.Col(nil, trait, q.traits), &q.folds.Repeats[r])
					for i := range s.people {
						got := fit.Repeats[r].Predicted.At(i, trait)
						if !near(got, want.predicted[i], 1e-9) {
							t.Fatalf("trait %d person %d: predicted %v, want %v", trait, i, got, want.predicted[i])
						}
						moved = max(moved, math.Abs(got-plain.Repeats[r].Predicted.At(i, trait)))
					}
					for o, penalty := range want.penalty {
						if c := fit.Repeats[r].Choices[o][trait]; c.Penalty != penalty || !near(c.InnerMSE, want.mse[o], 1e-9) {
							t.Fatalf("trait %d fold %d: penalty %v with error %v, want %v with %v", trait, o, c.Penalty, c.InnerMSE, penalty, want.mse[o])
						}
					}
				}
			}
			if moved < 1e-4 {
				t.Errorf("scalers moved no prediction by more than %v", moved)
			}
		})
	}
}

func TestScalersOfAnotherNumber(t *testing.T) {
	q := invent(shapes()["cells"], 1)
	_, err := NewDesign(q.measures, q.confounds, q.folds, Options{Penalties: q.penalties, Scalers: []Scaler{midRank}})
	if err == nil || err.Error() != "predict: 1 scalers for 7 measures" {
		t.Errorf("got %v", err)
	}
}
