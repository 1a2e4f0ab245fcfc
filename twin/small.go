package twin

import "math"

// Cross-products of [y X] are packed: the upper triangle row by row, y first,
// so that the X part is the packed triangle behind the first row.

// unpackTo fills the q x q symmetric dst with the X part of packed sums.
func unpackTo(dst, sums []float64, q int) {
	at := 1 + q
	for a := range q {
		for b := a; b < q; b++ {
			dst[a*q+b], dst[b*q+a] = sums[at], sums[at]
			at++
		}
	}
}

// crossResidual sets dst to X'(y - X beta) of packed sums.
func crossResidual(dst, sums, beta []float64) {
	q := len(beta)
	copy(dst, sums[1:1+q])
	at := 1 + q
	for a := range q {
		for b := a; b < q; b++ {
			dst[a] -= sums[at] * beta[b]
			if b != a {
				dst[b] -= sums[at] * beta[a]
			}
			at++
		}
	}
}

// quadratic returns (y - X beta)'(y - X beta) of packed sums.
func quadratic(sums, beta []float64) float64 {
	q := len(beta)
	t := sums[0]
	at := 1 + q
	for a := range q {
		row := -2 * sums[1+a]
		for b := a; b < q; b++ {
			if b == a {
				row += sums[at] * beta[a]
			} else {
				row += 2 * sums[at] * beta[b]
			}
			at++
		}
		t += beta[a] * row
	}
	return t
}

// cholesky replaces the lower triangle of the symmetric q x q matrix x by its
// Cholesky factor and reports whether x is positive definite.
func cholesky(x []float64, q int) bool {
	for j := range q {
		d := x[j*q+j]
		for t := range j {
			d -= x[j*q+t] * x[j*q+t]
		}
		if !(d > 0) {
			return false
		}
		d = math.Sqrt(d)
		x[j*q+j] = d
		for i := j + 1; i < q; i++ {
			t := x[i*q+j]
			for s := range j {
				t -= x[i*q+s] * x[j*q+s]
			}
			x[i*q+j] = t / d
		}
	}
	return true
}

// solve replaces b by the solution against the matrix whose factor is given.
func solve(factor, b []float64, q int) {
	for i := range q {
		for t := range i {
			b[i] -= factor[i*q+t] * b[t]
		}
		b[i] /= factor[i*q+i]
	}
	for i := q - 1; i >= 0; i-- {
		for t := i + 1; t < q; t++ {
			b[i] -= factor[t*q+i] * b[t]
		}
		b[i] /= factor[i*q+i]
	}
}

// solveMatrix sets dst, q x q, to the inverse of the factored matrix times the
// X part of packed sums.
func solveMatrix(dst, factor, sums []float64, q int) {
	column := make([]float64, q)
	unpackTo(dst, sums, q)
	for b := range q {
		for a := range q {
			column[a] = dst[a*q+b]
		}
		solve(factor, column, q)
		for a := range q {
			dst[a*q+b] = column[a]
		}
	}
}
