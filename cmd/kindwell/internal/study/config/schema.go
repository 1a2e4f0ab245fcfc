package config

import (
	"bytes"
	"encoding/json"
	"reflect"

	"github.com/invopop/jsonschema"
)

// Schema returns the JSON Schema (draft 2020-12) of a study file, for editors:
// keys, types, words, ranges, defaults and meanings of all that this version
// serves. Rules that span keys are checked by Parse only.
func Schema() []byte {
	reflector := jsonschema.Reflector{
		FieldNameTag:               "yaml",
		RequiredFromJSONSchemaTags: true,
		DoNotReference:             true,
		Anonymous:                  true,
		Mapper:                     schemaOf,
	}
	s := reflector.ReflectFromType(reflect.TypeFor[Study]())
	s.Title = "kindwell study file"
	s.Description = "What is read, what is computed, and where the results go."
	finish(s, reflect.TypeFor[Study]())
	s.AnyOf = []*jsonschema.Schema{{Required: []string{"measures"}}, {Required: []string{"traits"}}}
	var out bytes.Buffer
	encoder := json.NewEncoder(&out)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", "  ")
	if err := encoder.Encode(s); err != nil {
		panic("config: schema: " + err.Error())
	}
	return out.Bytes()
}

// schemaOf gives the schema of types that are not written as Go has them:
// lists written as sections of names, and shapes that are not settled.
func schemaOf(t reflect.Type) *jsonschema.Schema {
	list, ok := namedOf(t)
	if !ok {
		return nil
	}
	value := &jsonschema.Schema{Type: "object"}
	if list.value >= 0 {
		declared := list.valueField(t.Elem())
		value = &jsonschema.Schema{
			Type: "array", Items: &jsonschema.Schema{Type: "string"},
			UniqueItems: declared.unique, Description: declared.help,
		}
		if declared.minItems > 0 {
			value.MinItems = count(declared.minItems)
		}
	}
	return &jsonschema.Schema{Type: "object", AdditionalProperties: value, MinProperties: count(1)}
}

func count(n int) *uint64 {
	u := uint64(n)
	return &u
}

// finish adds to the schema of a section what the tags of JSON Schema words
// do not say: meanings, words, keys that exclude each other; and it removes
// keys of later versions.
func finish(s *jsonschema.Schema, t reflect.Type) {
	fields := fieldsOf(t)
	for i := range fields {
		f := &fields[i]
		if !f.served() {
			s.Properties.Delete(f.name)
			continue
		}
		property, _ := s.Properties.Get(f.name)
		property.Description = f.meaning()
		inner := f.kind
		target := property
		if inner.Kind() == reflect.Slice && target.Items != nil {
			inner, target = inner.Elem(), property.Items
		}
		if choices := f.choices(); choices != nil {
			target.Enum = nil
			for _, name := range servedNames(choices) {
				target.Enum = append(target.Enum, name)
			}
		}
		if target.Type == "string" && f.choices() == nil {
			target.MinLength = count(1)
		}
		if f.name == "missing_codes" {
			target.Type, target.MinLength = "", nil
			target.AnyOf = []*jsonschema.Schema{{Type: "string", MinLength: count(1)}, {Type: "number"}, {Type: "boolean"}}
		}
		if f.zero != "" {
			nonzero := &jsonschema.Schema{Minimum: property.Minimum, Maximum: property.Maximum}
			property.Minimum, property.Maximum = "", ""
			property.AnyOf = []*jsonschema.Schema{{Const: 0}, nonzero}
		}
		if section := sectionType(inner); section != nil && target.Properties != nil {
			finish(target, section)
		}
	}
	names, needed := ways(fields, false)
	of := func(way string) []string {
		var keys []string
		for i := range fields {
			if fields[i].way == way && fields[i].served() {
				keys = append(keys, fields[i].name)
			}
		}
		return keys
	}
	for i, way := range names {
		for _, key := range of(way) {
			for _, other := range names[i+1:] {
				for _, otherKey := range of(other) {
					s.AllOf = append(s.AllOf, &jsonschema.Schema{Not: &jsonschema.Schema{Required: []string{key, otherKey}}})
				}
			}
			if needed {
				s.AnyOf = append(s.AnyOf, &jsonschema.Schema{Required: []string{key}})
			}
		}
	}
}

// meaning is the help of a key with its unit and what 0 means.
func (f *field) meaning() string {
	text := f.help
	if f.unit != "" {
		text += " (" + f.unit + ")"
	}
	if f.zero != "" {
		text += "; 0: " + f.zero
	}
	return text
}
