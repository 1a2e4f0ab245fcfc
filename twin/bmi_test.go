package twin

import (
	"math"
	"testing"
)

// Logarithm of body mass index in young Australian female twins, 534 MZ and
// 328 DZ pairs (Neale & Maes, Methodology for Genetic Studies of Twins and
// Families, table 6.4). The two covariance matrices are those behind the
// printed chi-squares of 8.06 (AE) and 160.72 (CE), which they give to the
// last digit; the further digits were computed from the matrices with base R.
var (
	bmiMZ = [3]float64{0.7247, 0.5891, 0.7915}
	bmiDZ = [3]float64{0.7786, 0.2461, 0.8365}
)

// saturated is the log-likelihood of pairs with a mean and variance of each
// twin's own and a covariance, at its maximum.
func saturated(n int, m [3]float64) float64 {
	return -float64(n) / 2 * (2*math.Log(2*math.Pi) + math.Log(m[0]*m[2]-m[1]*m[1]) + 2)
}

func TestBMIChiSquares(t *testing.T) {
	for _, c := range []struct {
		name     string
		nMZ, nDZ int
		want     map[Model]float64
	}{
		// Weights n - 1, as printed: 533 and 327 pairs with divisor n are what
		// 534 and 328 are with divisor n - 1.
		{"weights n-1", 533, 327, map[Model]float64{
			ModelE: 529.2984, ModelCE: 160.7182, ModelAE: 8.0550, ModelACE: 8.0550, ModelADE: 3.7107, ModelDE: 7.7957}},
		{"weights n", 534, 328, map[Model]float64{
			ModelE: 530.3303, ModelCE: 161.1009, ModelAE: 8.0757, ModelADE: 3.7186}},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := twinPairs(t, c.nMZ, c.nDZ, bmiMZ, bmiDZ)
			top := saturated(c.nMZ, bmiMZ) + saturated(c.nDZ, bmiDZ)
			for m, want := range c.want {
				f := mustFit(t, s, m)
				near(t, m.String(), 2*(top-f.LogLik), want, 5.1e-5)
			}
			near(t, "unbounded ACE", 2*(top-mustFit(t, s, ModelACE).SignedLogLik), c.want[ModelADE], 5.1e-5)
		})
	}
}

func TestBMIShares(t *testing.T) {
	s := twinPairs(t, 533, 327, bmiMZ, bmiDZ)
	ae, ce, ade, ace := mustFit(t, s, ModelAE), mustFit(t, s, ModelCE), mustFit(t, s, ModelADE), mustFit(t, s, ModelACE)
	// Same source: paths and standardised shares.
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"AE a2", ae.Share(A), .7813}, {"AE e2", ae.Share(E), .2187}, {"AE total variance", ae.Total, .79302},
		{"AE path a", math.Sqrt(ae.Components[0].Variance), .7871},
		{"AE path e", math.Sqrt(ae.Components[1].Variance), .4165},
		{"CE c2", ce.Share(C), .5904}, {"CE e2", ce.Share(E), .4096},
		{"ADE a2", ade.Share(A), .4042}, {"ADE d2", ade.Share(D), .3787}, {"ADE e2", ade.Share(E), .2171},
		{"ADE path d", math.Sqrt(ade.Components[1].Variance), .5441},
		{"ACE a2", ace.Share(A), .7813},
		{"ACE signed a2", ace.SignedShare(A), .9723}, {"ACE signed c2", ace.SignedShare(C), -.1894},
		{"ACE signed e2", ace.SignedShare(E), .2171},
	} {
		near(t, c.what, c.got, c.want, 5.1e-5)
	}
	if c := ace.Components[1]; !c.AtBound || c.Share != 0 || c.Variance != 0 {
		t.Errorf("C of ACE is %+v, want exactly 0 at its bound", c)
	}
	if a := ace.Components[0]; a.AtBound {
		t.Error("A of ACE is said to be at its bound")
	}
	// Without bounds ACE and ADE are one model: A' = A + 1.5 D, C' = -D/2.
	a, d := ade.Components[0].SignedVariance, ade.Components[1].SignedVariance
	near(t, "A + 1.5 D", ace.Components[0].SignedVariance, a+1.5*d, 1e-9)
	near(t, "-D/2", ace.Components[1].SignedVariance, -d/2, 1e-9)
	near(t, "E", ace.Components[2].SignedVariance, ade.Components[2].SignedVariance, 1e-9)
	near(t, "unbounded log-likelihoods", ace.SignedLogLik, ade.SignedLogLik, 1e-9)
}

