package config

import (
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"go.yaml.in/yaml/v4"
	"pgregory.net/rapid"
)

// outline is a tree as nested lists, with keys and text as they are.
func outline(n *node) any {
	switch n.kind {
	case isSection:
		keys := []any{"section"}
		for _, key := range n.keys {
			keys = append(keys, key.name, outline(key.value))
		}
		return keys
	case isList:
		items := []any{"list"}
		for _, item := range n.items {
			items = append(items, outline(item))
		}
		return items
	case isScalar:
		return n.text
	}
	return nil
}

// outlineOfOther is the same from the tree of another reader of YAML.
func outlineOfOther(n *yaml.Node) any {
	switch n.Kind {
	case yaml.DocumentNode:
		return outlineOfOther(n.Content[0])
	case yaml.MappingNode:
		keys := []any{"section"}
		for i := 0; i < len(n.Content); i += 2 {
			keys = append(keys, n.Content[i].Value, outlineOfOther(n.Content[i+1]))
		}
		return keys
	case yaml.SequenceNode:
		items := []any{"list"}
		for _, item := range n.Content {
			items = append(items, outlineOfOther(item))
		}
		return items
	}
	if n.Tag == "!!null" && n.Style == 0 {
		return nil
	}
	if n.Style&(yaml.LiteralStyle|yaml.FoldedStyle) != 0 {
		return strings.TrimRight(n.Value, "\n")
	}
	return n.Value
}

func checkOutline(t fataler, text []byte) {
	t.Helper()
	_, root, faults := read("study.yaml", text)
	if root == nil || faults.Err() != nil {
		t.Fatalf("%v\n%s", faults, text)
	}
	var other yaml.Node
	if err := yaml.Unmarshal(text, &other); err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	if diff := cmp.Diff(outlineOfOther(&other), outline(root)); diff != "" {
		t.Fatalf("%s\n%s", diff, text)
	}
}

// TestTreeAgreesWithAnotherReader compares our tree with that of an
// independent reader of YAML.
func TestTreeAgreesWithAnotherReader(t *testing.T) {
	for _, name := range []string{"testdata/served.yaml", "testdata/whole.yaml"} {
		data, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		checkOutline(t, data)
	}
	for _, text := range []string{
		minimal,
		"a:\n- b\n-\n  c: d\n  e: ~\n- - f\n  - g\n-   - h\nempty:\n",
		"literal: |\n  x\n  y\nfolded: >-\n  x\n  y\n\n  z\ndouble: \"a\n  b\\u00e9\\\"\"\nsingle: 'it''s'\nplain: a\n  b # c\n",
		"flow: {a: [1, 2.50, x y], \"b c\": {d: , e}, 'f': []}\nurl: http://x.org/a#b\nhash: a#b\ntime: 12:30\n",
		"a: {\n  b: [c,\n    d],\n  e: f }\n\n# g\nh: 'i' # j\n",
	} {
		checkOutline(t, []byte(text))
	}
}

// TestAsRunIsReadByOthers reads drawn studies with both readers.
func TestAsRunIsReadByOthers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) { checkOutline(t, drawStudy(t).AsRun()) })
}
