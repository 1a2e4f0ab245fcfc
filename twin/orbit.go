package twin

import (
	"encoding/binary"
	"slices"
)

// findOrbits fills the orbits of the structure. Pairs are split by their kind,
// then again and again by the kinds that a third member sees towards the two,
// until nothing splits (the closure of Weisfeiler & Leman 1968). The matrices
// that are constant on the resulting classes are closed under products, so
// they hold the inverse of V and all its derivatives, whatever the components.
//
// The search costs the cube of the size, so it is made only where several
// blocks share its result; elsewhere each pair is an orbit of its own.
func (s *structure) findOrbits() {
	k := s.size
	class := make([]int32, k*k)
	if s.blocks() >= k {
		for i := range k {
			for j := range k {
				class[i*k+j] = 2 * s.kind[i*k+j]
			}
			class[i*k+i]++
		}
		closePairs(class, k)
	} else {
		for i := range class {
			class[i] = int32(i)
		}
	}
	// V is symmetric: a pair and its mirror image are one orbit.
	s.orbit = make([]int32, k*k)
	number := make(map[int32]int32)
	for i := range k {
		for j := i; j < k; j++ {
			o, ok := number[class[i*k+j]]
			if !ok {
				o, ok = number[class[j*k+i]]
			}
			if !ok {
				o = int32(len(s.pair))
				s.pair = append(s.pair, [2]int{i, j})
			}
			number[class[i*k+j]], number[class[j*k+i]] = o, o
			s.orbit[i*k+j], s.orbit[j*k+i] = o, o
		}
	}
	s.orbits = len(s.pair)
}

// closePairs splits classes of ordered pairs until, for every two pairs of one
// class, equally many third members see each pair of classes towards them.
func closePairs(class []int32, k int) {
	seen := make([]int64, k)
	next := make([]int32, k*k)
	key := make([]byte, 0, 8*(k+1))
	count := 0
	for {
		number := make(map[string]int32)
		for i := range k {
			for j := range k {
				for t := range k {
					seen[t] = int64(class[i*k+t])<<32 | int64(class[t*k+j])
				}
				slices.Sort(seen)
				key = binary.LittleEndian.AppendUint64(key[:0], uint64(class[i*k+j]))
				for _, c := range seen {
					key = binary.LittleEndian.AppendUint64(key, uint64(c))
				}
				c, ok := number[string(key)]
				if !ok {
					c = int32(len(number))
					number[string(key)] = c
				}
				next[i*k+j] = c
			}
		}
		copy(class, next)
		if len(number) == count {
			return
		}
		count = len(number)
	}
}
