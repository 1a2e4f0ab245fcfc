package twin

import (
	"errors"
	"math"
	"testing"

	"kindwell/internal/stream"
)

// equalPairs is a sample of pairs with exact correlations, means 0 and
// variances 1.
func equalPairs(t testing.TB, nMZ, nDZ int, rMZ, rDZ float64) *Sample {
	t.Helper()
	return twinPairs(t, nMZ, nDZ, [3]float64{1, rMZ, 1}, [3]float64{1, rDZ, 1})
}

// With equal variances the unbounded estimates are Falconer's formulae. The
// correlations are those of Neale & Maes, table 6.1, and textbook exercises,
// one of which has a heritability beyond 1.
func TestFalconer(t *testing.T) {
	for _, c := range []struct{ rMZ, rDZ, a2, c2, d2, a2ADE, e2 float64 }{
		{.78, .30, .96, -.18, .36, .42, .22},
		{.69, .32, .74, -.05, .10, .59, .31},
		{.77, .32, .90, -.13, .26, .51, .23},
		{.70, .37, .66, .04, -.08, .78, .30},
		{.90, .10, 1.6, -.7, 1.4, -.5, .10},
		{.60, .40, .40, .20, -.4, 1.0, .40},
		{.30, .30, 0, .3, -.6, .9, .70},
	} {
		s := equalPairs(t, 300, 200, c.rMZ, c.rDZ)
		ace, ade := mustFit(t, s, ModelACE), mustFit(t, s, ModelADE)
		near(t, "a2", ace.SignedShare(A), c.a2, 1e-9)
		near(t, "c2", ace.SignedShare(C), c.c2, 1e-9)
		near(t, "e2", ace.SignedShare(E), c.e2, 1e-9)
		near(t, "a2 of ADE", ade.SignedShare(A), c.a2ADE, 1e-9)
		near(t, "d2", ade.SignedShare(D), c.d2, 1e-9)
		for _, e := range ace.Components {
			if e.Share < 0 || e.Share > 1 || e.AtBound != (e.Share == 0) {
				t.Errorf("bounded estimate %+v", e)
			}
		}
	}
}

// The book's example, Neale & Maes, node 105: a2 .30, c2 .20, 1000 + 1000
// pairs. Without C the ratio is 11.3615 and a2 .5212; without A it is 19.9335
// and c2 .4250 (n weights, computed from the expected matrices). The latter is
// also N (ln(1 - m^2) - ln(1 - rMZ^2)/2 - ln(1 - rDZ^2)/2).
func TestExpectedRatios(t *testing.T) {
	s := equalPairs(t, 1000, 1000, .50, .35)
	ae, ce, ace := mustFit(t, s, ModelAE), mustFit(t, s, ModelCE), mustFit(t, s, ModelACE)
	near(t, "a2", ae.Share(A), .5212, 5.1e-5)
	near(t, "c2", ce.Share(C), .4250, 5.1e-5)
	near(t, "e2", ce.Share(E), .5750, 5.1e-5)
	c, err := s.Test(ae, ace)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "C given A", c.Ratio, 11.3615, 5.1e-5)
	a, err := s.Test(ce, ace)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "A given C", a.Ratio, 19.9335, 5.1e-5)
	near(t, "A given C, closed form", a.Ratio, pairNonCentrality(1000, 1000, .5, .35), 1e-9)
	near(t, "signed root", a.Statistic, math.Sqrt(19.9335), 1e-5)
	if a.Method != SignedRootMethod || a.Method.String() != "signed_root" || c.Method.String() != "mixture" {
		t.Errorf("methods %s and %s", a.Method, c.Method)
	}
	// Upper tail of the normal distribution at 4.46469 by R: pnorm(..., lower = FALSE).
	near(t, "p", a.P, 4.0095e-6, 1e-9)
	near(t, "p of the mixture equals the signed root's inside the bounds", a.PMixture, a.P, 1e-15)
}

