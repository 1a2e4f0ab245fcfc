package crossval

import (
	"errors"
	"testing"
)

// A ring of twelve needs some hundreds of looks at each of its 144 relations,
// and keeps 12 + 2 permutations of 12 members.
func TestSearchGivesUp(t *testing.T) {
	const size = 12
	ring := Family{Relation: make([]int, size*size)}
	for i := range size {
		ring.People = append(ring.People, i+1)
		ring.Relation[i*size+(i+1)%size] = 1
		ring.Relation[(i+1)%size*size+i] = 1
	}
	families := []Family{{People: []int{0}, Relation: []int{0}}, ring}
	plenty := work{relations: 1 << 20, members: 1 << 10}
	if _, err := newExchange(size+1, families, plenty); err != nil {
		t.Fatal(err)
	}
	for name, little := range map[string]work{
		"looking": {relations: 20 * size * size, members: plenty.members},
		"memory":  {relations: plenty.relations, members: 12 * size},
	} {
		_, err := newExchange(size+1, families, little)
		var structure *StructureError
		if !errors.As(err, &structure) || *structure != (StructureError{Family: 1, Size: size}) ||
			err.Error() != "crossval: family 1 of 12 members has more symmetry than can be worked out" {
			t.Errorf("%s: got %v", name, err)
		}
	}
	// Every point at which the search can run out ends in the same error.
	for relations := 0; relations < 60*size*size; relations += 7 {
		_, err := newExchange(size+1, families, work{relations: relations, members: plenty.members})
		var structure *StructureError
		if err != nil && !errors.As(err, &structure) {
			t.Fatalf("with %d relations: %v", relations, err)
		}
	}
}

// Relations, their direction and marks each tell members apart.
func TestColoursTellRelationsApart(t *testing.T) {
	w := work{relations: 1 << 20, members: 1 << 10}
	line := newShape(3, []int{0, 1, 2, 1, 0, 1, 2, 1, 0}, make([]int, 3))
	c, err := line.colours(&w)
	if err != nil {
		t.Fatal(err)
	}
	if c.count != 2 || c.of[0] != c.of[2] || c.of[0] == c.of[1] {
		t.Errorf("ends and middle of a line have colours %x", c.of)
	}
	up := newShape(2, []int{0, 1, 2, 0}, make([]int, 2))
	if c, err = up.colours(&w); err != nil || !c.discrete() {
		t.Errorf("parent and child have colours %x, %v", c.of, err)
	}
	pair := newShape(2, []int{0, 1, 1, 0}, []int{3, 4})
	if c, err = pair.colours(&w); err != nil || !c.discrete() {
		t.Errorf("members of two marks have colours %x, %v", c.of, err)
	}
}

// The exact checks behind the colours, which a collision of hashes would leave
// as the only ones.
func TestExactChecks(t *testing.T) {
	// Two twins and a parent of one code down and another up.
	kin := newShape(3, []int{
		0, 1, 4,
		1, 0, 4,
		5, 5, 0,
	}, []int{0, 0, 0})
	marked := newShape(3, kin.relation, []int{0, 7, 0})
	for _, c := range []struct {
		name  string
		a, b  *shape
		to    []int
		wants bool
	}{
		{"nobody moves", kin, kin, []int{0, 1, 2}, true},
		{"twins trade places", kin, kin, []int{1, 0, 2}, true},
		{"twin and parent trade places", kin, kin, []int{2, 1, 0}, false},
		{"one comes twice", kin, kin, []int{0, 0, 2}, false},
		{"marks differ", kin, marked, []int{0, 1, 2}, false},
		{"marks move", marked, marked, []int{1, 0, 2}, false},
	} {
		if got := c.a.carries(c.to, c.b); got != c.wants {
			t.Errorf("%s: carries is %v", c.name, got)
		}
	}
	if !kin.changePlaces(0, 1) || kin.changePlaces(0, 2) || marked.changePlaces(0, 1) {
		t.Error("who may change places is wrong")
	}
	elder := newShape(2, []int{0, 1, 2, 0}, []int{0, 0})
	if elder.changePlaces(0, 1) {
		t.Error("two who see each other differently change places")
	}
	// A map is refused when it does not take the base where it was sent.
	m := matcher{path: &path{shape: kin, base: []int{0}}, other: kin, image: []int{1}}
	if !m.keepsImages([]int{1, 0, 2}) || m.keepsImages([]int{0, 1, 2}) {
		t.Error("images of the base are not kept")
	}
}
