package predict

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// sameBits compares everything that Fit and Null say, bit for bit.
func sameBits(t *testing.T, what string, a, b *Design, q problem) {
	t.Helper()
	fitA, err := a.Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	fitB, err := b.Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	for r := range fitA.Repeats {
		x, y := fitA.Repeats[r], fitB.Repeats[r]
		for i, pair := range [][2]*mat.Dense{{x.Baseline, y.Baseline}, {x.Target, y.Target}, {x.Predicted, y.Predicted}} {
			if !mat.Equal(pair[0], pair[1]) {
				t.Errorf("%s: matrix %d of repeat %d differs", what, i, r)
			}
		}
	}
	for j := range fitA.Scores {
		for k, s := range fitA.Scores[j] {
			if o := fitB.Scores[j][k]; math.Float64bits(s.Value) != math.Float64bits(o.Value) || math.Float64bits(s.Low) != math.Float64bits(o.Low) {
				t.Errorf("%s: %v of trait %d: %v and %v", what, s.Metric, j, s.Value, o.Value)
			}
		}
	}
	weightsA, _ := fitA.Weights()
	weightsB, _ := fitB.Weights()
	for j := range weightsA {
		for m := range weightsA[j] {
			if weightsA[j][m] != weightsB[j][m] {
				t.Errorf("%s: weight %d of trait %d differs", what, m, j)
			}
		}
	}
	nullA, err := a.Null(context.Background(), q.traits, drawn{300, 1}, nil)
	if err != nil {
		t.Fatal(err)
	}
	nullB, err := b.Null(context.Background(), q.traits, drawn{300, 1}, nil)
	if err != nil {
		t.Fatal(err)
	}
	for j := range nullA {
		for i, v := range nullA[j] {
			if math.Float64bits(v) != math.Float64bits(nullB[j][i]) {
				t.Fatalf("%s: null %d of trait %d: %v and %v", what, i, j, v, nullB[j][i])
			}
		}
	}
}

func TestWorkersDoNotMatter(t *testing.T) {
	for _, name := range []string{"given folds", "cells", "repeats", "wide"} {
		s := shapes()[name]
		s.traits = 5
		if name == "wide" {
			s.measures = 60
		}
		q := invent(s, 3)
		one := q.design(t, Options{Workers: 1})
		for _, workers := range []int{2, 8} {
			sameBits(t, name, one, q.design(t, Options{Workers: workers}), q)
		}
	}
}

// Decompositions that are not kept are made anew, a few folds at a time.
func TestStagesDoNotMatter(t *testing.T) {
	for _, name := range []string{"given folds", "missing cells", "repeats", "wide cells"} {
		q := invent(shapes()[name], 4)
		for _, metric := range Metrics() {
			opt := Options{Penalties: q.penalties, FillMissing: true, Metric: metric}
			whole, err := newDesign(q.measures, nil, q.confounds, q.folds, opt, 1<<30)
			if err != nil {
				t.Fatal(err)
			}
			parts, err := newDesign(q.measures, nil, q.confounds, q.folds, opt, 1)
			if err != nil {
				t.Fatal(err)
			}
			if whole.kept == nil || parts.kept != nil {
				t.Fatal("decompositions are not kept as asked")
			}
			if metric != Rho && len(parts.stages) != parts.sizes.folds {
				t.Fatalf("%d stages for %d folds", len(parts.stages), parts.sizes.folds)
			}
			a, err := whole.Null(context.Background(), q.traits, drawn{5, 1}, nil)
			if err != nil {
				t.Fatal(err)
			}
			b, err := parts.Null(context.Background(), q.traits, drawn{5, 1}, nil)
			if err != nil {
				t.Fatal(err)
			}
			for j := range a {
				for i := range a[j] {
					if !near(a[j][i], b[j][i], 1e-10) {
						t.Errorf("%s, %v: %v whole, %v in parts", name, metric, a[j][i], b[j][i])
					}
				}
			}
		}
	}
}

// Traits that go together must not touch each other.
func TestColumnsAreIndependent(t *testing.T) {
	q := invent(shapes()["cells"], 6)
	d := q.design(t, Options{})
	together, err := d.Null(context.Background(), q.traits, drawn{150, 2}, nil)
	if err != nil {
		t.Fatal(err)
	}
	for j := range together {
		alone, err := d.Null(context.Background(), mat.DenseCopyOf(q.traits.Slice(0, 90, j, j+1)), drawn{150, 2}, nil)
		if err != nil {
			t.Fatal(err)
		}
		for i, v := range alone[0] {
			if v != together[j][i] {
				t.Fatalf("trait %d, arrangement %d: %v alone, %v together", j, i, v, together[j][i])
			}
		}
	}
}

