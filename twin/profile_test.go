package twin

import (
	"errors"
	"math"
	"testing"

	"kindwell/internal/stream"

	"pgregory.net/rapid"
)

func mustInterval(t testing.TB, s *Sample, f *Fit, q Quantity, confidence float64) Interval {
	t.Helper()
	i, err := s.Interval(f, q, confidence)
	if err != nil {
		t.Fatalf("%s %s: %v", f.Model, q, err)
	}
	return i
}

// lowestBetween is the least value of a function with one minimum.
func lowestBetween(f func(float64) float64, low, high float64) float64 {
	const golden = 0.6180339887498949
	a, b := high-golden*(high-low), low+golden*(high-low)
	fa, fb := f(a), f(b)
	for range 100 {
		if fa < fb {
			high, b, fb = b, a, fa
			a = high - golden*(high-low)
			fa = f(a)
		} else {
			low, a, fa = a, b, fb
			b = low + golden*(high-low)
			fb = f(b)
		}
	}
	return min(fa, fb)
}

// Signed limits of a2 and c2 by a search in the correlations of MZ and DZ pairs,
// a = 2 (r_mz - r_dz), c = 2 r_dz - r_mz, whose deviance has a closed form.
func TestSignedLimitsOfPairs(t *testing.T) {
	s := twinPairs(t, 533, 327, bmiMZ, bmiDZ)
	fit := mustFit(t, s, ModelACE)
	deviance := func(rMZ, rDZ float64) float64 {
		if math.Abs(rMZ) >= 1 || math.Abs(rDZ) >= 1 {
			return math.Inf(1)
		}
		var ss float64
		for _, g := range []struct {
			n float64
			m [3]float64
			r float64
		}{{533, bmiMZ, rMZ}, {327, bmiDZ, rDZ}} {
			ss += g.n * ((g.m[0]+g.m[2])/2 + g.m[1]) / (1 + g.r)
			ss += g.n * ((g.m[0]+g.m[2])/2 - g.m[1]) / (1 - g.r)
		}
		return 2*860*math.Log(ss) + 533*math.Log(1-rMZ*rMZ) + 327*math.Log(1-rDZ*rDZ)
	}
	a, c := fit.SignedShare(A), fit.SignedShare(C)
	least := deviance(a+c, a/2+c)
	for _, q := range []struct {
		quantity Quantity
		estimate float64
		profile  func(t float64) float64
	}{
		{SignedA, a, func(t float64) float64 {
			return lowestBetween(func(c float64) float64 { return deviance(t+c, t/2+c) }, -.9, .5)
		}},
		{SignedC, c, func(t float64) float64 {
			return lowestBetween(func(a float64) float64 { return deviance(a+t, a/2+t) }, .3, 1.6)
		}},
	} {
		i := mustInterval(t, s, fit, q.quantity, .95)
		near(t, "estimate", i.Estimate, q.estimate, 1e-12)
		// 3.841458820694124 = qchisq(.95, 1) in R.
		near(t, q.quantity.String()+" low", q.profile(i.Low)-least, 3.841458820694124, 1e-7)
		near(t, q.quantity.String()+" high", q.profile(i.High)-least, 3.841458820694124, 1e-7)
		if !(i.Low < i.Estimate && i.Estimate < i.High) || i.LowAtBound || i.HighAtBound {
			t.Errorf("%s: %+v", q.quantity, i)
		}
	}
}

