// Package demo writes the invented Saltmere cohort, which the program carries
// with it, into a folder.
package demo
