package twin

import (
	"fmt"
	"strings"
)

// findFamilies makes the connected sets of people through parents, twin sets
// (whose members share their parents, known or not), equal labels and stated
// homes, and numbers them by first appearance.
func (p *Pedigree) findFamilies(r *reading) {
	everyone, n := len(p.mother), p.people
	// One node a person, a label and a stated home.
	labelNode, homeNode := int32(everyone), int32(everyone+len(r.labels))
	joined := newUnions(everyone + len(r.labels) + len(r.homes))
	homeOf := make(map[string]int32, len(r.homes))
	for h, home := range r.homes {
		homeOf[home] = int32(h)
	}
	for i := range int32(n) {
		for _, parent := range [...]int32{p.mother[i], p.father[i]} {
			if parent != none {
				joined.join(i, parent)
			}
		}
		if l := r.label[i]; l != none {
			joined.join(i, labelNode+l)
		}
		if home := r.people[i].RearedIn; home != "" {
			joined.join(i, homeNode+homeOf[home])
		}
	}

	// The root of a set is its lowest member, so that the root of a person is
	// the first person of the family.
	p.family = make([]int32, everyone)
	families := int32(0)
	for i := range p.family {
		if root := joined.root(int32(i)); root == int32(i) {
			p.family[i] = families
			families++
		} else {
			p.family[i] = p.family[root]
		}
	}
	p.listMembers(int(families))
	p.labelFamilies(r)
}

// listMembers sorts the people with a row by family.
func (p *Pedigree) listMembers(families int) {
	p.memberStart = make([]int, families+1)
	for _, f := range p.family[:p.people] {
		p.memberStart[f+1]++
	}
	for f := range families {
		p.memberStart[f+1] += p.memberStart[f]
	}
	p.members = make([]int, p.people)
	next := append([]int(nil), p.memberStart...)
	for i, f := range p.family[:p.people] {
		p.members[next[f]] = i
		next[f]++
	}
}

// labelFamilies gives each family its label, and tells of those with several.
func (p *Pedigree) labelFamilies(r *reading) {
	p.labels = make([]string, p.Families())
	var several []int32 // families, by first appearance of their second label
	others := make(map[int32][]string)
	seen := make([]bool, len(r.labels))
	for i, l := range r.label {
		if l == none || seen[l] {
			continue
		}
		seen[l] = true
		f := p.family[i]
		if p.labels[f] == "" {
			p.labels[f] = r.labels[l]
			continue
		}
		if others[f] == nil {
			several = append(several, f)
		}
		others[f] = append(others[f], r.labels[l])
	}

	var people []int32
	var lines []string
	for _, f := range several {
		for _, i := range p.Members(int(f)) {
			people = append(people, int32(i))
		}
		lines = append(lines, strings.Join(append([]string{p.labels[f]}, others[f]...), " = "))
	}
	r.note("family", people, "%s of several labels, tied by a parent, a twin set or a stated home, each made one "+
		"under its first label: %s.", counted(len(several), "family", "families"), listed(lines))

	var used map[string]bool
	for f := range p.labels {
		if p.labels[f] != "" {
			continue
		}
		if used == nil {
			used = make(map[string]bool, len(p.labels))
			for _, label := range r.labels {
				used[label] = true
			}
		}
		label := r.people[p.members[p.memberStart[f]]].ID
		for used[label] {
			label = fmt.Sprintf("%s_", label)
		}
		used[label] = true
		p.labels[f] = label
	}
}

// Families is the number of families among the people given.
func (p *Pedigree) Families() int { return len(p.memberStart) - 1 }

// Family is the family of a person: the set of people connected through
// parents, twin sets, equal family labels and equal stated homes. A label ties
// people who are no blood relatives too, such as husband and wife, since it is
// the analyst's statement that they belong together; a home ties people so
// that those who share one are never taken as independent. Families are
// numbered from 0 by first appearance; founders have one as well.
func (p *Pedigree) Family(i int) int { return int(p.family[i]) }

// FamilyLabel is the label of a family: the first label of its people in the
// order of the table; without any, the id of its first person, with
// underscores added where that is a label already.
func (p *Pedigree) FamilyLabel(family int) string { return p.labels[family] }

// Members are the people of a family who have a row, ascending. The slice is
// shared and must not be changed.
func (p *Pedigree) Members(family int) []int {
	from, to := p.memberStart[family], p.memberStart[family+1]
	return p.members[from:to:to]
}
