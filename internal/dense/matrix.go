package dense

import "gonum.org/v1/gonum/blas"

// block is a rectangle of a matrix.
type block struct{ row, column, rows, columns int }

// matrix is a matrix that is written to, or one triangle of it.
type matrix struct {
	rows, columns int
	data          []float64
	stride        int
	// only, unless 0, keeps to one triangle of a square, diagonal included.
	// This matrix is a part of the square that starts shift columns further to
	// the right of it than down.
	only  blas.Uplo
	shift int
}

// part returns a block of the matrix.
func (x matrix) part(b block) matrix {
	x.rows, x.columns = b.rows, b.columns
	x.data = x.data[b.row*x.stride+b.column:]
	x.shift += b.column - b.row
	return x
}

// span returns which columns of row i belong to the matrix: from, up to but
// without to.
func (x matrix) span(i int) (from, to int) {
	switch x.only {
	case blas.Upper:
		return min(max(0, i-x.shift), x.columns), x.columns
	case blas.Lower:
		return 0, min(max(0, i-x.shift+1), x.columns)
	}
	return 0, x.columns
}

// empty reports whether nothing of the rectangle belongs to the matrix.
func (x matrix) empty() bool {
	from, to := x.span(0)
	lastFrom, lastTo := x.span(x.rows - 1)
	return from >= to && lastFrom >= lastTo
}

// whole reports whether all of the rectangle belongs to the matrix.
func (x matrix) whole() bool {
	from, to := x.span(0)
	lastFrom, lastTo := x.span(x.rows - 1)
	return min(to-from, lastTo-lastFrom) == x.columns
}

// scale multiplies the matrix by a number; 0 overwrites whatever is there.
func (x matrix) scale(by float64) {
	if by == 1 {
		return
	}
	for i := range x.rows {
		from, to := x.span(i)
		row := x.data[i*x.stride:][from:to]
		if by == 0 {
			clear(row)
			continue
		}
		for j := range row {
			row[j] *= by
		}
	}
}

// copyTo copies from a matrix of equal shape what belongs to which.
func copyTo(dst, src, which matrix) {
	for i := range which.rows {
		from, to := which.span(i)
		copy(dst.data[i*dst.stride:][from:to], src.data[i*src.stride:][from:to])
	}
}
