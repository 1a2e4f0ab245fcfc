package twin

// findHomes says who grew up together. A home is the stated RearedIn; without
// one it goes with the mother, or under WithBoth with mother and father, known
// or supplied by a rule, so that twins and assumed full siblings share theirs.
//
// Where some state a home and others do not, those without one take the home
// of the others of their mother (or sibship) when these state one and the
// same, and otherwise share a home among themselves.
//
// Each person has one home, so that sharing one is an equivalence: the matrix
// of zeros and ones is block diagonal, and positive semidefinite.
func (p *Pedigree) findHomes(r *reading) {
	brood, broods := p.mother[:p.people], len(p.mother)
	if r.rules.RearedWith == WithBoth {
		brood, broods = p.sibship, len(p.couples)
	}
	p.home = make([]int32, p.people)
	copy(p.home, brood)

	seen := make(map[string]int32)
	stated := make([]int32, p.people)
	for i := range stated {
		stated[i], r.homes = numbered(seen, r.homes, r.people[i].RearedIn)
	}
	if len(r.homes) == 0 {
		return
	}

	const several = int32(-2)
	ofBrood := make([]int32, broods) // the one home that a brood states
	for b := range ofBrood {
		ofBrood[b] = none
	}
	for i, home := range stated {
		if home == none || brood[i] == none {
			continue
		}
		switch had := &ofBrood[brood[i]]; *had {
		case none:
			*had = home
		case home:
		default:
			*had = several
		}
	}
	var filled []int32
	for i, home := range stated {
		if home == none && brood[i] != none && ofBrood[brood[i]] >= 0 {
			home = ofBrood[brood[i]]
			filled = append(filled, int32(i))
		}
		if home != none {
			p.home[i] = int32(broods) + home
		}
	}
	r.note("reared_in", filled, "%s without a stated home had that of siblings filled in: %s.",
		counted(len(filled), "person", "people"), r.names(filled))
}

// SharedHome says whether two people grew up in one home (R of the variance
// model, where it is 1): people with equal RearedIn, or without it the
// children of one mother, the members of a twin set, and full siblings by
// Rules.UnknownParents; with WithBoth only the children of one mother and
// father. Nobody else shares one: not spouses, a parent and a child, cousins,
// or any founder without a row, unless RearedIn says so. Sharing a home is an
// equivalence, and everyone shares their own.
func (p *Pedigree) SharedHome(i, j int) bool {
	if i == j {
		return true
	}
	return i < p.people && j < p.people && p.home[i] != none && p.home[i] == p.home[j]
}
