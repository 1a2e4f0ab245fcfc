package features_test

import (
	"fmt"

	"gonum.org/v1/gonum/mat"

	"kindwell/features"
)

func ExampleLogColumn() {
	logs, faults := features.LogColumn([]float64{1, 0, 10})
	fmt.Printf("%.4f\n", logs)
	for _, f := range faults {
		fmt.Println(f)
	}
	// Output:
	// [0.0000 NaN 2.3026]
	// features: row 1, column 0: 0: log needs a value above 0
}

func ExampleCLR() {
	occupancy := mat.NewDense(2, 3, []float64{
		.2, .3, .5,
		0, .5, .5,
	})
	logRatios, replaced, _ := features.CLR(occupancy, .0005)
	fmt.Printf("%.4f\n", mat.Formatted(logRatios))
	fmt.Println("zeros replaced:", replaced)
	// Output:
	// ⎡-0.4406  -0.0351   0.4757⎤
	// ⎣-4.6048   2.3024   2.3024⎦
	// zeros replaced: 1
}

func ExampleFitRankNormal() {
	training := []float64{1, 2, 4, 8, 100}
	scores, err := features.FitRankNormal(training)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.3f\n", scores.Apply([]float64{0, 4, 6, 1000}))
	// Output:
	// [-1.180 0.000 0.249 1.180]
}

func ExampleMeanBy() {
	person := []int{0, 0, 1, 1}
	dwellSeconds := []float64{2, 4, 3, 5}
	fmt.Println(features.MeanBy(person, 2, dwellSeconds))
	// Output:
	// [3 4]
}
