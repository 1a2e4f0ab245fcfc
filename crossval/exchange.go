package crossval

import (
	"errors"
	"fmt"
	"math"
	"math/big"
)

// Exchange is the set of all arrangements that a null hypothesis allows for
// people who are related: the ways to hand out the people's values to their
// places that keep every relation (Winkler et al. 2015, seen as symmetries of
// the relations). It is not changed by its methods and may be used by several
// goroutines at once.
type Exchange struct {
	people     int
	structures []structure
}

// structure is a way of being related that one or more families share.
type structure struct {
	*symmetries
	// members[f*size+i] is the person in place i of the structure's f-th
	// family.
	members []int
	first   int
	path    *path // only while families are sorted
}

func (t *structure) families() int { return len(t.members) / t.size }

func (t *structure) family(f int) []int { return t.members[f*t.size : (f+1)*t.size] }

// Structure describes families that are alike: one can be laid on another,
// member on member, so that all relations and marks agree.
type Structure struct {
	// Size is the number of members, Families the number of families, First
	// the index of the first of them.
	Size, Families, First int
	// Symmetries is the number of ways to move members inside one family that
	// keep every relation and mark, moving nobody among them.
	Symmetries *big.Int
}

// StructureError says that the symmetries of a family could not be found with
// reasonable work. It takes hundreds of members with hundreds of branches that
// are alike, or a relation matrix that no family of people has.
type StructureError struct {
	Family, Size int
}

func (e *StructureError) Error() string {
	return fmt.Sprintf("crossval: family %d of %d members has more symmetry than can be worked out", e.Family, e.Size)
}

// NewExchange finds all arrangements of people 0..people-1 who fall into
// families. An arrangement is allowed when every two places of a family get
// the values of two members of one family who are related as they are, in both
// directions, and every place the value of a person with the same mark.
// Families that are alike therefore change places as wholes, and members move
// inside by the symmetries of their family. People of different families count
// as unrelated, and a family is expected to hang together: the symmetries of
// two unrelated groups in one family would be found, exchanges with other
// families would not.
//
// To keep everyone inside the own family, give each family a mark of its own.
//
// Families that are not a partition of the people, and relations or marks of
// wrong length, are an error; so is a family whose symmetries cannot be worked
// out (*StructureError).
func NewExchange(people int, families []Family) (*Exchange, error) {
	return newExchange(people, families, work{relations: 1 << 30, members: 1 << 26})
}

// newExchange allows each way of being related some work: for callers a few
// seconds and a quarter of a gigabyte.
func newExchange(people int, families []Family, allowed work) (*Exchange, error) {
	if err := checkFamilies(people, families); err != nil {
		return nil, err
	}
	s := sorter{known: make(map[string]fitting), alike: make(map[uint64][]int)}
	var key []byte
	for f := range families {
		family := &families[f]
		key = family.appendKey(key[:0])
		fit, seen := s.known[string(key)]
		if !seen {
			w := allowed
			var err error
			if fit, err = s.fit(f, family.shape(), &w); errors.Is(err, errTooLong) {
				return nil, &StructureError{Family: f, Size: len(family.People)}
			} else if err != nil {
				return nil, err
			}
			s.known[string(key)] = fit
		}
		t := &s.structures[fit.structure]
		for _, member := range fit.order {
			t.members = append(t.members, family.People[member])
		}
	}
	for t := range s.structures {
		s.structures[t].path = nil // of no more use
	}
	return &Exchange{people: people, structures: s.structures}, nil
}

// checkFamilies checks that families are a partition of the people and that
// their matrices fit.
func checkFamilies(people int, families []Family) error {
	if people < 0 {
		return fmt.Errorf("crossval: %d people", people)
	}
	in := make([]bool, people)
	left := people
	for f := range families {
		family := &families[f]
		size := len(family.People)
		switch {
		case size == 0:
			return fmt.Errorf("crossval: family %d has no members", f)
		case len(family.Relation) != size*size:
			return fmt.Errorf("crossval: family %d of %d members has %d relations", f, size, len(family.Relation))
		case family.Mark != nil && len(family.Mark) != size:
			return fmt.Errorf("crossval: family %d of %d members has %d marks", f, size, len(family.Mark))
		}
		for _, person := range family.People {
			if person < 0 || person >= people {
				return fmt.Errorf("crossval: family %d has person %d of %d people", f, person, people)
			}
			if in[person] {
				return fmt.Errorf("crossval: person %d is in two families or twice in one, the second time in family %d", person, f)
			}
			in[person] = true
			left--
		}
	}
	if left > 0 {
		for person, yes := range in {
			if !yes {
				return fmt.Errorf("crossval: %d people are in no family, the first is person %d", left, person)
			}
		}
	}
	return nil
}

