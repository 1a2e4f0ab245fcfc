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
	// LowAtBound and HighAtBound say that the interval ends because the shares
	// do, not because the likelihood has fallen: at 0 or 1, or, for signed
	// quantities, where V is no longer positive definite in every family.
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
		edge = 1 - estimate
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
	inside, low := 0.0, -root
	outside, high := math.Inf(1), 0.0
	d := min(p.reach(sign, root), edge)
	for high <= 0 {
		e, err := excess(d)
		switch {
		case err != nil:
			return 0, false, err
		case math.IsInf(e, 1):
			// No minimum there, or none that is joined to the fit.
			outside = d
		case e > 0:
			outside, high = d, e
		case d == edge:
			return (1 + sign) / 2, true, nil
		default:
			inside, low = d, e
		}
		if high > 0 {
			break
		}
		if math.IsInf(outside, 1) {
			d = min(edge, d*max(1.2, min(3, 1.1*root/(e+root))))
			continue
		}
		if d = (inside + outside) / 2; outside-inside < 1e-10 {
			if p.bounded {
				return 0, false, errProfile
			}
			// Before the likelihood has fallen enough, V ceases to be positive
			// definite, or the profile to have a maximum that belongs to the fit.
			return estimate + sign*inside, true, nil
		}
	}
	d, err = brent(excess, inside, low, outside, high, 1e-11)
	if err != nil {
		return 0, false, err
	}
	return estimate + sign*d, false, nil
}

// reach is how far the limit would lie if the deviance were a parabola.
func (p *profile) reach(sign, root float64) float64 {
	w := p.known[0].shares
	moved := p.tangent(w, p.total[0]+sign)
	// The likelihood is still at w.
	slope, curvature := 0.0, 0.0
	point := p.search(p.total[0]).point
	p.lik.at(w[:len(w)-1], point)
	m := len(w) - 1
	for j := range m {
		dj := moved[j] - w[j]
		slope += point.gradient[j] * dj
		for k := range m {
			curvature += dj * point.hessian[j*m+k] * (moved[k] - w[k])
		}
	}
	slope = max(slope, 0)
	if !(curvature > 0) {
		return 0.1
	}
	distance := (math.Sqrt(slope*slope+2*curvature*root*root) - slope) / curvature
	return max(1e-6, min(distance, 0.3))
}

// rise is the deviance above the fit's with the inside shares summing to t,
// infinite where no minimum is found that is joined to the fit's.
func (p *profile) rise(t float64) (float64, error) {
	near := 0
	for i, v := range p.total {
		if math.Abs(v-t) < math.Abs(p.total[near]-t) {
			near = i
		}
	}
	f, ok := p.follow(near, t)
	if p.bounded {
		// A bound may hide a lower minimum from the path.
		for _, w := range p.starts(t) {
			other, fine := p.search(t).from(w)
			if fine && other.converged && other.pivot > leastDistance && (!ok || better(other, f, p.lik.people)) {
				f, ok = other, true
			}
		}
	}
	if !ok {
		return math.Inf(1), nil
	}
	if f.deviance < p.least-p.rounding() {
		return 0, errProfile // the fit was not the lowest minimum
	}
	p.known, p.total = append(p.known, f), append(p.total, t)
	return f.deviance - p.least, nil
}

// rounding is what two deviances may differ by without meaning it.
func (p *profile) rounding() float64 { return 1e-7 + 1e-10*float64(p.lik.people) }

// follow searches at t from a known point, along the path of minima in as few
// steps as stay on it: V must be positive definite at every start, and the
// minimum no lower than the fit's.
func (p *profile) follow(near int, t float64) (found, bool) {
	from := p.total[near]
	for pieces := 1; pieces <= 16; pieces *= 4 {
		f, ok := p.known[near], true
		for piece := 1; piece <= pieces && ok; piece++ {
			reach := from + (t-from)*float64(piece)/float64(pieces)
			if piece == pieces {
				reach = t
			}
			start := p.scaled
			if !p.bounded {
				start = p.tangent
			}
			f, ok = p.search(reach).from(start(f.shares, reach))
			ok = ok && f.converged && f.pivot > p.distance() && f.deviance >= p.least-p.rounding()
		}
		if ok {
			return f, true
		}
	}
	return found{}, false
}

// distance is the smallest pivot at a point of the profile that counts.
func (p *profile) distance() float64 {
	if p.bounded {
		return leastDistance
	}
	return leastSignedDistance
}

// scaled moves shares so that the inside ones sum to t, all of them and all of
// the others in proportion. Where the bounds hold, V stays positive definite.
func (p *profile) scaled(w []float64, t float64) []float64 {
	before := p.sum(w)
	moved := append([]float64(nil), w...)
	scale := func(members []int, before, after float64) {
		for _, j := range members {
			if before > 1e-12 {
				moved[j] *= after / before
			} else {
				moved[j] = after / float64(len(members))
			}
		}
	}
	scale(p.inside, before, t)
	scale(p.outside, 1-before, 1-t)
	return moved
}

func (p *profile) sum(w []float64) float64 {
	var t float64
	for _, j := range p.inside {
		t += w[j]
	}
	return t
}

// tangent moves shares so that the inside ones sum to t, along the tangent of
// the path of minima.
func (p *profile) tangent(w []float64, t float64) []float64 {
	before := p.sum(w)
	s := p.search(before)
	moved := append([]float64(nil), w...)
	if !p.lik.at(w[:len(w)-1], s.point) {
		return moved
	}
	s.chooseMoves(w)
	shift := move{share: s.reference(s.groups[0], w), reference: s.reference(s.groups[1], w)}
	var free []int
	for i := range s.moves {
		if !s.moves[i].held {
			free = append(free, i)
		}
		s.moves[i].slope = (t - before) * s.curvature(s.moves[i], shift)
	}
	s.solveFree(free)
	moved[shift.share] += t - before
	moved[shift.reference] -= t - before
	for _, v := range s.moves {
		moved[v.share] += v.length
		moved[v.reference] -= v.length
	}
	return moved
}

// starts are shares with the inside summing to t: for each share of a group of
// two or more, that one large in it.
func (p *profile) starts(t float64) [][]float64 {
	var all [][]float64
	for _, g := range [][]int{p.inside, p.outside} {
		if len(g) == 1 {
			continue
		}
		for _, main := range g {
			w := make([]float64, len(p.inside)+len(p.outside))
			fill := func(members []int, total float64) {
				for _, j := range members {
					w[j] = total / float64(len(members))
				}
			}
			fill(p.inside, t)
			fill(p.outside, 1-t)
			total := w[main] * float64(len(g))
			for _, j := range g {
				w[j] = 0.1 * total / float64(len(g)-1)
			}
			w[main] = 0.9 * total
			all = append(all, w)
		}
	}
	return all
}
