package twin

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// record is a row of a table by column name.
type record map[string]string

// number parses a cell; an empty one is NaN.
func (r record) number(t testing.TB, name string) float64 {
	t.Helper()
	text, ok := r[name]
	if !ok {
		t.Fatalf("no column %q", name)
	}
	if text == "" || text == "NA" {
		return math.NaN()
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func readTable(t testing.TB, path ...string) []record {
	t.Helper()
	f, err := os.Open(filepath.Join(append([]string{"..", "testdata"}, path...)...))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	rows := make([]record, len(lines)-1)
	for i, line := range lines[1:] {
		rows[i] = record{}
		for j, cell := range line {
			rows[i][lines[0][j]] = cell
		}
	}
	return rows
}

// familiesOf reads a people table of children with ids of parents who are not
// in it.
func familiesOf(people []record) *tableKin {
	k := &tableKin{}
	number := map[string]int{}
	id := func(prefix, name string) int {
		if name == "" {
			return -1
		}
		key := prefix + name
		if _, ok := number[key]; !ok {
			number[key] = 1<<20 + len(number)
		}
		return number[key]
	}
	for _, p := range people {
		set := -1
		if p["twin_set"] != "" {
			set = id("twins ", p["twin_set"])
		}
		k.add(id("family ", p["family"]), id("", p["mother"]), id("", p["father"]), set, p["zygosity"] == "MZ", p["sex"] == "M")
	}
	return k
}

// completeSample is a measure of a folder of testdata, on the people who are
// complete in it and the covariates (age, sex, motion, or none).
func completeSample(t testing.TB, folder, measure string, covariates bool) *Sample {
	t.Helper()
	people := readTable(t, folder, "people.csv")
	value := map[string]record{}
	for _, r := range readTable(t, folder, "dynamics.csv") {
		value[r["person"]] = r
	}
	var rows []int
	var y, x []float64
	for i, p := range people {
		v := value[p["person"]].number(t, measure)
		motion := p.number(t, "motion")
		if math.IsNaN(v) || covariates && math.IsNaN(motion) {
			continue
		}
		sex := 0.0
		if p["sex"] == "M" {
			sex = 1
		}
		rows, y, x = append(rows, i), append(y, v), append(x, p.number(t, "age"), sex, motion)
	}
	var design *mat.Dense
	var names []string
	if covariates {
		design, names = mat.NewDense(len(y), 3, x), []string{"age", "sex", "motion"}
	}
	s, err := NewSample(familiesOf(people), rows, y, design, names)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// checkAgainst compares the fits of a sample with the rows of a reference.
// shareTol is in units of the total variance.
func checkAgainst(t *testing.T, s *Sample, want map[string]record, shareTol float64) {
	t.Helper()
	for _, c := range []struct {
		row    string
		model  Model
		signed bool
	}{
		{"E", ModelE, false}, {"AE", ModelAE, false}, {"CE", ModelCE, false}, {"ACE", ModelACE, false},
		{"AE_signed", ModelAE, true}, {"CE_signed", ModelCE, true}, {"ACE_signed", ModelACE, true},
	} {
		r, ok := want[c.row]
		if !ok {
			continue
		}
		fit := mustFit(t, s, c.model)
		logLik := fit.LogLik
		if c.signed {
			logLik = fit.SignedLogLik
		}
		near(t, c.row+" log-likelihood", logLik, r.number(t, "log_likelihood"), 1e-8)
		for _, e := range fit.Components {
			v := e.Variance
			if c.signed {
				v = e.SignedVariance
			}
			near(t, c.row+" "+e.Component.String(), v, r.number(t, e.Component.String()), shareTol*fit.Total)
		}
	}
}

// byMeasure sorts the rows of a reference by measure and model.
func byMeasure(t *testing.T, folder string) (measures []string, rows map[string]map[string]record) {
	t.Helper()
	rows = map[string]map[string]record{}
	for _, r := range readTable(t, folder, "reference.csv") {
		m := r["measure"]
		if rows[m] == nil {
			measures = append(measures, m)
			rows[m] = map[string]record{}
		}
		rows[m][r["model"]] = r
	}
	return measures, rows
}

func checkLimits(t *testing.T, s *Sample, want record) {
	t.Helper()
	fit := mustFit(t, s, ModelACE)
	for _, q := range []Quantity{ShareA, ShareC, ShareE} {
		i, err := s.Interval(fit, q, 0.95)
		if err != nil {
			t.Fatal(err)
		}
		near(t, q.String()+" low", i.Low, want.number(t, q.String()+"_low"), 1e-6)
		near(t, q.String()+" high", i.High, want.number(t, q.String()+"_high"), 1e-6)
		if (i.Low == 0) != i.LowAtBound || (i.High == 1) != i.HighAtBound {
			t.Errorf("%s: %+v", q, i)
		}
	}
	familial, err := s.Interval(fit, Familial, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "familial low", familial.Low, 1-want.number(t, "e2_high"), 1e-6)
	near(t, "familial high", familial.High, 1-want.number(t, "e2_low"), 1e-6)
}

// Twin pairs by lavaan and base R (testdata/ace_pairs/make.R).
func TestPairsAgainstLavaan(t *testing.T) {
	measures, rows := byMeasure(t, "ace_pairs")
	for _, m := range measures {
		t.Run(m, func(t *testing.T) {
			s := completeSample(t, "ace_pairs", m, false)
			checkAgainst(t, s, rows[m], 1e-6)
			checkLimits(t, s, rows[m]["ACE"])
			near(t, "mean", mustFit(t, s, ModelACE).Fixed[0].Estimate, rows[m]["ACE"].number(t, "mean"), 1e-6)
		})
	}
}

// Families with siblings, half-siblings, lost co-twins and covariates by a
// dense density in scipy (testdata/ace_small/make.py).
func TestFamiliesAgainstScipy(t *testing.T) {
	measures, rows := byMeasure(t, "ace_small")
	for _, m := range measures {
		t.Run(m, func(t *testing.T) {
			s := completeSample(t, "ace_small", m, true)
			want := rows[m]["ACE"]
			if s.People() != int(want.number(t, "people")) {
				t.Fatalf("%d people, want %s", s.People(), want["people"])
			}
			checkAgainst(t, s, rows[m], 1e-6)
			checkLimits(t, s, want)
			for _, model := range []Model{ModelACE, ModelE} {
				for _, e := range mustFit(t, s, model).Fixed {
					r := rows[m][model.String()]
					near(t, e.Term, e.Estimate, r.number(t, e.Term), 1e-6)
					near(t, e.Term+" se", e.SE, r.number(t, e.Term+"_se"), 1e-6)
				}
			}
		})
	}
}

// galtonFamilies are the children and both parents of each family, parents in
// front.
func galtonFamilies(t testing.TB) (k *tableKin, height, male []float64) {
	t.Helper()
	k = &tableKin{}
	table := readTable(t, "galton", "GaltonFamilies.csv")
	mother, father, family := -1, -1, ""
	number := 0
	for _, r := range table {
		if r["family"] != family {
			family = r["family"]
			number++
			father = k.add(number, -1, -1, -1, false, true)
			mother = k.add(number, -1, -1, -1, false, false)
			height = append(height, r.number(t, "father"), r.number(t, "mother"))
			male = append(male, 1, 0)
		}
		boy := r["gender"] == "male"
		k.add(number, mother, father, -1, false, boy)
		height = append(height, r.number(t, "childHeight"))
		if boy {
			male = append(male, 1)
		} else {
			male = append(male, 0)
		}
	}
	return k, height, male
}

// Heights of Galton's families with up to 15 children, by dense densities in
// base R (testdata/galton/make.R). The variances 4.197039 and 1.891158, a2
// .6893731 and -2 lnL 5954.711 of AE, 6269.926 of E, are also what lme4 gives,
// whose optimiser leaves the last digit open.
func TestGaltonFamilies(t *testing.T) {
	k, height, male := galtonFamilies(t)
	n := len(height)
	s, err := NewSample(k, everyone(n), height, mat.NewDense(n, 1, male), []string{"male"})
	if err != nil {
		t.Fatal(err)
	}
	if n != 1344 || s.Families() != 205 {
		t.Fatalf("%d people in %d families", n, s.Families())
	}
	rows := map[string]record{}
	for _, r := range readTable(t, "galton", "reference.csv") {
		r["C"] = r["S"]
		rows[r["model"]] = r
	}
	siblings := rows["ACE_siblings"]
	delete(rows, "ACE_siblings")
	checkAgainst(t, s, rows, 1e-6)

	ae := mustFit(t, s, ModelAE)
	near(t, "A", ae.Components[0].Variance, 4.197039, 2e-6)
	near(t, "E", ae.Components[1].Variance, 1.891158, 2e-6)
	near(t, "a2", ae.Share(A), .6893731, 2e-7)
	near(t, "-2 lnL", -2*ae.LogLik, 5954.711, 5e-4)
	near(t, "-2 lnL of E", -2*mustFit(t, s, ModelE).LogLik, 6269.926, 5e-4)
	for _, e := range ae.Fixed {
		name := e.Term
		if name == "intercept" {
			name = "female"
		}
		near(t, name, e.Estimate, rows["AE"].number(t, name), 1e-6)
		near(t, name+" se", e.SE, rows["AE"].number(t, name+"_se"), 1e-6)
	}
	// Sons and daughters are alike: one structure for each number of children.
	children := map[int]int{}
	for i := range n {
		if k.mother[i] >= 0 {
			children[k.family[i]]++
		}
	}
	sizes := map[int]bool{}
	for _, c := range children {
		sizes[c] = true
	}
	if s.Structures() != len(sizes) {
		t.Errorf("%d structures, want one for each of %d numbers of children", s.Structures(), len(sizes))
	}

	// A sibling environment that parents have no part in: component matrices
	// with an uneven diagonal. -2 lnL 5952.793 is also what lme4 gives.
	l := newLayout(n, k.Family, func(i, j int) entries {
		var e entries
		e[placeA] = k.Kinship(i, j)
		if k.mother[i] >= 0 && k.mother[j] >= 0 {
			e[placeC] = 1
		}
		if i == j {
			e[placeA]--
			e[placeC]--
		}
		return e
	})
	lik := newLikelihood(newMoments(l, s.columns.rows, s.columns.width), []int{placeA, placeC}, ML)
	f, ok := best(newSearch(lik, []group{{upTo(3), 1}}, true), startingShares(2), leastDistance)
	if !ok || !f.converged {
		t.Fatal("no maximum")
	}
	near(t, "-2 lnL with a sibling environment", -2*s.logLik(lik, f.deviance), 5952.793, 5e-4)
	p := lik.newPoint()
	lik.at(f.shares[:2], p)
	for at, name := range []string{"A", "S", "E"} {
		near(t, "sibling environment "+name, f.shares[at]*p.s2*s.columns.scale*s.columns.scale, siblings.number(t, name), 1e-6)
	}
}

// groupSample is a random-intercept model as a CE model: groups are families
// of siblings.
func groupSample(t *testing.T, group []string, y []float64, x *mat.Dense, names []string) *Sample {
	t.Helper()
	k := &tableKin{}
	number := map[string]int{}
	for _, g := range group {
		if _, ok := number[g]; !ok {
			number[g] = len(number)
		}
		k.add(number[g], 1<<20+2*number[g], 1<<20+2*number[g]+1, -1, false, false)
	}
	s, err := NewSample(k, everyone(len(y)), y, x, names)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Random intercepts by lme4 (testdata/mixed_models/make.R), whose variances
// carry about seven digits.
func TestRandomInterceptsAgainstLme4(t *testing.T) {
	want := map[string]record{}
	slope := map[string]record{}
	for _, r := range readTable(t, "mixed_models", "reference.csv") {
		key := r["data"] + " " + r["criterion"]
		if r["term"] == "days" {
			slope[key] = r
		} else {
			want[key] = r
		}
	}
	for _, data := range []string{"dyestuff", "dyestuff2", "sleepstudy"} {
		var group []string
		var y, days []float64
		for _, r := range readTable(t, "mixed_models", data+".csv") {
			group, y = append(group, r["batch"]), append(y, r.number(t, "y"))
			if _, ok := r["days"]; ok {
				days = append(days, r.number(t, "days"))
			}
		}
		var x *mat.Dense
		var names []string
		if days != nil {
			x, names = mat.NewDense(len(days), 1, days), []string{"days"}
		}
		s := groupSample(t, group, y, x, names)
		for _, criterion := range []Criterion{ML, REML} {
			key := data + " " + criterion.String()
			t.Run(key, func(t *testing.T) {
				fit, err := s.Fit(ModelCE, FitOptions{Criterion: criterion})
				if err != nil || !fit.Converged {
					t.Fatal(err, fit)
				}
				r := want[key]
				near(t, "group", fit.Components[0].Variance, r.number(t, "group"), 1e-6*fit.Total)
				near(t, "residual", fit.Components[1].Variance, r.number(t, "residual"), 1e-6*fit.Total)
				near(t, "-2 lnL", -2*fit.LogLik, r.number(t, "deviance"), 1e-8)
				near(t, "mean", fit.Fixed[0].Estimate, r.number(t, "estimate"), 1e-6)
				near(t, "se of the mean", fit.Fixed[0].SE, r.number(t, "se"), 1e-5)
				if len(fit.Fixed) > 1 {
					near(t, "slope", fit.Fixed[1].Estimate, slope[key].number(t, "estimate"), 1e-6)
					near(t, "se of the slope", fit.Fixed[1].SE, slope[key].number(t, "se"), 1e-6)
				}
				if zero := data == "dyestuff2"; fit.Components[0].AtBound != zero || (fit.Components[0].Share == 0) != zero {
					t.Errorf("share of the group %g, at bound %v", fit.Components[0].Share, fit.Components[0].AtBound)
				}
			})
		}
	}
	// Digits as known beside the data: Dyestuff 1388.3333 and 2451.25, -2 lnL
	// 327.3270599, ratio against no batch effect 5.402826 (p .0100 of the
	// mixture); REML 1764.05 and 319.6542768; Dyestuff2 0, 13.346099,
	// 162.8730368; sleepstudy 1296.8700, 954.5278, 1794.078643. They agree with
	// the table by eye; the ratio is checked here.
	var group []string
	var y []float64
	for _, r := range readTable(t, "mixed_models", "dyestuff.csv") {
		group, y = append(group, r["batch"]), append(y, r.number(t, "y"))
	}
	s := groupSample(t, group, y, nil, nil)
	test, err := s.Test(mustFit(t, s, ModelE), mustFit(t, s, ModelCE))
	if err != nil {
		t.Fatal(err)
	}
	near(t, "ratio", test.Ratio, 5.402826, 1e-6)
	near(t, "p", test.P, .0100, 1e-4)
}

// Lambs of unrelated sires: ML puts the variance of sires at 0, REML at the
// published 0.5171 beside 2.9616 (Harville & Fenech 1985, Biometrics 41:137;
// further digits by lme4, testdata/lambs/make.R, to about 1e-6).
func TestLambs(t *testing.T) {
	var sire []string
	var y []float64
	table := readTable(t, "lambs", "harville_lamb.csv")
	x := mat.NewDense(len(table), 6, nil)
	for i, r := range table {
		sire, y = append(sire, r["line"]+"/"+r["sire"]), append(y, r.number(t, "weight"))
		if line := int(r.number(t, "line")); line > 1 {
			x.Set(i, line-2, 1)
		}
		if age := int(r.number(t, "damage")); age > 1 {
			x.Set(i, 2+age, 1)
		}
	}
	s := groupSample(t, sire, y, x, []string{"line2", "line3", "line4", "line5", "age2", "age3"})
	if s.Families() != 23 {
		t.Fatalf("%d sires", s.Families())
	}
	for _, r := range readTable(t, "lambs", "reference.csv") {
		criterion := ML
		if r["criterion"] == "REML" {
			criterion = REML
		}
		fit, err := s.Fit(ModelCE, FitOptions{Criterion: criterion})
		if err != nil {
			t.Fatal(err)
		}
		near(t, r["criterion"]+" sire", fit.Components[0].Variance, r.number(t, "sire"), 2e-6)
		near(t, r["criterion"]+" residual", fit.Components[1].Variance, r.number(t, "residual"), 2e-6)
		near(t, r["criterion"]+" -2 lnL", -2*fit.LogLik, r.number(t, "deviance"), 1e-8)
		if criterion == REML {
			near(t, "published sire", fit.Components[0].Variance, .5171, 5e-5)
			near(t, "published residual", fit.Components[1].Variance, 2.9616, 5e-5)
		}
	}
}
