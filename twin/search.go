package twin

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

const (
	// smallestStep ends a search: a Newton step in shares below it would move
	// no digit that is printed.
	smallestStep = 1e-9
	mostSteps    = 200
	largestStep  = 0.5
)

// search looks for the least deviance over shares w_1 ... w_m, w_E that sum to
// 1, the first m being theta of the likelihood. Shares are in groups with a
// fixed total each: one group of total 1 is a fit, two groups are a profile.
type search struct {
	lik     *likelihood
	groups  []group
	bounded bool // shares stay at 0 or above

	point   *point
	moves   []move
	step    []float64 // change of each share
	partial []float64
}

// group is a set of shares with a fixed total.
type group struct {
	members []int
	total   float64
}

// move lets one share grow at the cost of its group's reference.
type move struct {
	share, reference int
	slope            float64 // of the deviance
	held             bool    // at its bound and better left there
	length           float64
}

// found is where a search ended.
type found struct {
	shares    []float64
	deviance  float64
	pivot     float64 // smallest pivot of V there
	converged bool
}

func newSearch(lik *likelihood, groups []group, bounded bool) *search {
	m := len(lik.use)
	return &search{
		lik: lik, groups: groups, bounded: bounded,
		point: lik.newPoint(), step: make([]float64, m+1), partial: make([]float64, m),
	}
}

// from searches from the given shares, which must have the groups' totals. It
// reports false when V is not positive definite at the start.
//
// Each step is a Newton step on the exact Hessian (on its absolute values in
// directions where it is not positive), shortened to the nearest bound and
// halved until V is positive definite and the deviance falls. Shares at a bound
// stay there while the deviance would rise (active set).
func (s *search) from(start []float64) (found, bool) {
	w := append([]float64(nil), start...)
	next := make([]float64, len(w))
	m := len(w) - 1
	if !s.lik.at(w[:m], s.point) {
		return found{}, false
	}
	converged := false
	for range mostSteps {
		s.chooseMoves(w)
		fall := s.newton(w)
		longest := 0.0
		for _, d := range s.step {
			longest = max(longest, math.Abs(d))
		}
		if longest <= smallestStep {
			converged = true
			break
		}
		t, hit := s.longest(w)
		before := s.point.deviance
		slack := 1e-13*float64(s.lik.people) + 1e-12
		for range 60 {
			for j := range w {
				next[j] = w[j] + t*s.step[j]
				if j == hit || s.bounded && next[j] < 0 {
					next[j] = 0
				}
			}
			s.balance(next)
			if s.lik.at(next[:m], s.point) && s.point.deviance <= before-1e-4*t*fall+slack {
				break
			}
			t, hit = t/2, -1
			if t*longest < 1e-14 {
				t = 0
				break
			}
		}
		if t == 0 {
			// Nothing better in reach of rounding: done if little was promised.
			s.lik.at(w[:m], s.point)
			converged = fall < 1e-8
			break
		}
		copy(w, next)
	}
	return found{shares: w, deviance: s.point.deviance, pivot: s.lik.pivot, converged: converged}, true
}

// balance makes the shares of each group add to its total exactly.
func (s *search) balance(w []float64) {
	for _, g := range s.groups {
		r := s.reference(g, w)
		rest := g.total
		for _, j := range g.members {
			if j != r {
				rest -= w[j]
			}
		}
		w[r] = rest
	}
}

// reference returns the share of a group that gives way to the others: the
// largest where bounds are in force, so that it is far from its own; else the
// last, which is E where E is in the group.
func (s *search) reference(g group, w []float64) int {
	r := g.members[len(g.members)-1]
	if s.bounded {
		for _, j := range g.members {
			if w[j] > w[r] {
				r = j
			}
		}
	}
	return r
}

// slope is the derivative of the deviance when share j grows and r shrinks.
func (s *search) slope(j, r int) float64 {
	var t float64
	if j < len(s.point.gradient) {
		t += s.point.gradient[j]
	}
	if r < len(s.point.gradient) {
		t -= s.point.gradient[r]
	}
	return t
}

