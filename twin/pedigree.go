package twin

import (
	"errors"
	"fmt"
)

// Pedigree holds who is related to whom, read from ids. People keep the
// indices of the table, 0..Len()-1; parents who have no row follow as
// founders, first those named by an id, then those that a rule supplies.
// Every method is safe for use by several goroutines at once, and needs
// memory in proportion to the number of people only.
type Pedigree struct {
	people int // people with a row; founders without one come after them

	// One entry a person, founders included; -1 means not known.
	mother, father []int32
	depth          []int32   // generations below the founders
	genome         []int32   // lowest index among identical people
	inbreeding     []float64 // by genome; nil when nobody is inbred
	family         []int32

	// One entry a person with a row.
	sex      []Sex
	zygosity []Zygosity
	twinSet  []int32
	sibship  []int32
	home     []int32 // -1: a home of their own

	couples     map[couple]int32 // sibship of each pair of parents
	labels      []string         // by family
	members     []int            // people with a row, family by family
	memberStart []int            // where each family starts in members
}

var _ Kin = (*Pedigree)(nil)

type couple struct{ mother, father int32 }

// none marks an unknown parent, a missing twin set, sibship or home.
const none = int32(-1)

// NewPedigree reads the relations of people from their ids, by the rules that
// docs/relations.md lists with a table of cases. In short: two people of one
// twin set are twins; people with the same mother and father are full
// siblings, with one of them in common half-siblings; a person named as mother
// or father is a parent; further kin follow through the pedigree. Parents
// without a row become founders, who are related to nobody but their
// descendants.
//
// What ids leave open is filled in this order:
//
//  1. A twin without a mother or father id has the one of the co-twins.
//  2. Among the children of one known parent whose other parent is not known,
//     those with equal family labels have the same unknown parent, under
//     AssumeSameParent. A child without a label joins them when the labelled
//     ones have one label between them; otherwise the unlabelled are siblings
//     of each other. Everyone else (AssumeOtherParent, different labels, or a
//     child whose sibling's other parent is known) is a half-sibling.
//  3. People with equal family labels and no parent ids have the same unknown
//     mother and father, under AssumeFullSiblings, except those who are a
//     parent of someone with that label or without one: a mother with a row
//     beside her children is no sibling of theirs, nor of her husband. They
//     become siblings of each other, not of those whose parents are known.
//  4. Twins whose parents are not known still share both.
//
// Labels are compared as written; twins of one set count as having each
// other's labels.
//
// Faults of the ids are returned all at once: the error joins one PersonError
// each, in order of person, and the pedigree is nil. They are: an empty or
// repeated id, a person who is their own parent or ancestor, a parent named as
// mother and as father, twins with different mothers or fathers or with a
// parent in their own twin set, identical twins of different sex, zygosity or
// mz_set without a twin set, and zygosities of one set that contradict each
// other or do not say who is identical. Notes tell of rules used and of
// doubtful ids.
//
// The people are not kept or changed, and their order has no influence on any
// relation. It panics when a rule is out of range.
func NewPedigree(people []Person, rules Rules) (*Pedigree, []Note, error) {
	if rules.UnknownParents > AssumeUnrelated || rules.UnknownParent > AssumeOtherParent || rules.RearedWith > WithBoth {
		panic("twin: NewPedigree with a rule out of range")
	}
	r := &reading{people: people, rules: rules}
	r.readIDs()
	r.readTwinSets()
	r.checkAncestors()
	if len(r.faults) > 0 {
		return nil, nil, r.joinedFaults()
	}
	r.fillOneUnknown()
	r.fillBothUnknown()
	r.noteParentsSex()

	n := len(people)
	p := &Pedigree{
		people:   n,
		mother:   r.mother,
		father:   r.father,
		genome:   r.genomes(),
		sex:      make([]Sex, n),
		zygosity: r.zygosity,
		twinSet:  r.twinSet,
	}
	for i := range people {
		p.sex[i] = people[i].Sex
	}
	p.depth, _ = depths(p.mother, p.father)
	p.findInbreeding()
	p.findSibships()
	p.findHomes(r)
	p.findFamilies(r)
	return p, r.notes, nil
}

// Len is the number of people given; founders have indices from Len() on.
func (p *Pedigree) Len() int { return p.people }

// Founders is the number of parents without a row, named or supplied by a
// rule. Their indices are Len()..Len()+Founders()-1.
func (p *Pedigree) Founders() int { return len(p.mother) - p.people }

// Mother is the index of a person's mother, which is Len() or more when she
// has no row, and -1 when she is not known.
func (p *Pedigree) Mother(i int) int { return int(p.mother[i]) }

// Father is the index of a person's father, which is Len() or more when he has
// no row, and -1 when he is not known.
func (p *Pedigree) Father(i int) int { return int(p.father[i]) }

// TwinSet numbers the twin sets from 0 by first appearance; -1 for people who
// are no twins. A set may have one member present.
func (p *Pedigree) TwinSet(i int) int { return int(p.twinSet[i]) }

// Zygosity is a twin's zygosity after the rules: as given, or that of the
// co-twin, or Dizygotic for a twin of other sex than all the others. A person
// of a larger set is Monozygotic when identical to at least one other.
func (p *Pedigree) Zygosity(i int) Zygosity { return p.zygosity[i] }

// Sibship numbers the sibships from 0 by first appearance: full siblings and
// twins of one mother and father. It is -1 where a parent is neither known
// nor supplied by a rule. An only child of two known parents is a sibship of
// one.
func (p *Pedigree) Sibship(i int) int { return int(p.sibship[i]) }

// Inbred returns the first person, by index, whose parents are related, and
// whether there is one. The covariance of dominance deviations that Dominance
// gives does not hold with inbreeding.
func (p *Pedigree) Inbred() (person int, found bool) {
	if p.inbreeding == nil {
		return -1, false
	}
	for i := range p.people {
		if p.inbreeding[p.genome[i]] > 0 {
			return i, true
		}
	}
	return -1, false
}

// findSibships numbers the pairs of parents by first appearance.
func (p *Pedigree) findSibships() {
	p.sibship = make([]int32, p.people)
	p.couples = make(map[couple]int32)
	for i := range p.sibship {
		c := couple{p.mother[i], p.father[i]}
		if c.mother == none || c.father == none {
			p.sibship[i] = none
			continue
		}
		s, ok := p.couples[c]
		if !ok {
			s = int32(len(p.couples))
			p.couples[c] = s
		}
		p.sibship[i] = s
	}
}

// checkPeople panics unless rows are distinct indices of people with a row.
func (p *Pedigree) checkPeople(method string, rows []int) {
	seen := make([]bool, p.people)
	for _, i := range rows {
		if i < 0 || i >= p.people {
			panic(fmt.Sprintf("twin: %s with person %d of %d", method, i, p.people))
		}
		if seen[i] {
			panic(fmt.Sprintf("twin: %s with person %d twice", method, i))
		}
		seen[i] = true
	}
}

// joinedFaults returns all faults as one error, in order of person.
func (r *reading) joinedFaults() error {
	r.sortFaults()
	all := make([]error, len(r.faults))
	for i, f := range r.faults {
		all[i] = f
	}
	return errors.Join(all...)
}
