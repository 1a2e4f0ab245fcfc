package config

import (
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// field is one key of the layout: what the tags of a struct field say.
type field struct {
	name      string // key in the file
	index     int    // of the struct field
	kind      reflect.Type
	help      string
	unit      string
	otherwise string // default in words, where it follows from other keys
	advice    string
	zero      string // what 0 means where it is allowed below the minimum, "" where it is not
	later     string // "" when served, else the value that asks for nothing, or "yes"
	way       string // keys of different ways exclude each other
	oneWay    bool   // one of the ways is asked for
	required  bool
	fallback  *string // fixed default as written in a study file
	enum      []string
	minimum, above,
	maximum, below *string
	minItems int
	unique   bool
}

// fieldsOf reads the declaration of one section from its struct type, in
// order; fields without a key are left out.
func fieldsOf(t reflect.Type) []field {
	var fields []field
	for i := range t.NumField() {
		tag := t.Field(i).Tag
		name := tag.Get("yaml")
		if name == "" || name[0] == ',' {
			continue
		}
		f := field{
			name: name, index: i, kind: t.Field(i).Type,
			help: tag.Get("help"), unit: tag.Get("unit"), otherwise: tag.Get("otherwise"),
			advice: tag.Get("advice"), later: tag.Get("later"), zero: tag.Get("zero"),
		}
		f.way, f.oneWay = strings.CutSuffix(tag.Get("way"), "*")
		f.readRules(tag.Get("jsonschema"))
		fields = append(fields, f)
	}
	return fields
}

// readRules reads the tag of JSON Schema words.
func (f *field) readRules(tag string) {
	for _, rule := range strings.Split(tag, ",") {
		word, value, _ := strings.Cut(rule, "=")
		switch word {
		case "required":
			f.required = true
		case "default":
			f.fallback = &value
		case "enum":
			f.enum = append(f.enum, value)
		case "minimum":
			f.minimum = &value
		case "exclusiveMinimum":
			f.above = &value
		case "maximum":
			f.maximum = &value
		case "exclusiveMaximum":
			f.below = &value
		case "minItems":
			f.minItems, _ = strconv.Atoi(value)
		case "uniqueItems":
			f.unique = value == "true"
		case "":
		default:
			panic("config: unknown word in a jsonschema tag: " + rule)
		}
	}
}

// served says whether this version serves the key.
func (f *field) served() bool { return f.later == "" }

// choices are the words that a key may have, nil when it is no key of words.
func (f *field) choices() []Choice { return choicesOf(f.kind, f.enum) }

// choicesOf returns the words of a type, or of the elements of a list type,
// narrowed to enum when that is not empty.
func choicesOf(t reflect.Type, enum []string) []Choice {
	if t.Kind() == reflect.Slice {
		t = t.Elem()
	}
	words, ok := reflect.Zero(t).Interface().(chooser)
	if !ok {
		return nil
	}
	var choices []Choice
	for _, c := range words.Choices() {
		if len(enum) == 0 || slices.Contains(enum, c.Name) {
			choices = append(choices, c)
		}
	}
	return choices
}

// servedNames returns the words that this version serves.
func servedNames(choices []Choice) []string {
	var names []string
	for _, c := range choices {
		if !c.Later {
			names = append(names, c.Name)
		}
	}
	return names
}

// sectionType returns the struct type of a section, nil for other types.
func sectionType(t reflect.Type) reflect.Type {
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	if t.Kind() == reflect.Struct {
		return t
	}
	return nil
}

// named describes a list type that is written as a section whose keys are
// names chosen by the user: name and value are the indices of the two fields
// of the element; value is -1 when the other fields are keys of a section.
type named struct{ name, value int }

// namedOf returns the description for such a list type.
func namedOf(t reflect.Type) (named, bool) {
	if t.Kind() != reflect.Slice || t.Elem().Kind() != reflect.Struct {
		return named{}, false
	}
	n := named{-1, -1}
	for i := range t.Elem().NumField() {
		switch t.Elem().Field(i).Tag.Get("yaml") {
		case ",name":
			n.name = i
		case ",value":
			n.value = i
		}
	}
	return n, n.name >= 0
}

// valueField is the declaration of the value of a named element.
func (n named) valueField(element reflect.Type) field {
	f := element.Field(n.value)
	declared := field{kind: f.Type, index: n.value, help: f.Tag.Get("help")}
	declared.readRules(f.Tag.Get("jsonschema"))
	return declared
}

// ways lists the ways of a section in the order of declaration, and whether
// one of them is asked for.
func ways(fields []field, everything bool) (names []string, needed bool) {
	for i := range fields {
		f := &fields[i]
		if f.way == "" || slices.Contains(names, f.way) || !f.served() && !everything {
			continue
		}
		names = append(names, f.way)
		needed = needed || f.oneWay
	}
	return names, needed
}

// join joins a path and a key.
func join(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}

// element is the path of a list element.
func element(path string, i int) string {
	return path + "[" + strconv.Itoa(i) + "]"
}
