// Package tidy holds the result tables: declared once, written, read back,
// described for machines and for people.
//
// A table is a Go struct. Its fields, in order, are the columns; tags give a
// column's name, unit and description, the categories it may hold and whether
// it belongs to the key. [Tables] lists all of them. The writer, the reader,
// the data package (datapackage.json) and the manual page docs/tables.md read
// that one declaration, so they cannot disagree.
//
// # Rows
//
// The types of a column are string, int, float64, [OptionalInt] and bool.
// Missing is NaN in a float64, the zero value of an OptionalInt and "" in a
// string; int and bool are never missing. A row is begun with [Blank], which
// sets every float64 to NaN, so that a number nobody filled in is an empty
// cell and not a zero. Embedded structs ([Test], [Interval]) are the endings
// that several tables share.
//
// A column whose tag says unfilled is part of the layout but is not computed
// in this version: its description says so, and the writer refuses a value in
// it, so that the description stays true.
//
// # Files
//
// CSV, UTF-8 without BOM, LF, one header line, quotes where encoding/csv
// would put them. A number is the shortest text that reads back as the same
// float64, in plain decimals from 1e-6 up to 1e21 and with an exponent
// outside; negative zero is 0, infinities are INF and -INF (the words of the
// Frictionless Table Schema). Missing is an empty cell; true and false are
// these words.
//
// A [Folder] is written beside its place and renamed into it when complete:
// a results folder is whole or it is not there. See [Create] for what is
// refused.
//
// # Errors
//
// Functions panic (prefix "tidy: ") for a row type that is not in the
// registry, which only the calling code can cause. Everything else, from a
// full disk to a file with another header, is an error; errors about a cell
// name table, row and column.
package tidy

//go:generate go test -run ^TestManualPage$ . -update
