package predict

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"

	"kindwell/internal/stream"
)

// Two penalties on the two sides of the best have the same error: of penalties
// within 1e-12 of the least mean squared error the largest wins, and a larger
// one that is worse by more does not. The difference is relative to the whole
// error, with the part that no penalty changes.
func TestTies(t *testing.T) {
	q := invent(shape{people: 60, measures: 3, confounds: 1, traits: 1, repeats: 1, outer: 2, inner: 3}, 2)
	st := stream.New(4, "test ties")
	for i := range 60 { // mostly noise: the best penalty is inside, and the constant part large
		q.traits.Set(i, 0, 0.7*q.traits.At(i, 0)+4*st.Norm())
	}
	y := mat.Col(nil, 0, q.traits)
	errorAt := func(penalty float64) float64 {
		return textbook{measures: q.measures, confounds: q.confounds, penalties: []float64{penalty}}.fit(y, &q.folds.Repeats[0]).mse[0]
	}
	best, least := 1.0, math.Inf(1)
	for l := -2.0; l < 5; l += 0.05 {
		if e := errorAt(math.Exp(l * math.Ln10)); e < least {
			best, least = math.Exp(l*math.Ln10), e
		}
	}
	lower := best / 1.6
	want := errorAt(lower)
	if best < 0.1 || best > 1e4 || want < least*(1+1e-5) || errorAt(best*1e6) < want*(1+1e-5) {
		t.Fatalf("no penalty inside: best %v with %v, %v at %v, %v above", best, least, want, lower, errorAt(best*1e6))
	}
	// The larger penalty whose error exceeds that of the lower by a share.
	above := func(share float64) float64 {
		from, to := best, best*1e6
		for range 60 {
			middle := math.Sqrt(from * to)
			if errorAt(middle) < want*(1+share) {
				from = middle
			} else {
				to = middle
			}
		}
		return to
	}
	for _, c := range []struct {
		share float64
		takes int
	}{
		{-1e-9, 1}, {-3e-14, 1}, {0, 1}, {3e-14, 1}, {8e-13, 1}, {1.3e-12, 0}, {1e-11, 0}, {1e-9, 0},
	} {
		q.penalties = []float64{lower, above(c.share)}
		fit, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
		if err != nil {
			t.Fatal(err)
		}
		got := fit.Repeats[0].Choices[0][0]
		if got.Penalty != q.penalties[c.takes] || !near(got.InnerMSE, want*(1+float64(c.takes)*c.share), 1e-11) {
			t.Errorf("share %v: penalty %v with error %v, want %v with %v", c.share, got.Penalty, got.InnerMSE, q.penalties[c.takes], want)
		}
	}
}

// When nothing can be predicted every penalty is as good: the largest wins.
func TestTieOfAllPenalties(t *testing.T) {
	q := invent(shape{people: 60, measures: 3, traits: 1, repeats: 1, outer: 2, inner: 3}, 2)
	q.measures.Zero()
	fit, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
	if err != nil {
		t.Fatal(err)
	}
	for o, c := range fit.Repeats[0].Choices {
		if c[0].Penalty != 1000 || c[0].End != HighEnd {
			t.Errorf("fold %d: %+v", o, c[0])
		}
	}
}

func TestEndsOfTheGrid(t *testing.T) {
	q := invent(shape{people: 200, measures: 3, traits: 1, repeats: 1, outer: 2, inner: 3}, 2)
	for i := range 200 { // hardly any noise: the lowest penalty is best
		q.traits.Set(i, 0, q.measures.At(i, 0)-q.measures.At(i, 2)+1e-3*q.traits.At(i, 0))
	}
	for _, c := range []struct {
		penalties []float64
		end       End
		text      string
	}{{[]float64{0.01, 1, 100}, LowEnd, "low"}, {[]float64{1e-9, 1e-8}, HighEnd, "high"}, {[]float64{3}, Inside, ""}} {
		q.penalties = c.penalties
		fit, err := q.design(t, Options{}).Fit(context.Background(), q.traits)
		if err != nil {
			t.Fatal(err)
		}
		got := fit.Repeats[0].Choices[1][0]
		if c.end == HighEnd {
			// The two errors differ by less than 1e-12: the larger is taken.
			if got.End != HighEnd {
				t.Errorf("%v: %+v", c.penalties, got)
			}
		} else if got.End != c.end || got.End.String() != c.text {
			t.Errorf("%v: %+v", c.penalties, got)
		}
		if math.IsNaN(got.InnerMSE) {
			t.Errorf("%v: no inner error although there are inner folds", c.penalties)
		}
	}
}