func TestCancelled(t *testing.T) {
	q := invent(shapes()["cells"], 1)
	d := q.design(t, Options{Workers: 2})
	ctx, cancel := context.WithCancel(context.Background())
	last := 0
	null, err := d.Null(ctx, q.traits, drawn{2000, 1}, func(done int) {
		if done <= last {
			t.Errorf("progress went from %d to %d", last, done)
		}
		last = done
		cancel()
	})
	if !errors.Is(err, context.Canceled) || null != nil {
		t.Errorf("Null of a cancelled context: %v", err)
	}
	if last >= 2000 {
		t.Error("all arrangements were done")
	}
	if _, err := d.Fit(ctx, q.traits); !errors.Is(err, context.Canceled) {
		t.Errorf("Fit of a cancelled context: %v", err)
	}
}

func TestProgressReachesTheEnd(t *testing.T) {
	q := invent(shapes()["repeats"], 1)
	last := 0
	if _, err := q.design(t, Options{}).Null(context.Background(), q.traits, drawn{301, 1}, func(done int) { last = done }); err != nil {
		t.Fatal(err)
	}
	if last != 301 {
		t.Errorf("progress ended at %d of 301", last)
	}
}

func TestInputsStayAsTheyAre(t *testing.T) {
	q := invent(shapes()["missing"], 2)
	copies := []*mat.Dense{mat.DenseCopyOf(q.measures), mat.DenseCopyOf(q.confounds), mat.DenseCopyOf(q.traits)}
	penalties := append([]float64(nil), q.penalties...)
	d := q.design(t, Options{})
	if _, err := d.Fit(context.Background(), q.traits); err != nil {
		t.Fatal(err)
	}
	if _, err := d.Null(context.Background(), q.traits, drawn{3, 1}, nil); err != nil {
		t.Fatal(err)
	}
	if _, err := Residuals(q.traits, q.confounds); err != nil {
		t.Fatal(err)
	}
	for i, a := range []*mat.Dense{q.measures, q.confounds, q.traits} {
		for k, v := range a.RawMatrix().Data {
			if math.Float64bits(v) != math.Float64bits(copies[i].RawMatrix().Data[k]) {
				t.Fatalf("matrix %d changed", i)
			}
		}
	}
	for i, v := range penalties {
		if q.penalties[i] != v {
			t.Error("penalties changed")
		}
	}
}

func TestZeroWeights(t *testing.T) {
	s := shapes()["given folds"]
	q := invent(s, 1)
	for i := range s.people {
		q.measures.Set(i, 1, 4)
		q.measures.Set(i, 5, 3*q.confounds.At(i, 0)-q.confounds.At(i, 1)+2)
	}
	q.confounds = appendColumn(q.confounds, func(i int) float64 { return q.confounds.At(i, 0) + 1 })
	d := q.design(t, Options{})
	want := []ZeroWeight{
		{Measure: 1, ConstantOuter: 4, ConstantInner: 12},
		{Measure: 5, ExplainedOuter: 4, ExplainedInner: 12},
	}
	if got := d.Notes().ZeroWeights; len(got) != 2 || got[0] != want[0] || got[1] != want[1] {
		t.Errorf("weights of 0: %+v, want %+v", got, want)
	}
	if got := d.Notes().PassedOver; len(got) != 1 || got[0] != 2 {
		t.Errorf("confounds passed over: %v, want the third", got)
	}
	fit, err := d.Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	weights, err := fit.Weights()
	if err != nil {
		t.Fatal(err)
	}
	for _, j := range []int{1, 5} {
		if w := weights[0][j]; w.Weight != 0 || w.SD != 0 || !math.IsNaN(w.SignAgreement) || w.Pattern != 0 || w.MeasureSD != 0 {
			t.Errorf("measure %d: %+v, want zeros", j, w)
		}
	}
}

func TestNotes(t *testing.T) {
	q := invent(shapes()["cells"], 1)
	if n := q.design(t, Options{}).Notes(); n.IllConditioned || n.SmallFolds != 0 || n.ZeroWeights != nil || n.PassedOver != nil {
		t.Errorf("notes of a plain design: %+v", n)
	}
	q.penalties = []float64{1e-8, 1}
	if n := q.design(t, Options{}).Notes(); !n.IllConditioned {
		t.Errorf("a penalty of %v for 90 people and 7 measures is not noted", q.penalties[0])
	}
	r := &q.folds.Repeats[0]
	held := 0
	for i, f := range r.Outer {
		if f != 3 {
			continue
		}
		if held++; held > 2 { // leave two people in fold 3
			r.Outer[i], r.Inner[3][i], r.Inner[0][i] = 0, r.Cell[i], -1
		}
	}
	d := q.design(t, Options{Metric: R2})
	if n := d.Notes(); n.SmallFolds != 1 {
		t.Errorf("%d small folds", n.SmallFolds)
	}
	fit, err := d.Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	if fit.Scores[0][0].Metric == RByFold {
		t.Error("r_by_fold is reported although a fold has fewer than 3 people")
	}
}