// Pairs of siblings who are more alike than additive genes can make them: a2
// ends at 1 with E at its bound, signed a2 beyond it.
func TestShareOfOne(t *testing.T) {
	a, b := exactPairs(t, 100, 1, .6, 1, 3)
	var y []float64
	kinds, sizes := make([]byte, 100), make([]int, 100)
	for i := range a {
		kinds[i], sizes[i] = 's', 2
		y = append(y, a[i], b[i])
	}
	s, err := NewSample(sibships(kinds, sizes), everyone(200), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	f := mustFit(t, s, ModelAE)
	if f.Share(A) != 1 || f.Share(E) != 0 || !f.Components[1].AtBound || f.Components[0].AtBound {
		t.Errorf("shares %+v", f.Components)
	}
	near(t, "signed a2", f.SignedShare(A), 1.2, 1e-9)
	i := mustInterval(t, s, f, ShareA, .95)
	if i.High != 1 || !i.HighAtBound || i.LowAtBound || !(i.Low < 1 && i.Low > .8) {
		t.Errorf("a2 %+v", i)
	}
	e := mustInterval(t, s, f, ShareE, .95)
	if e.Low != 0 || !e.LowAtBound {
		t.Errorf("e2 %+v", e)
	}
	near(t, "e2 high", e.High, 1-i.Low, 1e-9)
	signed := mustInterval(t, s, f, SignedA, .95)
	if !(signed.Low > i.Low && signed.High > 1.2 && signed.High < 2) {
		t.Errorf("signed a2 %+v", signed)
	}
	// r = a2/2 lies within tanh(atanh(.6) -/+ 1.96/sqrt(n - 3/2)), nearly.
	half := 1.959964 / math.Sqrt(98.5)
	near(t, "signed low", signed.Low, 2*math.Tanh(math.Atanh(.6)-half), .01)
	near(t, "signed high", signed.High, 2*math.Tanh(math.Atanh(.6)+half), .01)
}

func TestIntervalOfModelE(t *testing.T) {
	s := equalPairs(t, 20, 20, .5, .3)
	i := mustInterval(t, s, mustFit(t, s, ModelE), ShareE, .95)
	if i.Estimate != 1 || i.Low != 1 || i.High != 1 {
		t.Errorf("%+v", i)
	}
}

// What must hold of any sample: bounded below signed, smaller below larger
// models, limits around estimates and wider with more confidence, shares that
// add to 1, the same numbers from REML's route where nothing is estimated twice.
func TestOrderOfFits(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		seed := rapid.Uint64Range(0, 1<<20).Draw(r, "seed")
		families := rapid.IntRange(60, 120).Draw(r, "families")
		a, c := rapid.Float64Range(0, .6).Draw(r, "a"), rapid.Float64Range(0, .35).Draw(r, "c")
		f := twinsWithSiblings(seed, families)
		draw := stream.New(seed, "order of fits")
		var shared float64
		for i := range f.y {
			if i%4 == 0 {
				shared = draw.Norm()
			}
			f.y[i] = math.Sqrt(a/2+c)*shared + math.Sqrt(1-a/2-c)*draw.Norm()
		}
		s := f.sample(t)
		fits := map[Model]*Fit{}
		for m := ModelE; m <= ModelADE; m++ {
			fit, err := s.Fit(m, FitOptions{})
			if err != nil || !fit.Converged || !fit.SignedConverged {
				r.Fatalf("model %s: %v, %+v", m, err, fit)
			}
			fits[m] = fit
			var sum, signed float64
			for _, e := range fit.Components {
				sum += e.Share
				signed += e.SignedShare
				if e.Share < 0 || e.Share > 1 {
					r.Fatalf("%s: share %+v", m, e)
				}
			}
			if math.Abs(sum-1) > 1e-12 || math.Abs(signed-1) > 1e-12 {
				r.Fatalf("%s: shares add to %v and %v", m, sum, signed)
			}
			if fit.SignedLogLik < fit.LogLik-1e-9 {
				r.Fatalf("%s: signed %v below bounded %v", m, fit.SignedLogLik, fit.LogLik)
			}
			lowest := 0.0
			for _, e := range fit.Components {
				lowest = min(lowest, e.SignedShare)
			}
			gain := fit.SignedLogLik - fit.LogLik
			if lowest == 0 && gain > 1e-9 || lowest < -.01 && gain < 1e-9 {
				r.Fatalf("%s: signed shares %+v, log-likelihoods %v and %v", m, fit.Components, fit.SignedLogLik, fit.LogLik)
			}
		}
		for _, p := range [][2]Model{{ModelE, ModelAE}, {ModelE, ModelCE}, {ModelE, ModelDE}, {ModelAE, ModelACE},
			{ModelCE, ModelACE}, {ModelAE, ModelADE}, {ModelDE, ModelADE}, {ModelE, ModelACE}, {ModelE, ModelADE}} {
			test, err := s.Test(fits[p[0]], fits[p[1]])
			if err != nil {
				r.Fatal(err)
			}
			same := true // the tested variances are all 0
			for _, e := range fits[p[1]].Components {
				if !p[0].Has(e.Component) {
					same = same && e.Share == 0
				}
			}
			if same && test.Ratio != 0 {
				r.Fatalf("ratio %g of equal fits", test.Ratio)
			}
			if test.P < 0 || test.P > 1 || test.Ratio < 0 || (test.Ratio == 0) != (test.PMixture == 1) {
				r.Fatalf("%+v", test)
			}
		}
		fit := fits[ModelACE]
		for _, q := range []Quantity{ShareA, ShareC, ShareE, Familial, SignedA, SignedC} {
			wide, err := s.Interval(fit, q, .95)
			if err != nil {
				r.Fatal(q, err)
			}
			narrow, err := s.Interval(fit, q, .8)
			if err != nil {
				r.Fatal(q, err)
			}
			if !(wide.Low <= narrow.Low && narrow.Low <= wide.Estimate && wide.Estimate <= narrow.High && narrow.High <= wide.High) {
				r.Fatalf("%s: %+v and %+v", q, wide, narrow)
			}
		}
	})
}

