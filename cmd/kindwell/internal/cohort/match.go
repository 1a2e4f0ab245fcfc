package cohort

// Match finds the names that a list of patterns means, as places in names and
// in their order, each once; unmatched are the patterns that mean none. In a
// pattern * stands for any characters, also none, and ? for one; everything else
// for itself, capitals included.
func Match(patterns, names []string) (matched []int, unmatched []string) {
	hit := make([]bool, len(names))
	for _, pattern := range patterns {
		found := false
		for j, name := range names {
			if glob(pattern, name) {
				hit[j], found = true, true
			}
		}
		if !found {
			unmatched = append(unmatched, pattern)
		}
	}
	for j := range names {
		if hit[j] {
			matched = append(matched, j)
		}
	}
	return matched, unmatched
}

// glob matches a whole name. After a mismatch it goes back to the last star
// only, which is enough and keeps the work below pattern times name.
func glob(pattern, name string) bool {
	if pattern == name {
		return true
	}
	p, n := []rune(pattern), []rune(name)
	at, star, mark := 0, -1, 0
	for i := 0; i < len(n); {
		switch {
		case at < len(p) && p[at] == '*':
			star, mark = at, i
			at++
		case at < len(p) && (p[at] == '?' || p[at] == n[i]):
			at++
			i++
		case star >= 0:
			mark++
			at, i = star+1, mark
		default:
			return false
		}
	}
	for at < len(p) && p[at] == '*' {
		at++
	}
	return at == len(p)
}
