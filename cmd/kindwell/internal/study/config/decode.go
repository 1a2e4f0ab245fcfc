package config

import (
	"fmt"
	"reflect"
	"slices"
	"strings"
)

// decoder fills the structs of the layout from a tree and collects all faults
// on the way. A value that is wrong leaves the default in its place.
type decoder struct {
	src        *source
	faults     Faults
	bad        map[string]bool // paths whose value was refused
	everything bool            // take keys and words of later versions too
	homes      homes           // made when the first unknown key is met
}

func (d *decoder) fault(at place, message, advice string) {
	d.faults.Add(d.src.position(at), message, advice)
}

// refuse reports a value that is not what its key asks for.
func (d *decoder) refuse(n *node, path, expected, advice string) {
	d.bad[path] = true
	if n.kind == isRefused {
		return
	}
	d.fault(n.place, fmt.Sprintf("`%s` must be %s, found %s", path, expected, n.found()), advice)
}

// section fills a struct from a section; n is nil for a section that is not
// in the file, of which only the defaults are taken.
func (d *decoder) section(n *node, into reflect.Value, path string) {
	fields := fieldsOf(into.Type())
	given := map[string]*entry{}
	if n != nil {
		for i := range n.keys {
			key := &n.keys[i]
			given[key.name] = key
			if f := lookup(fields, key.name); f == nil {
				d.unknown(key, fields, path)
			}
		}
		d.src.places[path] = d.placeOf(path, n.place)
	}
	way := d.chooseWay(n, fields, given, path)
	for i := range fields {
		f := &fields[i]
		key, ok := given[f.name]
		at, value := join(path, f.name), into.Field(f.index)
		switch {
		case ok && !f.served() && !d.everything:
			d.notServed(key, f, at)
		case ok:
			if key.value.kind != isSection { // a value that is refused leaves the default
				d.setDefault(f, value, way)
			}
			d.src.places[at] = key.place
			d.value(key.value, value, f, at)
		case f.required && n != nil:
			d.bad[at] = true
			d.fault(d.src.places[path], fmt.Sprintf("`%s` is missing", at), f.wanted())
		case f.served() || d.everything:
			d.setDefault(f, value, way)
		}
	}
}

// placeOf is the place of a section: that of its key, where it has one.
func (d *decoder) placeOf(path string, otherwise place) place {
	if p, ok := d.src.places[path]; ok {
		return p
	}
	return otherwise
}

// wanted is the advice for a required key that is missing.
func (f *field) wanted() string {
	if t := sectionType(f.kind); t != nil {
		return "add a section `" + f.name + "`: " + f.help
	}
	if len(f.enum) == 1 {
		return "add `" + f.name + ": " + f.enum[0] + "`"
	}
	return "add `" + f.name + ": ...`, " + expectedOf(f.kind, f) + ": " + f.help
}

func lookup(fields []field, name string) *field {
	for i := range fields {
		if fields[i].name == name {
			return &fields[i]
		}
	}
	return nil
}

// unknown reports a key that the section does not have.
func (d *decoder) unknown(key *entry, fields []field, path string) {
	name := shorten(key.name)
	var names []string
	for i := range fields {
		if fields[i].served() || d.everything {
			names = append(names, fields[i].name)
		}
	}
	where := "at the top of the file"
	if path != "" {
		where = "in `" + path + "`"
	}
	message := fmt.Sprintf("unknown key `%s` %s", name, where)
	if d.homes == nil {
		d.homes = layoutHomes()
	}
	homes, later := d.homes.find(key.name, path)
	switch {
	case len(homes) > 0:
		words := "in " + strings.Join(quoted(homes), " or ")
		if slices.Contains(homes, "") {
			words = "at the top of the file"
		}
		d.fault(key.place, message, "`"+name+"` belongs "+words)
	case later != "":
		d.fault(key.place, notAvailable(later), "remove the key")
	default:
		d.fault(key.place, message, suggest(key.name, names, "keys here: "))
	}
}

