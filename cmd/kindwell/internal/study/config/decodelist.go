package config

import (
	"fmt"
	"reflect"
)

// list fills a slice from a list.
func (d *decoder) list(n *node, into reflect.Value, f *field, path string) {
	if n.kind != isList {
		advice := ""
		if n.kind == isScalar && into.Type().Elem().Kind() == reflect.String {
			advice = "write [" + shorten(n.text) + "]"
		}
		d.refuse(n, path, expectedOf(into.Type(), f), advice)
		return
	}
	if len(n.items) < f.minItems {
		d.refuse(n, path, fmt.Sprintf("%s with %d or more elements", expectedOf(into.Type(), f), f.minItems), "")
		return
	}
	list := reflect.MakeSlice(into.Type(), len(n.items), len(n.items))
	first := map[any]bool{}
	for i, item := range n.items {
		at := element(path, i)
		d.src.places[at] = item.place
		one := *f
		one.kind, one.required = into.Type().Elem(), true
		d.value(item, list.Index(i), &one, at)
		if d.bad[at] {
			d.bad[path] = true
			continue
		}
		if !f.unique || !list.Index(i).Comparable() {
			continue
		}
		if value := list.Index(i).Interface(); first[value] {
			d.bad[at] = true
			d.fault(item.place, fmt.Sprintf("%s stands twice in `%s`", item.words(), path), "remove one of the two")
		} else {
			first[value] = true
		}
	}
	into.Set(list)
}

// words shows a list element in a message.
func (n *node) words() string {
	if n.kind == isList {
		text := "["
		for i, item := range n.items {
			if i > 0 {
				text += ", "
			}
			text += item.text
		}
		return "`" + shorten(text) + "]`"
	}
	return "`" + shorten(n.text) + "`"
}

// pair fills an array of fixed length from a list.
func (d *decoder) pair(n *node, into reflect.Value, f *field, path string) {
	if n.kind != isList || len(n.items) != into.Len() {
		d.refuse(n, path, expectedOf(into.Type(), f), "")
		return
	}
	one := *f
	one.kind, one.required = into.Type().Elem(), true
	for i, item := range n.items {
		at := element(path, i)
		d.src.places[at] = item.place
		d.value(item, into.Index(i), &one, at)
		if d.bad[at] {
			d.bad[path] = true
		}
	}
}

// namedList fills a slice from a section whose keys are names.
func (d *decoder) namedList(n *node, into reflect.Value, list named, f *field, path string) {
	if n.kind != isSection {
		d.refuse(n, path, expectedOf(into.Type(), f), "")
		return
	}
	elements := reflect.MakeSlice(into.Type(), len(n.keys), len(n.keys))
	for i, key := range n.keys {
		at := join(path, key.name)
		d.src.places[at] = key.place
		e := elements.Index(i)
		if advice := badText(key.name); advice != "" {
			d.bad[path] = true
			d.fault(key.place, fmt.Sprintf("a name in `%s` is empty or not of one line", path), "give it a name")
		}
		e.Field(list.name).SetString(key.name)
		if list.value >= 0 {
			one := list.valueField(e.Type())
			d.value(key.value, e.Field(list.value), &one, at)
		} else if key.value.kind == isSection {
			d.section(key.value, e, at)
		} else {
			d.refuse(key.value, at, "a section of keys", "")
		}
		if d.bad[at] {
			d.bad[path] = true
		}
	}
	into.Set(elements)
}