// curvature is the second derivative of the deviance along two moves.
func (s *search) curvature(a, b move) float64 {
	m := len(s.partial)
	h := func(j, k int) float64 {
		if j >= m || k >= m {
			return 0
		}
		return s.point.hessian[j*m+k]
	}
	return h(a.share, b.share) - h(a.share, b.reference) - h(a.reference, b.share) + h(a.reference, b.reference)
}

// chooseMoves lists the moves at w and holds those at a bound that would raise
// the deviance by leaving it.
func (s *search) chooseMoves(w []float64) {
	s.moves = s.moves[:0]
	for _, g := range s.groups {
		if s.bounded && g.total < 1e-12 {
			continue
		}
		r := s.reference(g, w)
		for _, j := range g.members {
			if j == r {
				continue
			}
			v := move{share: j, reference: r, slope: s.slope(j, r)}
			v.held = s.bounded && w[j] == 0 && v.slope >= 0
			s.moves = append(s.moves, v)
		}
	}
}

// newton sets step to the Newton step over the moves that are not held and
// returns the fall in deviance per unit of it. A move at its bound that the
// joint step would push beyond is held, and the step taken anew.
func (s *search) newton(w []float64) float64 {
	for {
		var free []int
		for i := range s.moves {
			s.moves[i].length = 0
			if !s.moves[i].held {
				free = append(free, i)
			}
		}
		s.solveFree(free)
		again := false
		for _, i := range free {
			v := &s.moves[i]
			if s.bounded && w[v.share] == 0 && v.length < 0 {
				v.held, again = true, true
			}
		}
		if !again {
			break
		}
	}
	clear(s.step)
	longest := 0.0
	for _, v := range s.moves {
		s.step[v.share] += v.length
		s.step[v.reference] -= v.length
	}
	for _, d := range s.step {
		longest = max(longest, math.Abs(d))
	}
	cut := 1.0
	if longest > largestStep {
		cut = largestStep / longest
		for j := range s.step {
			s.step[j] *= cut
		}
	}
	var fall float64
	for _, v := range s.moves {
		fall -= cut * v.length * v.slope
	}
	return fall
}

// solveFree sets the lengths of the free moves.
func (s *search) solveFree(free []int) {
	n := len(free)
	if n == 0 {
		return
	}
	h := mat.NewSymDense(n, nil)
	g := mat.NewVecDense(n, nil)
	for a, i := range free {
		g.SetVec(a, -s.moves[i].slope)
		for b := a; b < n; b++ {
			h.SetSym(a, b, s.curvature(s.moves[i], s.moves[free[b]]))
		}
	}
	var x mat.VecDense
	var chol mat.Cholesky
	if chol.Factorize(h) && chol.Cond() < 1e13 {
		if err := chol.SolveVecTo(&x, g); err == nil {
			for a, i := range free {
				s.moves[i].length = x.AtVec(a)
			}
			return
		}
	}
	// Not a minimum's Hessian: descend along its axes, the upturned ones too.
	var eigen mat.EigenSym
	if !eigen.Factorize(h, true) {
		panic("twin: the eigenvalues of a Hessian did not converge")
	}
	values := eigen.Values(nil)
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	scale := 1e-300
	for _, v := range values {
		scale = max(scale, math.Abs(v))
	}
	for k, v := range values {
		var along float64
		for a := range n {
			along += vectors.At(a, k) * g.AtVec(a)
		}
		along /= max(math.Abs(v), 1e-8*scale)
		for a, i := range free {
			s.moves[i].length += along * vectors.At(a, k)
		}
	}
}

// longest returns how much of the step may be taken, at most 1, and the share
// that reaches its bound with it, -1 for none.
func (s *search) longest(w []float64) (t float64, hit int) {
	t, hit = 1, -1
	if !s.bounded {
		return t, hit
	}
	for j, d := range s.step {
		if d < 0 && w[j]+t*d <= 0 {
			t, hit = w[j]/-d, j
		}
	}
	return t, hit
}
