package config

import (
	"reflect"
	"strings"

	"kindwell/internal/names"
)

// expectedOf says what a value of a type must be under the rules of a key, for
// a sentence "must be ...".
func expectedOf(t reflect.Type, f *field) string {
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	if choices := choicesOf(t, f.enum); choices != nil && t.Kind() != reflect.Slice {
		return oneOf(servedNames(choices))
	}
	if _, ok := namedOf(t); ok {
		return "a section of names, each with a list"
	}
	switch t.Kind() {
	case reflect.Int, reflect.Uint64:
		if len(f.enum) == 1 {
			return f.enum[0]
		}
		words := "a whole number" + f.bounds()
		if f.zero != "" {
			words = "0 or " + words
		}
		return words
	case reflect.Float64:
		return "a number" + f.bounds()
	case reflect.Bool:
		return "true or false"
	case reflect.Slice:
		return "a list of " + elementsOf(t.Elem(), f)
	case reflect.Array:
		return "a pair like [a, b]"
	case reflect.Struct:
		return "a section of keys"
	}
	return "text"
}

// elementsOf names the elements of a list.
func elementsOf(t reflect.Type, f *field) string {
	if choices := choicesOf(t, f.enum); choices != nil {
		return strings.Join(quoted(servedNames(choices)), ", ")
	}
	switch t.Kind() {
	case reflect.Array:
		return "pairs like [a, b]"
	case reflect.Struct:
		return "sections of keys"
	case reflect.Float64:
		return "numbers"
	}
	return "text"
}

// bounds words the range of a number.
func (f *field) bounds() string {
	var parts []string
	if f.minimum != nil && f.maximum != nil {
		return " from " + *f.minimum + " to " + *f.maximum
	}
	if f.minimum != nil && *f.minimum != "0" {
		parts = append(parts, "of at least "+*f.minimum)
	} else if f.minimum != nil {
		parts = append(parts, "of 0 or more")
	}
	if f.above != nil {
		parts = append(parts, "above "+*f.above)
	}
	if f.maximum != nil {
		parts = append(parts, "at most "+*f.maximum)
	}
	if f.below != nil {
		parts = append(parts, "below "+*f.below)
	}
	if len(parts) == 0 {
		return ""
	}
	return " " + strings.Join(parts, " and ")
}

// oneOf words a choice.
func oneOf(names []string) string {
	if len(names) == 1 {
		return "`" + names[0] + "`"
	}
	return "one of " + strings.Join(quoted(names), ", ")
}

func quoted(names []string) []string {
	marked := make([]string, len(names))
	for i, name := range names {
		marked[i] = "`" + name + "`"
	}
	return marked
}

// suggest words the nearest of some names, or lists them when none is near.
func suggest(name string, candidates []string, list string) string {
	if near := names.Nearest(name, candidates); near != "" {
		return "did you mean `" + near + "`?"
	}
	if len(candidates) == 0 {
		return ""
	}
	return list + strings.Join(quoted(candidates), ", ")
}
