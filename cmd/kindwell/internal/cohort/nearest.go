package cohort

import (
	"strings"

	"kindwell/internal/names"
)

// orNearest is the end of a message about a missing column: the likely name,
// or else the names there are.
func orNearest(name string, list []string) string {
	if near := names.Nearest(name, list); near != "" {
		return "the nearest name is " + quote(near)
	}
	return "its columns are " + quoteList(list, 8)
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
