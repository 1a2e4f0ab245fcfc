package twin

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// FitOptions are the choices of a fit.
type FitOptions struct {
	// Criterion is ML (the default) or REML.
	Criterion Criterion
}

// Estimate is the share of one component.
type Estimate struct {
	Component Component
	// Variance is in squared units of the variable, Share a fraction of the
	// total variance. Both are at least 0.
	Variance, Share float64
	// AtBound says that the likelihood would be higher with, or is flat
	// towards, a variance below 0.
	AtBound bool
	// SignedVariance and SignedShare are the values at the maximum of the
	// likelihood without bounds that is reached uphill from the bounded one,
	// inside the region where V is positive definite. Unlike the bounded ones
	// they are not pushed upward by the bound; they may be negative.
	SignedVariance, SignedShare float64
}

// Fit is a model at its highest likelihood.
type Fit struct {
	Model     Model
	Criterion Criterion
	People    int
	Families  int

	// Components are in the order of Model.Components.
	Components []Estimate
	// Total is the total variance, the sum of the components' variances.
	Total float64
	// LogLik is the maximum of the log-likelihood with variances of 0 or more,
	// the constant -n/2 ln(2 pi) included; SignedLogLik is the maximum without
	// that bound.
	LogLik, SignedLogLik float64
	// Parameters counts fixed effects and variances.
	Parameters int
	// AIC is -2 LogLik + 2 Parameters, BIC -2 LogLik + Parameters ln(Families).
	AIC, BIC float64
	// Fixed are the fixed effects at the bounded optimum, intercept first.
	Fixed []FixedEffect

	// Converged says that the bounded search ended at a maximum, and
	// SignedConverged that the unbounded one did. Where the latter did not, the
	// signed values are NaN: in small samples the unbounded likelihood may rise
	// all the way to the edge of the region where V is positive definite.
	// Intervals and tests refuse what did not converge.
	Converged, SignedConverged bool
	// Evaluations counts evaluations of the likelihood, Restarts the starts
	// beyond the first, over both searches.
	Evaluations, Restarts int

	shares, signed []float64 // full precision, the start of profiles
}

// Share returns the bounded share of a component, 0 when the model lacks it.
func (f *Fit) Share(c Component) float64 {
	if i := f.Model.position(c); i >= 0 {
		return f.Components[i].Share
	}
	return 0
}

// SignedShare returns the unbounded share of a component, 0 when the model
// lacks it.
func (f *Fit) SignedShare(c Component) float64 {
	if i := f.Model.position(c); i >= 0 {
		return f.Components[i].SignedShare
	}
	return 0
}

// Fit maximises the likelihood of a model,
//
//	y = X beta + u,  V = s2 (a2 K + c2 R + d2 L + e2 I),
//
// with and without the bounds a2, c2, d2, e2 >= 0. Total variance and fixed
// effects are profiled out; the search over the shares is Newton's with exact
// derivatives, from several starts.
//
// The errors are *UnidentifiedError, *InbreedingError and ErrNoMaximum. A
// search that did not converge is no error but a fit that says so.
func (s *Sample) Fit(model Model, opt FitOptions) (*Fit, error) {
	lik := s.likelihood(model, opt.Criterion)
	if model.Has(D) && s.inbred >= 0 {
		return nil, &InbreedingError{Person: s.people[s.inbred]}
	}
	if err := identified(lik, model); err != nil {
		return nil, err
	}
	m := len(lik.use)
	all := []group{{members: upTo(m + 1), total: 1}}
	starts := startingShares(m)

	bounded, ok := best(newSearch(lik, all, true), starts, leastDistance)
	if !ok {
		return nil, ErrNoMaximum
	}
	signed, signedOK := nearest(newSearch(lik, all, false), bounded, starts)
	f := &Fit{
		Model: model, Criterion: opt.Criterion, People: s.People(), Families: s.Families(),
		Parameters:  s.columns.width - 1 + m + 1,
		Converged:   bounded.converged,
		Evaluations: lik.evaluations,
		Restarts:    2*len(starts) - 1,
		shares:      bounded.shares,
	}
	f.LogLik = s.logLik(lik, bounded.deviance)
	f.AIC = -2*f.LogLik + 2*float64(f.Parameters)
	f.BIC = -2*f.LogLik + float64(f.Parameters)*math.Log(float64(f.Families))

	unit := s.columns.scale * s.columns.scale
	p := lik.newPoint()
	lik.at(bounded.shares[:m], p)
	f.Total = p.s2 * unit
	for i, c := range model.components() {
		f.Components = append(f.Components, Estimate{
			Component: c,
			Variance:  bounded.shares[i] * f.Total, Share: bounded.shares[i],
			AtBound:        bounded.shares[i] == 0,
			SignedVariance: math.NaN(), SignedShare: math.NaN(),
		})
	}
	f.Fixed = s.columns.effects(lik.beta, lik.factor, p.s2)

	f.SignedConverged = signedOK && signed.converged
	f.SignedLogLik = math.NaN()
	if f.SignedConverged {
		f.signed = signed.shares
		f.SignedLogLik = s.logLik(lik, signed.deviance)
		lik.at(signed.shares[:m], p)
		for i := range f.Components {
			f.Components[i].SignedShare = signed.shares[i]
			f.Components[i].SignedVariance = signed.shares[i] * p.s2 * unit
		}
	}
	return f, nil
}

