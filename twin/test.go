package twin

import (
	"fmt"
	"math"
)

// Method is how a test turns its statistic into a p value.
type Method uint8

const (
	// MixtureMethod compares the bounded likelihood ratio with the mixture of
	// chi-squares that belongs to variances at their bound.
	MixtureMethod Method = iota
	// SignedRootMethod compares the signed root of the unbounded likelihood
	// ratio with the normal distribution, upper tail. Unlike the mixture it
	// holds its level whatever the other variances are.
	SignedRootMethod
)

// String returns the name of the method in the tables.
func (m Method) String() string {
	if m == SignedRootMethod {
		return "signed_root"
	}
	return "mixture"
}

// Test is a comparison of two nested models.
type Test struct {
	Null, Full Model
	// Statistic is the likelihood ratio -2 (lnL null - lnL full) for
	// MixtureMethod, at least 0; for SignedRootMethod the root of the unbounded
	// ratio with the sign of the tested variance's signed estimate.
	Statistic float64
	// Ratio is the bounded likelihood ratio for both methods, at least 0.
	Ratio float64
	DF    int // number of variances tested
	// Weights of chi-square(0), (1) and (2) in the null distribution of Ratio.
	Weights Mixture
	// PMixture is the p value of Ratio; 1 when Ratio is 0. It is conservative
	// where Conservative says so.
	PMixture float64
	// Conservative says that a variance outside the test is at its bound, so
	// that Ratio is smaller than its mixture supposes.
	Conservative bool
	Method       Method
	P            float64 // by Method
}

// Test compares two fits of this sample. These pairs have a test:
//
//	CE, ACE             additive variance given C: signed root, one-sided; where
//	                    an unbounded model has no maximum, the bounded ratio
//	                    with its mixture, half and half, which is conservative
//	AE, ACE  and AE, ADE   C or D given A: mixture, half and half
//	DE, ADE             A given D: mixture, half and half
//	E, AE  E, CE  E, DE    one familial component at all: mixture, half and half
//	E, ACE  and  E, ADE    any of two: mixture with the weights of the sample's
//	                    own design (Self & Liang 1987; Dominicus et al. 2006)
//
// The test of A that belongs beside an ADE fit is CE, ACE too: without bounds
// ADE and ACE are one model, in which A is what makes identical twins more
// alike than others.
//
// The errors are *NotConvergedError, and one naming the pair where it has no
// test. Fits of another sample, or by different criteria, panic.
func (s *Sample) Test(null, full *Fit) (*Test, error) {
	for _, f := range []*Fit{null, full} {
		if f.People != s.People() || f.Families != s.Families() {
			panic("twin: test asked of a fit of another sample")
		}
		if !f.Converged {
			return nil, &NotConvergedError{What: "model " + f.Model.String()}
		}
	}
	if null.Criterion != full.Criterion {
		panic("twin: test asked of an ML and a REML fit")
	}
	var tested []Component
	nested := true
	for _, c := range full.Model.components() {
		if !null.Model.Has(c) {
			tested = append(tested, c)
		}
	}
	for _, c := range null.Model.components() {
		nested = nested && full.Model.Has(c)
	}
	if !nested || len(tested) == 0 {
		return nil, fmt.Errorf("no test of model %s against model %s", null.Model, full.Model)
	}
	t := &Test{Null: null.Model, Full: full.Model, DF: len(tested), Weights: halfHalf}
	if len(tested) == 2 {
		t.Weights = mixture(s.likelihood(full.Model, full.Criterion))
	}
	same := true // all tested variances are 0, so that the models are one
	for _, e := range full.Components {
		switch {
		case contains(tested, e.Component):
			same = same && e.AtBound
		case e.AtBound:
			t.Conservative = true
		}
	}
	var err error
	if t.Ratio, err = ratio(null.LogLik, full.LogLik, s.People(), full.Model); err != nil {
		return nil, err
	}
	if same {
		t.Ratio = 0
	}
	t.PMixture = t.Weights.Tail(t.Ratio)
	t.Statistic, t.P = t.Ratio, t.PMixture
	if null.Model == ModelCE && full.Model == ModelACE {
		if !null.SignedConverged || !full.SignedConverged {
			// The bounded ratio stands in: conservative, but a test.
			return t, nil
		}
		r, err := ratio(null.SignedLogLik, full.SignedLogLik, s.People(), full.Model)
		if err != nil {
			return nil, err
		}
		t.Method = SignedRootMethod
		t.Statistic = math.Copysign(math.Sqrt(r), full.SignedShare(A))
		t.P = normalUpper(t.Statistic)
	}
	return t, nil
}

// HeadlineTest returns the models whose comparison is the test of additive
// variance that goes with a full model: CE against ACE for ACE and for ADE, E
// against AE for AE. The other models have no such test, and ok is false.
func HeadlineTest(full Model) (null, against Model, ok bool) {
	switch full {
	case ModelACE, ModelADE:
		return ModelCE, ModelACE, true
	case ModelAE:
		return ModelE, ModelAE, true
	}
	return 0, 0, false
}

// ratio is the likelihood ratio of two nested fits. A larger model cannot fit
// worse; a difference below 0 by more than rounding means that its maximum was
// missed.
func ratio(null, full float64, people int, model Model) (float64, error) {
	r := 2 * (full - null)
	if r < -1e-9*float64(people)-1e-8 {
		return 0, &NotConvergedError{What: "model " + model.String()}
	}
	return max(r, 0), nil
}
