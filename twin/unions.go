package twin

import "slices"

// unions holds disjoint sets of 0..n-1. Each set is known by its lowest
// member, whatever the order of joining.
type unions []int32

func newUnions(n int) unions {
	u := make(unions, n)
	for i := range u {
		u[i] = int32(i)
	}
	return u
}

// root is the lowest member of the set of i.
func (u unions) root(i int32) int32 {
	for u[i] != i {
		u[i] = u[u[i]]
		i = u[i]
	}
	return i
}

// join makes one set of those of i and j.
func (u unions) join(i, j int32) {
	i, j = u.root(i), u.root(j)
	if i > j {
		i, j = j, i
	}
	u[j] = i
}

// sets splits people by the set they belong to, in order of the sets' lowest
// members, each in the order of people.
func (u unions) sets(people []int32) [][]int32 {
	sorted := slices.Clone(people)
	slices.SortStableFunc(sorted, func(a, b int32) int { return int(u.root(a)) - int(u.root(b)) })
	var sets [][]int32
	for len(sorted) > 0 {
		root, end := u.root(sorted[0]), 1
		for end < len(sorted) && u.root(sorted[end]) == root {
			end++
		}
		sets = append(sets, sorted[:end:end])
		sorted = sorted[end:]
	}
	return sets
}
