// Package cohort turns the input tables of a study into checked people, a
// pedigree and matrices. It is the only place that knows file formats, and
// everything it finds wrong has an address: file, line, column, cell.
//
//	c, err := cohort.Load(cohort.Inputs{
//		Folder:   "study",
//		People:   cohort.PeopleInput{File: "people.csv"},
//		Measures: &cohort.MeasuresInput{Files: []string{"dynamics.csv"}, Session: "session"},
//		Traits:   []cohort.TableInput{{File: "mood.csv"}},
//	})
//
// # Tables
//
// A table is CSV (.csv, commas) or TSV (.tsv, tabs), also packed with gzip
// (.gz), in UTF-8 with or without byte-order mark, with LF or CRLF line ends and
// quotes as in RFC 4180: a header, then one row a person (or person and
// session). Names in the header lose blanks at their ends; they have to be there
// and to differ. Rows without any text are skipped. A row counts by the line on
// which an editor shows it, which is not its number where a cell holds a line
// break.
//
// The empty cell, one of blanks alone, NA, n/a and NaN in capitals or small
// letters, and the study's own missing codes are missing values, in every column
// (a mother NA is not known, a person NA is refused). In columns of numbers a
// code that is a number means the number.
//
// What a column holds comes from its role, never from a guess at its type:
//
//   - ids (person, family, mother, father, twin_set, mz_set, reared_in, session,
//     folds) are text, matched to the letter: "007" is not "7". Blanks and
//     invisible characters at their ends are refused, not taken off, since then
//     two tables might no longer mean the same person.
//   - categories are text without blanks at their ends. Sex is male or female
//     (m, f, in capitals or small letters); any other word stays a category and
//     counts as unknown where the pedigree needs the sex. Zygosity is MZ or DZ,
//     in capitals or small letters.
//   - numbers are decimal with a decimal point, and finite. Blanks at their ends
//     do not matter. Inf, hexadecimal, digit groups, decimal commas, percent
//     signs, and numbers too large or too small for 64 bits are refused. An age
//     89+ is 89, with a warning.
//   - other columns of people and of trait tables hold numbers when at least 90 %
//     of their cells that are not missing do: the others are then faults.
//     Otherwise they hold categories. Columns of measures hold numbers, always.
//
// # People
//
// People come in the order in which the people table first names them; all
// indices count from there. With a session column the rows of a person become
// one: ids, sex and zygosity have to agree (a missing cell contradicts nothing),
// numbers are averaged, categories are the first session's, and every
// contradiction settled so is a warning. Sessions go by number when all their
// labels are numbers, otherwise as the rows stand in the file.
//
// Persons of other tables who are not in the people table are left out, with a
// warning and an exclusion each; a table without anybody known is refused. A
// name of a column means one thing: a measure or trait that is also a column of
// another table is refused.
//
// # Messages
//
// Load reports everything that is wrong in all tables at once, as *Faults;
// errors.As finds each Fault. Warnings point at rows of the files and name no
// person, so that they can stand in a report. The same tables give the same
// messages in the same order.
//
// Behind a Table is a gota data frame, made from columns that were read and
// checked here; its own readers, writers and joins change data without a word
// and are not used. Missing values are NaN in numbers and "" in text.
//
// Functions panic, with the prefix "cohort: ", only when a column is asked for
// that the table does not have as text or as numbers.
package cohort