// logLik turns a deviance in the likelihood's units into the log-likelihood of
// the variable and covariates as they were given.
func (s *Sample) logLik(lik *likelihood, deviance float64) float64 {
	n := float64(s.People())
	if lik.criterion == REML {
		n -= float64(s.columns.width - 1)
		deviance += 2 * s.columns.logDet()
	}
	return -0.5 * (deviance + n*(1+math.Log(2*math.Pi)+2*math.Log(s.columns.scale)))
}

// upTo returns 0, 1, ... n-1.
func upTo(n int) []int {
	all := make([]int, n)
	for i := range all {
		all[i] = i
	}
	return all
}

// startingShares are the starts of a fit of m components and E: all alike,
// little of any, and much of each in turn.
func startingShares(m int) [][]float64 {
	fill := func(main int, share float64) []float64 {
		w := make([]float64, m+1)
		for i := range w {
			w[i] = (1 - share) / float64(m)
		}
		w[main] = share
		return w
	}
	if m == 0 {
		return [][]float64{{1}}
	}
	starts := [][]float64{fill(m, 1/float64(m+1)), fill(m, 0.9)}
	for k := range m {
		starts = append(starts, fill(k, 0.6))
	}
	return starts
}

// leastDistance is the smallest pivot of V at a maximum that counts. Closer to
// the edge of positive definiteness the likelihood is climbing without end.
const leastDistance = 1e-8

// leastSignedDistance is leastDistance for the unbounded model. A structure that
// few families have can go singular there while the fixed effects take what it
// no longer allows, so that the likelihood rises for ever: searches that run to
// that edge stop at pivots of about 1e-8, maxima that mean something lie at those
// of the order of e2.
const leastSignedDistance = 1e-5

// nearest returns the maximum of the unbounded model that is reached uphill from
// the bounded one; that is the bounded one itself where no share is held at 0.
// Higher values elsewhere, at the edge of the region where V is positive
// definite, belong to no maximum. Only where the way uphill has no end are the
// other starts tried.
func nearest(s *search, bounded found, starts [][]float64) (found, bool) {
	if bounded.converged {
		if f, ok := s.from(bounded.shares); ok && f.converged && f.pivot > leastSignedDistance {
			return f, true
		}
	}
	return best(s, starts, leastSignedDistance)
}

// best searches from every start and returns the least deviance that a search
// converged to, or the least at all where none did. It reports false when every
// search ran to the edge of the region where V is positive definite.
func best(s *search, starts [][]float64, distance float64) (found, bool) {
	var least found
	have := false
	for _, w := range starts {
		f, ok := s.from(w)
		if ok && f.pivot > distance && (!have || better(f, least, s.lik.people)) {
			least, have = f, true
		}
	}
	return least, have
}

// better reports whether a is to be preferred to b: converged, then lower. Of
// equal ones within rounding neither is better.
func better(a, b found, people int) bool {
	if a.converged != b.converged {
		return a.converged
	}
	return a.deviance < b.deviance-1e-11*float64(people)
}

// identified checks that the model's matrices differ on the sample, after the
// fixed effects have taken their part: the information on the variances at
// V = I, tr(P B_k P B_l) with P = I - X(X'X)^-1 X', must not be singular.
func identified(lik *likelihood, model Model) error {
	m, q := len(lik.use), lik.columns-1
	if !lik.accumulate(make([]float64, m)) {
		panic("twin: the identity is not positive definite")
	}
	unpackTo(lik.factor, lik.cross, q)
	if !cholesky(lik.factor, q) {
		panic("twin: covariates are collinear after they were made orthogonal")
	}
	// Entry 0 stands for E, the others for the component matrices less I.
	x := mat.NewSymDense(m+1, nil)
	x.SetSym(0, 0, float64(lik.people-q))
	first := make([][]float64, m)
	second := make([]float64, q*q)
	next := 0
	for k := range m {
		first[k] = make([]float64, q*q)
		solveMatrix(first[k], lik.factor, lik.cross1[k], q)
		x.SetSym(0, 1+k, lik.logDet1[k]+trace(first[k], q))
		for j := range k + 1 {
			solveMatrix(second, lik.factor, lik.cross2[next], q)
			x.SetSym(1+j, 1+k, -lik.logDet2[k*m+j]-trace(second, q)+traceOfProduct(first[k], first[j], q))
			next++
		}
	}
	scale := make([]float64, m+1)
	for k := range scale {
		scale[k] = math.Sqrt(max(x.At(k, k), 0))
		if k > 0 && scale[k] < 1e-6*scale[0] {
			// No relatives at all who share the component.
			return &UnidentifiedError{Model: model, Components: []Component{model.components()[k-1], E}}
		}
	}
	for j := range m + 1 {
		for k := j; k <= m; k++ {
			x.SetSym(j, k, x.At(j, k)/(scale[j]*scale[k]))
		}
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(x, true) {
		panic("twin: the eigenvalues of an information matrix did not converge")
	}
	if eigen.Values(nil)[0] > 1e-9 {
		return nil
	}
	// The null vector in terms of the whole matrices, of which I + B_k is one.
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	weight := make([]float64, m+1)
	var most float64
	weight[m] = vectors.At(0, 0) / scale[0]
	for k := range m {
		weight[k] = vectors.At(1+k, 0) / scale[1+k]
		weight[m] -= weight[k]
		most = max(most, math.Abs(weight[k]))
	}
	confused := &UnidentifiedError{Model: model}
	for k, c := range model.components() {
		if math.Abs(weight[k]) > 1e-4*most {
			confused.Components = append(confused.Components, c)
		}
	}
	return confused
}
