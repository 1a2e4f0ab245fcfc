package predict_test

import (
	"context"
	"fmt"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
	"kindwell/predict"
)

// One measure, -1 and 1 in turn, and a trait of 10 less or more 2. With X'X = 4
// and X'y = 8 the weight at penalty 4 is 8 / (4 + 4).
func ExampleRidge() {
	measures := mat.NewDense(4, 1, []float64{-1, 1, -1, 1})
	trait := mat.NewDense(4, 1, []float64{8, 12, 8, 12})
	ridge, err := predict.NewRidge(measures)
	if err != nil {
		fmt.Println(err)
		return
	}
	fit, err := ridge.Fit(trait, 4)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println("weight", fit.Weights.At(0, 0), "intercept", fit.Intercepts[0])
	fmt.Println("degrees of freedom", fit.DegreesOfFreedom)
	// Output:
	// weight 1 intercept 10
	// degrees of freedom 0.5
}

// people invents twenty people in ten families of two: a measure, an age, and
// a trait that is twice the measure and half the age, with something of its own.
func people() (measures, ages, trait *mat.Dense, families []int) {
	measures, ages, trait = mat.NewDense(20, 1, nil), mat.NewDense(20, 1, nil), mat.NewDense(20, 1, nil)
	for i := range 20 {
		measure, age, own := float64(i*7%20), float64(20+i*i%11), float64(i*i%7-3)*2
		measures.Set(i, 0, measure)
		ages.Set(i, 0, age)
		trait.Set(i, 0, 2*measure+age/2+own)
		families = append(families, i/2)
	}
	return measures, ages, trait, families
}

func ExampleDesign_Fit() {
	measures, ages, trait, families := people()
	folds, err := crossval.BalancedFolds(families, crossval.FoldOptions{Outer: 2, Inner: 2, Repeats: 1, Seed: 1})
	if err != nil {
		fmt.Println(err)
		return
	}
	design, err := predict.NewDesign(measures, ages, folds, predict.Options{Penalties: []float64{0.01, 1, 100}})
	if err != nil {
		fmt.Println(err)
		return
	}
	fit, err := design.Fit(context.Background(), trait)
	if err != nil {
		fmt.Println(err)
		return
	}
	first := fit.Repeats[0]
	fmt.Println("penalty", first.Choices[0][0].Penalty, first.Choices[0][0].End)
	for _, score := range fit.Scores[0][:2] {
		fmt.Printf("%v %.2f\n", score.Metric, score.Value)
	}
	// Output:
	// penalty 0.01 low
	// r_by_fold 0.94
	// r 0.95
}

// every arrangement of an Arrangements turns the people by one place more.
type turns int

func (t turns) Len() int { return int(t) }

func (t turns) At(i int, dst []int) {
	for place := range dst {
		dst[place] = (place + i + 1) % len(dst)
	}
}

func ExampleDesign_Null() {
	measures, ages, trait, families := people()
	folds, err := crossval.BalancedFolds(families, crossval.FoldOptions{Outer: 2, Inner: 2, Repeats: 1, Seed: 1})
	if err != nil {
		fmt.Println(err)
		return
	}
	design, err := predict.NewDesign(measures, ages, folds, predict.Options{Penalties: []float64{0.01, 1, 100}, Metric: predict.R2})
	if err != nil {
		fmt.Println(err)
		return
	}
	residuals, err := predict.Residuals(trait, ages)
	if err != nil {
		fmt.Println(err)
		return
	}
	null, err := design.Null(context.Background(), residuals, turns(9), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	fit, err := design.Fit(context.Background(), trait)
	if err != nil {
		fmt.Println(err)
		return
	}
	observed := fit.Scores[0][3]
	fmt.Printf("%v %.2f, p = %v\n", observed.Metric, observed.Value, crossval.PValue(observed.Value, null[0], crossval.Upper))
	// Output:
	// r2 0.90, p = 0.1
}

// The first trait is 3 plus twice the confound: nothing is left of it.
func ExampleResiduals() {
	confounds := mat.NewDense(4, 1, []float64{1, 2, 3, 4})
	traits := mat.NewDense(4, 2, []float64{
		5, 2,
		7, 1,
		9, 4,
		11, 3,
	})
	residuals, err := predict.Residuals(traits, confounds)
	if err != nil {
		fmt.Println(err)
		return
	}
	shares, err := predict.ExplainedShare(traits, confounds)
	if err != nil {
		fmt.Println(err)
		return
	}
	for i := range 4 {
		fmt.Printf("%.1f\n", residuals.RawRowView(i))
	}
	fmt.Printf("explained %.2f\n", shares)
	// Output:
	// [0.0 0.4]
	// [0.0 -1.2]
	// [0.0 1.2]
	// [0.0 -0.4]
	// explained [1.00 0.36]
}
