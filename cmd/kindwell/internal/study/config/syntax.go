package config

import (
	"errors"
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/goccy/go-yaml"
	"github.com/goccy/go-yaml/lexer"
	"github.com/goccy/go-yaml/parser"
	"github.com/goccy/go-yaml/token"
)

// Limits that no study file comes near; they keep reading quick and its depth
// small, whatever the file.
const (
	maxBytes = 128 << 10
	maxDepth = 24
	maxSigns = 50 // refused signs that are reported
)

// read turns a study file into a tree. With faults the tree may be nil.
func read(file string, data []byte) (*source, *node, Faults) {
	text, fault := cleanText(data)
	src := newSource(file, text)
	var faults Faults
	if fault != nil {
		faults.Add(src.position(fault.at), fault.message, fault.advice)
		return src, nil, faults
	}
	// The parser loses tabs inside text and then counts columns wrongly. It
	// gets spaces instead, and tabs that could matter are refused.
	tokens := lexer.Tokenize(strings.ReplaceAll(text, "\t", " "))
	if faults = strayTabs(src, tokens); len(faults) > 0 {
		return src, nil, faults
	}
	if at, deep := tooDeep(tokens); deep {
		faults.Add(src.position(at), "lists and sections are nested too deep", "a study file needs no more than a few levels")
		return src, nil, faults
	}
	faults = refusedTokens(src, tokens)
	parsed, err := parser.Parse(tokens, 0, parser.AllowDuplicateMapKey())
	if err != nil {
		if len(faults) == 0 {
			faults = append(faults, syntaxFault(src, err))
		}
		return src, nil, faults
	}
	b := builder{src: src}
	root := &node{kind: isNothing}
	for _, doc := range parsed.Docs {
		if doc.Body != nil {
			root = b.build(doc.Body, place{1, 1})
			break
		}
	}
	faults = append(faults, b.faults...)
	switch root.kind {
	case isSection:
		return src, root, faults
	case isNothing:
		if len(faults) == 0 {
			faults.Add(src.position(place{1, 1}), "the file is empty", "a study file begins with `kindwell: 1`")
		}
	case isScalar, isList:
		faults.Add(src.position(root.place), "a study file is made of keys and values, found "+root.found(),
			"begin with `kindwell: 1`; a space follows every `:`")
	}
	return src, nil, faults
}

// textFault is a fault in the bytes of a file.
type textFault struct {
	at              place
	message, advice string
}

// cleanText checks bytes and returns text without byte-order mark and with
// line feeds as the only line ends. On a fault the text is what can be shown.
func cleanText(data []byte) (string, *textFault) {
	if len(data) > maxBytes {
		return "", &textFault{message: fmt.Sprintf("the file has %d bytes; a study file has at most %d", len(data), maxBytes),
			advice: "is this a table? tables are named in a study file"}
	}
	text := string(data)
	if strings.HasPrefix(text, "\xff\xfe") || strings.HasPrefix(text, "\xfe\xff") {
		return "", &textFault{message: "the file is encoded as UTF-16", advice: "save it as UTF-8"}
	}
	text = strings.TrimPrefix(text, "\ufeff")
	text = strings.ReplaceAll(text, "\r\n", "\n")
	text = strings.ReplaceAll(text, "\r", "\n")
	at := place{1, 0}
	for i, r := range text {
		at.column++
		switch {
		case r == '\n':
			at = place{at.line + 1, 0}
		case r == utf8.RuneError && !strings.HasPrefix(text[i:], string(utf8.RuneError)):
			return strings.ToValidUTF8(text, string(utf8.RuneError)),
				&textFault{at, "this character is not UTF-8", "save the file as UTF-8"}
		case r != '\t' && (unicode.IsControl(r) || r == '\ufeff'):
			return text, &textFault{at, fmt.Sprintf("a study file cannot hold the character %U", r), "remove it"}
		}
	}
	return text, nil
}

