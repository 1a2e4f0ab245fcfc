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