func TestInbreeding(t *testing.T) {
	// Children of siblings, one of them with a twin: K of a child with itself
	// is 1.25. A is defined, D is not.
	k := inbredKin{sibships([]byte("mdmdmdmd"), []int{2, 2, 3, 3, 2, 2, 3, 3})}
	y := make([]float64, len(k.family))
	draw := stream.New(14, "inbreeding")
	for i := range y {
		y[i] = draw.Norm()
	}
	s, err := NewSample(k, everyone(len(y)), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	mustFit(t, s, ModelAE)

	// The diagonal of K is uneven: the total variance takes its part of the
	// information, tr(B_j B_k) - tr(B_j) tr(B_k)/n.
	f := familySample{kin: k.tableKin, y: y}
	information := func(a, b Component) float64 {
		var sum, traceA, traceB float64
		x, z := f.component(a), f.component(b)
		for i := range y {
			for j := range y {
				u, v := x.At(i, j), z.At(i, j)
				for _, m := range []struct {
					of   Component
					into *float64
				}{{a, &u}, {b, &v}} {
					if m.of == A && k.family[i] == k.family[j] {
						*m.into = k.Kinship(i, j)
					}
					if i == j {
						*m.into--
					}
				}
				if i == j {
					traceA += u
					traceB += v
				}
				sum += u * v
			}
		}
		return sum - traceA*traceB/float64(len(y))
	}
	rho := information(A, C) / math.Sqrt(information(A, A)*information(C, C))
	near(t, "weight of two degrees of freedom", mixture(s.likelihood(ModelACE, ML))[2], math.Acos(rho)/(2*math.Pi), 1e-12)

	_, err = s.Fit(ModelADE, FitOptions{})
	var inbred *InbreedingError
	if !errors.As(err, &inbred) || inbred.Person != 4 {
		t.Errorf("error %v, want inbreeding of person 4", err)
	}
}

// inbredKin gives the third family inbred children.
type inbredKin struct{ *tableKin }

func (k inbredKin) Kinship(i, j int) float64 {
	v := k.tableKin.Kinship(i, j)
	if k.family[i] == 2 {
		v += .25
	}
	return v
}
