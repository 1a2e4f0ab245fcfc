package predict

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"kindwell/internal/stream"
)

func shapes() map[string]shape {
	return map[string]shape{
		"given folds":           {people: 90, measures: 7, confounds: 2, traits: 3, repeats: 1, outer: 4, inner: 3},
		"cells":                 {people: 90, measures: 7, confounds: 2, traits: 3, repeats: 1, outer: 4, inner: 3, cells: true},
		"repeats":               {people: 70, measures: 5, confounds: 1, traits: 2, repeats: 3, outer: 3, inner: 4, cells: true},
		"no confounds":          {people: 60, measures: 6, traits: 2, repeats: 2, outer: 3, inner: 3},
		"one measure":           {people: 60, measures: 1, confounds: 1, traits: 2, repeats: 1, outer: 3, inner: 3},
		"collinear":             {people: 80, measures: 8, confounds: 1, traits: 2, repeats: 1, outer: 3, inner: 3, collinear: true},
		"constant":              {people: 80, measures: 8, confounds: 1, traits: 2, repeats: 1, outer: 3, inner: 3, constant: true},
		"missing":               {people: 80, measures: 6, confounds: 2, traits: 2, repeats: 1, outer: 3, inner: 3, missing: true},
		"missing cells":         {people: 80, measures: 6, confounds: 2, traits: 2, repeats: 1, outer: 3, inner: 3, missing: true, cells: true, collinear: true},
		"wide":                  {people: 50, measures: 120, confounds: 2, traits: 2, repeats: 1, outer: 3, inner: 3},
		"wide cells":            {people: 50, measures: 120, confounds: 2, traits: 2, repeats: 2, outer: 3, inner: 3, cells: true, missing: true},
		"wide collinear":        {people: 50, measures: 60, confounds: 2, traits: 2, repeats: 1, outer: 3, inner: 3, collinear: true, constant: true},
		"as wide as people":     {people: 60, measures: 30, confounds: 1, traits: 2, repeats: 1, outer: 3, inner: 3},
		"wider than some folds": {people: 60, measures: 36, confounds: 1, traits: 2, repeats: 1, outer: 3, inner: 3},
	}
}

func (q problem) design(t testing.TB, opt Options) *Design {
	t.Helper()
	if opt.Penalties == nil {
		opt.Penalties = q.penalties
	}
	opt.FillMissing = true
	d, err := NewDesign(q.measures, q.confounds, q.folds, opt)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func near(got, want, tol float64) bool { return math.Abs(got-want) <= tol*math.Max(1, math.Abs(want)) }

func TestFitAgainstTextbook(t *testing.T) {
	const tol = 1e-9 // trait units; traits have deviations of 1 to 5
	for name, s := range shapes() {
		t.Run(name, func(t *testing.T) {
			for seed := range uint64(3) {
				q := invent(s, seed)
				fit, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
				if err != nil {
					t.Fatal(err)
				}
				book := textbook{measures: q.measures, confounds: q.confounds, penalties: q.penalties}
				at := 0
				for r := range q.folds.Repeats {
					got := fit.Repeats[r]
					for trait := range s.traits {
						want := book.fit(mat.Col(nil, trait, q.traits), &q.folds.Repeats[r])
						for i := range s.people {
							for what, pair := range map[string][2]float64{
								"baseline":  {got.Baseline.At(i, trait), want.baseline[i]},
								"target":    {got.Target.At(i, trait), want.target[i]},
								"predicted": {got.Predicted.At(i, trait), want.predicted[i]},
							} {
								if !near(pair[0], pair[1], tol) {
									t.Fatalf("seed %d repeat %d trait %d person %d: %s %v, want %v", seed, r, trait, i, what, pair[0], pair[1])
								}
							}
						}
						for o, penalty := range want.penalty {
							c := got.Choices[o][trait]
							if c.Penalty != penalty || !near(c.InnerMSE, want.mse[o], tol) {
								t.Fatalf("seed %d repeat %d trait %d fold %d: penalty %v with error %v, want %v with %v", seed, r, trait, o, c.Penalty, c.InnerMSE, penalty, want.mse[o])
							}
							for j := range s.measures {
								f := fit.fits[at+o]
								if w := f.weight.Data[j*s.traits+trait]; !near(w, want.weights[o][j], tol) {
									t.Fatalf("seed %d trait %d fold %d measure %d: weight %v, want %v", seed, trait, o, j, w, want.weights[o][j])
								}
								if w := f.pattern.Data[j*s.traits+trait]; !near(w, want.patterns[o][j], tol) {
									t.Fatalf("seed %d trait %d fold %d measure %d: pattern %v, want %v", seed, trait, o, j, w, want.patterns[o][j])
								}
								if !near(f.sd[j], want.sd[o][j], tol) {
									t.Fatalf("fold %d measure %d: sd %v, want %v", o, j, f.sd[j], want.sd[o][j])
								}
							}
						}
					}
					at += q.folds.Repeats[r].OuterCount
				}
			}
		})
	}
}

// Units and origins of measures, confounds and traits, and the order of the
// people, change predictions by nothing but their unit.
func TestUnitsAndOrderDoNotMatter(t *testing.T) {
	for _, name := range []string{"given folds", "missing cells", "wide"} {
		s := shapes()[name]
		q := invent(s, 9)
		want, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
		if err != nil {
			t.Fatal(err)
		}
		place := make([]int, s.people) // person of each row
		stream.New(1, "test order").PermTo(place)
		other := invent(s, 9)
		for i, person := range place {
			for j := range s.measures {
				other.measures.Set(i, j, 1e5+math.Pow(10, float64(j%7-3))*q.measures.At(person, j))
			}
			for j := range s.confounds {
				other.confounds.Set(i, j, -40+1e-3*q.confounds.At(person, j))
			}
			for j := range s.traits {
				other.traits.Set(i, j, 1e4-250*q.traits.At(person, j))
			}
			for r := range q.folds.Repeats {
				from, to := &q.folds.Repeats[r], &other.folds.Repeats[r]
				to.Outer[i] = from.Outer[person]
				for o := range from.Inner {
					to.Inner[o][i] = from.Inner[o][person]
				}
				if from.Cell != nil {
					to.Cell[i] = from.Cell[person]
				}
			}
		}
		got, err := other.design(t, Options{}).Fit(context.Background(), other.traits)
		if err != nil {
			t.Fatal(err)
		}
		for r := range want.Repeats {
			for j := range s.traits {
				for i, person := range place {
					if a, b := got.Repeats[r].Predicted.At(i, j)/-250, want.Repeats[r].Predicted.At(person, j); !near(a, b, 1e-7) {
						t.Fatalf("%s: person %d is predicted %v, in other units %v", name, person, b, a)
					}
				}
				for o := range want.Repeats[r].Choices {
					if a, b := got.Repeats[r].Choices[o][j].Penalty, want.Repeats[r].Choices[o][j].Penalty; a != b {
						t.Errorf("%s: penalty %v, in other units %v", name, b, a)
					}
				}
				for k, a := range got.Scores[j] {
					if b := want.Scores[j][k]; a.Metric == R && !near(a.Value, b.Value, 1e-7) {
						t.Errorf("%s: r %v, in other units %v", name, b.Value, a.Value)
					}
				}
			}
		}
	}
}
