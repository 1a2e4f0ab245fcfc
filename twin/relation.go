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

// Relation is how two people belong together. It is symmetric, and Unrelated
// for a person and themselves. Full and half-siblings include those by the
// rules; OtherKin is any other pair of kinship above zero, such as cousins,
// and the children of identical twins, who are as close as half-siblings.
func (p *Pedigree) Relation(i, j int) Relation {
	if i == j || p.family[i] != p.family[j] {
		return Unrelated
	}
	a, b := int32(i), int32(j)
	bothGiven := i < p.people && j < p.people
	if bothGiven && p.twinSet[i] != none && p.twinSet[i] == p.twinSet[j] {
		return twinRelation(p.genome[i] == p.genome[j],
			[2]Zygosity{p.zygosity[i], p.zygosity[j]}, [2]Sex{p.sex[i], p.sex[j]})
	}
	m, f, m2, f2 := p.mother[a], p.father[a], p.mother[b], p.father[b]
	sameMother, sameFather := m != none && m == m2, f != none && f == f2
	switch {
	case m == b || f == b || m2 == a || f2 == a:
		return ParentChild
	case sameMother && sameFather:
		return FullSibling
	case sameMother || sameFather:
		return HalfSibling
	case p.haveChild(a, b) || p.haveChild(b, a):
		return Spouse
	case p.kinship(p.genome[a], p.genome[b]) > 0:
		return OtherKin
	}
	return Unrelated
}

// haveChild says whether two people are mother and father of somebody.
func (p *Pedigree) haveChild(mother, father int32) bool {
	_, found := p.couples[couple{mother, father}]
	return found
}
