package crossval

import (
	"errors"
	"fmt"
	"slices"
)

// Given is one repeat of folds that come from outside.
type Given struct {
	// Outer is each person's outer fold, numbered 0, 1, ... without a gap; -1
	// for a person who is in none, which is refused by name.
	Outer []int
	// Inner is nil, for inner folds of our own, or holds for every outer fold
	// the inner fold of each person, numbered without a gap, -1 for the people
	// held out.
	Inner [][]int
}

// GivenFolds takes outer folds, and inner folds where they are given, from
// tables; leaving one site out is a table whose folds are sites. Where inner
// folds are not given they are cells over the families of each outer fold,
// balanced as in BalancedFolds, and redrawn as there for opt.Levels.
//
// opt.Outer, opt.Repeats and opt.Strata have to be zero, and opt.Inner, too,
// when every table has inner folds. Errors: *FoldError, up to 20 joined, for a
// missing person, a family on two sides, an empty fold or a gap in the numbers,
// an inner fold of a held-out person; *CountError when a training set has
// fewer families than inner folds asked, or all families are fewer than twice
// as many; *LevelError when a level is missing from a training set. Tables are
// copied.
func GivenFolds(family []int, tables []Given, opt FoldOptions) (*Folds, error) {
	if opt.Outer != 0 || opt.Repeats != 0 || opt.Strata != nil {
		return nil, errors.New("crossval: given folds bring their outer folds and repeats; leave Outer, Repeats and Strata zero")
	}
	if err := opt.validate(len(family)); err != nil {
		return nil, err
	}
	if len(tables) == 0 {
		return nil, errors.New("crossval: no folds given")
	}
	r := newRoster(family)
	folds := &Folds{Repeats: make([]Repeat, len(tables)), PerFamily: true}
	own := false
	c := checker{roster: r}
	for t, table := range tables {
		p := &folds.Repeats[t]
		p.Outer, p.OuterCount = slices.Clone(table.Outer), countOf(table.Outer)
		folds.PerFamily = folds.PerFamily && p.OuterCount == r.families()
		if table.Inner == nil {
			own = true
			if len(p.Outer) != len(family) {
				return nil, fmt.Errorf("crossval: repeat %d has outer folds of %d people, there are %d", t, len(p.Outer), len(family))
			}
			c.partition(t, -1, p.Outer, p.OuterCount, nil)
			continue
		}
		for _, inner := range table.Inner {
			p.Inner = append(p.Inner, slices.Clone(inner))
			p.InnerCount = append(p.InnerCount, countOf(inner))
		}
		if err := c.shape(t, p); err != nil {
			return nil, err
		}
		c.repeat(t, p, false)
	}
	if err := errors.Join(c.faults...); err != nil {
		return nil, err
	}
	if !own {
		if opt.Inner != 0 {
			return nil, errors.New("crossval: given folds bring their inner folds; leave Inner 0")
		}
	} else if err := drawInner(r, folds, opt); err != nil {
		return nil, err
	}
	if err := checkLevels(r, folds, opt.Levels); err != nil {
		return nil, err
	}
	return folds, nil
}

// countOf returns one more than the highest fold number.
func countOf(fold []int) int {
	count := 0
	for _, number := range fold {
		count = max(count, number+1)
	}
	return count
}

// drawInner makes the inner folds of the repeats that have none.
func drawInner(r *roster, folds *Folds, opt FoldOptions) error {
	d, err := newDealer(r, opt)
	if err != nil {
		return err
	}
	for t := range folds.Repeats {
		p := &folds.Repeats[t]
		if p.Inner != nil {
			continue
		}
		outer := make([]int, r.families())
		held := make([]int, p.OuterCount)
		for f, i := range r.first {
			outer[f] = p.Outer[i]
			held[outer[f]]++
		}
		for o, n := range held {
			if r.families()-n < opt.Inner {
				return &CountError{Families: r.families(), Inner: opt.Inner, Fold: o, Training: r.families() - n}
			}
		}
		for _, l := range d.levels {
			if !l.inEveryOuterTraining(outer) {
				return l.fault(t, 0)
			}
		}
		drawn, err := d.draw(t, p.OuterCount, func([]int) []int { return outer })
		if err != nil {
			return err
		}
		*p = *drawn
	}
	return nil
}

// checkLevels says whether every level is in every training set of the inner
// folds that were given; drawn ones keep them already.
func checkLevels(r *roster, folds *Folds, columns [][]int) error {
	for c, column := range columns {
		for _, l := range levelsOf(r, c, column) {
			for t := range folds.Repeats {
				if p := &folds.Repeats[t]; p.Cell == nil && !l.inEveryTraining(r, p) {
					return l.fault(t, 0)
				}
			}
		}
	}
	return nil
}
