package predict

import (
	"encoding/csv"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
)

// readTable reads a CSV file of testdata into columns by name.
func readTable(t testing.TB, path ...string) map[string][]string {
	t.Helper()
	f, err := os.Open(filepath.Join(append([]string{"..", "testdata"}, path...)...))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	table := map[string][]string{}
	for j, name := range rows[0] {
		for _, r := range rows[1:] {
			table[name] = append(table[name], r[j])
		}
	}
	return table
}

func number(t testing.TB, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// numbers returns the named columns as a matrix.
func numbers(t testing.TB, table map[string][]string, names ...string) *mat.Dense {
	t.Helper()
	m := mat.NewDense(len(table[names[0]]), len(names), nil)
	for j, name := range names {
		for i, text := range table[name] {
			m.Set(i, j, number(t, text))
		}
	}
	return m
}

// smallCohort is testdata/ridge_small.
func smallCohort(t testing.TB) (measures, confounds, traits *mat.Dense, folds *crossval.Folds) {
	t.Helper()
	measures = numbers(t, readTable(t, "ridge_small", "dynamics.csv"), "f001", "f002", "f003", "f004", "f005", "f006", "f007", "f008")
	traits = numbers(t, readTable(t, "ridge_small", "questionnaires.csv"), "q001", "q002", "q003")
	people := readTable(t, "ridge_small", "people.csv")
	for i, s := range people["sex"] {
		people["sex"][i] = map[string]string{"M": "1", "F": "0"}[s]
	}
	confounds = numbers(t, people, "age", "sex", "motion")
	table := readTable(t, "ridge_small", "folds.csv")
	r := crossval.Repeat{OuterCount: 5}
	for _, text := range table["outer"] {
		r.Outer = append(r.Outer, int(number(t, text))-1)
	}
	for o := range r.OuterCount {
		var inner []int
		for _, text := range table["inner_in_outer"+strconv.Itoa(o+1)] {
			if text == "" {
				text = "0"
			}
			inner = append(inner, int(number(t, text))-1)
		}
		r.Inner, r.InnerCount = append(r.Inner, inner), append(r.InnerCount, 4)
	}
	return measures, confounds, traits, &crossval.Folds{Repeats: []crossval.Repeat{r}}
}
