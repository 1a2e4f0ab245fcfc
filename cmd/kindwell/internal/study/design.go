package study

import (
	"fmt"
	"slices"
	"strings"

	"gonum.org/v1/gonum/mat"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/study/config"
)

// columns names the columns of people that enter a design matrix: as they
// are, squared, and multiplied in pairs.
type columns struct {
	use      []string
	squares  []string
	products [][2]string
}

// confoundColumns are those of the confounds of a study.
func confoundColumns(c config.Confounds) columns {
	return columns{use: c.Use, squares: c.Squares, products: c.Products}
}

// without leaves out one column, its square and its products.
func (c columns) without(name string) columns {
	same := func(s string) bool { return s == name }
	kept := columns{
		use:     slices.DeleteFunc(slices.Clone(c.use), same),
		squares: slices.DeleteFunc(slices.Clone(c.squares), same),
	}
	for _, p := range c.products {
		if p[0] != name && p[1] != name {
			kept.products = append(kept.products, p)
		}
	}
	return kept
}

// among keeps the squares and products that are made of the given columns, and
// uses these columns.
func (c columns) among(use []string) columns {
	kept := columns{use: use}
	for _, s := range c.squares {
		if slices.Contains(use, s) {
			kept.squares = append(kept.squares, s)
		}
	}
	for _, p := range c.products {
		if slices.Contains(use, p[0]) && slices.Contains(use, p[1]) {
			kept.products = append(kept.products, p)
		}
	}
	return kept
}

// describe writes the columns as one cell of a table.
func (c columns) describe() string {
	words := slices.Clone(c.use)
	for _, s := range c.squares {
		words = append(words, s+"^2")
	}
	for _, p := range c.products {
		words = append(words, p[0]+" x "+p[1])
	}
	return joined(words)
}

// design is a matrix without its constant: a row a person, a column a term.
type design struct {
	matrix *mat.Dense // nil when there is no term
	names  []string
}

// designOf makes the design matrix of some rows of the people table. A
// category becomes an indicator column for each level but the first (in
// alphabetical order) among those present. Squares and products are taken
// about the mean of the rows, which changes no fit since the columns
// themselves and the constant are always there, and keeps them apart
// numerically.
func designOf(people *cohort.Cohort, c columns, rows []int) design {
	var d design
	var terms [][]float64
	add := func(name string, values []float64) {
		d.names = append(d.names, name)
		terms = append(terms, values)
	}
	for _, name := range c.use {
		for _, t := range termsOf(people, name, rows) {
			add(t.name, t.values)
		}
	}
	for _, name := range c.squares {
		for _, t := range termsOf(people, name, rows) {
			about := centred(t)
			add(about.name+"^2", product(about.values, about.values))
		}
	}
	for _, p := range c.products {
		for _, a := range termsOf(people, p[0], rows) {
			for _, b := range termsOf(people, p[1], rows) {
				about, other := centred(a), centred(b)
				add(about.name+" x "+other.name, product(about.values, other.values))
			}
		}
	}
	if len(terms) == 0 || len(rows) == 0 {
		return design{}
	}
	d.matrix = mat.NewDense(len(rows), len(terms), nil)
	for j, values := range terms {
		d.matrix.SetCol(j, values)
	}
	return d
}

type term struct {
	name   string
	values []float64
}

// termsOf returns the column or columns by which a variable enters a design.
func termsOf(people *cohort.Cohort, name string, rows []int) []term {
	v := people.Variables[name]
	if v.Numeric {
		return []term{{name, pick(v.Values, rows)}}
	}
	levels := levelsPresent(v, rows)
	var terms []term
	for _, level := range levels[min(1, len(levels)):] {
		values := make([]float64, len(rows))
		for i, row := range rows {
			if v.Codes[row] == level {
				values[i] = 1
			}
		}
		terms = append(terms, term{fmt.Sprintf("%s: %s", name, v.Levels[level]), values})
	}
	return terms
}

// levelsPresent returns the codes of the levels among rows, by level name.
func levelsPresent(v *cohort.Variable, rows []int) []int {
	seen := map[int]bool{}
	var codes []int
	for _, row := range rows {
		if c := v.Codes[row]; c >= 0 && !seen[c] {
			seen[c] = true
			codes = append(codes, c)
		}
	}
	slices.SortFunc(codes, func(a, b int) int { return strings.Compare(v.Levels[a], v.Levels[b]) })
	return codes
}

// pick returns the elements of values at rows.
func pick[T any](values []T, rows []int) []T {
	out := make([]T, len(rows))
	for i, row := range rows {
		out[i] = values[row]
	}
	return out
}

// centred takes the mean of the rows away from a term and writes it into the
// name, so that a fit can be used from its table alone.
func centred(t term) term {
	mean := 0.0
	for _, v := range t.values {
		mean += v
	}
	mean /= float64(len(t.values))
	about := term{fmt.Sprintf("(%s - %v)", t.name, mean), make([]float64, len(t.values))}
	for i, v := range t.values {
		about.values[i] = v - mean
	}
	return about
}

func product(a, b []float64) []float64 {
	out := make([]float64, len(a))
	for i := range a {
		out[i] = a[i] * b[i]
	}
	return out
}
