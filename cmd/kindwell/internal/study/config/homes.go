package config

import (
	"reflect"
	"slices"
	"strings"
)

// homes says for every key of the layout in which sections it is.
type homes map[string][]home

// home is a section that has a key; "" is the top of the file.
type home struct {
	section string
	later   bool // the key, or the section, is of a later version
}

// layoutHomes walks through the whole layout.
func layoutHomes() homes {
	all := homes{}
	var visit func(t reflect.Type, section string, later bool)
	visit = func(t reflect.Type, section string, later bool) {
		for _, f := range fieldsOf(t) {
			keyLater := later || !f.served()
			all[f.name] = append(all[f.name], home{section, keyLater})
			inner := f.kind
			if inner.Kind() == reflect.Slice {
				inner = inner.Elem()
			}
			if s := sectionType(inner); s != nil {
				visit(s, join(section, f.name), keyLater)
			}
		}
	}
	visit(reflect.TypeFor[Study](), "", false)
	return all
}

// maxHomes is the number of sections above which naming them helps nobody.
const maxHomes = 3

// find returns the sections that a key belongs in, those inside the section
// of path if there are any; or, for a key that only a later version serves,
// its path.
func (h homes) find(name, path string) (sections []string, later string) {
	for _, home := range h[name] {
		if home.later {
			if later == "" {
				later = join(home.section, name)
			}
			continue
		}
		sections = append(sections, home.section)
	}
	if len(sections) == 0 {
		return nil, later
	}
	inside := func(section string) bool { return path != "" && strings.HasPrefix(section, path+".") }
	if slices.ContainsFunc(sections, inside) {
		sections = slices.DeleteFunc(sections, func(section string) bool { return !inside(section) })
	}
	if len(sections) > maxHomes {
		return nil, ""
	}
	return sections, ""
}
