package study

import (
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// galtonTables turns the table of children into tables of people and heights,
// with a row for each parent.
func galtonTables(t *testing.T) string {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "..", "..", "testdata", "galton", "GaltonFamilies.csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	people := []string{"person,family,mother,father,sex"}
	heights := []string{"person,height"}
	seen := map[string]bool{}
	for _, r := range rows[1:] {
		family, father, mother, number, sex, height := r[1], r[2], r[3], r[6], r[7], r[8]
		if !seen[family] {
			seen[family] = true
			people = append(people, fmt.Sprintf("M%s,%s,,,female", family, family), fmt.Sprintf("F%s,%s,,,male", family, family))
			heights = append(heights, fmt.Sprintf("M%s,%s", family, mother), fmt.Sprintf("F%s,%s", family, father))
		}
		people = append(people, fmt.Sprintf("%s-%s,%s,M%s,F%s,%s", family, number, family, family, family, sex))
		heights = append(heights, fmt.Sprintf("%s-%s,%s", family, number, height))
	}
	dir := t.TempDir()
	for name, lines := range map[string][]string{"people.csv": people, "heights.csv": heights} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(strings.Join(lines, "\n")+"\n"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// TestGaltonFamilies: Galton's heights (1886; HistData), parents as founders,
// sex in the mean: variances, share and likelihood as direct maximum likelihood
// of the 205 families' normal densities gives them (4.197039, 1.891158,
// .689373, 5954.711), and the number of pairs by arithmetic on the table.
func TestGaltonFamilies(t *testing.T) {
	dir := galtonTables(t)
	r := runStudy(t, writeStudy(t, dir, `kindwell: 1
seed: 1
people: {file: people.csv}
measures: {file: heights.csv, states_learned_on: no_states}
heritability: {full: AE, models: [AE, CE, E], covariates: [sex]}
`), 2)
	near := func(what string, got, want, tol float64) {
		t.Helper()
		if !(math.Abs(got-want) <= tol) {
			t.Errorf("%s is %v, want %v", what, got, want)
		}
	}
	h := r.Heritability[0]
	near("a2", h.A2, .689373, 1e-6)
	near("people", float64(h.People), 1344, 0)
	near("families", float64(h.Families), 205, 0)
	near("A", r.VarianceComponents[0].Variance, 4.197039, 2e-6)
	near("E", r.VarianceComponents[1].Variance, 1.891158, 2e-6)
	near("-2 lnL", -2*r.VarianceModels[0].LogLikelihood, 5954.711, 5e-4)
	near("mean of women", r.FixedEffects[0].Estimate, 64.05865, 1e-5)
	near("men over women", r.FixedEffects[1].Estimate, 5.246375, 1e-6)
	pairs := map[string]int{}
	for _, rel := range r.Relations {
		pairs[rel.Relation] = rel.Pairs
	}
	if pairs["parent_child"] != 2*934 || pairs["spouse"] != 205 || pairs["full_sibling"] != 2415 {
		t.Errorf("pairs: %v", pairs)
	}
	// The spouse correlation of the raw table is .0969; both sides' sex is
	// theirs alone, so that the covariate takes nothing from it.
	for _, c := range r.TwinCorrelations {
		if c.Relation == "spouse" {
			near("spouses", c.Correlation, .0969, 5e-5)
		}
	}
}
