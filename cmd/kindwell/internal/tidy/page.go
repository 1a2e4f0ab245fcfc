package tidy

import (
	"fmt"
	"strings"
)

// ManualPage returns docs/tables.md: every table and column as declared.
func ManualPage() []byte {
	var b strings.Builder
	b.WriteString(pageHead)
	for _, t := range Tables() {
		fmt.Fprintf(&b, "- [%s](#%s): %s\n", t.Path(), anchor(t), lowerFirst(strings.TrimPrefix(t.Description, "One row is ")))
	}
	for _, t := range Tables() {
		fmt.Fprintf(&b, "\n## %s\n\n%s", t.Path(), t.Description)
		if key := t.PrimaryKey(); key != nil {
			fmt.Fprintf(&b, " Rows are told apart by %s.", strings.Join(key, ", "))
		}
		b.WriteString("\n\n| column | type | unit | meaning |\n| --- | --- | --- | --- |\n")
		for _, c := range t.Columns {
			fmt.Fprintf(&b, "| %s | %s | %s | %s |\n", c.Name, c.pageType(), c.Unit, c.pageMeaning())
		}
	}
	return []byte(b.String())
}

const pageHead = `# Result tables

<!-- Generated from the declarations in cmd/kindwell/internal/tidy by go generate; edit those. -->

Every table is a CSV file: UTF-8, lines end in LF, one header line, one row an
observation. Numbers have a decimal point and the fewest digits that read back
as the same 64-bit number, with an exponent below 0.000001 and from 1e21 on. A
missing value is an empty cell, an infinite number is INF or -INF, truth values
are true and false. The same descriptions, with the type, the unit and the
possible values of every column and the size and SHA-256 of every file but run.json, are in
datapackage.json (Frictionless Data Package, version 2).

A unit of 1 marks a share, a probability, a correlation or another number
without unit.

`

// anchor returns the page anchor that Markdown viewers give a table's heading.
func anchor(t *Table) string { return strings.ReplaceAll(t.Path(), ".", "") }

func lowerFirst(s string) string { return strings.ToLower(s[:1]) + s[1:] }

// pageType returns the column's type in words.
func (c *Column) pageType() string {
	switch c.Kind {
	case Integer, MaybeInteger:
		return "whole number"
	case Boolean:
		return "true or false"
	case Number:
		return "number"
	default:
		return "text"
	}
}

// pageMeaning returns the description, with the categories where there are
// some.
func (c *Column) pageMeaning() string {
	if c.Enum == nil {
		return c.Description
	}
	return c.Description + " One of " + strings.Join(c.Enum, ", ") + "."
}