func TestSignedRootHasASign(t *testing.T) {
	s := equalPairs(t, 200, 200, .30, .50)
	ce, ace := mustFit(t, s, ModelCE), mustFit(t, s, ModelACE)
	a, err := s.Test(ce, ace)
	if err != nil {
		t.Fatal(err)
	}
	if !(a.Statistic < 0) || !(a.P > 0.5) || a.Ratio != 0 || a.PMixture != 1 {
		t.Errorf("r_mz below r_dz: %+v", a)
	}
	near(t, "statistic", a.Statistic*a.Statistic, pairNonCentrality(200, 200, .3, .5), 1e-9)
	if !ace.Components[0].AtBound || a.Conservative {
		t.Errorf("A at its bound: %v; conservative %v, want only A there", ace.Components, a.Conservative)
	}
	// The other way round C is at its bound, and the mixture too careful.
	s = equalPairs(t, 200, 200, .60, .10)
	if a, err = s.Test(mustFit(t, s, ModelCE), mustFit(t, s, ModelACE)); err != nil {
		t.Fatal(err)
	}
	if !a.Conservative || !(a.Ratio < a.Statistic*a.Statistic) {
		t.Errorf("C at its bound: %+v", a)
	}
}

// Weights for E against ACE and ADE in a sample with share p of MZ pairs (the
// kind of mixture: Dominicus et al. 2006). By hand, w2 = arccos(rho) / (2 pi)
// with rho = (p + (1-p)/2) / sqrt(p + (1-p)/4); for ADE the DZ pairs count 1/4
// beside 1/2.
func TestMixtureWeights(t *testing.T) {
	for _, c := range []struct {
		mz, dz int
		model  Model
		w0, w2 float64
	}{
		{50, 50, ModelACE, .448792, .051208},
		{40, 80, ModelACE, .5 - .054087, .054087},
		{40, 60, ModelACE, .5 - .053573, .053573},
		{50, 50, ModelADE, .465198, .034802},
	} {
		s := equalPairs(t, c.mz, c.dz, .5, .2)
		m := mixture(s.likelihood(c.model, ML))
		near(t, "w0", m[0], c.w0, 5.1e-7)
		near(t, "w1", m[1], .5, 0)
		near(t, "w2", m[2], c.w2, 5.1e-7)
		test, err := s.Test(mustFit(t, s, ModelE), mustFit(t, s, c.model))
		if err != nil {
			t.Fatal(err)
		}
		if test.Weights != m || test.DF != 2 {
			t.Errorf("test has weights %v and %d degrees of freedom", test.Weights, test.DF)
		}
	}
	// 5 % critical values: with those weights, and of one component.
	m := Mixture{.448792, .5, .051208}
	near(t, "critical value of E against ACE", m.Critical(.05), 3.10051, 5.1e-6)
	near(t, "critical value of one component", halfHalf.Critical(.05), 2.70554, 5.1e-6)
	near(t, "naive critical value", Mixture{0, 0, 1}.Critical(.05), 5.9915, 5.1e-5)
	near(t, "p of 3.8415", halfHalf.Tail(3.8415), .025, 1e-6)
	near(t, "p of 0", halfHalf.Tail(0), 1, 0)
	if c := halfHalf.Critical(.5); c != 0 {
		t.Errorf("critical value of one half: %g, want 0", c)
	}
	// pnorm(10, lower.tail = FALSE) by R 4.2.2.
	near(t, "normal tail at 10", normalUpper(10)/7.61985302416052e-24, 1, 1e-12)
}

// Weights hold for any design: against the projection on the quadrant by
// simulation, in a sample of mixed families.
func TestMixtureWeightsBySimulation(t *testing.T) {
	s := mixedFamilies(8, 80, 4).sample(t)
	lik := s.likelihood(ModelACE, ML)
	w := mixture(lik)
	// Estimates at E are normal with the inverse information; simulate the
	// score instead and count how many variances the projection leaves.
	lik.accumulate([]float64{0, 0})
	a, b, c := -lik.logDet2[0], -lik.logDet2[2], -lik.logDet2[3]
	draw := stream.New(9, "projection")
	const runs = 200000
	var counts [3]int
	for range runs {
		x := math.Sqrt(a) * draw.Norm()
		y := b/a*x + math.Sqrt(c-b*b/a)*draw.Norm()
		switch {
		case c*x-b*y > 0 && a*y-b*x > 0:
			counts[2]++
		case math.Max(x/math.Sqrt(a), y/math.Sqrt(c)) > 0:
			counts[1]++
		default:
			counts[0]++
		}
	}
	for k := range counts {
		near(t, "weight", w[k], float64(counts[k])/runs, 0.005)
	}
}

