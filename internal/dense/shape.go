package dense

import "gonum.org/v1/gonum/blas"

// Arguments are checked as gonum checks them, in the same order and with the
// same texts, so that a caller cannot tell who refused.

func checkTranspose(t blas.Transpose) {
	if t != blas.NoTrans && t != blas.Trans && t != blas.ConjTrans {
		panic("blas: illegal transpose")
	}
}

func checkUplo(u blas.Uplo) {
	if u != blas.Upper && u != blas.Lower {
		panic("blas: illegal triangle")
	}
}

func checkCount(name string, n int) {
	if n < 0 {
		panic("blas: " + name + " < 0")
	}
}

func checkStride(name string, stride, columns int) {
	if stride < max(1, columns) {
		panic("blas: bad leading dimension of " + name)
	}
}

func checkLength(name string, data []float64, rows, columns, stride int) {
	if len(data) < (rows-1)*stride+columns {
		panic("blas: insufficient length of " + name)
	}
}

// stored returns the shape in memory of a matrix whose operand is rows x columns.
func stored(t blas.Transpose, rows, columns int) (int, int) {
	if t == blas.NoTrans {
		return rows, columns
	}
	return columns, rows
}
