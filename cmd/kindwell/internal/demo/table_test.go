package demo

import (
	"bytes"
	"encoding/csv"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"kindwell/testdata/saltmere/invent"
)

// table is a CSV file by column name.
type table struct {
	header []string
	rows   [][]string
}

func parse(t *testing.T, data []byte) *table {
	t.Helper()
	records, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return &table{records[0], records[1:]}
}

func (b *table) text(row int, column string) string {
	i := slices.Index(b.header, column)
	if i < 0 {
		panic("no column " + column)
	}
	return b.rows[row][i]
}

// number is NaN for an empty cell.
func (b *table) number(row int, column string) float64 {
	cell := b.text(row, column)
	if cell == "" {
		return math.NaN()
	}
	x, err := strconv.ParseFloat(cell, 64)
	if err != nil {
		panic(err)
	}
	return x
}

// cohort is the demo, or a larger one of its kind, ready for simple
// statistics.
type cohort struct {
	people, dynamics *table
	values           map[string][]float64 // by name, one a row of people, NaN where missing
}

func invented(t *testing.T, times int) *cohort {
	t.Helper()
	files := invent.Tables(invent.Seed, times)
	c := &cohort{people: parse(t, files["people.csv"]), dynamics: parse(t, files["dynamics.csv"]), values: map[string][]float64{}}
	place := map[string]int{}
	for i := range c.people.rows {
		place[c.people.text(i, "person")] = i
	}
	n := len(c.people.rows)
	for _, name := range []string{"age", "motion"} {
		c.values[name] = make([]float64, n)
		for i := range n {
			c.values[name][i] = c.people.number(i, name)
		}
	}
	c.values["man"] = make([]float64, n)
	for i := range n {
		if c.people.text(i, "sex") == "M" {
			c.values["man"][i] = 1
		}
	}
	for _, name := range []string{"mood.csv", "sleep.csv"} {
		answers := parse(t, files[name])
		for _, column := range answers.header[1:] {
			c.values[column] = missing(n)
			for r := range answers.rows {
				c.values[column][place[answers.text(r, "person")]] = answers.number(r, column)
			}
		}
	}
	// Sessions: occupancies as centred log-ratios, times as logarithms, then
	// the mean of a person's sessions.
	sum, count := map[string][]float64{}, map[string][]float64{}
	for r := range c.dynamics.rows {
		i := place[c.dynamics.text(r, "person")]
		center := 0.0
		for s := range 9 {
			center += math.Log(max(c.dynamics.number(r, "occupancy_"+strconv.Itoa(s+1)), 0.0002)) / 9
		}
		for _, name := range c.dynamics.header[2:] {
			x := c.dynamics.number(r, name)
			switch {
			case strings.HasPrefix(name, "occupancy_"):
				x = math.Log(max(x, 0.0002)) - center
			case name != "switching_rate_hz":
				x = math.Log(x)
			}
			if math.IsNaN(x) {
				continue
			}
			if sum[name] == nil {
				sum[name], count[name] = make([]float64, n), make([]float64, n)
			}
			sum[name][i] += x
			count[name][i]++
		}
	}
	for name := range sum {
		c.values[name] = make([]float64, n)
		for i := range n {
			c.values[name][i] = sum[name][i] / count[name][i] // 0/0 is NaN
		}
	}
	return c
}

func missing(n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = math.NaN()
	}
	return x
}

// without returns a variable without what the named columns and a constant
// predict of it: Gram-Schmidt, column by column, over the people complete in
// all of them.
func (c *cohort) without(name string, columns ...string) []float64 {
	y := slices.Clone(c.values[name])
	n := len(y)
	basis := [][]float64{make([]float64, n)}
	for i := range n {
		basis[0][i] = 1
	}
	for _, column := range columns {
		basis = append(basis, slices.Clone(c.values[column]))
	}
	for i := range n {
		ok := !math.IsNaN(y[i])
		for _, b := range basis {
			ok = ok && !math.IsNaN(b[i])
		}
		if !ok {
			y[i] = math.NaN()
		}
	}
	for k := range basis {
		for i := range n {
			if math.IsNaN(y[i]) {
				basis[k][i] = 0
			}
		}
		for _, b := range basis[:k] {
			project(basis[k], b)
		}
		project(y, basis[k])
	}
	return y
}

// project takes the direction b out of y, where y is not missing.
func project(y, b []float64) {
	dot, norm := 0.0, 0.0
	for i := range y {
		if !math.IsNaN(y[i]) {
			dot += y[i] * b[i]
			norm += b[i] * b[i]
		}
	}
	for i := range y {
		y[i] -= dot / norm * b[i]
	}
}

// correlation is Pearson's, over people present in both.
func correlation(x, y []float64) float64 {
	var n, sx, sy, sxx, syy, sxy float64
	for i := range x {
		if math.IsNaN(x[i] + y[i]) {
			continue
		}
		n++
		sx, sy = sx+x[i], sy+y[i]
		sxx, syy, sxy = sxx+x[i]*x[i], syy+y[i]*y[i], sxy+x[i]*y[i]
	}
	return (n*sxy - sx*sy) / math.Sqrt((n*sxx-sx*sx)*(n*syy-sy*sy))
}

// twins returns the correlation of complete pairs of a zygosity, each pair
// taken both ways round (Fisher 1925), and their number.
func (c *cohort) twins(y []float64, zygosity string) (r float64, pairs int) {
	first := map[string]int{}
	var a, b []float64
	for i := range c.people.rows {
		set := c.people.text(i, "twin_set")
		if set == "" || c.people.text(i, "zygosity") != zygosity {
			continue
		}
		j, ok := first[set]
		if !ok {
			first[set] = i
			continue
		}
		if !math.IsNaN(y[i] + y[j]) {
			pairs++
			a, b = append(a, y[i], y[j]), append(b, y[j], y[i])
		}
	}
	return correlation(a, b), pairs
}
