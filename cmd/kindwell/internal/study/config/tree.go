package config

import (
	"fmt"
	"strings"

	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/token"
)

// kind is what a node of a study file is.
type kind int

const (
	isScalar  kind = iota
	isNothing      // no value, null or ~
	isList
	isSection // keys with values
	isRefused // reported already
)

// node is a piece of a study file with its place.
type node struct {
	kind   kind
	place  place
	text   string // of a scalar, as written; of quoted text, what it means
	quoted bool   // text in quotes or a block of text: no number, no word
	items  []*node
	keys   []entry
}

// entry is one key of a section.
type entry struct {
	name  string
	place place
	value *node
}

// found describes a node in a sentence "must be ..., found ...".
func (n *node) found() string {
	switch {
	case n.kind == isNothing:
		return "nothing"
	case n.kind == isList && len(n.items) == 0:
		return "an empty list"
	case n.kind == isList:
		return fmt.Sprintf("a list of %d", len(n.items))
	case n.kind == isSection:
		return "a section of keys"
	case n.quoted || !plainNumber.MatchString(n.text) && n.text != "true" && n.text != "false":
		return fmt.Sprintf("the text %q", shorten(n.text))
	}
	return n.text
}

// shorten cuts long text for a message.
func shorten(text string) string {
	runes := []rune(text)
	if len(runes) > 60 {
		return string(runes[:57]) + "..."
	}
	return text
}

// builder turns the parser's tree into ours.
type builder struct {
	src    *source
	faults Faults
}

func placeOf(t *token.Token) place {
	if t == nil || t.Position == nil {
		return place{1, 1}
	}
	return place{t.Position.Line, t.Position.Column}
}

// build returns the node for a value; at is its place when it has none of its
// own, as that of a value that is not there.
func (b *builder) build(n ast.Node, at place) *node {
	switch v := n.(type) {
	case nil:
		return &node{kind: isNothing, place: at}
	case *ast.NullNode:
		return &node{kind: isNothing, place: at}
	case *ast.StringNode:
		quoted := v.Token.Type == token.SingleQuoteType || v.Token.Type == token.DoubleQuoteType
		return &node{kind: isScalar, place: placeOf(v.Token), text: v.Value, quoted: quoted}
	case *ast.LiteralNode:
		text := ""
		if v.Value != nil {
			text = strings.TrimRight(v.Value.Value, "\n")
		}
		return &node{kind: isScalar, place: placeOf(v.Start), text: text, quoted: true}
	case *ast.IntegerNode, *ast.FloatNode, *ast.BoolNode, *ast.InfinityNode, *ast.NanNode:
		t := n.GetToken()
		return &node{kind: isScalar, place: placeOf(t), text: strings.TrimSpace(t.Value)}
	case *ast.SequenceNode:
		list := &node{kind: isList, place: placeOf(v.Start)}
		for _, item := range v.Values {
			list.items = append(list.items, b.build(item, list.place))
		}
		return list
	case *ast.MappingNode:
		return b.section(v.Values, placeOf(v.Start))
	case *ast.MappingValueNode:
		return b.section([]*ast.MappingValueNode{v}, placeOf(v.Key.GetToken()))
	}
	return &node{kind: isRefused, place: at}
}

// section builds a section of keys and reports keys that are given twice.
func (b *builder) section(values []*ast.MappingValueNode, at place) *node {
	section := &node{kind: isSection, place: at}
	first := map[string]place{}
	for i, value := range values {
		t := value.Key.GetToken()
		p := placeOf(t)
		if i == 0 {
			section.place = p
		}
		if !isName(value.Key) {
			continue // reported with the tokens
		}
		name := keyName(value.Key)
		if earlier, ok := first[name]; ok {
			b.faults.Add(b.src.position(p),
				fmt.Sprintf("`%s` is given twice, first in line %d", shorten(name), earlier.line),
				"keep one of the two")
			continue
		}
		first[name] = p
		section.keys = append(section.keys, entry{name: name, place: p, value: b.build(value.Value, p)})
	}
	return section
}

// isName says whether a key is text (or a number or word, which a name may
// look like).
func isName(key ast.MapKeyNode) bool {
	switch key.(type) {
	case *ast.StringNode, *ast.IntegerNode, *ast.FloatNode, *ast.BoolNode, *ast.NullNode, *ast.InfinityNode, *ast.NanNode:
		return true
	}
	return false
}

func keyName(key ast.MapKeyNode) string {
	if s, ok := key.(*ast.StringNode); ok {
		return s.Value
	}
	return strings.TrimSpace(key.GetToken().Value)
}