func notAvailable(what string) string {
	return "`" + what + "` is not available in this version"
}

// notServed reports a key of a later version, unless its value asks for
// nothing.
func (d *decoder) notServed(key *entry, f *field, path string) {
	n := key.value
	switch f.later {
	case "[]":
		if n.kind == isList && len(n.items) == 0 {
			return
		}
	case "{}":
		if n.kind == isSection && len(n.keys) == 0 {
			return
		}
	default:
		if n.kind == isScalar && !n.quoted && n.text == f.later {
			return
		}
	}
	d.bad[path] = true
	d.fault(key.place, notAvailable(path), "remove the key")
}

// chooseWay finds which of several keys that exclude each other are given,
// and reports a mixture, or that none is where one is asked for.
func (d *decoder) chooseWay(n *node, fields []field, given map[string]*entry, path string) string {
	names, needed := ways(fields, d.everything)
	if len(names) == 0 {
		return ""
	}
	chosen, by := "", ""
	refused := false
	if n != nil {
		for i := range n.keys {
			f := lookup(fields, n.keys[i].name)
			if f == nil || f.way == "" {
				continue
			}
			if !slices.Contains(names, f.way) { // of a later version, reported there
				refused = true
				continue
			}
			if chosen != "" && f.way != chosen {
				d.bad[join(path, f.name)] = true
				d.fault(n.keys[i].place, fmt.Sprintf("`%s` and `%s` exclude each other", join(path, by), join(path, f.name)), "keep one of them")
				continue
			}
			if chosen == "" {
				chosen, by = f.way, f.name
			}
		}
	}
	if chosen == "" && needed && !refused && n != nil {
		d.bad[path] = true
		d.fault(d.src.places[path], fmt.Sprintf("`%s` needs %s", path, strings.Join(quoted(names), " or ")), "add `"+names[0]+": ...`")
	}
	if chosen == "" && !needed {
		return names[0]
	}
	return chosen
}

// setDefault gives a key its fixed default; keys of another way than the
// chosen one have none.
func (d *decoder) setDefault(f *field, value reflect.Value, way string) {
	if f.way != "" && f.way != way {
		return
	}
	switch {
	case f.fallback != nil:
		d.value(&node{kind: isScalar, text: *f.fallback}, value, f, "")
	case value.Kind() == reflect.Struct:
		d.section(nil, value, "")
	case value.Kind() == reflect.Slice && f.minItems == 0 && (f.served() || d.everything):
		value.Set(reflect.MakeSlice(value.Type(), 0, 0))
	}
}

// value fills one value of any type.
func (d *decoder) value(n *node, into reflect.Value, f *field, path string) {
	if n.kind == isNothing {
		d.refuseNothing(n, f, path)
		return
	}
	t := into.Type()
	if t.Kind() == reflect.Pointer {
		fresh := reflect.New(t.Elem())
		d.value(n, fresh.Elem(), f, path)
		if n.kind == isSection || fresh.Elem().Kind() != reflect.Struct {
			into.Set(fresh)
		}
		return
	}
	if list, ok := namedOf(t); ok {
		d.namedList(n, into, list, f, path)
		return
	}
	switch t.Kind() {
	case reflect.Struct:
		if n.kind != isSection {
			d.refuse(n, path, expectedOf(t, f), "")
			return
		}
		d.section(n, into, path)
	case reflect.Slice:
		d.list(n, into, f, path)
	case reflect.Array:
		d.pair(n, into, f, path)
	case reflect.Interface:
		// Of a later version; its shape is not settled.
	default:
		d.scalar(n, into, f, path)
	}
}

func (d *decoder) refuseNothing(n *node, f *field, path string) {
	d.bad[path] = true
	advice := "write " + expectedOf(f.kind, f)
	if sectionType(f.kind) != nil {
		advice = "write its keys below it, indented, or `{}` to take every default"
	}
	if !f.required {
		advice += ", or remove the key"
	}
	d.fault(n.place, fmt.Sprintf("`%s` has no value", path), advice)
}
