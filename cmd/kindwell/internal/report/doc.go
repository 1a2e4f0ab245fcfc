// Package report says in words and numbers what a study found and what a run
// would do: the headline that ends a run, and the page of a check.
//
// Everything shown comes from the rows of package tidy or from Checked, so
// that text and tables are the same numbers. No person appears by identifier.
// Writers are given by the caller; nothing here touches a file.
package report
