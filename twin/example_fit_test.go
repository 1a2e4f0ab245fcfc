package twin_test

import (
	"fmt"

	"kindwell/twin"
)

// twentyPairs of each zygosity with values of plus or minus one: MZ twins agree
// in 18 pairs and differ in 2, DZ twins agree in 16 and differ in 4, so that
// their correlations are 0.8 and 0.6.
func twentyPairs() ([]twin.Person, []float64) {
	var people []twin.Person
	var y []float64
	for pair := range 40 {
		zygosity, agree := twin.Monozygotic, 18
		if pair >= 20 {
			zygosity, agree = twin.Dizygotic, 16
		}
		first := float64(1 - 2*(pair%2))
		second := first
		if pair%20 >= agree {
			second = -first
		}
		set := fmt.Sprintf("set %d", pair)
		people = append(people,
			twin.Person{ID: fmt.Sprintf("%d a", pair), Family: set, TwinSet: set, Zygosity: zygosity, Sex: twin.Female},
			twin.Person{ID: fmt.Sprintf("%d b", pair), Family: set, TwinSet: set, Zygosity: zygosity, Sex: twin.Female})
		y = append(y, first, second)
	}
	return people, y
}

// With two kinds of pairs and equal variances a2 is 2 (0.8 - 0.6), c2 is
// 2 x 0.6 - 0.8, and e2 is 1 - 0.8 (Falconer).
func ExampleSample_Fit() {
	people, y := twentyPairs()
	pedigree, _, err := twin.NewPedigree(people, twin.Rules{})
	if err != nil {
		fmt.Println(err)
		return
	}
	rows := make([]int, len(people))
	for i := range rows {
		rows[i] = i
	}
	sample, err := twin.NewSample(pedigree, rows, y, nil, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	fit, err := sample.Fit(twin.ModelACE, twin.FitOptions{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, e := range fit.Components {
		fmt.Printf("%s %.3f\n", e.Component, e.Share)
	}
	interval, err := sample.Interval(fit, twin.ShareA, 0.95)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("a2 from %.2f to %.2f, low at its bound: %v\n", interval.Low, interval.High, interval.LowAtBound)
	// Output:
	// A 0.400
	// C 0.400
	// E 0.200
	// a2 from 0.00 to 0.88, low at its bound: true
}

// The signed root of the ratio of CE against ACE, N (ln(1 - 0.7^2) -
// ln(1 - 0.8^2)/2 - ln(1 - 0.6^2)/2) = 40 x 0.0606 with N = 40 pairs.
func ExampleSample_Test() {
	people, y := twentyPairs()
	pedigree, _, err := twin.NewPedigree(people, twin.Rules{})
	if err != nil {
		fmt.Println(err)
		return
	}
	rows := make([]int, len(people))
	for i := range rows {
		rows[i] = i
	}
	sample, err := twin.NewSample(pedigree, rows, y, nil, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	var fits [2]*twin.Fit
	for i, model := range []twin.Model{twin.ModelCE, twin.ModelACE} {
		if fits[i], err = sample.Fit(model, twin.FitOptions{}); err != nil {
			fmt.Println(err)
			return
		}
	}
	test, err := sample.Test(fits[0], fits[1])
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s %.3f, p %.3f\n", test.Method, test.Statistic, test.P)
	// Output: signed_root 1.557, p 0.060
}

func ExampleSample_Correlation() {
	people, y := twentyPairs()
	pedigree, _, err := twin.NewPedigree(people, twin.Rules{})
	if err != nil {
		fmt.Println(err)
		return
	}
	rows := make([]int, len(people))
	for i := range rows {
		rows[i] = i
	}
	sample, err := twin.NewSample(pedigree, rows, y, nil, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, relation := range []twin.Relation{twin.MZ, twin.DZSameSex} {
		c, err := sample.Correlation(relation, twin.CorrelationOptions{Confidence: 0.95})
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Printf("%s %.2f (%d pairs)\n", c.Relation, c.Value, c.Pairs)
	}
	// Output:
	// mz 0.80 (20 pairs)
	// dz_same_sex 0.60 (20 pairs)
}

func ExampleMixture_Critical() {
	// E against ACE with equally many MZ and DZ pairs.
	weights := twin.Mixture{0.448792, 0.5, 0.051208}
	fmt.Printf("%.3f\n", weights.Critical(0.05))
	// Output: 3.101
}
