package config

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// docs is the folder of the manual.
const docs = "../../../../../docs"

// TestPages compares the pages that are made from the structs with the ones
// in the manual; with -update it writes them.
func TestPages(t *testing.T) {
	for _, page := range []struct {
		name string
		want []byte
	}{
		{"study.schema.json", Schema()},
		{"configuration.md", Manual()},
	} {
		path := filepath.Join(docs, page.name)
		if *update {
			if err := os.WriteFile(path, page.want, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		got, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(string(page.want), string(got)); diff != "" {
			t.Errorf("%s differs from the structs; run go generate\n%s", page.name, diff)
		}
	}
}

// TestManualExample reads the example of the manual page.
func TestManualExample(t *testing.T) {
	examples := regexp.MustCompile("(?s)```yaml\n(.*?)```").FindAllSubmatch(Manual(), -1)
	if len(examples) != 1 {
		t.Fatalf("%d examples, want 1", len(examples))
	}
	if _, err := Parse("study.yaml", examples[0][1]); err != nil {
		t.Error(err)
	}
}

// TestEveryKeyIsDeclared walks through the layout: every served key has a
// meaning and stands in the manual and the schema, and no later one does.
func TestEveryKeyIsDeclared(t *testing.T) {
	var schema map[string]any
	if err := json.Unmarshal(Schema(), &schema); err != nil {
		t.Fatal(err)
	}
	manual := string(Manual())
	keys := 0
	var walk func(typ reflect.Type, path string, node map[string]any)
	walk = func(typ reflect.Type, path string, node map[string]any) {
		properties, _ := node["properties"].(map[string]any)
		served := 0
		for _, f := range fieldsOf(typ) {
			at := join(path, f.name)
			property, in := properties[f.name].(map[string]any)
			if f.help == "" {
				t.Errorf("%s has no meaning", at)
			}
			if in != f.served() {
				t.Errorf("%s: served %v, in the schema %v", at, f.served(), in)
			}
			if !f.served() {
				continue
			}
			served++
			if !strings.Contains(manual, "| `"+f.name+"` | ") || !strings.Contains(manual, cell(f.meaning())) {
				t.Errorf("%s is not in the manual", at)
			}
			if property["description"] != f.meaning() {
				t.Errorf("%s: the schema says %q", at, property["description"])
			}
			for _, c := range f.choices() {
				if c.Meaning == "" {
					t.Errorf("%s: %s has no meaning", at, c.Name)
				}
			}
			inner := f.kind
			if items, ok := property["items"].(map[string]any); ok {
				inner, property = inner.Elem(), items
			}
			if section := sectionType(inner); section != nil {
				walk(section, at, property)
			}
		}
		if served != len(properties) {
			t.Errorf("%q: %d keys served, %d in the schema", path, served, len(properties))
		}
		keys += served
	}
	walk(reflect.TypeFor[Study](), "", schema)
	if keys < 60 {
		t.Errorf("only %d keys", keys)
	}
	for _, word := range []string{"training_mean", "ilr", "pseudonyms", "REML", "per_fold", "learning_curve", "auc"} {
		if bytes.Contains(Schema(), []byte(word)) || strings.Contains(manual, word) {
			t.Errorf("%s, of a later version, is in a page", word)
		}
	}
}
