package crossval

import (
	"errors"
	"fmt"

	"kindwell/internal/stream"
)

// BalancedFolds draws folds that are balanced in people and never split a
// family. family holds a label a person, any integers; equal labels are one
// family.
//
// Each repeat is one partition of the families into outer x inner cells:
// largest families first, those of one size in a random order, each into the
// emptiest outer fold and the emptiest cell inside it. Inner fold i of an
// outer fold joins cell i of every other outer fold, so that sums over cells
// serve every outer fold (Repeat.Cell). With opt.Strata "emptiest" is counted
// in people of the same stratum.
//
// All fields of opt are read. More outer folds than families, and more inner
// folds than half the families, are a *CountError; a level that cannot be kept
// in every training set, or a stratum in every outer fold, is a *LevelError.
func BalancedFolds(family []int, opt FoldOptions) (*Folds, error) {
	if opt.Outer < 2 {
		return nil, fmt.Errorf("crossval: %d outer folds asked, 2 is the least", opt.Outer)
	}
	if opt.Repeats < 0 {
		return nil, fmt.Errorf("crossval: %d repeats asked", opt.Repeats)
	}
	if err := opt.validate(len(family)); err != nil {
		return nil, err
	}
	r := newRoster(family)
	if opt.Outer > r.families() {
		return nil, &CountError{Families: r.families(), Outer: opt.Outer, Inner: opt.Inner, Fold: -1}
	}
	d, err := newDealer(r, opt)
	if err != nil {
		return nil, err
	}
	folds := &Folds{PerFamily: opt.Outer == r.families()}
	for repeat := range max(1, opt.Repeats) {
		p, err := d.draw(repeat, opt.Outer, func(order []int) []int {
			return dealOuter(d.makeup, order, opt.Outer, r.families()-opt.Inner)
		})
		if err != nil {
			return nil, err
		}
		folds.Repeats = append(folds.Repeats, *p)
	}
	return folds, nil
}

// maxLeftOut bounds people x families of leave-one-family-out folds, which
// list the inner fold of every person for every family held out.
const maxLeftOut = 1 << 28

// LeaveOneFamilyOut makes folds that hold out one family at a time, numbered
// in order of first appearance. The inner folds are cells over all families,
// balanced in people: inner fold i while a family is held out is cell i without
// that family.
//
// opt.Outer, opt.Repeats and opt.Strata have to be zero. Errors are those of BalancedFolds;
// people x families above 2^28 is an error, since the inner folds of all outer
// folds would not fit into memory.
func LeaveOneFamilyOut(family []int, opt FoldOptions) (*Folds, error) {
	if opt.Outer != 0 || opt.Repeats != 0 {
		return nil, errors.New("crossval: leaving one family out has one repeat and as many outer folds as families; leave Outer and Repeats 0")
	}
	if opt.Strata != nil {
		return nil, errors.New("crossval: strata cannot be in every outer fold of one family")
	}
	if err := opt.validate(len(family)); err != nil {
		return nil, err
	}
	r := newRoster(family)
	if r.families() > maxLeftOut/len(family) {
		return nil, fmt.Errorf("crossval: leaving one of %d families out of %d people is more than can be held in memory; ask for folds of several families", r.families(), len(family))
	}
	d, err := newDealer(r, opt)
	if err != nil {
		return nil, err
	}
	own := make([]int, r.families())
	for f := range own {
		own[f] = f
	}
	p, err := d.draw(0, len(own), func([]int) []int { return own })
	if err != nil {
		return nil, err
	}
	return &Folds{Repeats: []Repeat{*p}, PerFamily: true}, nil
}

// dealer draws partitions made of cells.
type dealer struct {
	opt    FoldOptions
	roster *roster
	makeup *makeup
	levels []level // to be in every training set
	strata []level // to be in every outer fold
}

// newDealer checks that cells can be made: each has to be reached by two outer
// folds, which takes twice as many families as cells.
func newDealer(r *roster, opt FoldOptions) (*dealer, error) {
	if opt.Inner < 2 {
		return nil, fmt.Errorf("crossval: %d inner folds asked, 2 is the least", opt.Inner)
	}
	if 2*opt.Inner > r.families() {
		return nil, &CountError{Families: r.families(), Outer: opt.Outer, Inner: opt.Inner, Fold: -1}
	}
	d := &dealer{opt: opt, roster: r}
	for c, column := range opt.Levels {
		d.levels = append(d.levels, levelsOf(r, c, column)...)
	}
	for _, l := range d.levels {
		if len(l.families) < 3 { // one outer fold and one cell take two families out
			return nil, l.fault(0, 0)
		}
	}
	if opt.Strata == nil {
		d.makeup = newMakeup(r, nil, 1)
		return d, nil
	}
	d.strata = levelsOf(r, -1, opt.Strata)
	stratum := make([]int, len(opt.Strata))
	for c, l := range d.strata {
		if len(l.families) < opt.Outer {
			return nil, l.fault(0, 0)
		}
		for _, i := range l.people {
			stratum[i] = c
		}
	}
	d.makeup = newMakeup(r, stratum, len(d.strata))
	return d, nil
}

// draw makes one repeat. outerOf returns the outer fold of each family, given
// the order in which families are dealt.
func (d *dealer) draw(repeat, folds int, outerOf func(order []int) []int) (*Repeat, error) {
	failed := make([]int, len(d.levels)+len(d.strata))
	for try := range tries {
		s := stream.New(d.opt.Seed, d.opt.purpose(), uint64(repeat), uint64(try))
		order := d.roster.drawOrder(s)
		outer := outerOf(order)
		cell := dealCells(d.makeup, order, outer, folds, d.opt.Inner)
		kept := true
		for at, l := range d.levels {
			if !l.inEveryCellTraining(outer, cell, folds, d.opt.Inner) {
				failed[at]++
				kept = false
			}
		}
		for at, l := range d.strata {
			if !l.inEveryOuter(d.roster, outer, folds) {
				failed[len(d.levels)+at]++
				kept = false
			}
		}
		if kept {
			return fromCells(d.roster.spread(outer), d.roster.spread(cell), folds, d.opt.Inner), nil
		}
	}
	worst := 0
	for at, n := range failed {
		if n > failed[worst] {
			worst = at
		}
	}
	if worst < len(d.levels) {
		return nil, d.levels[worst].fault(repeat, tries)
	}
	return nil, d.strata[worst-len(d.levels)].fault(repeat, tries)
}

// fromCells writes out the inner folds that cells make.
func fromCells(outer, cell []int, folds, cells int) *Repeat {
	p := &Repeat{
		Outer: outer, OuterCount: folds,
		Inner: make([][]int, folds), InnerCount: make([]int, folds),
		Cell: cell,
	}
	n := len(outer)
	all := make([]int, folds*n)
	for o := range folds {
		inner := all[o*n : (o+1)*n : (o+1)*n]
		copy(inner, cell)
		p.Inner[o], p.InnerCount[o] = inner, cells
	}
	for i, o := range outer {
		p.Inner[o][i] = -1
	}
	return p
}
