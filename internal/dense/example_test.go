package dense_test

import (
	"fmt"

	"gonum.org/v1/gonum/blas"

	"kindwell/internal/dense"
)

func ExampleDefault() {
	a := []float64{
		1, 2,
		3, 4,
	}
	b := []float64{
		1, 0, 2,
		0, 1, 3,
	}
	c := make([]float64, 6)
	dense.Default().Dgemm(blas.NoTrans, blas.NoTrans, 2, 3, 2, 1, a, 2, b, 3, 0, c, 3)
	fmt.Println(c[:3])
	fmt.Println(c[3:])
	// Output:
	// [1 2 8]
	// [3 4 18]
}
