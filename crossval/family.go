package crossval

// Family is one connected family as this package sees it: people by index and
// how each is related to each, without a word about what a relation means.
type Family struct {
	// People are the indices of the members, each person of an analysis in
	// exactly one family.
	People []int
	// Relation holds len(People) squared codes, row by row: entry (i, j) says
	// how member i is related to member j. Equal codes mean the same relation.
	// A directed relation (parent of, child of) has two codes, one a direction.
	// The diagonal is not read.
	Relation []int
	// Mark is nil or holds one code a member; a member's value moves only to
	// a place with the same mark.
	Mark []int
}