// Values that differ by rounding alone are constant.
func TestRoundingIsNoMeasure(t *testing.T) {
	s := shapes()["given folds"]
	q := invent(s, 1)
	a, b := 0.1, 0.2
	for i := range s.people {
		v := 0.3
		if i%2 == 0 {
			v = a + b // 0.30000000000000004
		}
		q.measures.Set(i, 1, v)
		if q.folds.Repeats[0].Outer[i] == 2 {
			v = 5
		}
		q.measures.Set(i, 4, v) // constant only while fold 2 is held out
	}
	if q.measures.At(0, 1) == q.measures.At(1, 1) {
		t.Fatal("no rounding")
	}
	want := []ZeroWeight{{Measure: 1, ConstantOuter: 4, ConstantInner: 12}, {Measure: 4, ConstantOuter: 1, ConstantInner: 3}}
	got := q.design(t, Options{}).Notes().ZeroWeights
	if len(got) != 2 || got[0] != want[0] || got[1] != want[1] {
		t.Errorf("weights of 0: %+v, want %+v", got, want)
	}
}

func appendColumn(a *mat.Dense, value func(i int) float64) *mat.Dense {
	n, c := a.Dims()
	b := mat.NewDense(n, c+1, nil)
	for i := range n {
		for j := range c {
			b.Set(i, j, a.At(i, j))
		}
		b.Set(i, c, value(i))
	}
	return b
}

func TestConfoundThatATrainingSetCannotLearn(t *testing.T) {
	s := shapes()["given folds"]
	q := invent(s, 1)
	r := &q.folds.Repeats[0]
	// The level is held only by people of outer fold 2.
	q.confounds = appendColumn(q.confounds, func(i int) float64 {
		if r.Outer[i] == 2 {
			return 1
		}
		return 0
	})
	_, err := NewDesign(q.measures, q.confounds, q.folds, Options{Penalties: q.penalties})
	var fault *ConfoundError
	if !errors.As(err, &fault) {
		t.Fatalf("error %v, want a ConfoundError", err)
	}
	if *fault != (ConfoundError{Confound: 2, Repeat: 0, Outer: 2, Inner: -1}) {
		t.Errorf("fault %+v", *fault)
	}
	if !strings.Contains(err.Error(), "confound 2") || !strings.Contains(err.Error(), "outer fold 2") {
		t.Errorf("text %q", err)
	}
	// A confound passed over before it must not shift its number.
	shifted := mat.NewDense(s.people, 4, nil)
	for i := range s.people {
		shifted.SetRow(i, []float64{7, q.confounds.At(i, 0), q.confounds.At(i, 1), q.confounds.At(i, 2)})
	}
	_, err = NewDesign(q.measures, shifted, q.folds, Options{Penalties: q.penalties})
	if !errors.As(err, &fault) || fault.Confound != 3 {
		t.Errorf("error %v, want one of confound 3", err)
	}
}