// strayTabs reports, once a line, tabs that are neither in a comment nor at
// the end of what a line says.
func strayTabs(src *source, tokens token.Tokens) Faults {
	comments := map[int]int{} // column by line
	for _, t := range tokens {
		if t.Type == token.CommentType {
			p := placeOf(t)
			comments[p.line] = p.column
		}
	}
	var faults Faults
	for i, line := range src.lines {
		if !strings.Contains(line, "\t") {
			continue
		}
		runes := []rune(line)
		if column, ok := comments[i+1]; ok {
			runes = runes[:min(max(column-1, 0), len(runes))]
		}
		said := strings.TrimRight(string(runes), " \t")
		if before, _, found := strings.Cut(said, "\t"); found {
			faults.Add(src.position(place{i + 1, utf8.RuneCountInString(before) + 1}),
				"a tab stands where spaces should", "write spaces")
		}
	}
	return faults
}

// refusedTokens reports what YAML allows and a study file does not: a second
// document, directives, anchors, aliases, tags and keys that are no names.
func refusedTokens(src *source, tokens token.Tokens) Faults {
	var faults Faults
	started, ended := false, false
	for _, t := range tokens {
		if t.Type == token.CommentType {
			continue
		}
		if ended && t.Type != token.DocumentEndType || started && t.Type == token.DocumentHeaderType {
			faults.Add(src.position(placeOf(t)), "a second document begins here",
				"one file holds one study: remove this line and what follows, or begin a file of its own")
			return faults
		}
		if len(faults) == maxSigns {
			return faults
		}
		started = true
		ended = ended || t.Type == token.DocumentEndType
		if message, advice := refusedToken(src, t); message != "" {
			faults.Add(src.position(placeOf(t)), message, advice)
		}
	}
	return faults
}

// refusedToken words what is wrong with a kind of token, if anything.
func refusedToken(src *source, t *token.Token) (message, advice string) {
	quote := "text that begins with `" + t.Value + "` needs quotes"
	switch t.Type {
	case token.DirectiveType:
		return "lines and values that begin with `%` have no meaning in a study file", quote
	case token.AliasType:
		return "`*` has a meaning of its own in YAML when text begins with it",
			"write it in quotes: " + strconv.Quote(wordAt(src.position(placeOf(t))))
	case token.AnchorType:
		return "anchors (`&`) are not used in a study file", quote
	case token.TagType:
		return "tags (`!`) are not used in a study file", "write the value without a tag; text that begins with `!` needs quotes"
	case token.MergeKeyType:
		return "`<<` is not used in a study file", "write the keys out"
	case token.MappingKeyType:
		return "`?` has a meaning of its own in YAML when text begins with it", "write the key as `name: value`, or the text in quotes"
	}
	return "", ""
}

// wordAt returns the text from a place to the next end of a value.
func wordAt(at Position) string {
	text := string([]rune(at.Source)[at.Column-1:])
	if end := strings.IndexAny(text, ",]} \t"); end >= 0 {
		text = text[:end]
	}
	return shorten(text)
}

// tooDeep finds where more than maxDepth lists and sections are open at once,
// in a count that is at most twice too high.
func tooDeep(tokens token.Tokens) (place, bool) {
	var columns []int // where the open block lists and sections begin
	open := 0
	var last place
	for _, t := range tokens {
		p := placeOf(t)
		begins := 0 // column at which a block list or section begins or goes on
		switch t.Type {
		case token.SequenceStartType, token.MappingStartType:
			open++
		case token.SequenceEndType, token.MappingEndType:
			open = max(0, open-1)
		case token.MappingValueType:
			begins = last.column
		case token.SequenceEntryType, token.MappingKeyType, token.AnchorType, token.TagType:
			begins = p.column
		}
		last = p
		if begins > 0 && open == 0 {
			for len(columns) > 0 && columns[len(columns)-1] > begins {
				columns = columns[:len(columns)-1]
			}
			if len(columns) == 0 || columns[len(columns)-1] < begins {
				columns = append(columns, begins)
			}
		}
		if open+2*len(columns) > maxDepth {
			return p, true
		}
	}
	return place{}, false
}

