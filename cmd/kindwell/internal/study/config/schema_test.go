package config

import (
	"bytes"
	"encoding/json"
	"os"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
)

func compiledSchema(t *testing.T) *jsonschema.Schema {
	t.Helper()
	document, err := jsonschema.UnmarshalJSON(bytes.NewReader(Schema()))
	if err != nil {
		t.Fatal(err)
	}
	compiler := jsonschema.NewCompiler()
	if err := compiler.AddResource("study.schema.json", document); err != nil {
		t.Fatal(err)
	}
	schema, err := compiler.Compile("study.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	return schema
}

// instance is a study file as an editor hands it to a schema validator.
func instance(t fataler, text []byte) any {
	t.Helper()
	_, root, faults := read("study.yaml", text)
	if root == nil {
		t.Fatalf("%v", faults)
	}
	return plain(root)
}

func plain(n *node) any {
	switch {
	case n.kind == isSection:
		section := map[string]any{}
		for _, key := range n.keys {
			section[key.name] = plain(key.value)
		}
		return section
	case n.kind == isList:
		list := make([]any, len(n.items))
		for i, item := range n.items {
			list[i] = plain(item)
		}
		return list
	case n.kind == isScalar && !n.quoted && plainNumber.MatchString(n.text):
		number := strings.TrimPrefix(n.text, "+")
		if json.Valid([]byte(number)) {
			return json.Number(number)
		}
		return n.text
	case n.kind == isScalar && !n.quoted && (n.text == "true" || n.text == "false"):
		return n.text == "true"
	case n.kind == isScalar:
		return n.text
	}
	return nil
}

// TestSchemaAcceptsWhatParseAccepts validates the example in the schema.
func TestSchemaAcceptsWhatParseAccepts(t *testing.T) {
	schema := compiledSchema(t)
	data, err := os.ReadFile("testdata/served.yaml")
	if err != nil {
		t.Fatal(err)
	}
	// Values that ask for nothing are accepted by Parse alone.
	for _, line := range []string{"questionnaires: {}\n", "  negative_controls: false\n", "  repeated: false\n"} {
		if !bytes.Contains(data, []byte(line)) {
			t.Fatalf("no %q", line)
		}
		data = bytes.Replace(data, []byte(line), nil, 1)
	}
	if err := schema.Validate(instance(t, data)); err != nil {
		t.Error(err)
	}
	if err := schema.Validate(instance(t, []byte(minimal+"predict: {}\nheritability: {}\n"))); err != nil {
		t.Error(err)
	}
}

// TestSchemaRefusesWhatParseRefuses validates the faulty files: the schema
// refuses all but those that break a rule which spans keys, or which YAML
// itself refuses.
func TestSchemaRefusesWhatParseRefuses(t *testing.T) {
	spans := map[string]bool{
		"low above the default of high": true, "set unknown": true, "trait that is a confound": true,
		"predict without measures": true, "predict without traits": true, "metric that has no value": true,
		"one column under two names": true, "results folder": true, "text of two lines": true,
		// These are right for JSON, or reported before the schema is asked.
		"penalty beyond numbers": true, "power of ten for a whole number": true,
		"duplicate key": true, "duplicate nested key": true,
	}
	schema := compiledSchema(t)
	_, cases := readFaulty(t)
	asked := 0
	for _, c := range cases {
		_, root, faults := read("study.yaml", []byte(c.file))
		if root == nil || faults.Err() != nil && !spans[c.name] {
			continue
		}
		asked++
		err := schema.Validate(instance(t, []byte(c.file)))
		if accepted := err == nil; accepted != spans[c.name] {
			t.Errorf("%s: accepted by the schema: %v", c.name, accepted)
		}
	}
	if asked < 50 {
		t.Errorf("only %d files reach the schema", asked)
	}
}
