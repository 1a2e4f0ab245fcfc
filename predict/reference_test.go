package predict

import (
	"context"
	"math"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// given is one arrangement from a table.
type given [][]int

func (g given) Len() int            { return len(g) }
func (g given) At(i int, dst []int) { copy(dst, g[i]) }

// The expected values are those of testdata/ridge_small/reference.py
// (scikit-learn 1.2.1, numpy 1.24.2, scipy 1.10.1).
func TestReference(t *testing.T) {
	const tol = 1e-8
	measures, confounds, traits, folds := smallCohort(t)
	opt := Options{Workers: 2}
	for i := range 20 {
		opt.Penalties = append(opt.Penalties, math.Pow(10, -1+6*float64(i)/19))
	}
	residuals, err := Residuals(traits, confounds)
	if err != nil {
		t.Fatal(err)
	}
	var arrangement []int
	for _, text := range readTable(t, "ridge_small", "arrangement.csv")["from"] {
		arrangement = append(arrangement, int(number(t, text)))
	}
	d, err := NewDesign(measures, confounds, folds, opt)
	if err != nil {
		t.Fatal(err)
	}
	names := map[string]int{"q001": 0, "q002": 1, "q003": 2}
	columns := map[string]*mat.Dense{"observed": traits, "rearranged": permuted(residuals, given{arrangement}, 0)}
	fits := map[string]*Fit{}
	for kind, column := range columns {
		if fits[kind], err = d.Fit(context.Background(), column); err != nil {
			t.Fatal(err)
		}
	}

	person, last := -1, ""
	table := readTable(t, "ridge_small", "predictions.csv")
	for i, kind := range table["kind"] {
		trait := table["trait"][i]
		if person++; kind+trait != last {
			person, last = 0, kind+trait
		}
		r := fits[kind].Repeats[0]
		for name, got := range map[string]*mat.Dense{"baseline": r.Baseline, "target": r.Target, "predicted": r.Predicted} {
			if want := number(t, table[name][i]); !near(got.At(person, names[trait]), want, tol) {
				t.Errorf("%s %s person %d: %s %v, want %v", kind, trait, person, name, got.At(person, names[trait]), want)
			}
		}
	}
	table = readTable(t, "ridge_small", "penalties.csv")
	for i, kind := range table["kind"] {
		o, trait := int(number(t, table["outer"][i]))-1, names[table["trait"][i]]
		got := fits[kind].Repeats[0].Choices[o][trait]
		if want := number(t, table["penalty"][i]); math.Abs(got.Penalty/want-1) > 1e-12 {
			t.Errorf("%s trait %d fold %d: penalty %v, want %v", kind, trait, o, got.Penalty, want)
		}
		if want := number(t, table["inner_mse"][i]); !near(got.InnerMSE, want, tol) {
			t.Errorf("%s trait %d fold %d: inner error %v, want %v", kind, trait, o, got.InnerMSE, want)
		}
	}
	table = readTable(t, "ridge_small", "weights.csv")
	for i, kind := range table["kind"] {
		o, trait := int(number(t, table["outer"][i]))-1, names[table["trait"][i]]
		j, _ := strconv.Atoi(table["measure"][i][1:])
		f := fits[kind].fits[o]
		for name, got := range map[string]float64{"weight": f.weight.Data[(j-1)*3+trait], "pattern": f.pattern.Data[(j-1)*3+trait], "sd": f.sd[j-1]} {
			if want := number(t, table[name][i]); !near(got, want, tol) {
				t.Errorf("%s trait %d fold %d measure %d: %s %v, want %v", kind, trait, o, j, name, got, want)
			}
		}
	}
	table = readTable(t, "ridge_small", "scores.csv")
	for i, kind := range table["kind"] {
		metric, err := ParseMetric(table["metric"][i])
		if err != nil {
			t.Fatal(err)
		}
		trait, want := names[table["trait"][i]], number(t, table["value"][i])
		if got := scoreOf(t, fits[kind], trait, metric).Value; !near(got, want, tol) {
			t.Errorf("%s trait %d: %v %v, want %v", kind, trait, metric, got, want)
		}
		if kind == "observed" || metric > RMSE {
			continue
		}
		opt.Metric = metric
		d, err := NewDesign(measures, confounds, folds, opt)
		if err != nil {
			t.Fatal(err)
		}
		null, err := d.Null(context.Background(), residuals, given{arrangement}, nil)
		if err != nil {
			t.Fatal(err)
		}
		if got := null[trait][0]; !near(got, want, tol) {
			t.Errorf("null of trait %d: %v %v, want %v", trait, metric, got, want)
		}
	}
}
