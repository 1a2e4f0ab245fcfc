package predict

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/mat"

	"kindwell/internal/dense"
)

// newTable returns a zero matrix, row by row without gaps.
func newTable(rows, cols int) blas64.General {
	return blas64.General{Rows: rows, Cols: cols, Stride: cols, Data: make([]float64, rows*cols)}
}

// rowsOf returns rows from..to-1 of a without copying.
func rowsOf(a blas64.General, from, to int) blas64.General {
	a.Rows = to - from
	a.Data = a.Data[from*a.Stride:]
	return a
}

// columnsOf returns columns from..to-1 of a without copying.
func columnsOf(a blas64.General, from, to int) blas64.General {
	a.Cols = to - from
	if a.Rows > 0 && a.Cols > 0 {
		a.Data = a.Data[from:]
	}
	return a
}

// row returns row i of a.
func row(a blas64.General, i int) []float64 {
	return a.Data[i*a.Stride : i*a.Stride+a.Cols]
}

// gatherTo copies the named rows of a into dst, in their order.
func gatherTo(dst, a blas64.General, rows []int) {
	for i, r := range rows {
		copy(row(dst, i), row(a, r))
	}
}

const (
	plain  = blas.NoTrans
	turned = blas.Trans
)

// multiplyTo sets dst = alpha op(a) op(b) + beta dst.
func multiplyTo(dst blas64.General, alpha float64, ta blas.Transpose, a blas64.General, tb blas.Transpose, b blas64.General, beta float64) {
	inner := a.Cols
	if ta == turned {
		inner = a.Rows
	}
	if dst.Rows == 0 || dst.Cols == 0 {
		return
	}
	if inner == 0 || alpha == 0 {
		if beta != 1 {
			for i := range dst.Rows {
				for j := range row(dst, i) {
					dst.Data[i*dst.Stride+j] *= beta
				}
			}
		}
		return
	}
	dense.Single().Dgemm(ta, tb, dst.Rows, dst.Cols, inner, alpha, a.Data, a.Stride, b.Data, b.Stride, beta, dst.Data, dst.Stride)
}

// product returns op(a) op(b).
func product(ta blas.Transpose, a blas64.General, tb blas.Transpose, b blas64.General) blas64.General {
	rows, cols := a.Rows, b.Cols
	if ta == turned {
		rows = a.Cols
	}
	if tb == turned {
		cols = b.Rows
	}
	dst := newTable(rows, cols)
	multiplyTo(dst, 1, ta, a, tb, b, 0)
	return dst
}

// scaleColumn multiplies column j of a by factor.
func scaleColumn(a blas64.General, j int, factor float64) {
	for i := range a.Rows {
		a.Data[i*a.Stride+j] *= factor
	}
}

// checkFinite refuses a matrix with a value that is no number, by its place.
// NaN passes when missing is true.
func checkFinite(what string, a *mat.Dense, missing bool) error {
	rows, cols := a.Dims()
	for i := range rows {
		for j := range cols {
			v := a.At(i, j)
			if math.IsInf(v, 0) || (math.IsNaN(v) && !missing) {
				return fmt.Errorf("predict: %s %d of person %d is %v", what, j, i, v)
			}
		}
	}
	return nil
}
