package invent

import (
	"math"

	"kindwell/internal/stream"
)

const (
	rate    = 100   // samples a second
	samples = 20000 // of a session: 200 s, so that a share of them has 5 decimals
	least   = 2     // samples, the shortest visit
)

// summary is what the dynamics table keeps of one session; a number that
// does not exist is NaN.
type summary struct {
	occupied  [states]int     // samples in each state
	dwell     [states]float64 // mean length of the visits not cut by an end, s
	interval  [states]float64 // mean time from the end of a visit to the start of the next to the same state, s
	switching float64         // changes of state a second
}

// chain is a semi-Markov process: visits of random length, and a random next
// state that depends on the one that ends.
type chain struct {
	next  [states][states]float64 // cumulative probabilities of the next state
	stay  [states]float64         // parameter of the two geometric parts of a visit
	start int
}

// newChain returns the process of one session: a person's drives, moved by
// age, with the session's own noise.
func newChain(d *[drives]float64, decades float64, s *stream.Stream) *chain {
	var weight, length [states]float64
	pace := d[speed] + ageOnSpeed*decades + sessionNoise*s.Norm()
	for i, b := range base {
		share := d[occupancy+i] + sessionNoise*s.Norm()
		if i == 0 {
			share += ageOnState1 * decades
		}
		visit := d[dwell+i] + sessionNoise*s.Norm()
		length[i] = b.dwell * exp(dwellSpread*visit-speedSpread*pace)
		// A state visited for longer is visited less often: occupancy and
		// dwell have drives of their own.
		weight[i] = b.weight * exp(b.spread*share) / length[i]
	}
	c := &chain{}
	for i := range states {
		sum := 0.0
		for j := range states {
			if j != i {
				w := weight[j]
				if base[i].cluster == base[j].cluster {
					w *= withinFactor
				}
				sum += w
			}
			c.next[i][j] = sum
		}
		for j := range states {
			c.next[i][j] /= sum
		}
		mean := max(length[i]*rate-least, 0.2) / 2
		c.stay[i] = mean / (1 + mean)
	}
	c.start = s.IntN(states)
	return c
}

// visit draws the length of a visit in samples: the least plus two geometric
// parts, so that a visit's end depends on how long it has lasted.
func (c *chain) visit(state int, s *stream.Stream) int {
	part := func() int { return int(math.Log(1-s.Float64()) / math.Log(c.stay[state])) }
	return least + part() + part()
}

// follow draws the state after a visit.
func (c *chain) follow(state int, s *stream.Stream) int {
	u := s.Float64()
	for j, bound := range c.next[state] {
		if u < bound && j != state {
			return j
		}
	}
	// Rounding may leave the last bound a hair under 1.
	if state == states-1 {
		return states - 2
	}
	return states - 1
}

// run draws one session of samples and summarises it.
func (c *chain) run(s *stream.Stream) summary {
	var out summary
	var visits, gaps [states]int
	var inVisits, inGaps [states]int // samples
	ended := [states]int{}           // sample after the last visit, 0 when there was none
	changes := 0
	for at, state := 0, c.start; at < samples; state = c.follow(state, s) {
		if at > 0 {
			changes++
		}
		if ended[state] > 0 {
			gaps[state]++
			inGaps[state] += at - ended[state]
		}
		length := c.visit(state, s)
		out.occupied[state] += min(length, samples-at)
		if at > 0 && at+length < samples {
			visits[state]++
			inVisits[state] += length
		}
		at += length
		ended[state] = at
	}
	for i := range states {
		out.dwell[i] = float64(inVisits[i]) / rate / float64(visits[i]) // 0/0 is NaN, as wanted
		out.interval[i] = float64(inGaps[i]) / rate / float64(gaps[i])
	}
	out.switching = float64(changes) / (float64(samples-1) / rate)
	return out
}