// syntaxFault words an error of the parser.
func syntaxFault(src *source, err error) Fault {
	var syntax *yaml.SyntaxError
	if !errors.As(err, &syntax) {
		return Fault{Position: src.position(place{1, 1}), Message: "the file cannot be read as YAML: " + err.Error()}
	}
	at := placeOf(syntax.Token)
	for _, known := range syntaxMessages {
		if !strings.Contains(syntax.Message, known.part) {
			continue
		}
		if known.next && !sameLine(src, at) {
			return deeperLine(src, at)
		}
		return Fault{Position: src.position(at), Message: known.message, Advice: known.advice}
	}
	return Fault{Position: src.position(at), Message: "this is no YAML: " + syntax.Message,
		Advice: "check indentation, brackets and quotes in this line and the one before"}
}

// syntaxMessages words what the parser says; next marks messages that the
// parser places one line early.
var syntaxMessages = [...]struct {
	part, message, advice string
	next                  bool
}{
	{part: "mapping value is not allowed", next: true,
		message: "`: ` stands inside a value", advice: "one key a line; text that holds `: ` needs quotes"},
	{part: "quoted text",
		message: "the quote that opens here is never closed", advice: "close it, or write the text without quotes"},
	{part: "flow mapping end token", message: "the `{` that opens here is never closed", advice: "close it with `}`"},
	{part: "could not find flow map content", message: "the `{` that opens here is never closed", advice: "close it with `}`"},
	{part: "sequence end token", message: "the `[` that opens here is never closed", advice: "close it with `]`"},
	{part: "',' or ']' must be specified", message: "a `]` or `,` is missing before this",
		advice: "close the list above with `]`, or put a `,` between its elements"},
	{part: "',' or '}' must be specified", message: "a `}` or `,` is missing before this",
		advice: "close the section above with `}`, or put a `,` between its keys"},
	{part: "'[' character corresponding", message: "this `]` closes nothing", advice: "remove it, or open the list with `[`"},
	{part: "'{' character corresponding", message: "this `}` closes nothing", advice: "remove it, or open the section with `{`"},
	{part: "is a reserved character", message: "text cannot begin with this character", advice: "write the text in quotes"},
	{part: "non-map value is specified", message: "this line is no `key: value`", advice: "a `:` and a space follow every key"},
	{part: "block sequence entries are not allowed", message: "a list that is written with `-` begins on a line of its own",
		advice: "write it as [a, b], or put each `- ` on a line below the key"},
	{part: "unexpected key name", message: "there is no name before this `:`", advice: "write `key: value`"},
	{part: "value is not allowed in this context", message: "this does not belong here",
		advice: "check the indentation: keys of one section begin in the same column"},
	{part: "unknown escape character", message: "this `\\` begins no escape that YAML knows",
		advice: "write the text in single quotes, where `\\` means itself"},
}

// sameLine says whether the `: ` that the parser stumbled over is in the line
// of at, after it.
func sameLine(src *source, at place) bool {
	line := []rune(src.position(at).Source)
	rest := string(line[min(at.column-1, len(line)):])
	return strings.Contains(rest, ": ") || strings.HasSuffix(strings.TrimRight(rest, " "), ":")
}

// deeperLine is the fault of a key that is indented below a value: the first
// line with text after at.
func deeperLine(src *source, at place) Fault {
	for i := at.line; i < len(src.lines); i++ {
		line := src.lines[i]
		trimmed := strings.TrimLeft(line, " ")
		if trimmed == "" || trimmed[0] == '#' {
			continue
		}
		at = place{i + 1, len(line) - len(trimmed) + 1}
		break
	}
	return Fault{Position: src.position(at), Message: "this line is indented below a key that has a value already",
		Advice: "keys of one section begin in the same column"}
}
