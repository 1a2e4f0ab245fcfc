package predict

import (
	"context"
	"testing"

	"gonum.org/v1/gonum/mat"

	"kindwell/internal/stream"
)

// drawn are uniform arrangements without regard to families.
type drawn struct {
	count int
	seed  uint64
}

func (d drawn) Len() int { return d.count }

func (d drawn) At(i int, dst []int) { stream.New(d.seed, "test arrangements", uint64(i)).PermTo(dst) }

func permuted(a *mat.Dense, arrangements Arrangements, i int) *mat.Dense {
	n, t := a.Dims()
	from := make([]int, n)
	arrangements.At(i, from)
	b := mat.NewDense(n, t, nil)
	for place, person := range from {
		b.SetRow(place, a.RawRowView(person))
	}
	return b
}

// Null must be what Fit reports for the rearranged residuals, whichever the
// metric and the folds, although it takes sums for people.
func TestNullIsFitOfRearranged(t *testing.T) {
	for name, s := range shapes() {
		t.Run(name, func(t *testing.T) {
			q := invent(s, 5)
			residuals, err := Residuals(q.traits, q.confounds)
			if err != nil {
				t.Fatal(err)
			}
			arrangements := drawn{4, 9}
			for _, perFamily := range []bool{false, true} {
				q.folds.PerFamily = perFamily
				for _, metric := range Metrics() {
					if metric == RByFold && perFamily {
						continue
					}
					d := q.design(t, Options{Metric: metric})
					null, err := d.Null(context.Background(), residuals, arrangements, nil)
					if err != nil {
						t.Fatal(err)
					}
					for a := range arrangements.Len() {
						fit, err := d.Fit(context.Background(), permuted(residuals, arrangements, a))
						if err != nil {
							t.Fatal(err)
						}
						for trait := range null {
							want := scoreOf(t, fit, trait, metric).Value
							if got := null[trait][a]; !near(got, want, 1e-10) {
								t.Errorf("%v, per family %v, trait %d, arrangement %d: %v, Fit has %v", metric, perFamily, trait, a, got, want)
							}
						}
					}
				}
			}
		})
	}
}

func scoreOf(t testing.TB, f *Fit, trait int, metric Metric) Score {
	t.Helper()
	for _, s := range f.Scores[trait] {
		if s.Metric == metric {
			return s
		}
	}
	t.Fatalf("no score %v", metric)
	return Score{}
}
