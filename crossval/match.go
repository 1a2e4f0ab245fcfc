package crossval

import "slices"

// path is a sequence of members of a shape, singled out one after the other
// until every member has a colour of its own. A map that keeps relations is
// known when it is known on the path.
type path struct {
	shape *shape
	// base are the members, colours[t] the colouring with base[:t] singled
	// out: one more than base. Both grow as they are needed.
	base    []int
	colours []colouring
}

// newPath starts a path at the colouring of its shape.
func newPath(s *shape, c colouring) *path { return &path{shape: s, colours: []colouring{c}} }

// last returns the colouring at the end of the path as far as it goes.
func (p *path) last() colouring { return p.colours[len(p.colours)-1] }

// extend singles out one more member: the first of a smallest colour that more
// than one member has.
func (p *path) extend(w *work) error {
	c := p.last()
	often := make(map[uint64]int)
	for _, colour := range c.of {
		often[colour]++
	}
	best := -1
	for i, colour := range c.of {
		if often[colour] > 1 && (best < 0 || often[colour] < often[c.of[best]]) {
			best = i
		}
	}
	next, err := p.shape.singledOut(c, best, w)
	if err != nil {
		return err
	}
	p.base = append(p.base, best)
	p.colours = append(p.colours, next)
	return nil
}

// matcher searches for a map of the path's shape onto another that keeps all
// relations and marks.
type matcher struct {
	*path
	other *shape
	image []int // of base[:len(image)]
	work  *work
}

// onto returns a map of the path's shape onto another with its colouring, or
// nil when there is none: to[i] is the member of other in place of member i.
func (p *path) onto(other *shape, c colouring, w *work) ([]int, error) {
	m := matcher{path: p, other: other, work: w}
	return m.search(c)
}

// moving returns a symmetry of the path's own shape that leaves base[:depth]
// where they are and takes base[depth] to member, or nil when there is none.
func (p *path) moving(depth, member int, w *work) ([]int, error) {
	m := matcher{path: p, other: p.shape, image: slices.Clone(p.base[:depth]), work: w}
	return m.try(p.colours[depth], member)
}

// search continues from images of the first members of the base and the
// colouring of the other shape in which these are singled out.
func (m *matcher) search(c colouring) ([]int, error) {
	depth := len(m.image)
	own := m.colours[depth]
	if !own.matches(c) {
		return nil, nil
	}
	if err := m.work.spend(m.shape.size * m.shape.size); err != nil {
		return nil, err
	}
	if to := m.likely(own, c); m.shape.carries(to, m.other) && m.keepsImages(to) {
		return to, nil
	}
	if own.discrete() {
		return nil, nil
	}
	if depth == len(m.base) {
		if err := m.extend(m.work); err != nil {
			return nil, err
		}
	}
	for member, colour := range c.of {
		if colour != own.of[m.base[depth]] {
			continue
		}
		if to, err := m.try(c, member); to != nil || err != nil {
			return to, err
		}
	}
	return nil, nil
}

// try takes the next member of the base to a given member.
func (m *matcher) try(c colouring, member int) ([]int, error) {
	next, err := m.other.singledOut(c, member, m.work)
	if err != nil {
		return nil, err
	}
	m.image = append(m.image, member)
	to, err := m.search(next)
	m.image = m.image[:len(m.image)-1]
	return to, err
}

// likely returns a map that keeps colours: members stay where their colour is
// the same on both sides, the others go in order. When all colours differ it
// is the only one; before that it is a guess that saves most of the search.
func (m *matcher) likely(own, c colouring) []int {
	size := m.shape.size
	to := make([]int, size)
	free := make(map[uint64][]int)
	for i := range size {
		to[i] = -1
		if own.of[i] == c.of[i] {
			to[i] = i
		} else {
			free[c.of[i]] = append(free[c.of[i]], i)
		}
	}
	for i := range size {
		if to[i] < 0 {
			rest := free[own.of[i]]
			to[i], free[own.of[i]] = rest[0], rest[1:]
		}
	}
	return to
}

func (m *matcher) keepsImages(to []int) bool {
	for t, member := range m.image {
		if to[m.base[t]] != member {
			return false
		}
	}
	return true
}