// sorter sorts families into structures.
type sorter struct {
	structures []structure
	// known says, for members listed in a way that was met before, where they
	// belong; alike lists the structures of families that look alike.
	known map[string]fitting
	alike map[uint64][]int
}

// fitting says that member order[i] of a family goes to place i of a structure.
type fitting struct {
	structure int
	order     []int
}

// fit finds the structure of a family, or makes it.
func (s *sorter) fit(family int, own *shape, w *work) (fitting, error) {
	c, err := own.colours(w)
	if err != nil {
		return fitting{}, err
	}
	look := uint64(own.size)
	for _, colour := range c.sorted {
		look = blend(look, colour)
	}
	for _, t := range s.alike[look] {
		order, err := s.structures[t].path.onto(own, c, w)
		if err != nil {
			return fitting{}, err
		}
		if order != nil {
			return fitting{t, order}, nil
		}
	}
	y, err := newSymmetries(own, c, w)
	if err != nil {
		return fitting{}, err
	}
	order := make([]int, own.size)
	for i := range order {
		order[i] = i
	}
	s.alike[look] = append(s.alike[look], len(s.structures))
	s.structures = append(s.structures, structure{symmetries: y, first: family, path: newPath(own, c)})
	return fitting{len(s.structures) - 1, order}, nil
}

// Structures returns the structures of the families, in the order of their
// first families.
func (e *Exchange) Structures() []Structure {
	out := make([]Structure, len(e.structures))
	for i := range e.structures {
		t := &e.structures[i]
		out[i] = Structure{Size: t.size, Families: t.families(), First: t.first, Symmetries: t.order()}
	}
	return out
}

// FamiliesFixed returns the number of families that no arrangement moves:
// they are alone in their structure and their members cannot move inside.
func (e *Exchange) FamiliesFixed() int {
	count := 0
	for i := range e.structures {
		if t := &e.structures[i]; t.families() == 1 && t.movable() == 0 {
			count++
		}
	}
	return count
}

// PeopleFixed returns the number of people whose value no arrangement moves.
func (e *Exchange) PeopleFixed() int {
	count := 0
	for i := range e.structures {
		if t := &e.structures[i]; t.families() == 1 {
			count += t.size - t.movable()
		}
	}
	return count
}

// Count returns the number of allowed arrangements, the one that moves nobody
// included: the product over structures of families! x symmetries^families.
// For hundreds of thousands of families that is a number of millions of
// digits, and takes seconds; Log10 does not.
func (e *Exchange) Count() *big.Int {
	count := big.NewInt(1)
	for i := range e.structures {
		t := &e.structures[i]
		families := int64(t.families())
		count.Mul(count, new(big.Int).MulRange(1, families))
		count.Mul(count, new(big.Int).Exp(t.order(), big.NewInt(families), nil))
	}
	return count
}

// Log10 returns the decimal logarithm of Count.
func (e *Exchange) Log10() float64 {
	if count, ok := e.upTo(int(min(int64(1)<<53, math.MaxInt))); ok {
		return math.Log10(float64(count))
	}
	sum := 0.0
	for i := range e.structures {
		t := &e.structures[i]
		trades, _ := math.Lgamma(float64(t.families() + 1))
		inside := 0.0
		t.choices(func(ways int) bool {
			inside += math.Log(float64(ways))
			return true
		})
		sum += trades + float64(float64(t.families())*inside)
	}
	return sum / math.Ln10
}

// upTo returns Count when it is at most limit.
func (e *Exchange) upTo(limit int) (count int, ok bool) {
	count = 1
	times := func(ways int) bool {
		if count > limit/ways {
			return false
		}
		count *= ways
		return true
	}
	for i := range e.structures {
		t := &e.structures[i]
		for f := range t.families() {
			if !times(f+1) || !t.choices(times) {
				return 0, false
			}
		}
	}
	return count, true
}