func TestBMIIntervals(t *testing.T) {
	s := twinPairs(t, 533, 327, bmiMZ, bmiDZ)
	ae, ade, ace := mustFit(t, s, ModelAE), mustFit(t, s, ModelADE), mustFit(t, s, ModelACE)
	// 95 % profile limits computed from the matrices with base R, four digits.
	for _, c := range []struct {
		fit       *Fit
		q         Quantity
		low, high float64
	}{
		{ae, ShareA, .7479, .8101},
		{ade, ShareA, .0127, .7614},
		{ade, Broad, .7507, .8108},
		{ade, Familial, .7507, .8108},
		{ade, ShareE, 1 - .8108, 1 - .7507},
	} {
		i, err := s.Interval(c.fit, c.q, 0.95)
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.fit.Model.String()+" "+c.q.String()+" low", i.Low, c.low, 5.1e-5)
		near(t, c.fit.Model.String()+" "+c.q.String()+" high", i.High, c.high, 5.1e-5)
		if i.LowAtBound || i.HighAtBound {
			t.Errorf("%s %s: an end is said to be at its bound", c.fit.Model, c.q)
		}
	}
	i, err := s.Interval(ace, ShareC, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	if i.Low != 0 || !i.LowAtBound || i.HighAtBound || !(i.High > 0) {
		t.Errorf("interval of c2 at its bound: %+v", i)
	}
}

func TestBMITests(t *testing.T) {
	s := twinPairs(t, 533, 327, bmiMZ, bmiDZ)
	ae, ade, e := mustFit(t, s, ModelAE), mustFit(t, s, ModelADE), mustFit(t, s, ModelE)
	d, err := s.Test(ae, ade)
	if err != nil {
		t.Fatal(err)
	}
	// Same source: likelihood ratio 4.3444; p .0371 against chi-square(1),
	// .0186 with the mixture.
	near(t, "ratio", d.Ratio, 4.3444, 1e-4)
	near(t, "p of the mixture", d.P, .0186, 5e-5)
	near(t, "p against chi-square(1)", 2*d.P, .0371, 5.1e-5)
	a, err := s.Test(e, ae)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "E against AE", a.Ratio, 529.2984-8.0550, 1e-4)
}

func TestBMICriteria(t *testing.T) {
	s := twinPairs(t, 533, 327, bmiMZ, bmiDZ)
	for m, parameters := range map[Model]int{ModelE: 2, ModelAE: 3, ModelACE: 4, ModelADE: 4} {
		f := mustFit(t, s, m)
		if f.Parameters != parameters || f.People != 2*860 || f.Families != 860 {
			t.Errorf("%s: %d parameters, %d people in %d families", m, f.Parameters, f.People, f.Families)
		}
		near(t, "AIC", f.AIC, -2*f.LogLik+2*float64(parameters), 1e-9)
		// ln(860) = 6.756932389247553.
		near(t, "BIC", f.BIC, -2*f.LogLik+6.756932389247553*float64(parameters), 1e-9)
		if f.Evaluations < 2 || m != ModelE && f.Restarts < 3 {
			t.Errorf("%s: %d evaluations, %d restarts", m, f.Evaluations, f.Restarts)
		}
		if s.Structures() != 2 {
			t.Errorf("%d structures, want 2", s.Structures())
		}
	}
	// With C at its bound ACE is AE with one parameter more.
	ae, ace := mustFit(t, s, ModelAE), mustFit(t, s, ModelACE)
	near(t, "AIC of a component at its bound", ace.AIC-ae.AIC, 2, 1e-9)
}

func TestModels(t *testing.T) {
	for m := ModelE; m <= ModelADE; m++ {
		got, err := ParseModel(m.String())
		if err != nil || got != m {
			t.Errorf("ParseModel(%q) = %v, %v", m.String(), got, err)
		}
		name := ""
		for _, c := range m.Components() {
			name += c.String()
		}
		if name != m.String() {
			t.Errorf("model %s has components %s", m, name)
		}
	}
	if _, err := ParseModel("ACDE"); err == nil || err.Error() != `no model "ACDE"; the models are E, AE, CE, DE, ACE and ADE` {
		t.Errorf("error %v", err)
	}
	if ModelAE.Has(C) || !ModelAE.Has(A) {
		t.Error("AE has A and not C")
	}
}
