package dense

import (
	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

// Default returns the implementation of BLAS that this machine runs fastest.
// It is safe for use by several goroutines.
func Default() blas.Float64 { return gonum.Implementation{} }
