// Package names compares names that people type: Nearest finds the one that
// was probably meant, Match those that a pattern means.
package names
