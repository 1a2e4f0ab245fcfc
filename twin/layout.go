package twin

import (
	"encoding/binary"
	"slices"
)

// maxLayoutComponents is how many component matrices a layout can carry.
const maxLayoutComponents = 8

// entries holds the entry of every component matrix, less the identity, at one
// pair of people. Unused places are 0.
type entries [maxLayoutComponents]float64

// layout arranges the people of a sample in blocks that are independent of one
// another, and blocks in structures: blocks of one structure have the same
// component matrices, member by member, and so the same covariance matrix.
type layout struct {
	people     int
	families   int
	kinds      []entries // what distinguishes pairs; kind 0 has no entry at all
	structures []*structure
}

// structure is one shape of block.
type structure struct {
	size    int
	kind    []int32 // size x size: index into layout.kinds
	members []int32 // size people a block, block after block

	// Orbits are sets of member pairs at which every product of component
	// matrices and of the inverse of V has one and the same entry. Cross
	// products need to be kept by orbit only.
	orbits int
	orbit  []int32  // size x size, symmetric
	pair   [][2]int // one pair of each orbit
}

// blocks is the number of blocks of the structure.
func (s *structure) blocks() int { return len(s.members) / s.size }

// block returns the people of block b in the order of the structure.
func (s *structure) block(b int) []int32 { return s.members[b*s.size : (b+1)*s.size] }

// newLayout arranges people 0..people-1. family labels them, and entriesOf
// returns the entries of a pair of one family (or of a person with himself),
// symmetric in the pair.
func newLayout(people int, family func(i int) int, entriesOf func(i, j int) entries) *layout {
	l := &layout{people: people, kinds: []entries{{}}}
	kindOf := map[entries]int32{{}: 0}
	known := map[string]*arranged{}
	byKey := map[string]*structure{}
	families := groupBy(people, family)
	l.families = len(families)
	for _, f := range families {
		k := len(f)
		kind := make([]int32, k*k)
		for a := range k {
			for b := a; b < k; b++ {
				e := entriesOf(int(f[a]), int(f[b]))
				code, ok := kindOf[e]
				if !ok {
					code = int32(len(l.kinds))
					kindOf[e] = code
					l.kinds = append(l.kinds, e)
				}
				kind[a*k+b], kind[b*k+a] = code, code
			}
		}
		for _, part := range connected(kind, k) {
			own := submatrix(kind, k, part)
			key := kindKey(own)
			as, ok := known[key]
			if !ok {
				order := canonicalOrder(own, len(part))
				own = submatrix(own, len(part), order)
				canonical := kindKey(own)
				s, ok := byKey[canonical]
				if !ok {
					s = &structure{size: len(part), kind: own}
					byKey[canonical] = s
					l.structures = append(l.structures, s)
				}
				as = &arranged{order: order, structure: s}
				known[key] = as
			}
			for _, a := range as.order {
				as.structure.members = append(as.structure.members, f[part[a]])
			}
		}
	}
	for _, s := range l.structures {
		s.findOrbits()
	}
	return l
}

// arranged is what is known of a block whose kinds were seen before.
type arranged struct {
	order     []int
	structure *structure
}

// groupBy returns the people of each label, labels by first appearance.
func groupBy(people int, label func(i int) int) [][]int32 {
	place := make(map[int]int)
	var groups [][]int32
	for i := range people {
		g, ok := place[label(i)]
		if !ok {
			g = len(groups)
			place[label(i)] = g
			groups = append(groups, nil)
		}
		groups[g] = append(groups[g], int32(i))
	}
	return groups
}

// connected splits the members of a family into parts between which every kind
// is 0, each part in ascending order and parts by their first member.
func connected(kind []int32, k int) [][]int {
	part := make([]int, k)
	for i := range part {
		part[i] = -1
	}
	var parts [][]int
	for first := range k {
		if part[first] >= 0 {
			continue
		}
		p := len(parts)
		part[first] = p
		members := []int{first}
		for at := 0; at < len(members); at++ {
			for j := range k {
				if part[j] < 0 && kind[members[at]*k+j] != 0 {
					part[j] = p
					members = append(members, j)
				}
			}
		}
		slices.Sort(members)
		parts = append(parts, members)
	}
	return parts
}

// submatrix returns the rows and columns of a k x k matrix in the given order.
func submatrix(m []int32, k int, order []int) []int32 {
	n := len(order)
	sub := make([]int32, n*n)
	for a, i := range order {
		for b, j := range order {
			sub[a*n+b] = m[i*k+j]
		}
	}
	return sub
}

// kindKey returns the kinds as a map key; its length tells the size.
func kindKey(kind []int32) string {
	key := make([]byte, 0, 4*len(kind))
	for _, c := range kind {
		key = binary.LittleEndian.AppendUint32(key, uint32(c))
	}
	return string(key)
}

// canonicalOrder returns an order of the k members that depends on how they
// are related and not on how they were listed: members are told apart by what
// they are to the others, and ties by setting the first of them apart and
// looking again. Two listings of one family thus give one matrix of kinds
// whenever tied members can stand in for each other, as they can in sibships,
// couples with children and most pedigrees. Where they cannot, alike families
// may end up in two structures, which costs time and changes no number.
func canonicalOrder(kind []int32, k int) []int {
	class := make([]int32, k) // rank of the first member of one's class
	order := make([]int, k)
	for i := range order {
		order[i] = i
	}
	sorted := append([]int(nil), order...)
	slices.SortStableFunc(sorted, func(i, j int) int { return int(kind[i*k+i]) - int(kind[j*k+j]) })
	setClasses(class, sorted, func(i, j int) bool { return kind[i*k+i] == kind[j*k+j] })
	refine(class, sorted, kind, k)
	for r := 0; r < k; r++ {
		// Classes are runs of sorted; set apart the first member of a run that
		// is longer than one.
		if r+1 == k || class[sorted[r+1]] != class[sorted[r]] {
			continue
		}
		for _, i := range sorted[r+1:] {
			if class[i] == int32(r) {
				class[i] = int32(r + 1)
			}
		}
		refine(class, sorted, kind, k)
	}
	copy(order, sorted)
	return order
}

// refine splits classes until members of one class see the same kinds towards
// members of every class. sorted stays sorted by class.
func refine(class []int32, sorted []int, kind []int32, k int) {
	seen := make([][]int64, k)
	for i := range seen {
		seen[i] = make([]int64, k)
	}
	before := classCount(class, sorted)
	for before < k {
		for i := range k {
			for j := range k {
				seen[i][j] = int64(kind[i*k+j])<<32 | int64(class[j])
			}
			slices.Sort(seen[i])
		}
		slices.SortStableFunc(sorted, func(i, j int) int {
			if class[i] != class[j] {
				return int(class[i] - class[j])
			}
			return slices.Compare(seen[i], seen[j])
		})
		next := make([]int32, k)
		setClasses(next, sorted, func(i, j int) bool {
			return class[i] == class[j] && slices.Equal(seen[i], seen[j])
		})
		copy(class, next)
		after := classCount(class, sorted)
		if after == before {
			return
		}
		before = after
	}
}

// setClasses numbers the runs of equal members of sorted by their first place.
func setClasses(class []int32, sorted []int, equal func(i, j int) bool) {
	for r, i := range sorted {
		if r > 0 && equal(sorted[r-1], i) {
			class[i] = class[sorted[r-1]]
		} else {
			class[i] = int32(r)
		}
	}
}

func classCount(class []int32, sorted []int) int {
	n := 0
	for r, i := range sorted {
		if r == 0 || class[i] != class[sorted[r-1]] {
			n++
		}
	}
	return n
}
