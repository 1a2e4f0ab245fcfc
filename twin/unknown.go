package twin

import (
	"cmp"
	"slices"
)

// addFounder appends a parent who has neither row nor id.
func (r *reading) addFounder() int32 {
	r.mother, r.father = append(r.mother, none), append(r.father, none)
	return int32(len(r.mother) - 1)
}

// fillOneUnknown decides, among the children of each known parent whose other
// parent is not known, who shares that other parent.
func (r *reading) fillOneUnknown() {
	var found oneUnknown
	for _, brood := range r.sharingOneUnknown(r.mother, r.father, &found) {
		father := r.addFounder()
		for _, i := range brood {
			r.father[i] = father
		}
	}
	for _, brood := range r.sharingOneUnknown(r.father, r.mother, &found) {
		mother := r.addFounder()
		for _, i := range brood {
			r.mother[i] = mother
		}
	}
	r.note("unknown_parent", found.full, "%s share one parent, the other being unknown for all of them, with no two "+
		"family labels: taken as full siblings (unknown_parent: same): %s.",
		counted(len(found.full), "person", "people"), r.names(found.full))
	r.note("unknown_parent", found.half, "%s share one parent, the other being unknown for all of them: taken as "+
		"half-siblings (unknown_parent: other): %s.",
		counted(len(found.half), "person", "people"), r.names(found.half))
	r.note("unknown_parent", found.labels, "%s share one parent, the other being unknown for all of them, but have "+
		"different family labels: taken as half-siblings where the labels differ: %s.",
		counted(len(found.labels), "person", "people"), r.names(found.labels))
	r.note("unknown_parent", found.oneOnly, "%s with one parent unknown share the other with people whose parents "+
		"are both known: taken as half-siblings of these: %s.",
		counted(len(found.oneOnly), "person", "people"), r.names(found.oneOnly))
}

// oneUnknown collects the people about whom fillOneUnknown decides.
type oneUnknown struct{ full, half, labels, oneOnly []int32 }

// sharingOneUnknown returns the groups of two or more who share a parent of
// the known role and, by the rules, their unknown parent of the other role.
func (r *reading) sharingOneUnknown(known, unknown []int32, found *oneUnknown) [][]int32 {
	hasPair := make([]bool, len(known)) // parents of a child of two known parents
	var children []int32
	for i := range r.people {
		switch {
		case known[i] == none:
		case unknown[i] == none:
			children = append(children, int32(i))
		default:
			hasPair[known[i]] = true
		}
	}
	slices.SortStableFunc(children, func(a, b int32) int { return cmp.Compare(known[a], known[b]) })

	var groups [][]int32
	var joined unions
	for len(children) > 0 {
		parent, end := known[children[0]], 1
		for end < len(children) && known[children[end]] == parent {
			end++
		}
		brood := children[:end:end]
		children = children[end:]
		if hasPair[parent] {
			found.oneOnly = append(found.oneOnly, brood...)
		}
		switch {
		case end == 1:
		case r.rules.UnknownParent == AssumeOtherParent:
			if r.units(brood) > 1 {
				found.half = append(found.half, brood...)
			}
			groups = append(groups, r.pairsOrMore(brood)...)
		default:
			if joined == nil {
				joined = newUnions(len(r.people))
			}
			r.joinByLabel(joined, brood)
			sets := joined.sets(brood)
			for _, set := range sets {
				if len(set) > 1 {
					groups = append(groups, set)
				}
				if r.units(set) > 1 {
					found.full = append(found.full, set...)
				}
			}
			if len(sets) > 1 {
				found.labels = append(found.labels, brood...)
			}
		}
	}
	return groups
}

// joinByLabel joins the twins among the children of one parent, then those of
// equal labels. The unlabelled join the labelled ones when these have become
// one set, else each other.
func (r *reading) joinByLabel(joined unions, brood []int32) {
	first := make(map[int32]int32)
	for _, i := range brood {
		if s := r.twinSet[i]; s != none {
			joined.join(i, r.twins[s][0])
		}
		if l := r.label[i]; l != none {
			if j, ok := first[l]; ok {
				joined.join(i, j)
			} else {
				first[l] = i
			}
		}
	}
	labelled := make(map[int32]bool) // roots of sets with a label
	for _, i := range first {
		labelled[joined.root(i)] = true
	}
	var unlabelled []int32
	for _, i := range brood {
		if root := joined.root(i); !labelled[root] {
			unlabelled = append(unlabelled, root)
		}
	}
	for k, i := range unlabelled {
		joined.join(i, unlabelled[0])
		if k == 0 && len(labelled) == 1 {
			for root := range labelled {
				joined.join(i, root)
			}
		}
	}
}