func TestRefused(t *testing.T) {
	base := shapes()["cells"]
	for name, c := range map[string]struct {
		spoil func(q *problem, opt *Options)
		says  string
	}{
		"NaN measure":        {func(q *problem, o *Options) { q.measures.Set(4, 2, math.NaN()) }, "measure 2 of person 4 is NaN"},
		"infinite measure":   {func(q *problem, o *Options) { o.FillMissing = true; q.measures.Set(4, 2, math.Inf(1)) }, "measure 2 of person 4 is +Inf"},
		"NaN confound":       {func(q *problem, o *Options) { q.confounds.Set(3, 1, math.NaN()) }, "confound 1 of person 3"},
		"confounds of fewer": {func(q *problem, o *Options) { q.confounds = mat.NewDense(5, 1, nil) }, "confounds of 5 people, 90"},
		"many confounds":     {func(q *problem, o *Options) { q.confounds = mat.NewDense(90, 89, nil) }, "89 confounds are too many for 90"},
		"no measures":        {func(q *problem, o *Options) { q.measures = nil }, "no measures"},
		"no folds":           {func(q *problem, o *Options) { q.folds = nil }, "no folds"},
		"folds of fewer":     {func(q *problem, o *Options) { q.folds.Repeats[0].Outer = make([]int, 3) }, "outer folds of 3 people, 90"},
		"one fold":           {func(q *problem, o *Options) { q.folds.Repeats[0].OuterCount = 1 }, "two are the least"},
		"outside the folds":  {func(q *problem, o *Options) { q.folds.Repeats[0].Outer[7] = 4 }, "person 7 is in outer fold 4 of 4"},
		"empty fold":         {func(q *problem, o *Options) { q.folds.Repeats[0].OuterCount = 5 }, "outer fold 4 is empty"},
		"no inner folds":     {func(q *problem, o *Options) { q.folds.Repeats[0].Inner = nil }, "inner folds for 0"},
		"inner of the held out": {func(q *problem, o *Options) {
			q.folds.Repeats[0].Inner[q.folds.Repeats[0].Outer[7]][7] = 0
		}, "person 7 is held out"},
		"inner outside": {func(q *problem, o *Options) {
			q.folds.Repeats[0].Inner[(q.folds.Repeats[0].Outer[7]+1)%4][7] = 3
		}, "person 7 is in inner fold 3 of 3"},
		"inner against cell": {func(q *problem, o *Options) { q.folds.Repeats[0].Cell[7] = (q.folds.Repeats[0].Cell[7] + 1) % 3 }, "person 7 is of cell"},
		"one inner fold": {func(q *problem, o *Options) {
			r := &q.folds.Repeats[0]
			r.Cell = nil
			for i, f := range r.Inner[2] {
				r.Inner[2][i] = min(f, 0)
			}
		}, "outer fold 2: fewer than two inner folds"},
		"no penalty":           {func(q *problem, o *Options) { o.Penalties = nil }, "at least one penalty"},
		"penalty of 0":         {func(q *problem, o *Options) { o.Penalties[0] = 0 }, "penalty 0 is 0"},
		"penalties not sorted": {func(q *problem, o *Options) { o.Penalties = []float64{1, 1} }, "does not exceed"},
		"metric":               {func(q *problem, o *Options) { o.Metric = R2Full }, "r2_full cannot be tested"},
		"confidence":           {func(q *problem, o *Options) { o.Confidence = 1 }, "confidence 1"},
		"workers":              {func(q *problem, o *Options) { o.Workers = -1 }, "-1 workers"},
		"per family":           {func(q *problem, o *Options) { q.folds.PerFamily = true }, "r_by_fold is not defined"},
		"missing too often": {func(q *problem, o *Options) {
			o.FillMissing = true
			for i := range 19 {
				q.measures.Set(i, 3, math.NaN())
			}
		}, "measure 3 is missing in 19 of 90"},
		"fold of two": {func(q *problem, o *Options) {
			two := 0
			for i, f := range q.folds.Repeats[0].Outer {
				if f == 3 {
					if two++; two > 2 {
						q.folds.Repeats[0].Outer[i] = 0
						for x := range q.folds.Repeats[0].Inner {
							q.folds.Repeats[0].Inner[x][i] = q.folds.Repeats[0].Cell[i]
						}
						q.folds.Repeats[0].Inner[0][i] = -1
					}
				}
			}
		}, "the smallest has 2"},
	} {
		t.Run(name, func(t *testing.T) {
			q := invent(base, 1)
			opt := Options{Penalties: append([]float64(nil), q.penalties...)}
			c.spoil(&q, &opt)
			_, err := NewDesign(q.measures, q.confounds, q.folds, opt)
			if err == nil || !strings.Contains(err.Error(), c.says) {
				t.Errorf("error %v, want one with %q", err, c.says)
			}
		})
	}
	q := invent(base, 1)
	d := q.design(t, Options{})
	for name, traits := range map[string]*mat.Dense{"none": nil, "fewer people": mat.NewDense(4, 1, nil), "NaN": mat.NewDense(90, 1, func() []float64 { v := make([]float64, 90); v[3] = math.NaN(); return v }())} {
		if _, err := d.Fit(context.Background(), traits); err == nil {
			t.Errorf("traits (%s) passed", name)
		}
		if _, err := d.Null(context.Background(), traits, drawn{2, 1}, nil); err == nil {
			t.Errorf("residuals (%s) passed", name)
		}
	}
	if _, err := d.Null(context.Background(), q.traits, drawn{0, 1}, nil); err == nil {
		t.Error("no arrangements passed")
	}
}

func TestTooFewForTheConfounds(t *testing.T) {
	st := stream.New(1, "test")
	x, c := mat.NewDense(8, 1, nil), mat.NewDense(8, 3, nil)
	for i := range 8 {
		x.Set(i, 0, st.Norm())
		for j := range 3 {
			c.Set(i, j, st.Norm())
		}
	}
	r := crossval.Repeat{Outer: []int{0, 0, 0, 0, 1, 1, 1, 1}, OuterCount: 2}
	_, err := NewDesign(x, c, &crossval.Folds{Repeats: []crossval.Repeat{r}}, Options{Penalties: []float64{1}})
	if err == nil || !strings.Contains(err.Error(), "4 training people") {
		t.Errorf("error %v", err)
	}
}
