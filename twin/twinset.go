package twin

// readTwinSets finds who is a twin of whom, gives twins the parents of their
// co-twins, and settles zygosity and who is identical.
func (r *reading) readTwinSets() {
	n := len(r.people)
	r.twinSet = make([]int32, n)
	r.zygosity = make([]Zygosity, n)
	r.identical = make([]int32, n)
	seen := make(map[string]int32)
	var labels []string
	for i := range r.people {
		r.zygosity[i] = r.people[i].Zygosity
		r.identical[i] = int32(i)
		r.twinSet[i], labels = numbered(seen, labels, r.people[i].TwinSet)
		if s := r.twinSet[i]; s != none {
			if int(s) == len(r.twins) {
				r.twins = append(r.twins, nil)
			}
			r.twins[s] = append(r.twins[s], int32(i))
		}
	}

	var found zygosityNotes
	var filled, alone []int32
	for s, set := range r.twins {
		if len(set) == 1 {
			alone = append(alone, set[0])
			continue
		}
		if r.agreeOnParents(set, labels[s]) {
			filled = append(filled, r.shareParents(set)...)
		}
		r.settleZygosity(set, &found)
	}

	r.note("twin_set", alone, "%s without a co-twin in the table: %s.",
		counted(len(alone), "twin", "twins"), r.names(alone))
	r.note("twin_set", filled, "%s without a mother or father id had the co-twin's filled in: %s.",
		counted(len(filled), "twin", "twins"), r.names(filled))
	r.note("zygosity", found.copied, "%s without zygosity had the co-twin's or that of the mz_set filled in: %s.",
		counted(len(found.copied), "twin", "twins"), r.names(found.copied))
	r.note("zygosity", found.bySex, "%s without zygosity taken as DZ because of a co-twin of the other sex: %s.",
		counted(len(found.bySex), "twin", "twins"), r.names(found.bySex))
	r.note("zygosity", found.unknown, "%s of unknown zygosity and not of opposite sex: kept in prediction and "+
		"exchange as a relation of its own, left out of twin models: %s.",
		counted(len(found.unknown), "twin", "twins"), r.names(found.unknown))
	r.note("sex", found.noSex, "%s in DZ pairs with a sex not known, counted as same-sex pairs: %s.",
		counted(len(found.noSex), "twin", "twins"), r.names(found.noSex))
}

// agreeOnParents finds twins of different mothers or fathers, and twins of
// whom one is a parent of another.
func (r *reading) agreeOnParents(set []int32, label string) bool {
	agree := true
	for _, kind := range [...]struct {
		field  string
		parent []int32
	}{{"mother", r.mother}, {"father", r.father}} {
		first := none
		for _, i := range set {
			parent := kind.parent[i]
			switch {
			case parent == none:
			case int(parent) < len(r.people) && r.people[parent].TwinSet == label:
				r.fault(i, "twin_set", parent, "%q is in the twin set %q of their own %s, %q",
					r.ids[i], label, kind.field, r.ids[parent])
				agree = false
			case first == none:
				first = i
			case parent != kind.parent[first]:
				r.fault(i, kind.field, first, "%q has the %s %q, the co-twin %q has %q; twins have one %s",
					r.ids[i], kind.field, r.ids[parent], r.ids[first], r.ids[kind.parent[first]], kind.field)
				agree = false
			}
		}
	}
	return agree
}

// shareParents gives every twin of a set the parents that any of them names,
// and returns who received one.
func (r *reading) shareParents(set []int32) []int32 {
	mother, father := none, none
	for _, i := range set {
		mother, father = max(mother, r.mother[i]), max(father, r.father[i])
	}
	var filled []int32
	for _, i := range set {
		if r.mother[i] != mother || r.father[i] != father {
			filled = append(filled, i)
		}
		r.mother[i], r.father[i] = mother, father
	}
	return filled
}

// zygosityNotes collects twins whose zygosity was not as given.
type zygosityNotes struct{ copied, bySex, unknown, noSex []int32 }

// settleZygosity decides who of a set of two or more is identical to whom, and
// the zygosity of each where it is not given. An mz_set anywhere in the set
// tells all: people are identical when they have the same one.
func (r *reading) settleZygosity(set []int32, found *zygosityNotes) {
	told := false
	for _, i := range set {
		told = told || r.people[i].MZSet != ""
	}
	settle := r.zygosityBySet
	if told {
		settle = r.zygosityByMZSet
	}
	if !settle(set, found) {
		return
	}
	r.checkIdenticalSex(set)
	if !told {
		r.zygosityBySex(set, found)
	}
	for k, i := range set {
		unclear := false
		for l, j := range set {
			unclear = unclear || k != l && r.twinRelation(i, j) == DZSameSex &&
				(r.people[i].Sex == SexUnknown || r.people[j].Sex == SexUnknown)
		}
		if unclear {
			found.noSex = append(found.noSex, i)
		}
	}
}

