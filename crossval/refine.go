package crossval

import (
	"errors"
	"slices"
)

// errTooLong says that a search has used up its work.
var errTooLong = errors.New("crossval: search too long")

// work is what a search may still do: relations it looks at, and members of
// all the permutations it keeps.
type work struct{ relations, members int }

func (w *work) spend(relations int) error {
	w.relations -= relations
	if w.relations < 0 {
		return errTooLong
	}
	return nil
}

func (w *work) keep(members int) error {
	w.members -= members
	if w.members < 0 {
		return errTooLong
	}
	return nil
}

// colouring gives each member of a family a colour. Colours are hashes of
// what can be said about a member without its number, so that a one-to-one
// map that keeps relations and marks takes each member to one of its own
// colour, in its own family or another. Members of different colour are never
// exchanged; members of one colour may or may not be.
type colouring struct {
	of     []uint64
	sorted []uint64
	count  int // different colours
}

func newColouring(of []uint64) colouring {
	c := colouring{of: of, sorted: slices.Sorted(slices.Values(of))}
	for i, v := range c.sorted {
		if i == 0 || v != c.sorted[i-1] {
			c.count++
		}
	}
	return c
}

// matches says whether two families have the same colours equally often.
func (c colouring) matches(other colouring) bool { return slices.Equal(c.sorted, other.sorted) }

func (c colouring) discrete() bool { return c.count == len(c.of) }

// colours returns the colouring that starts from marks.
func (s *shape) colours(w *work) (colouring, error) {
	of := make([]uint64, s.size)
	for i, mark := range s.mark {
		of[i] = scramble(uint64(mark))
	}
	return s.refine(newColouring(of), w)
}

// singledOut returns the colouring in which one member has a colour of its own.
func (s *shape) singledOut(c colouring, member int, w *work) (colouring, error) {
	of := slices.Clone(c.of)
	of[member] = blend(of[member], 1)
	return s.refine(newColouring(of), w)
}

// refine tells members of one colour apart by how they are related to those of
// each colour, until that tells no more of them apart (colour refinement:
// Weisfeiler & Leman 1968). Two colours that fall on one hash would only be
// told apart less well.
func (s *shape) refine(c colouring, w *work) (colouring, error) {
	for {
		if err := w.spend(s.size * s.size); err != nil {
			return c, err
		}
		of := make([]uint64, s.size)
		for i := range of {
			sum := uint64(0)
			for j, link := range s.link[i*s.size : (i+1)*s.size] {
				if i != j {
					sum += scramble(link ^ c.of[j])
				}
			}
			of[i] = blend(c.of[i], sum)
		}
		next := newColouring(of)
		if next.count < c.count {
			return c, nil
		}
		if next.count == c.count {
			return next, nil
		}
		c = next
	}
}
