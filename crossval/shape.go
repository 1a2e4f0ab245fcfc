package crossval

import (
	"encoding/binary"
	"slices"
)

// shape is how the members of one family are related, with members numbered
// from 0. Mark is never nil.
type shape struct {
	size     int
	relation []int
	mark     []int
	// link[i*size+j] is a hash of the relation of i and j in both directions.
	link []uint64
}

func newShape(size int, relation, mark []int) *shape {
	s := &shape{size: size, relation: relation, mark: mark, link: make([]uint64, size*size)}
	for i := range size {
		for j := range size {
			s.link[i*size+j] = blend(uint64(relation[i*size+j]), uint64(relation[j*size+i]))
		}
	}
	return s
}

// carries says whether to, which gives for every member of s one of other, is
// one-to-one and keeps every relation and mark.
func (s *shape) carries(to []int, other *shape) bool {
	taken := make([]bool, s.size)
	for i, a := range to {
		if taken[a] || s.mark[i] != other.mark[a] {
			return false
		}
		taken[a] = true
		for j, b := range to {
			if i != j && s.relation[i*s.size+j] != other.relation[a*s.size+b] {
				return false
			}
		}
	}
	return true
}

// appendKey appends a text that two families share only when they are related
// member by member in the order in which their members are listed.
func (f *Family) appendKey(key []byte) []byte {
	size := len(f.People)
	key = binary.AppendUvarint(key, uint64(size))
	for i := range size {
		key = binary.AppendVarint(key, int64(f.markOf(i)))
		for j := range size {
			if i != j {
				key = binary.AppendVarint(key, int64(f.Relation[i*size+j]))
			}
		}
	}
	return key
}

func (f *Family) markOf(member int) int {
	if f.Mark == nil {
		return 0
	}
	return f.Mark[member]
}

func (f *Family) shape() *shape {
	mark := make([]int, len(f.People))
	for i := range mark {
		mark[i] = f.markOf(i)
	}
	return newShape(len(mark), slices.Clone(f.Relation), mark)
}

// blend makes one number of two, in a way that tells their order.
func blend(a, b uint64) uint64 {
	return scramble(a*0x9e3779b97f4a7c15 ^ scramble(b+0x6a09e667f3bcc909))
}

// scramble is a one-to-one map of 64 bits in which every bit of the argument
// matters to every bit of the value (the finisher of splitmix64, Steele, Lea &
// Flood 2014).
func scramble(x uint64) uint64 {
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}
