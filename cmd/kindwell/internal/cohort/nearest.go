package cohort

import (
	"strings"
	"unicode/utf8"
)

// nearest returns the name that was probably meant: the one with the fewest
// letters to insert, delete, replace or exchange with a neighbour, capitals and
// the kind of gap between words aside, the first of equals. It is empty when no
// name is within a third of the letters.
func nearest(name string, names []string) string {
	best, bestDistance := "", 1+max(1, utf8.RuneCountInString(name)/3)
	plain := func(s string) []rune {
		return []rune(strings.NewReplacer(" ", "_", "-", "_", ".", "_").Replace(strings.ToLower(s)))
	}
	wanted := plain(name)
	for _, candidate := range names {
		if d := distance(wanted, plain(candidate), bestDistance); d < bestDistance {
			best, bestDistance = candidate, d
		}
	}
	return best
}

// distance is the edit distance with exchanges of neighbours (optimal string
// alignment: Damerau 1964), or limit when it is at least that.
func distance(a, b []rune, limit int) int {
	if len(a)-len(b) >= limit || len(b)-len(a) >= limit {
		return limit
	}
	before := make([]int, len(b)+1)
	previous := make([]int, len(b)+1)
	current := make([]int, len(b)+1)
	for j := range previous {
		previous[j] = j
	}
	for i := 1; i <= len(a); i++ {
		current[0] = i
		for j := 1; j <= len(b); j++ {
			replace := previous[j-1]
			if a[i-1] != b[j-1] {
				replace++
			}
			d := min(replace, previous[j]+1, current[j-1]+1)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				d = min(d, before[j-2]+1)
			}
			current[j] = d
		}
		before, previous, current = previous, current, before
	}
	return min(previous[len(b)], limit)
}

// orNearest is the end of a message about a missing column: the likely name,
// or else the names there are.
func orNearest(name string, names []string) string {
	if near := nearest(name, names); near != "" {
		return "the nearest name is " + quote(near)
	}
	return "its columns are " + quoteList(names, 8)
}

// quoteList names up to limit things and counts the rest.
func quoteList(names []string, limit int) string {
	quoted := make([]string, 0, limit)
	for _, n := range names[:min(len(names), limit)] {
		quoted = append(quoted, quote(n))
	}
	list := strings.Join(quoted, ", ")
	if more := len(names) - limit; more > 0 {
		list += " and " + plural(more, "more", "more")
	}
	return list
}
