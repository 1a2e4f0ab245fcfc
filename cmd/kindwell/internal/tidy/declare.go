package tidy

import (
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// Kind is the type of a column.
type Kind int

// The kinds of columns, with the Go type of their field.
const (
	Text         Kind = iota // string, "" is missing
	Integer                  // int, never missing
	MaybeInteger             // OptionalInt
	Number                   // float64, NaN is missing
	Boolean                  // bool, never missing
)

// String returns the type's name in the Frictionless Table Schema.
func (k Kind) String() string {
	switch k {
	case Integer, MaybeInteger:
		return "integer"
	case Number:
		return "number"
	case Boolean:
		return "boolean"
	default:
		return "string"
	}
}

// Column is the declaration of one column, read from the tags of its field.
type Column struct {
	Name        string
	Kind        Kind
	Unit        string   // "" for text and booleans
	Description string   // full sentences; says so when the column is unfilled
	Enum        []string // the only values besides missing; nil when free
	Minimum     *float64 // smallest possible value, nil when there is none
	Maximum     *float64 // largest possible value, nil when there is none
	Key         bool     // belongs to the primary key; never missing
	Unfilled    bool     // not computed in this version; the writer keeps it empty
	index       []int    // path of the field from the row struct
}

// unfilledNote ends the description of an unfilled column.
const unfilledNote = " Empty: not computed in this version."

// declare reads the columns of the row struct T. It panics when the struct is
// not a sound declaration; every declaration is read by the package's tests.
func declare[T any](name, title, description string) *Table {
	row := reflect.TypeFor[T]()
	t := &Table{Name: name, Title: title, Description: description, row: row}
	t.addColumns(row, nil, nil)
	seen := map[string]bool{}
	for _, c := range t.Columns {
		if seen[c.Name] {
			panic("tidy: " + name + " has two columns " + c.Name)
		}
		seen[c.Name] = true
	}
	return t
}

// addColumns appends the columns of a struct that is reached by path;
// unfilled names the columns of an embedded struct that stay empty in this
// table.
func (t *Table) addColumns(s reflect.Type, path []int, unfilled []string) {
	for i := range s.NumField() {
		f := s.Field(i)
		index := append(slices.Clone(path), i)
		if f.Anonymous {
			t.addColumns(f.Type, index, strings.Fields(f.Tag.Get("unfilled")))
			continue
		}
		c := Column{
			Name:        f.Tag.Get("name"),
			Kind:        kindOf(f),
			Unit:        f.Tag.Get("unit"),
			Description: f.Tag.Get("description"),
			Minimum:     bound(f, "minimum"),
			Maximum:     bound(f, "maximum"),
			Key:         f.Tag.Get("key") == "primary",
			index:       index,
		}
		c.Enum = strings.Fields(f.Tag.Get("enum"))
		if len(c.Enum) == 0 {
			c.Enum = nil
		}
		if c.Unfilled = f.Tag.Get("unfilled") == "true" || slices.Contains(unfilled, c.Name); c.Unfilled {
			c.Description += unfilledNote
		}
		t.Columns = append(t.Columns, c)
	}
}

func kindOf(f reflect.StructField) Kind {
	switch f.Type {
	case reflect.TypeFor[string]():
		return Text
	case reflect.TypeFor[int]():
		return Integer
	case reflect.TypeFor[OptionalInt]():
		return MaybeInteger
	case reflect.TypeFor[float64]():
		return Number
	case reflect.TypeFor[bool]():
		return Boolean
	}
	panic("tidy: field " + f.Name + " has a type no column can have: " + f.Type.String())
}

func bound(f reflect.StructField, tag string) *float64 {
	text, ok := f.Tag.Lookup(tag)
	if !ok {
		return nil
	}
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		panic("tidy: field " + f.Name + ": " + err.Error())
	}
	return &x
}
