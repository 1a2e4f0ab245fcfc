package crossval

// Folds says who is held out when: for every repeat an outer fold for each
// person, and inside the training people of every outer fold an inner fold.
// People are rows 0..n-1 of an analysis; families are never split.
type Folds struct {
	// Repeats holds one partition a repeat.
	Repeats []Repeat
	// PerFamily is true when every outer fold is one family (leave one out):
	// scores are then taken over all held-out people together.
	PerFamily bool
}

// Repeat is one partition of the people into outer folds, with the inner
// folds of each outer fold's training people.
type Repeat struct {
	// Outer is each person's outer fold, 0..OuterCount-1; none is empty.
	Outer      []int
	OuterCount int
	// Inner[o][i] is the inner fold of person i while outer fold o is held
	// out, 0..InnerCount[o]-1, and -1 when i itself is held out.
	Inner      [][]int
	InnerCount []int
	// Cell, when not nil, is the cell (0..InnerCount-1) of each person from
	// which all inner folds are made: Inner[o][i] = Cell[i] for every person
	// outside o. Sums over cells then serve every outer fold.
	Cell []int
}

// People returns the number of people that the folds are about.
func (f *Folds) People() int {
	if len(f.Repeats) == 0 {
		return 0
	}
	return len(f.Repeats[0].Outer)
}

// OuterFolds returns the number of outer folds over all repeats.
func (f *Folds) OuterFolds() int {
	sum := 0
	for r := range f.Repeats {
		sum += f.Repeats[r].OuterCount
	}
	return sum
}

// TestOverTrain returns the mean number of held-out people over the mean
// number of training people, both over the outer folds of all repeats: the
// ratio that ResampledT asks for.
func (f *Folds) TestOverTrain() float64 {
	test := f.People() * len(f.Repeats) // each person is held out once a repeat
	train := f.People()*f.OuterFolds() - test
	return float64(test) / float64(train)
}
