package crossval

import (
	"errors"
	"fmt"
)

// FoldOptions says what folds are wanted. Which fields a constructor reads
// stands with the constructor; a field it does not read has to be left zero.
type FoldOptions struct {
	// Outer is the number of outer folds, 2 or more and at most the number of
	// families.
	Outer int
	// Repeats is the number of partitions, each drawn anew; 0 means 1.
	Repeats int
	// Inner is the number of inner folds, 2 or more and at most half the
	// number of families.
	Inner int
	// Seed and Purpose name the random streams; an empty Purpose means
	// "folds". Repeat r, try t draws from stream (Seed, Purpose, r, t).
	Seed    uint64
	Purpose string
	// Levels holds categorical columns, one code a person in each. Every
	// level of every column has to be present in every training set, outer
	// and inner; a partition that breaks this is drawn again, up to 100 times
	// a repeat. A level held by fewer than three families can never comply.
	Levels [][]int
	// Strata is nil or holds one code a person (the class of a binary trait,
	// a band of a continuous one). Folds are then as equal in each stratum as
	// families allow, and every stratum has to be present in every outer
	// fold; redrawn as for Levels.
	Strata []int
}

// tries is how often a partition is drawn before a level that is missing
// somewhere becomes an error.
const tries = 100

// purpose returns the name of the streams.
func (opt FoldOptions) purpose() string {
	if opt.Purpose == "" {
		return "folds"
	}
	return opt.Purpose
}

// validate checks what does not depend on the constructor: that columns have
// one code for each of the people.
func (opt FoldOptions) validate(people int) error {
	if people == 0 {
		return errors.New("crossval: no people to make folds of")
	}
	for c, column := range opt.Levels {
		if len(column) != people {
			return fmt.Errorf("crossval: column %d of levels has %d codes for %d people", c, len(column), people)
		}
	}
	if opt.Strata != nil && len(opt.Strata) != people {
		return fmt.Errorf("crossval: strata have %d codes for %d people", len(opt.Strata), people)
	}
	return nil
}

// CountError says that the families are too few for the folds asked.
type CountError struct {
	// Families is how many families there are, Outer and Inner how many folds
	// were asked (0: given or not asked).
	Families, Outer, Inner int
	// Fold is the given outer fold that leaves Training families, fewer than
	// the inner folds asked, or -1 when the families as a whole are too few.
	Fold, Training int
}

func (e *CountError) Error() string {
	switch {
	case e.Fold >= 0:
		return fmt.Sprintf("crossval: with outer fold %d held out %d families are left, too few for %d inner folds", e.Fold, e.Training, e.Inner)
	case e.Outer > e.Families:
		return fmt.Sprintf("crossval: %d outer folds asked of %d families", e.Outer, e.Families)
	}
	return fmt.Sprintf("crossval: %d inner folds need %d families or more, there are %d", e.Inner, 2*e.Inner, e.Families)
}

// LevelError says that a level could not be kept where it has to be.
type LevelError struct {
	// Column is the column of FoldOptions.Levels whose level is missing from
	// a training set, or -1 when it is a stratum missing from an outer fold.
	Column int
	// Level is the code, People who has it, Families how many families they
	// are.
	Level    int
	People   []int
	Families int
	// Repeat is the partition that failed, and Tries how often it was drawn
	// (0: the folds were given, or no draw could have done).
	Repeat, Tries int
}

func (e *LevelError) Error() string {
	what := fmt.Sprintf("level %d of column %d (%d people in %d families) cannot be kept in every training set", e.Level, e.Column, len(e.People), e.Families)
	if e.Column < 0 {
		what = fmt.Sprintf("stratum %d (%d people in %d families) cannot be kept in every outer fold", e.Level, len(e.People), e.Families)
	}
	if e.Tries == 0 {
		return fmt.Sprintf("crossval: repeat %d: %s", e.Repeat, what)
	}
	return fmt.Sprintf("crossval: repeat %d: %s in %d draws", e.Repeat, what, e.Tries)
}
