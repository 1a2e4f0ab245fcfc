package twin

import (
	"fmt"
	"math"
)

// Quantity is a share, or a sum of shares, of which an interval can be asked.
type Quantity uint8

// The quantities. All are fractions of the total variance.
const (
	ShareA   Quantity = iota // a2
	ShareC                   // c2
	ShareD                   // d2
	ShareE                   // e2
	Broad                    // a2 + d2, heritability in the broad sense
	Familial                 // a2 + c2 + d2, all that relatives have in common
	SignedA                  // a2 of the unbounded model
	SignedC                  // c2 of the unbounded model
	SignedD                  // d2 of the unbounded model
)

var quantities = [...]struct {
	name       string
	components []Component
	signed     bool
}{
	ShareA:   {"a2", []Component{A}, false},
	ShareC:   {"c2", []Component{C}, false},
	ShareD:   {"d2", []Component{D}, false},
	ShareE:   {"e2", []Component{E}, false},
	Broad:    {"h2_broad", []Component{A, D}, false},
	Familial: {"familial", []Component{A, C, D}, false},
	SignedA:  {"a2_signed", []Component{A}, true},
	SignedC:  {"c2_signed", []Component{C}, true},
	SignedD:  {"d2_signed", []Component{D}, true},
}

// String returns the name of the quantity in the tables.
func (q Quantity) String() string {
	if int(q) < len(quantities) {
		return quantities[q].name
	}
	return fmt.Sprintf("Quantity(%d)", uint8(q))
}

// Interval is a profile-likelihood interval: the values at which -2 lnL,
// maximised over everything else, is at most the chi-square(1) quantile above
// its minimum.
type Interval struct {
	Estimate  float64
	Low, High float64
	// LowAtBound and HighAtBound say that the interval ends at 0 or 1 because
	// shares do, not because the likelihood has fallen.
	LowAtBound, HighAtBound bool
	Confidence              float64 // as asked, 0.95 for instance
}

// Interval returns the profile-likelihood interval of a quantity under a fit
// of this sample. Bounded quantities are cut at 0 and 1; signed ones have no
// bound but the region where V is positive definite.
//
// The error is *NotConvergedError where the fit or the profile did not
// converge. A quantity none of whose components is in the model, a confidence
// outside (0, 1), or a fit of another sample panics.
func (s *Sample) Interval(fit *Fit, q Quantity, confidence float64) (Interval, error) {
	if int(q) >= len(quantities) {
		panic("twin: no such quantity: " + q.String())
	}
	if fit.People != s.People() || fit.Families != s.Families() {
		panic("twin: interval asked of a fit of another sample")
	}
	what := quantities[q]
	var inside, outside []int
	for i, c := range fit.Model.components() {
		if contains(what.components, c) {
			inside = append(inside, i)
		} else {
			outside = append(outside, i)
		}
	}
	if len(inside) == 0 {
		panic(fmt.Sprintf("twin: model %s has no %s", fit.Model, q))
	}
	if what.signed && !fit.SignedConverged {
		return Interval{}, &NotConvergedError{What: "unbounded model " + fit.Model.String()}
	}
	if !what.signed && !fit.Converged {
		return Interval{}, &NotConvergedError{What: "model " + fit.Model.String()}
	}
	if len(outside) == 0 {
		// Model E: all variance is E's by definition.
		return Interval{Estimate: 1, Low: 1, High: 1, LowAtBound: true, HighAtBound: true, Confidence: confidence}, nil
	}
	shares := fit.shares
	if what.signed {
		shares = fit.signed
	}
	p := &profile{
		lik: s.likelihood(fit.Model, fit.Criterion), inside: inside, outside: outside, bounded: !what.signed,
	}
	i, err := p.interval(shares, confidence)
	if err != nil {
		return Interval{}, &NotConvergedError{What: fmt.Sprintf("interval of %s, model %s", q, fit.Model)}
	}
	return i, nil
}

func contains(cs []Component, c Component) bool {
	for _, own := range cs {
		if own == c {
			return true
		}
	}
	return false
}

// profile is the least deviance as a function of the sum of some shares.
type profile struct {
	lik             *likelihood
	inside, outside []int
	bounded         bool
	least           float64 // deviance of the fit
	known           []found // profile points found so far, the fit first
	total           []float64
}

// interval looks for the limits on both sides of the fit with these shares.
func (p *profile) interval(shares []float64, confidence float64) (Interval, error) {
	if !(confidence > 0 && confidence < 1) {
		panic("twin: confidence must lie between 0 and 1")
	}
	estimate := 0.0
	for _, j := range p.inside {
		estimate += shares[j]
	}
	start, ok := p.search(estimate).from(shares)
	if !ok || !start.converged {
		return Interval{}, errProfile
	}
	p.least = start.deviance
	p.known, p.total = []found{start}, []float64{estimate}
	root := math.Sqrt2 * math.Erfinv(confidence) // of the chi-square(1) quantile
	i := Interval{Estimate: estimate, Confidence: confidence}
	var err error
	if i.Low, i.LowAtBound, err = p.limit(estimate, -1, root); err != nil {
		return Interval{}, err
	}
	i.High, i.HighAtBound, err = p.limit(estimate, 1, root)
	return i, err
}

