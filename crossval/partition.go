package crossval

import (
	"math"
	"slices"

	"kindwell/internal/stream"
)

// roster numbers the families 0, 1, ... in order of first appearance.
type roster struct {
	of    []int // person -> family
	label []int // family -> label of the caller
	size  []int // family -> people
	first []int // family -> its first person
}

func newRoster(family []int) *roster {
	r := &roster{of: make([]int, len(family))}
	number := make(map[int]int)
	for i, label := range family {
		f, seen := number[label]
		if !seen {
			f = len(r.label)
			number[label] = f
			r.label = append(r.label, label)
			r.size = append(r.size, 0)
			r.first = append(r.first, i)
		}
		r.of[i] = f
		r.size[f]++
	}
	return r
}

func (r *roster) families() int { return len(r.label) }

// spread returns a value of each family as a value of each person.
func (r *roster) spread(perFamily []int) []int {
	person := make([]int, len(r.of))
	for i, f := range r.of {
		person[i] = perFamily[f]
	}
	return person
}

// makeup is how the people of each family fall into strata. Without strata
// all are of one, and "as equal in each stratum" is "as equal in people".
type makeup struct {
	strata int
	counts []int     // family by stratum
	weight []float64 // 1 over the squared number of people of a stratum
	size   []int     // family -> people
}

func newMakeup(r *roster, stratum []int, strata int) *makeup {
	m := &makeup{strata: strata, counts: make([]int, r.families()*strata), weight: make([]float64, strata), size: r.size}
	total := make([]int, strata)
	for i, f := range r.of {
		c := 0
		if stratum != nil {
			c = stratum[i]
		}
		m.counts[f*strata+c]++
		total[c]++
	}
	for c, n := range total {
		m.weight[c] = 1 / (float64(n) * float64(n))
	}
	return m
}

// bins are places that families are put into.
type bins struct {
	*makeup
	people   []int // bin -> people
	families []int // bin -> families
	held     []int // bin by stratum -> people
}

func newBins(m *makeup, count int) *bins {
	return &bins{m, make([]int, count), make([]int, count), make([]int, count*m.strata)}
}

func (b *bins) put(family, bin int) {
	b.people[bin] += b.size[family]
	b.families[bin]++
	for c := range b.strata {
		b.held[bin*b.strata+c] += b.counts[family*b.strata+c]
	}
}

// crowding says how much a family would meet its own kind in a bin: the sum
// over strata of (its people x the bin's people) / N_stratum^2. The rise of
// the sum of squared stratum shares over bins differs from twice this by a
// constant, so that the least crowded bin keeps shares most equal. Products
// are rounded one by one, which keeps ties the same on every machine.
func (b *bins) crowding(family, bin int) float64 {
	sum := 0.0
	for c := range b.strata {
		pairs := float64(b.counts[family*b.strata+c]) * float64(b.held[bin*b.strata+c])
		sum += float64(pairs * b.weight[c])
	}
	return sum
}

// drawOrder returns the families, largest first, those of one size in a random
// order.
func (r *roster) drawOrder(s *stream.Stream) []int {
	order := make([]int, r.families())
	for f := range order {
		order[f] = f
	}
	slices.SortStableFunc(order, func(a, b int) int { return r.size[b] - r.size[a] })
	for low := 0; low < len(order); {
		high := low + 1
		for high < len(order) && r.size[order[high]] == r.size[order[low]] {
			high++
		}
		s.ShuffleTo(order[low:high])
		low = high
	}
	return order
}

// dealOuter puts the families, in the order given, each into the least crowded
// outer fold, then the emptiest, then the first. No fold takes more than
// limit families, so that enough are left to train on when it is held out. An
// empty fold is never more crowded than another: none stays empty while there
// are as many families as folds.
func dealOuter(m *makeup, order []int, folds, limit int) []int {
	outer := make([]int, len(order))
	b := newBins(m, folds)
	for _, f := range order {
		best, least := -1, math.Inf(1)
		for o := range folds {
			if b.families[o] == limit {
				continue
			}
			if c := b.crowding(f, o); c < least || c == least && b.people[o] < b.people[best] {
				best, least = o, c
			}
		}
		outer[f] = best
		b.put(f, best)
	}
	return outer
}

// dealCells puts the families of every outer fold, in the order given, into
// cells: the least crowded one inside the fold, then the emptiest inside it,
// then one that fewer than two other folds reach, then the least crowded over
// all folds, then the first. Folds go in the order of their first family.
//
// Inner fold i of outer fold o is cell i outside o, never empty when every
// cell is reached by two folds. That is so when the sum of min(families,
// cells) over folds is at least twice the cells: a fold fills as many cells as
// it can, those reached by the fewest folds first, so that up to two folds a
// cell, cells never differ by more than one in how many folds reach them.
func dealCells(m *makeup, order, outer []int, folds, cells int) []int {
	byFold := make([][]int, folds)
	var turns []int
	for _, f := range order {
		o := outer[f]
		if len(byFold[o]) == 0 {
			turns = append(turns, o)
		}
		byFold[o] = append(byFold[o], f)
	}
	cell := make([]int, len(order))
	all := newBins(m, cells)
	reached := make([]int, cells)
	for _, o := range turns {
		inside := newBins(m, cells)
		better := func(f, a, b int) bool {
			if x, y := inside.crowding(f, a), inside.crowding(f, b); x != y {
				return x < y
			}
			if x, y := inside.people[a], inside.people[b]; x != y {
				return x < y
			}
			if x, y := min(reached[a], 2), min(reached[b], 2); x != y {
				return x < y
			}
			return all.crowding(f, a) < all.crowding(f, b)
		}
		for _, f := range byFold[o] {
			best := 0
			for c := 1; c < cells; c++ {
				if better(f, c, best) {
					best = c
				}
			}
			cell[f] = best
			inside.put(f, best)
			all.put(f, best)
		}
		for c := range cells {
			if inside.families[c] > 0 {
				reached[c]++
			}
		}
	}
	return cell
}
