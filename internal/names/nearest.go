package names

import "strings"

// Nearest returns the candidate that name was most likely meant to be, or ""
// when none is near. Capitals and the difference of space, - and _ count
// little; otherwise the distance is the number of letters put in, left out,
// changed or swapped with their neighbour, and may be a third of the length.
// Of equally near candidates the first wins.
func Nearest(name string, candidates []string) string {
	best, least := "", 0
	plain := []rune(plainName(name))
	for _, candidate := range candidates {
		other := []rune(plainName(candidate))
		allowed := max(1, max(len(plain), len(other))/3)
		if len(plain) < 2 || len(other) < 2 {
			allowed = 0
		}
		d := distance(plain, other)
		if d > allowed {
			continue
		}
		if best == "" || d < least {
			best, least = candidate, d
		}
	}
	return best
}

func plainName(name string) string {
	return strings.NewReplacer(" ", "_", "-", "_").Replace(strings.ToLower(name))
}

// Distance is the number of single letters to insert, delete, change or swap
// with a neighbour that turn a into b (optimal string alignment, Damerau 1964).
func Distance(a, b string) int { return distance([]rune(a), []rune(b)) }

// distance is Distance of letters.
func distance(a, b []rune) int {
	before, last, next := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(a); i++ {
		next[0] = i
		for j := 1; j <= len(b); j++ {
			change := last[j-1]
			if a[i-1] != b[j-1] {
				change++
			}
			next[j] = min(change, last[j]+1, next[j-1]+1)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				next[j] = min(next[j], before[j-2]+1)
			}
		}
		before, last, next = last, next, before
	}
	return last[len(b)]
}
