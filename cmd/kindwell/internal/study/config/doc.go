// Package config reads study.yaml, the one file that says what a study is.
//
// Load and Parse turn the file into a Study in which every default is filled
// in, or into Faults: everything that is wrong, in the order of the file,
// each with file, line, column, the line itself, the nearest valid name and
// what to do. Nothing is skipped in silence: unknown keys, keys given twice,
// wrong types (5.5 for a whole number, yes for true), values out of range and
// keys that belong to the layout but are not available in this version are
// all faults. Text is taken as it is written: 007 and 1.10 stay 007 and 1.10
// where text is asked for.
//
// The structs of this package are the only declaration of the layout. Their
// tags (see Study) drive loading, the JSON Schema for editors (Schema), the
// manual page docs/configuration.md (Manual) and the record of a run (AsRun).
//
// What can be checked in the file alone is checked here. Names that must
// match columns of tables cannot be: At gives the position of any key or list
// element, Faults.Add makes a fault of it that prints like ours, and Nearest
// finds the name that was meant.
//
// The YAML that is read is plain: mappings, lists, text, numbers, true and
// false. Anchors, aliases, tags, merge keys and second documents are refused.
//
//go:generate go test -run ^TestPages$ -update .
package config
