// Package study turns a study.yaml into results: it is the only place that
// knows the whole order of work.
//
//	Open   reads study.yaml and the tables it names, and checks that every name
//	       in it means something: a Plan, or every fault at once with its place
//	Check  says what a run would do, and runs nothing
//	Run    does the work and returns the rows of all result tables
//	Write  puts the rows into a results folder, whole or not at all
//
// A plan holds the measures on their scales, one number a person; the groups
// of traits that the same people have; and the variables whose variance is
// divided. Statistics come from the packages crossval, predict, twin and
// features, which know nothing of files; this package hands them matrices and
// turns what they return into rows of package tidy. It has no formula of its
// own beyond counting and averaging.
//
// Rows are made in a fixed order and every random draw comes from a named
// stream, so that the same study gives the same tables on any number of
// workers.
package study