// errProfile is turned into a *NotConvergedError by the callers, who know what
// was profiled.
var errProfile = &NotConvergedError{What: "profile"}

// search returns the search with the inside shares summing to t.
func (p *profile) search(t float64) *search {
	return newSearch(p.lik, []group{{p.inside, t}, {p.outside, 1 - t}}, p.bounded)
}

// limit finds where the root of the rise in deviance reaches the given one, on
// the side of the estimate that sign says.
func (p *profile) limit(estimate, sign, root float64) (at float64, bound bool, err error) {
	edge := math.Inf(1)
	if p.bounded {
		edge = (1 - estimate) * (1 + sign) / 2
		if sign < 0 {
			edge = estimate
		}
		if edge <= 0 {
			return estimate, true, nil
		}
	}
	// excess is negative inside the interval and nearly linear in distance.
	excess := func(distance float64) (float64, error) {
		rise, err := p.rise(estimate + sign*distance)
		return math.Sqrt(max(rise, 0)) - root, err
	}
	inside, outside := 0.0, math.Inf(1)
	low, high := -root, 0.0
	for d := min(0.1, edge); ; {
		e, err := excess(d)
		if err != nil {
			return 0, false, err
		}
		switch {
		case math.IsInf(e, 1):
			// Beyond the region where V is positive definite.
			outside = d
			if outside-inside < 1e-12 {
				return estimate + sign*inside, false, nil
			}
			d = (inside + outside) / 2
			continue
		case e <= 0:
			inside, low = d, e
			if d == edge {
				return estimate + sign*edge, true, nil
			}
			if math.IsInf(outside, 1) {
				d = min(2*d, edge)
			} else {
				d = (inside + outside) / 2
			}
			continue
		}
		outside, high = d, e
		break
	}
	d, err := brent(excess, inside, low, outside, high, 1e-11)
	return estimate + sign*d, false, err
}

// rise is the deviance above the fit's with the inside shares summing to t,
// infinite where V is positive definite for no such shares.
func (p *profile) rise(t float64) (float64, error) {
	// Start from the nearest point known.
	near := 0
	for i, v := range p.total {
		if math.Abs(v-t) < math.Abs(p.total[near]-t) {
			near = i
		}
	}
	s := p.search(t)
	f, ok := p.approach(s, near, t)
	if p.bounded && len(p.inside)+len(p.outside) > 2 {
		if other, fine := s.from(p.even(t)); fine && (!ok || better(other, f, p.lik.people)) {
			f, ok = other, true
		}
	}
	if !ok {
		return math.Inf(1), nil
	}
	if !f.converged || f.deviance < p.least-1e-7 {
		return 0, errProfile
	}
	p.known, p.total = append(p.known, f), append(p.total, t)
	return f.deviance - p.least, nil
}

// approach searches at t from a known point: its shares scaled to the new
// totals where bounds keep them safe, else moved in step with the change.
func (p *profile) approach(s *search, near int, t float64) (found, bool) {
	old, from := p.known[near].shares, p.total[near]
	if p.bounded {
		w := append([]float64(nil), old...)
		scale := func(members []int, before, after float64) {
			for _, j := range members {
				if before > 0 {
					w[j] *= after / before
				} else {
					w[j] = after / float64(len(members))
				}
			}
		}
		scale(p.inside, from, t)
		scale(p.outside, 1-from, 1-t)
		return s.from(w)
	}
	// Follow the path of minima in as few steps as keep V positive definite.
	for pieces := 1; pieces <= 64; pieces *= 4 {
		f, ok := found{shares: old}, true
		for piece := 1; piece <= pieces && ok; piece++ {
			reach := from + (t-from)*float64(piece)/float64(pieces)
			here := p.search(reach)
			f, ok = here.from(p.tangent(f.shares, reach))
		}
		if ok {
			return f, true
		}
	}
	return found{}, false
}

// even returns shares with the inside summing to t, alike inside and alike
// outside.
func (p *profile) even(t float64) []float64 {
	w := make([]float64, len(p.inside)+len(p.outside))
	for _, j := range p.inside {
		w[j] = t / float64(len(p.inside))
	}
	for _, j := range p.outside {
		w[j] = (1 - t) / float64(len(p.outside))
	}
	return w
}

// tangent moves shares so that the inside ones sum to t, along the tangent of
// the path of minima.
func (p *profile) tangent(w []float64, t float64) []float64 {
	before := 0.0
	for _, j := range p.inside {
		before += w[j]
	}
	s := p.search(before)
	moved := append([]float64(nil), w...)
	if !p.lik.at(w[:len(w)-1], s.point) {
		return moved
	}
	s.chooseMoves(w)
	shift := move{share: s.reference(s.groups[0], w), reference: s.reference(s.groups[1], w)}
	for i := range s.moves {
		s.moves[i].slope = (t - before) * s.curvature(s.moves[i], shift)
	}
	s.solveFree(upTo(len(s.moves)))
	moved[shift.share] += t - before
	moved[shift.reference] -= t - before
	for _, v := range s.moves {
		moved[v.share] += v.length
		moved[v.reference] -= v.length
	}
	return moved
}
