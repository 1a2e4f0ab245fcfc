package predict

import (
	"context"
	"errors"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// ranked puts the share of training people below a value in its place: a scale
// that is another one in every training set.
type ranked struct{ measures *mat.Dense }

func (r ranked) Count() int { return asTheyAre(r).Count() }

func (r ranked) Learn(training []int) (*mat.Dense, error) {
	if !slices.IsSorted(training) {
		return nil, errors.New("training people are not in order")
	}
	n, p := r.measures.Dims()
	learnt := mat.NewDense(n, p, nil)
	for j := range p {
		for i := range n {
			below := 0
			for _, t := range training {
				if r.measures.At(t, j) < r.measures.At(i, j) {
					below++
				}
			}
			learnt.Set(i, j, float64(below)/float64(len(training)))
		}
	}
	return learnt, nil
}

func TestLearnedMeasures(t *testing.T) {
	for _, name := range []string{"given folds", "repeats", "wide"} {
		s := shapes()[name]
		s.measures = min(s.measures, 40)
		q := invent(s, 2)
		for what, learner := range map[string]Learner{"unchanged": asTheyAre{q.measures}, "ranked": ranked{q.measures}} {
			d, err := NewLearnedDesign(learner, q.confounds, q.folds, Options{Penalties: q.penalties})
			if err != nil {
				t.Fatal(err)
			}
			fit, err := d.Fit(context.Background(), q.traits)
			if err != nil {
				t.Fatal(err)
			}
			book := textbook{confounds: q.confounds, penalties: q.penalties, learner: learner}
			at := 0
			for r := range q.folds.Repeats {
				for trait := range s.traits {
					want := book.fit(mat.Col(nil, trait, q.traits), &q.folds.Repeats[r])
					for i := range s.people {
						if got := fit.Repeats[r].Predicted.At(i, trait); !near(got, want.predicted[i], 1e-9) {
							t.Fatalf("%s, %s: person %d is predicted %v, want %v", name, what, i, got, want.predicted[i])
						}
					}
					for o, penalty := range want.penalty {
						if got := fit.Repeats[r].Choices[o][trait]; got.Penalty != penalty {
							t.Errorf("%s, %s: fold %d has the penalty %v, want %v", name, what, o, got.Penalty, penalty)
						}
						for j := range s.measures {
							f := fit.fits[at+o]
							if !near(f.weight.Data[j*s.traits+trait], want.weights[o][j], 1e-9) || !near(f.pattern.Data[j*s.traits+trait], want.patterns[o][j], 1e-9) {
								t.Fatalf("%s, %s: fold %d, measure %d: weight or pattern differs", name, what, o, j)
							}
						}
					}
				}
				at += q.folds.Repeats[r].OuterCount
			}
			null, err := d.Null(context.Background(), q.traits, drawn{3, 1}, nil)
			if err != nil {
				t.Fatal(err)
			}
			again, err := d.Fit(context.Background(), permuted(q.traits, drawn{3, 1}, 2))
			if err != nil {
				t.Fatal(err)
			}
			if want := scoreOf(t, again, 1, RByFold).Value; !near(null[1][2], want, 1e-10) {
				t.Errorf("%s, %s: null %v, want %v", name, what, null[1][2], want)
			}
		}
	}
}

// faulty answers as told.
type faulty struct {
	measures *mat.Dense
	err      error
	count    int
}

func (f faulty) Count() int                      { return f.count }
func (f faulty) Learn([]int) (*mat.Dense, error) { return f.measures, f.err }

func TestLearnerFaults(t *testing.T) {
	q := invent(shapes()["given folds"], 1)
	spoilt := mat.DenseCopyOf(q.measures)
	spoilt.Set(3, 2, 0/zero())
	for name, c := range map[string]struct {
		learner Learner
		says    string
	}{
		"none":        {nil, "no measures"},
		"no measures": {faulty{}, "no measures"},
		"error":       {faulty{err: errors.New("no states found"), count: 7}, "repeat 0, outer fold 0: no states found"},
		"shape":       {faulty{measures: q.measures, count: 6}, "90 people and 7 measures, 90 and 6"},
		"NaN":         {faulty{measures: spoilt, count: 7}, "measure 2 of person 3"},
	} {
		_, err := NewLearnedDesign(c.learner, q.confounds, q.folds, Options{Penalties: q.penalties})
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: error %v, want one with %q", name, err, c.says)
		}
	}
	if _, err := NewLearnedDesign(asTheyAre{q.measures}, q.confounds, nil, Options{Penalties: q.penalties}); err == nil {
		t.Error("no folds passed")
	}
}

func zero() float64 { return 0 }
