package config

import (
	"bytes"
	"fmt"
	"reflect"
	"strings"
)

// Manual returns the page docs/configuration.md: every key that this version
// serves, by section, with type, default and meaning.
func Manual() []byte {
	var w bytes.Buffer
	w.WriteString(manualIntroduction)
	manualSection(&w, "Top of the file", "", reflect.TypeFor[Study]())
	return w.Bytes()
}

const manualIntroduction = `<!-- Made from the Go structs of cmd/kindwell/internal/study/config; change those, then run go generate. -->

# The study file

A study is one YAML file, usually called ` + "`study.yaml`" + `. It names the tables, says which
columns are used and how, and asks for analyses. ` + "`kindwell check study.yaml`" + ` reads it and
the tables and runs nothing.

- Needed are ` + "`kindwell`, `seed`, `people`" + ` and one of ` + "`measures`" + ` and ` + "`traits`" + `. A section that is
  absent (` + "`predict`, `heritability`" + `) is an analysis that is not run.
- Files and the folder of the results are relative to the folder of the study file, unless
  their names are absolute.
- Text is taken as it is written: a column ` + "`007`" + ` needs no quotes. Text that begins with
  one of ` + "`* & ! % @ [ {`" + ` or holds ` + "`: `" + ` needs them.
- Unknown keys, wrong types and values out of range are refused, all at once, each with
  its line and column and the nearest valid name. Nothing is ignored.
- Editors that know JSON Schema can check the file while it is written: point them at
  [study.schema.json](study.schema.json), for instance by a first line
  ` + "`# yaml-language-server: $schema=study.schema.json`" + `.
- ` + "`study_as_run.yaml`" + ` among the results is the study with every default written out.

A file that asks for everything with defaults:

` + "```yaml" + `
kindwell: 1
seed: 20260112
people: {file: people.csv}
measures: {file: dynamics.csv, states_learned_on: other_people}
traits: {file: mood.csv, use: [wellbeing]}
predict: {}
heritability: {}
` + "```" + `
`

// manualSection writes the table of one section and then its subsections.
func manualSection(w *bytes.Buffer, title, path string, t reflect.Type) {
	fmt.Fprintf(w, "\n## %s\n\n| key | value | default | meaning |\n| --- | --- | --- | --- |\n", title)
	fields := fieldsOf(t)
	for i := range fields {
		f := &fields[i]
		if f.served() {
			fmt.Fprintf(w, "| `%s` | %s | %s | %s |\n", f.name, cell(f.valueWords(join(path, f.name))), cell(f.defaultWords()), cell(f.meaningWords()))
		}
	}
	if names, needed := ways(fields, false); len(names) > 1 {
		verb := "At most one"
		if needed {
			verb = "One"
		}
		fmt.Fprintf(w, "\n%s of %s is given.\n", verb, strings.Join(wayWords(fields, names), ", "))
	}
	for i := range fields {
		f := &fields[i]
		inner, words := f.kind, "`"+join(path, f.name)+"`"
		if inner.Kind() == reflect.Slice {
			inner, words = inner.Elem(), words+", each element"
		}
		if _, isNamed := namedOf(f.kind); f.served() && !isNamed && sectionType(inner) != nil {
			manualSection(w, words, join(path, f.name), sectionType(inner))
		}
	}
}

// wayWords lists the keys of each way.
func wayWords(fields []field, names []string) []string {
	words := make([]string, len(names))
	for i, name := range names {
		var keys []string
		for j := range fields {
			if fields[j].way == name && fields[j].served() {
				keys = append(keys, "`"+fields[j].name+"`")
			}
		}
		words[i] = strings.Join(keys, " with ")
	}
	return words
}

// cell escapes what would end a table cell.
func cell(text string) string { return strings.ReplaceAll(text, "|", "\\|") }

// valueWords says what a key may be.
func (f *field) valueWords(path string) string {
	switch {
	case f.choices() != nil && f.kind.Kind() == reflect.Slice:
		return "list of the words on the right"
	case f.choices() != nil:
		return strings.Join(quoted(servedNames(f.choices())), ", ")
	case sectionType(f.kind) != nil:
		return "section, see `" + path + "` below"
	case len(f.enum) == 1:
		return "`" + f.enum[0] + "`"
	}
	if _, ok := namedOf(f.kind); ok {
		return "names, each with a list of measures"
	}
	words := expectedOf(f.kind, f)
	words = strings.TrimPrefix(words, "a ")
	if f.kind.Kind() == reflect.Slice && sectionType(f.kind.Elem()) != nil {
		words += ", see `" + path + "` below"
	}
	return words
}

// defaultWords says what stands for a key that is not given.
func (f *field) defaultWords() string {
	switch {
	case f.required:
		return "needed"
	case f.fallback != nil:
		return "`" + *f.fallback + "`"
	case f.otherwise != "" && bareText.MatchString(f.otherwise):
		return "`" + f.otherwise + "`"
	case f.otherwise != "":
		return f.otherwise
	case f.kind.Kind() == reflect.Slice && f.minItems == 0:
		return "`[]`"
	case f.kind.Kind() == reflect.Struct:
		return "defaults below"
	}
	return "none"
}

// meaningWords is the meaning of a key, with that of each word it may be.
func (f *field) meaningWords() string {
	text := f.meaning()
	choices := f.choices()
	var words []string
	for _, c := range choices {
		if !c.Later {
			words = append(words, "`"+c.Name+"`: "+c.Meaning)
		}
	}
	if len(words) > 0 {
		text += ". " + strings.Join(words, "; ")
	}
	return text
}
