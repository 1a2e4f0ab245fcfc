package study

import (
	"math"
	"slices"
	"strings"
	"testing"

	"kindwell/cmd/kindwell/internal/cohort"
)

// people is a small cohort in memory: ages, and a site with a missing value.
func people() *cohort.Cohort {
	return &cohort.Cohort{Variables: map[string]*cohort.Variable{
		"age":  {Name: "age", Numeric: true, Values: []float64{20, 30, 40, 50}},
		"site": {Name: "site", Levels: []string{"north", "south", "west"}, Codes: []int{1, 0, 2, 1}},
	}}
}

// TestDesignByHand: numbers as they are, a column for each level but the first
// that is present, squares and products about the means of the rows.
func TestDesignByHand(t *testing.T) {
	c := columns{use: []string{"age", "site"}, squares: []string{"age"}, products: [][2]string{{"age", "site"}}}
	d := designOf(people(), c, []int{0, 1, 3}) // south, north, south; mean age 100/3
	wantNames := []string{"age", "site: south", "(age - 33.333333333333336)^2", "(age - 33.333333333333336) x (site: south - 0.6666666666666666)"}
	if !slices.Equal(d.names, wantNames) {
		t.Fatalf("names %v", d.names)
	}
	third := 1.0 / 3
	for i, want := range [][]float64{
		{20, 1, 1600.0 / 9, -40 * third * third},
		{30, 0, 100.0 / 9, 20 * third * third},
		{50, 1, 2500.0 / 9, 50 * third * third},
	} {
		for j, w := range want {
			if got := d.matrix.At(i, j); math.Abs(got-w) > 1e-12 {
				t.Errorf("row %d, %s: %v, want %v", i, d.names[j], got, w)
			}
		}
	}
	if empty := designOf(people(), columns{}, []int{0, 1}); empty.matrix != nil {
		t.Error("a design without columns has a matrix")
	}
}

func TestColumnsWithoutAndAmong(t *testing.T) {
	c := columns{use: []string{"age", "sex", "motion"}, squares: []string{"age", "motion"}, products: [][2]string{{"age", "sex"}, {"sex", "motion"}}}
	if got := c.without("age").describe(); got != "sex;motion;motion^2;sex x motion" {
		t.Errorf("without age: %s", got)
	}
	if got := c.among([]string{"age", "sex"}).describe(); got != "age;sex;age^2;age x sex" {
		t.Errorf("among age and sex: %s", got)
	}
}

// TestSquaresOfConfoundsAreCovariates reach the fixed effects.
func TestSquaresOfConfoundsAreCovariates(t *testing.T) {
	dir := cohortFiles(t, 24)
	text := strings.Replace(wholeStudy, "  use: [age, sex]\npredict", "  use: [age, sex]\n  squares: [age]\npredict", 1)
	r := runStudy(t, writeStudy(t, dir, text), 2)
	found := false
	for _, e := range r.FixedEffects {
		found = found || strings.HasPrefix(e.Term, "(age - ") && strings.HasSuffix(e.Term, ")^2")
	}
	if !found {
		t.Errorf("no square of age among %d fixed effects", len(r.FixedEffects))
	}
	if h := r.Heritability[0]; h.Covariates != "age;sex;age^2" {
		t.Errorf("covariates %q", h.Covariates)
	}
}
