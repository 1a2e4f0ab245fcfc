package crossval

import (
	"errors"
	"fmt"

	"kindwell/internal/stream"
)

// ErrOneArrangement says that nobody may be exchanged with anybody, so that
// there is no permutation test.
var ErrOneArrangement = errors.New("crossval: the relations allow one arrangement only, the one that moves nobody")

// DrawTo fills dst with one of the allowed arrangements, all equally likely:
// dst[place] is the person whose value comes to that place, so that related
// places i and j get people dst[i] and dst[j] with the same relation. It
// panics when dst has not one element a person.
func (e *Exchange) DrawTo(dst []int, s *stream.Stream) { e.chooseTo(dst, s) }

// chooseTo fills dst with the arrangement that a sequence of choices makes.
// Different choices make different arrangements, and all choices of 0 the one
// that moves nobody.
func (e *Exchange) chooseTo(dst []int, choose chooser) {
	if len(dst) != e.people {
		panic(fmt.Sprintf("crossval: arrangement of %d people into %d places", e.people, len(dst)))
	}
	for i := range dst {
		dst[i] = i
	}
	for i := range e.structures {
		t := &e.structures[i]
		for f := t.families() - 1; f > 0; f-- {
			g := f - choose.IntN(f+1)
			if g == f {
				continue
			}
			other := t.family(g)
			for at, person := range t.family(f) {
				dst[person], dst[other[at]] = dst[other[at]], dst[person]
			}
		}
		if len(t.stages) == 0 && len(t.peers) == 0 {
			continue
		}
		for f := range t.families() {
			t.rearrange(dst, t.family(f), choose)
		}
	}
}

// Series is the arrangements of one permutation test, without the one
// observed. It is not changed by its methods and may be used by several
// goroutines at once.
type Series struct {
	exchange   *Exchange
	length     int
	exhaustive bool
	seed       uint64
	purpose    string
}

// Series returns the arrangements for a test of at most asked permutations.
// When all M arrangements are at most asked, it is all of them except the one
// that moves nobody, M - 1; otherwise it is asked random ones, drawn
// independently (one may come twice or move nobody), number i from stream
// (seed, purpose, i). PValue is right for both.
//
// It returns ErrOneArrangement when M = 1, and an error when asked is below 1.
func (e *Exchange) Series(asked int, seed uint64, purpose string) (*Series, error) {
	if asked < 1 {
		return nil, fmt.Errorf("crossval: %d permutations asked, 1 is the least", asked)
	}
	s := &Series{exchange: e, length: asked, seed: seed, purpose: purpose}
	count, few := e.upTo(asked)
	if few && count == 1 {
		return nil, ErrOneArrangement
	}
	if few {
		s.length, s.exhaustive = count-1, true
	}
	return s, nil
}

// Len returns the number of arrangements, the one observed not counted.
func (s *Series) Len() int { return s.length }

// Exhaustive says whether the series holds every arrangement but the one that
// moves nobody, each once.
func (s *Series) Exhaustive() bool { return s.exhaustive }

// At fills dst with arrangement i of 0..Len()-1, as DrawTo does; the same
// whenever and wherever it is called. It panics when i is outside that range
// or dst has not one element a person.
func (s *Series) At(i int, dst []int) {
	if i < 0 || i >= s.length {
		panic(fmt.Sprintf("crossval: arrangement %d of %d", i, s.length))
	}
	if s.exhaustive {
		number := counter(i + 1) // 0 moves nobody
		s.exchange.chooseTo(dst, &number)
		return
	}
	s.exchange.DrawTo(dst, stream.New(s.seed, s.purpose, uint64(i)))
}

// counter makes the choices that the digits of a number spell, in the mixed
// radix of the numbers of ways.
type counter int

func (c *counter) IntN(n int) int {
	digit := int(*c) % n
	*c /= counter(n)
	return digit
}