// zygosityByMZSet makes people with one mz_set identical.
func (r *reading) zygosityByMZSet(set []int32, found *zygosityNotes) bool {
	ok := true
	for k, i := range set {
		mzSet, given := r.people[i].MZSet, r.people[i].Zygosity
		partner := none
		for l, j := range set {
			if l != k && mzSet != "" && r.people[j].MZSet == mzSet {
				partner = j
				break
			}
		}
		switch {
		case partner != none && given == Dizygotic:
			r.fault(i, "zygosity", partner, "%q is DZ but shares the mz_set %q with %q", r.ids[i], mzSet, r.ids[partner])
			ok = false
		case mzSet == "" && given == Monozygotic:
			r.fault(i, "mz_set", none, "%q is MZ without an mz_set, while the twin set has them", r.ids[i])
			ok = false
		}
		if partner != none {
			r.identical[i] = min(i, r.identical[partner])
			r.zygosity[i] = Monozygotic
		} else if given == ZygosityUnknown {
			r.zygosity[i] = Dizygotic
		}
		if given == ZygosityUnknown {
			found.copied = append(found.copied, i)
		}
	}
	return ok
}

// zygosityBySet settles a set without any mz_set: all are identical, or none
// is. In a pair one twin's zygosity is the other's too; in larger sets it is
// not, and MZ beside anything else does not say who is identical.
func (r *reading) zygosityBySet(set []int32, found *zygosityNotes) bool {
	with := [...]int32{ZygosityUnknown: none, Monozygotic: none, Dizygotic: none} // somebody with each
	for _, i := range set {
		with[r.zygosity[i]] = i
	}
	mz, dz, open := with[Monozygotic], with[Dizygotic], with[ZygosityUnknown]
	switch {
	case mz != none && dz != none:
		i, other := max(mz, dz), min(mz, dz)
		advice := ""
		if len(set) > 2 {
			advice = "; an mz_set must say who is identical"
		}
		r.fault(i, "zygosity", other, "%q is %s, %q of the same twin set is %s%s",
			r.ids[i], r.zygosity[i], r.ids[other], r.zygosity[other], advice)
		return false
	case mz != none && open != none && len(set) > 2:
		r.fault(open, "zygosity", mz, "%q has no zygosity, %q of the same twin set is MZ; an mz_set must say who is identical",
			r.ids[open], r.ids[mz])
		return false
	case open != none && len(set) == 2 && (mz != none || dz != none):
		r.zygosity[open] = r.zygosity[max(mz, dz)]
		found.copied = append(found.copied, open)
	}
	if mz != none {
		for _, i := range set {
			r.identical[i] = set[0]
		}
	}
	return true
}

// checkIdenticalSex finds identical twins of different sex.
func (r *reading) checkIdenticalSex(set []int32) {
	for k, i := range set {
		for _, j := range set[:k] {
			a, b := r.people[i].Sex, r.people[j].Sex
			if r.identical[i] == r.identical[j] && a != SexUnknown && b != SexUnknown && a != b {
				r.fault(i, "sex", j, "%q is %s, the identical twin %q is %s", r.ids[i], a, r.ids[j], b)
				break
			}
		}
	}
}

// zygosityBySex makes a twin DZ who differs in sex from every co-twin of
// unknown zygosity, or is the only one of unknown zygosity beside DZ co-twins,
// and notes those who stay unknown.
func (r *reading) zygosityBySex(set []int32, found *zygosityNotes) {
	var open []int32
	for _, i := range set {
		if r.zygosity[i] == ZygosityUnknown {
			open = append(open, i)
		}
	}
	settled := make([]bool, len(open))
	for k, i := range open {
		settled[k] = true
		for l, j := range open {
			if l != k && r.twinRelation(i, j) != DZOppositeSex {
				settled[k] = false
			}
		}
	}
	for k, i := range open {
		switch {
		case !settled[k]:
			found.unknown = append(found.unknown, i)
			continue
		case len(open) == 1:
			found.copied = append(found.copied, i)
		default:
			found.bySex = append(found.bySex, i)
		}
		r.zygosity[i] = Dizygotic
	}
}

// twinRelation is the relation of two people of one twin set.
func (r *reading) twinRelation(i, j int32) Relation {
	return twinRelation(r.identical[i] == r.identical[j],
		[2]Zygosity{r.zygosity[i], r.zygosity[j]}, [2]Sex{r.people[i].Sex, r.people[j].Sex})
}

// twinRelation decides the relation of two people of one twin set from
// whether they are identical, and their zygosities and sexes. One zygosity
// that is known settles a pair that is not identical: it is then DZ, or MZ
// with somebody else.
func twinRelation(identical bool, zygosity [2]Zygosity, sex [2]Sex) Relation {
	opposite := sex[0] != sex[1] && sex[0] != SexUnknown && sex[1] != SexUnknown
	switch {
	case identical:
		return MZ
	case opposite:
		return DZOppositeSex
	case zygosity[0] != ZygosityUnknown || zygosity[1] != ZygosityUnknown:
		return DZSameSex
	}
	return UnknownZygosity
}

// genomes returns for everyone, founders included, the lowest index of the
// people who are identical to them, themselves when nobody is.
func (r *reading) genomes() []int32 {
	genome := make([]int32, len(r.mother))
	for i := range genome {
		genome[i] = int32(i)
	}
	copy(genome, r.identical)
	return genome
}
