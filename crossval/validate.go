package crossval

import (
	"errors"
	"fmt"
)

// Fault is what is wrong with a fold.
type Fault int

// The faults that folds can have.
const (
	PersonMissing  Fault = iota // a person is in no fold
	FamilySplit                 // two relatives are in two folds of one partition
	FoldEmpty                   // a number below the highest is nobody's
	FoldsTooFew                 // fewer than two folds
	HeldOutInside               // a person who is held out has an inner fold
	FamilyNotAlone              // an outer fold of "one family a fold" holds two families
	CellDiffers                 // an inner fold is not the cell it is said to be
)

// FoldError says where a set of folds breaks a rule. Numbers count from 0.
type FoldError struct {
	Fault Fault
	// Repeat is the partition, Outer the fold that is at fault or is held
	// out, Inner the inner fold; -1 where none is concerned.
	Repeat, Outer, Inner int
	// Person is who is at fault, Other the relative on the other side, Family
	// their label; Person and Other are -1 where none is concerned, and
	// Family then means nothing.
	Person, Other int
	Family        int
}

func (e *FoldError) Error() string {
	where := fmt.Sprintf("crossval: repeat %d", e.Repeat)
	inner := e.Inner >= 0
	if inner {
		where += fmt.Sprintf(", outer fold %d held out", e.Outer)
	}
	kind, number := "outer", e.Outer
	if inner {
		kind, number = "inner", e.Inner
	}
	switch e.Fault {
	case PersonMissing:
		return fmt.Sprintf("%s: person %d (family %d) is in no %s fold", where, e.Person, e.Family, kind)
	case FamilySplit:
		return fmt.Sprintf("%s: family %d is split: person %d is in %s fold %d, person %d is not", where, e.Family, e.Person, kind, number, e.Other)
	case FoldEmpty:
		return fmt.Sprintf("%s: %s fold %d is empty", where, kind, number)
	case FoldsTooFew:
		return fmt.Sprintf("%s: fewer than two %s folds", where, kind)
	case HeldOutInside:
		return fmt.Sprintf("%s: person %d (family %d) is held out and in inner fold %d", where, e.Person, e.Family, e.Inner)
	case FamilyNotAlone:
		return fmt.Sprintf("%s: outer fold %d is to hold one family and holds person %d (family %d) with person %d", where, e.Outer, e.Person, e.Family, e.Other)
	case CellDiffers:
		return fmt.Sprintf("%s: inner fold %d of person %d (family %d) is not the person's cell", where, e.Inner, e.Person, e.Family)
	}
	return where + ": unknown fault"
}

// maxFaults is how many faults are reported in one go.
const maxFaults = 20

// Validate checks that the folds keep every rule of this package for people of
// these families: each person in one outer fold of every repeat, no outer and
// no inner fold empty, inner folds for the training people and only for them,
// no family on two sides of any split, cells and PerFamily as they are said to
// be. Faults are *FoldError, up to 20 of them joined (errors.Join); slices of
// wrong length are a plain error.
func (f *Folds) Validate(family []int) error {
	if len(f.Repeats) == 0 {
		return errors.New("crossval: folds without a repeat")
	}
	c := checker{roster: newRoster(family)}
	for r := range f.Repeats {
		if err := c.shape(r, &f.Repeats[r]); err != nil {
			return err
		}
		c.repeat(r, &f.Repeats[r], f.PerFamily)
	}
	return errors.Join(c.faults...)
}

// checker collects the faults of folds.
type checker struct {
	*roster
	faults []error
}

func (c *checker) add(e FoldError) {
	if e.Person >= 0 {
		e.Family = c.label[c.of[e.Person]]
	}
	if len(c.faults) < maxFaults {
		c.faults = append(c.faults, &e)
	}
}

// shape checks lengths.
func (c *checker) shape(repeat int, p *Repeat) error {
	n := len(c.of)
	if len(p.Outer) != n {
		return fmt.Errorf("crossval: repeat %d has outer folds of %d people, there are %d", repeat, len(p.Outer), n)
	}
	if len(p.Inner) != p.OuterCount || len(p.InnerCount) != p.OuterCount {
		return fmt.Errorf("crossval: repeat %d has %d outer folds with inner folds for %d and counts for %d", repeat, p.OuterCount, len(p.Inner), len(p.InnerCount))
	}
	for o, inner := range p.Inner {
		if len(inner) != n {
			return fmt.Errorf("crossval: repeat %d, outer fold %d has inner folds of %d people, there are %d", repeat, o, len(inner), n)
		}
	}
	if p.Cell != nil && len(p.Cell) != n {
		return fmt.Errorf("crossval: repeat %d has cells of %d people, there are %d", repeat, len(p.Cell), n)
	}
	return nil
}

func (c *checker) repeat(repeat int, p *Repeat, perFamily bool) {
	c.partition(repeat, -1, p.Outer, p.OuterCount, nil)
	for o, inner := range p.Inner {
		c.partition(repeat, o, inner, p.InnerCount[o], p.Outer)
		if p.Cell == nil {
			continue
		}
		for i, fold := range inner {
			if p.Outer[i] != o && p.Cell[i] != fold {
				c.add(FoldError{Fault: CellDiffers, Repeat: repeat, Outer: o, Inner: max(fold, 0), Person: i, Other: -1})
			}
		}
	}
	if !perFamily {
		return
	}
	holder := make([]int, p.OuterCount) // one more than the fold's first person
	for i, o := range p.Outer {
		switch {
		case o < 0 || o >= p.OuterCount: // already a fault
		case holder[o] == 0:
			holder[o] = i + 1
		case c.of[i] != c.of[holder[o]-1]:
			c.add(FoldError{Fault: FamilyNotAlone, Repeat: repeat, Outer: o, Inner: -1, Person: i, Other: holder[o] - 1})
		}
	}
}

// partition checks one division of people into folds 0..count-1. With outer
// given it is that of the training people while fold held is held out.
func (c *checker) partition(repeat, held int, fold []int, count int, outer []int) {
	at := func(number int) FoldError {
		e := FoldError{Repeat: repeat, Outer: number, Inner: -1, Person: -1, Other: -1}
		if outer != nil {
			e.Outer, e.Inner = held, max(number, 0)
		}
		return e
	}
	if count < 2 {
		e := at(0)
		e.Fault = FoldsTooFew
		c.add(e)
		return
	}
	filled := make([]bool, count)
	side := make([]int, c.families()) // one more than a family's first person inside
	for i, number := range fold {
		e := at(number)
		e.Person = i
		if outer != nil && outer[i] == held {
			if number != -1 {
				e.Fault = HeldOutInside
				c.add(e)
			}
			continue
		}
		if number < 0 || number >= count {
			e.Fault = PersonMissing
			c.add(e)
			continue
		}
		filled[number] = true
		switch first := side[c.of[i]]; {
		case first == 0:
			side[c.of[i]] = i + 1
		case fold[first-1] != number:
			e.Fault = FamilySplit
			e.Other = first - 1
			c.add(e)
		}
	}
	for number, full := range filled {
		if !full {
			e := at(number)
			e.Fault = FoldEmpty
			c.add(e)
		}
	}
}
