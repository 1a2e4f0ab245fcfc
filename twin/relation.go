package twin

// Relation says how two people belong together, in the words of the result
// tables. A pair has one relation, the closest that the ids name: twins, then
// parent and child, siblings, spouses and more distant kin.
type Relation uint8

// The relations of two people. The zero value is Unrelated: not known to be
// kin and without a common child.
const (
	Unrelated       Relation = iota
	MZ                       // identical twins (or members of a larger set)
	DZSameSex                // fraternal twins of one sex, or of unknown sex
	DZOppositeSex            // fraternal twins, a female and a male
	UnknownZygosity          // twins of one set, not known whether identical
	FullSibling              // mother and father in common, not twins
	HalfSibling              // one parent in common
	ParentChild              // one is a parent of the other
	Spouse                   // they have a child in common
	OtherKin                 // any other pair with common ancestors
	relationCount            // number of relations
)

var relationNames = [relationCount]string{
	Unrelated:       "unrelated",
	MZ:              "mz",
	DZSameSex:       "dz_same_sex",
	DZOppositeSex:   "dz_opposite_sex",
	UnknownZygosity: "unknown_zygosity",
	FullSibling:     "full_sibling",
	HalfSibling:     "half_sibling",
	ParentChild:     "parent_child",
	Spouse:          "spouse",
	OtherKin:        "other_kin",
}

// String returns the word of the result tables: "mz", "full_sibling" and so
// on, "unrelated" for the zero value.
func (r Relation) String() string {
	if r >= relationCount {
		return "relation out of range"
	}
	return relationNames[r]
}

// Twins says whether the relation is one of the same twin set.
func (r Relation) Twins() bool { return r >= MZ && r <= UnknownZygosity }
