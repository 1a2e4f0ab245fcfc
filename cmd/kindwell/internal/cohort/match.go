package cohort

import "kindwell/internal/names"

// Match finds the names that a list of patterns means, as places in names and
// in their order, each once; unmatched are the patterns that mean none. In a
// pattern * stands for any characters, also none (see names.Match).
func Match(patterns, list []string) (matched []int, unmatched []string) {
	hit := make([]bool, len(list))
	for _, pattern := range patterns {
		found := false
		for j, name := range list {
			if names.Match(pattern, name) {
				hit[j], found = true, true
			}
		}
		if !found {
			unmatched = append(unmatched, pattern)
		}
	}
	for j := range list {
		if hit[j] {
			matched = append(matched, j)
		}
	}
	return matched, unmatched
}