// units counts people, with the members of a twin set as one.
func (r *reading) units(people []int32) int {
	n := 0
	for _, i := range people {
		if s := r.twinSet[i]; s == none || r.twins[s][0] == i {
			n++
		}
	}
	return n
}

// pairsOrMore returns the twin sets of two or more among people.
func (r *reading) pairsOrMore(people []int32) [][]int32 {
	var sets [][]int32
	for _, i := range people {
		if s := r.twinSet[i]; s != none && r.twins[s][0] == i && len(r.twins[s]) > 1 {
			sets = append(sets, r.twins[s])
		}
	}
	return sets
}

// fillBothUnknown decides who, among the people without parent ids, shares
// both unknown parents: twins always, people of one label by the rule.
func (r *reading) fillBothUnknown() {
	open, joined := r.withoutParents()
	var full, unrelated, apart []int32
	inLabel := make([]int, len(r.labels))
	for _, l := range r.label {
		if l != none {
			inLabel[l]++
		}
	}
	for _, set := range joined.sets(open) {
		groups := [][]int32{set}
		switch {
		case r.units(set) == 1:
			if r.labelGoesOn(set, inLabel) {
				apart = append(apart, set...)
			}
		case r.rules.UnknownParents == AssumeFullSiblings:
			full = append(full, set...)
		default:
			unrelated = append(unrelated, set...)
			groups = r.pairsOrMore(set)
		}
		for _, group := range groups {
			r.shareUnknownParents(group)
		}
	}
	r.note("unknown_parents", full, "%s without parent ids taken as full siblings of those with the same family "+
		"label (unknown_parents: full_siblings): %s.", counted(len(full), "person", "people"), r.names(full))
	r.note("unknown_parents", unrelated, "%s without parent ids taken as no blood relatives of others with the same "+
		"family label (unknown_parents: unrelated): %s.", counted(len(unrelated), "person", "people"), r.names(unrelated))
	r.note("unknown_parents", apart, "%s without parent ids, while the others with the same family label have parent "+
		"ids or children there: taken as no blood relatives of these: %s.",
		counted(len(apart), "person", "people"), r.names(apart))
}

// withoutParents returns the people without parent ids who are not a parent
// under their own label, and joins those of equal labels and of one twin set.
// The twins of such a parent are left out too: the set receives its unknown
// parents here.
func (r *reading) withoutParents() (open []int32, joined unions) {
	isParent := make([]bool, len(r.people))
	for i := range r.people {
		for _, parent := range [...]int32{r.mother[i], r.father[i]} {
			if parent == none || int(parent) >= len(r.people) || r.label[parent] == none {
				continue
			}
			if r.label[i] == none || r.label[i] == r.label[parent] {
				isParent[parent] = true
			}
		}
	}
	for _, set := range r.twins {
		if r.mother[set[0]] == none && r.father[set[0]] == none && slices.ContainsFunc(set, func(i int32) bool { return isParent[i] }) {
			r.shareUnknownParents(set)
		}
	}

	joined = newUnions(len(r.people))
	first := make([]int32, len(r.labels))
	for l := range first {
		first[l] = none
	}
	for i := range r.people {
		if r.mother[i] != none || r.father[i] != none || isParent[i] {
			continue
		}
		open = append(open, int32(i))
		if s := r.twinSet[i]; s != none {
			joined.join(int32(i), r.twins[s][0])
		}
		if l := r.label[i]; l != none {
			if first[l] == none {
				first[l] = int32(i)
			}
			joined.join(int32(i), first[l])
		}
	}
	return open, joined
}

// labelGoesOn says whether anybody outside the set has a label of the set.
func (r *reading) labelGoesOn(set []int32, inLabel []int) bool {
	for _, i := range set {
		if r.label[i] == none {
			continue
		}
		within := 0
		for _, j := range set {
			if r.label[j] == r.label[i] {
				within++
			}
		}
		if inLabel[r.label[i]] > within {
			return true
		}
	}
	return false
}

// shareUnknownParents gives two or more people one mother and one father who
// have neither row nor id.
func (r *reading) shareUnknownParents(people []int32) {
	if len(people) < 2 {
		return
	}
	mother, father := r.addFounder(), r.addFounder()
	for _, i := range people {
		r.mother[i], r.father[i] = mother, father
	}
}
