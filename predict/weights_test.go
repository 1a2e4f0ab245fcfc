package predict

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

func TestWeightsAreMeansOfFits(t *testing.T) {
	s := shapes()["repeats"]
	q := invent(s, 3)
	fit, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	weights, err := fit.Weights()
	if err != nil {
		t.Fatal(err)
	}
	book := textbook{measures: q.measures, confounds: q.confounds, penalties: q.penalties}
	for trait := range s.traits {
		var fits, patterns, deviations [][]float64
		for r := range q.folds.Repeats {
			f := book.fit(mat.Col(nil, trait, q.traits), &q.folds.Repeats[r])
			fits, patterns, deviations = append(fits, f.weights...), append(patterns, f.patterns...), append(deviations, f.sd...)
		}
		count := float64(len(fits))
		for j := range s.measures {
			mean, square, pattern, sd, sign := 0.0, 0.0, 0.0, 0.0, 0.0
			for i, w := range fits {
				mean, pattern, sd = mean+w[j]/count, pattern+patterns[i][j]/count, sd+deviations[i][j]/count
			}
			for _, w := range fits {
				square += (w[j] - mean) * (w[j] - mean) / (count - 1)
				if math.Signbit(w[j]) == math.Signbit(mean) {
					sign += 1 / count
				}
			}
			got := weights[trait][j]
			for name, pair := range map[string][2]float64{
				"weight": {got.Weight, mean}, "sd": {got.SD, math.Sqrt(square)}, "sign agreement": {got.SignAgreement, sign},
				"pattern": {got.Pattern, pattern}, "deviation": {got.MeasureSD, sd},
			} {
				if !near(pair[0], pair[1], 1e-9) {
					t.Errorf("trait %d, measure %d: %s %v, want %v", trait, j, name, pair[0], pair[1])
				}
			}
		}
	}
}

// Two channels x1 = s + d and x2 = d: the trait is s, read off as x1 - x2, but
// only x1 goes with it (Haufe et al. 2014). The pattern of x2 is 0 whatever
// its weight.
func TestPatternIsNotWeight(t *testing.T) {
	n := 400
	x, y := mat.NewDense(n, 2, nil), mat.NewDense(n, 1, nil)
	for i := range n { // s and d are orthogonal, in training sets too
		s, d := float64(i%2)*2-1, float64(i/2%2)*6-3
		x.SetRow(i, []float64{s + d, d})
		y.Set(i, 0, s)
	}
	r := crossval.Repeat{OuterCount: 2, Outer: make([]int, n)}
	for i := range n {
		r.Outer[i] = i / 200
	}
	d, err := NewDesign(x, nil, &crossval.Folds{Repeats: []crossval.Repeat{r}}, Options{Penalties: []float64{1e-6}})
	if err != nil {
		t.Fatal(err)
	}
	fit, err := d.Fit(context.Background(), y)
	if err != nil {
		t.Fatal(err)
	}
	weights, err := fit.Weights()
	if err != nil {
		t.Fatal(err)
	}
	// Per deviation: sqrt(1 + 9) for x1, -3 for x2; covariances with s: 1, 0.
	for j, want := range []Weight{{Weight: math.Sqrt(10), Pattern: 1, MeasureSD: math.Sqrt(10)}, {Weight: -3, Pattern: 0, MeasureSD: 3}} {
		got := weights[0][j]
		if !near(got.Weight, want.Weight, 1e-6) || !near(got.Pattern, want.Pattern, 1e-6) || !near(got.MeasureSD, want.MeasureSD, 1e-12) || got.SignAgreement != 1 {
			t.Errorf("measure %d: %+v, want %+v", j, got, want)
		}
	}
}

// Parts of a composition: weights per unit add to 0 and predict the same.
func TestCompositions(t *testing.T) {
	n := 120
	st := stream.New(6, "test composition")
	x, y := mat.NewDense(n, 5, nil), mat.NewDense(n, 1, nil)
	folds := invent(shape{people: n, measures: 1, traits: 1, repeats: 2, outer: 3, inner: 3, cells: true}, 2).folds
	for i := range n {
		parts, mean := make([]float64, 4), 0.0
		for j := range parts {
			parts[j] = st.Norm() * float64(j+1) // log of a part, of unequal spread
			mean += parts[j] / 4
		}
		for j := range parts {
			x.Set(i, j, parts[j]-mean)
		}
		x.Set(i, 4, st.Norm())
		y.Set(i, 0, parts[0]-parts[2]+x.At(i, 4)+st.Norm())
	}
	d, err := NewDesign(x, nil, folds, Options{Penalties: []float64{1, 10, 100}})
	if err != nil {
		t.Fatal(err)
	}
	fit, err := d.Fit(context.Background(), y)
	if err != nil {
		t.Fatal(err)
	}
	plainWeights, err := fit.Weights()
	if err != nil {
		t.Fatal(err)
	}
	weights, err := fit.Weights([]int{0, 1, 2, 3})
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for _, w := range weights[0][:4] {
		sum += w.Weight
	}
	if math.Abs(sum) > 1e-12 {
		t.Errorf("weights of the parts add to %v", sum)
	}
	if weights[0][4] != plainWeights[0][4] {
		t.Errorf("a measure outside the composition changed: %+v, %+v", weights[0][4], plainWeights[0][4])
	}
	// In every fit the differences of predictions are those of the fit itself.
	per, about := make([]float64, 4), make([][]float64, 4)
	for f, one := range fit.fits {
		for j := range 4 {
			per[j] = one.weight.Data[j] / one.sd[j]
			about[j] = make([]float64, len(fit.fits))
			about[j][f] = one.weight.Data[j]
		}
		one.aboutMean(about, f, []int{0, 1, 2, 3})
		for i := range n {
			a, b := 0.0, 0.0
			for j := range 4 {
				a, b = a+per[j]*x.At(i, j), b+about[j][f]*x.At(i, j)
			}
			if !near(a, b, 1e-12) {
				t.Fatalf("fit %d, person %d: %v with the weights, %v about their mean", f, i, a, b)
			}
		}
	}
	for name, c := range map[string][][]int{"one part": {{2}}, "unknown": {{1, 5}}, "negative": {{-1, 2}}, "twice": {{0, 1}, {1, 2}}} {
		if _, err := fit.Weights(c...); err == nil {
			t.Errorf("composition (%s) passed", name)
		}
	}
}