// Partial fractions against the plain double sum, with gaps between
// eigenvalues from wide to nothing.
func TestPartialFractions(t *testing.T) {
	const r = 6
	penalties := []float64{0.1, 1, 10, 100}
	st := stream.New(2, "test fractions")
	for _, gap := range []float64{0.3, 1e-2, 1e-4, 2e-6, 9e-7, 1e-7, 1e-10, 1e-15, 0} {
		for _, several := range []bool{false, true} {
			p := newTable(9, r)
			for i := range p.Data {
				p.Data[i] = st.Norm()
			}
			sp := &spectrum{r: r, people: 9, p: p, h: product(turned, p, plain, p)}
			for i := range r {
				mu := 3 * float64(i+1)
				if i == 3 || several { // one close pair, or all close
					mu = 3 * (3 + gap*float64(i))
				}
				sp.mu = append(sp.mu, mu)
			}
			g := sp.partialFractions(penalties)
			z := newTable(r, 1)
			for i := range z.Data {
				z.Data[i] = st.Norm()
			}
			b := &block{width: 1, u: newTable(r, 1), z: z, terms: newTable(2*r, 1)}
			v := product(plain, g, plain, z)
			first, second := b.terms.Data[:r], b.terms.Data[r:]
			floats.MulTo(first, z.Data, v.Data)
			floats.Scale(2, first)
			floats.MulTo(second, z.Data, b.closeTerms(&innerFold{spectrum: sp}).Data)
			got := product(plain, sp.sum, plain, b.terms)
			for l, penalty := range penalties {
				fitted := newTable(r, 1)
				for i := range r {
					fitted.Data[i] = z.Data[i] / (sp.mu[i] + penalty)
				}
				predicted := product(plain, p, plain, fitted)
				want := blas64.Dot(column(predicted, 0), column(predicted, 0)) / 9
				// Differences of g lose digits at large penalties, where the sum
				// matters less: it is judged on the scale of its least penalty.
				scale := 0.0
				for i := range r {
					for j := range r {
						scale += math.Abs(z.Data[i]*z.Data[j]*sp.h.Data[i*r+j]) / (sp.mu[i] + penalty) / (sp.mu[j] + penalties[0]) / 9
					}
				}
				if got := got.Data[l]; math.Abs(got-want) > 1e-11*scale {
					t.Errorf("gap %v, several %v, penalty %v: %v, want %v (off by %.1e of its terms)", gap, several, penalty, got, want, math.Abs(got-want)/scale)
				}
			}
		}
	}
}

// Measures with many equal eigenvalues take each way there is to keep them.
func TestCloseEigenvalues(t *testing.T) {
	for name, c := range map[string]struct{ measures, copies int }{"few pairs": {7, 3}, "many pairs": {24, 16}} {
		t.Run(name, func(t *testing.T) {
			q := invent(shape{people: 80, measures: c.measures, confounds: 1, traits: 2, repeats: 1, outer: 3, inner: 3}, 3)
			for j := range c.copies {
				for i := range 80 {
					q.measures.Set(i, c.measures-1-j, 2*q.measures.At(i, j%2)+float64(j))
				}
			}
			d := q.design(t, Options{})
			in := d.kept[0][0].inner[0]
			if few := len(in.pairs) > 0; few != (name == "few pairs") || few == (in.u.Rows > 0) {
				t.Fatalf("%d close pairs, %d rows", len(in.pairs), in.u.Rows)
			}
			fit, err := d.Fit(context.Background(), q.traits)
			if err != nil {
				t.Fatal(err)
			}
			book := textbook{measures: q.measures, confounds: q.confounds, penalties: q.penalties}
			for trait := range 2 {
				want := book.fit(mat.Col(nil, trait, q.traits), &q.folds.Repeats[0])
				for i := range 80 {
					if got := fit.Repeats[0].Predicted.At(i, trait); !near(got, want.predicted[i], 1e-9) {
						t.Fatalf("person %d is predicted %v, want %v", i, got, want.predicted[i])
					}
				}
				for o, mse := range want.mse {
					if got := fit.Repeats[0].Choices[o][trait]; !near(got.InnerMSE, mse, 1e-11) || got.Penalty != want.penalty[o] {
						t.Errorf("fold %d: %+v, want %v with %v", o, got, want.penalty[o], mse)
					}
				}
			}
		})
	}
}
