package config

import (
	"bytes"
	"fmt"
	"reflect"
	"regexp"
	"slices"
	"strconv"
	"strings"
)

// AsRun returns the study as YAML with every default written out, keys in the
// order of the layout. Parse reads it back to an equal Study. Names of files
// are as in the study file: to read it from elsewhere, give Parse a name in
// the folder of the study file.
func (s *Study) AsRun() []byte {
	var w writer
	w.WriteString("# The study as it was run: every default is filled in.\n")
	w.section(reflect.ValueOf(s).Elem(), 0)
	return w.Bytes()
}

// writer writes YAML: sections as blocks, everything inside a list on its
// line.
type writer struct{ bytes.Buffer }

// shows says whether a value is written: what is not there, and text that has
// no value, is left out; an empty list is written where it may be.
func shows(f *field, v reflect.Value) bool {
	if !f.served() {
		return false
	}
	switch v.Kind() {
	case reflect.Pointer:
		return !v.IsNil()
	case reflect.Struct:
		return slices.ContainsFunc(fieldsOf(v.Type()), func(inner field) bool { return shows(&inner, v.Field(inner.index)) })
	case reflect.Slice:
		return v.Len() > 0 || f.minItems == 0 && f.way == ""
	case reflect.String:
		return v.Len() > 0
	case reflect.Bool:
		return true
	}
	// A number of 0 is written where it is in range; elsewhere it says that
	// there is none.
	return !v.IsZero() || f.zero != "" || f.minimum != nil && *f.minimum == "0"
}

func (w *writer) section(v reflect.Value, indent int) {
	for _, f := range fieldsOf(v.Type()) {
		value := v.Field(f.index)
		if !shows(&f, value) {
			continue
		}
		if value.Kind() == reflect.Pointer {
			value = value.Elem()
		}
		w.WriteString(strings.Repeat("  ", indent) + f.name + ":")
		list, isNamed := namedOf(value.Type())
		switch {
		case isNamed:
			w.WriteString("\n")
			for i := range value.Len() {
				e := value.Index(i)
				fmt.Fprintf(w, "%s%s: ", strings.Repeat("  ", indent+1), plainText(e.Field(list.name).String()))
				w.flow(e.Field(list.value))
				w.WriteString("\n")
			}
		case value.Kind() == reflect.Struct:
			w.WriteString("\n")
			w.section(value, indent+1)
		case value.Kind() == reflect.Slice && value.Len() > 0 && sectionType(value.Type().Elem()) != nil:
			w.WriteString("\n")
			for i := range value.Len() {
				w.WriteString(strings.Repeat("  ", indent+1) + "- ")
				w.flow(value.Index(i))
				w.WriteString("\n")
			}
		default:
			w.WriteString(" ")
			w.flow(value)
			w.WriteString("\n")
		}
	}
}

// flow writes a value on one line.
func (w *writer) flow(v reflect.Value) {
	switch v.Kind() {
	case reflect.Struct:
		w.WriteString("{")
		first := true
		for _, f := range fieldsOf(v.Type()) {
			if !shows(&f, v.Field(f.index)) {
				continue
			}
			if !first {
				w.WriteString(", ")
			}
			first = false
			w.WriteString(f.name + ": ")
			w.flow(v.Field(f.index))
		}
		w.WriteString("}")
	case reflect.Slice, reflect.Array:
		w.WriteString("[")
		for i := range v.Len() {
			if i > 0 {
				w.WriteString(", ")
			}
			w.flow(v.Index(i))
		}
		w.WriteString("]")
	case reflect.String:
		w.WriteString(plainText(v.String()))
	case reflect.Bool:
		w.WriteString(strconv.FormatBool(v.Bool()))
	case reflect.Float64:
		w.WriteString(strconv.FormatFloat(v.Float(), 'g', -1, 64))
	case reflect.Uint64:
		w.WriteString(strconv.FormatUint(v.Uint(), 10))
	default:
		w.WriteString(strconv.FormatInt(v.Int(), 10))
	}
}

var bareText = regexp.MustCompile(`^[A-Za-z_][A-Za-z0-9_./-]*$`)

// notBare are words that some reader of YAML takes for something else than
// text.
var notBare = [...]string{"true", "false", "null", "yes", "no", "on", "off", "y", "n"}

// plainText writes text without quotes where every reader of YAML takes it
// for text, and in double quotes elsewhere.
func plainText(text string) string {
	if bareText.MatchString(text) && !slices.Contains(notBare[:], strings.ToLower(text)) {
		return text
	}
	return strconv.Quote(text)
}