func TestTestsThatDoNotExist(t *testing.T) {
	s := equalPairs(t, 50, 50, .6, .3)
	for _, c := range []struct {
		null, full Model
		want       string
	}{
		{ModelADE, ModelACE, "no test of model ADE against model ACE"},
		{ModelACE, ModelACE, "no test of model ACE against model ACE"},
		{ModelACE, ModelAE, "no test of model ACE against model AE"},
		{ModelCE, ModelADE, "no test of model CE against model ADE"},
	} {
		_, err := s.Test(mustFit(t, s, c.null), mustFit(t, s, c.full))
		if err == nil || err.Error() != c.want {
			t.Errorf("%s, %s: error %v", c.null, c.full, err)
		}
	}
	fit := *mustFit(t, s, ModelACE)
	fit.Converged = false
	var n *NotConvergedError
	if _, err := s.Test(mustFit(t, s, ModelAE), &fit); !errors.As(err, &n) {
		t.Errorf("a fit that did not converge: error %v", err)
	}
	if _, err := s.Interval(&fit, ShareA, .95); !errors.As(err, &n) {
		t.Errorf("interval of a fit that did not converge: error %v", err)
	}
	for full, want := range map[Model]string{ModelACE: "CE ACE", ModelADE: "CE ACE", ModelAE: "E AE", ModelCE: ""} {
		null, against, ok := HeadlineTest(full)
		if got := null.String() + " " + against.String(); ok != (want != "") || ok && got != want {
			t.Errorf("headline test of %s: %s", full, got)
		}
	}
}

// What the null distributions are for, and what the tempting ones do: under E
// the ratio of E against ACE is 0 in w0 of samples (.449) and beyond 3.10051 in
// 5 %; A given C by its signed root rejects 5 % at C = .2, and the half-half
// mixture next to never when there is no C at all (.0012 in the limit).
func TestCalibration(t *testing.T) {
	if testing.Short() {
		t.Skip("simulation")
	}
	const pairs, runs = 200, 1500
	kinds, sizes := make([]byte, 2*pairs), make([]int, 2*pairs)
	for i := range kinds {
		kinds[i], sizes[i] = "md"[i%2], 2
	}
	k := sibships(kinds, sizes)
	y := make([]float64, 4*pairs)
	for i := range y {
		y[i] = float64(i)
	}
	people, err := NewSample(k, everyone(len(y)), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	simulate := func(c2 float64, run int) *Sample {
		draw := stream.New(10, "calibration", uint64(run), uint64(1000*c2))
		for i := range y {
			if i%2 == 0 {
				shared := math.Sqrt(c2) * draw.Norm()
				y[i], y[i+1] = shared, shared
			}
			y[i] += math.Sqrt(1-c2) * draw.Norm()
		}
		s, err := people.With(y, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
	var zero, beyond, mixed, root float64
	for run := range runs {
		s := simulate(0, run)
		ace := mustFit(t, s, ModelACE)
		e, err := s.Test(mustFit(t, s, ModelE), ace)
		if err != nil {
			t.Fatal(err)
		}
		if e.Ratio == 0 {
			zero++
		}
		if e.P <= .05 {
			beyond++
		}
		a, err := s.Test(mustFit(t, s, ModelCE), ace)
		if err != nil {
			t.Fatal(err)
		}
		if a.PMixture <= .05 {
			mixed++
		}
		s = simulate(.2, run)
		if a, err = s.Test(mustFit(t, s, ModelCE), mustFit(t, s, ModelACE)); err != nil {
			t.Fatal(err)
		}
		if a.P <= .05 {
			root++
		}
	}
	// Three standard errors of a rate from 1500 runs.
	near(t, "ratio of 0", zero/runs, .4488, .039)
	near(t, "E against ACE", beyond/runs, .05, .017)
	near(t, "signed root", root/runs, .05, .017)
	near(t, "half-half mixture without C", mixed/runs, .0012, .003)
}
