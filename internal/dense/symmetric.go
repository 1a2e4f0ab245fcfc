package dense

import "gonum.org/v1/gonum/blas"

const (
	// squareMost is the most rows of a square on the diagonal that one thread
	// computes.
	squareMost = 192
	// squareUnit divides the heights and widths of all tiles.
	squareUnit = 48
)

// Dsyrk computes one triangle of
//
//	C = alpha * A * Aᵀ + beta * C   or   C = alpha * Aᵀ * A + beta * C
//
// with arguments and panics as in gonum. Its elements have the bits that Dgemm
// gives them.
func (im implementation) Dsyrk(ul blas.Uplo, tA blas.Transpose, n, k int, alpha float64, a []float64, lda int, beta float64, c []float64, ldc int) {
	checkUplo(ul)
	checkTranspose(tA)
	checkCount("n", n)
	checkCount("k", k)
	rows, columns := stored(tA, n, k)
	checkStride("A", lda, columns)
	checkStride("C", ldc, n)
	if n == 0 {
		return
	}
	checkLength("a", a, rows, columns, lda)
	checkLength("c", c, n, n, ldc)

	triangle := matrix{rows: n, columns: n, data: c, stride: ldc, only: ul}
	if alpha == 0 || k == 0 {
		triangle.scale(beta)
		return
	}
	left := operand{a, lda, tA != blas.NoTrans}
	p := product{alpha: alpha, a: left, b: left.flipped(), k: k, beta: beta, c: triangle}
	im.run(p, n*(n+1)/2*k, func(threads int) []block { return cutTriangle(ul, n, threads, im.kernel) })
}

// cutTriangle divides a triangle over so many threads: into squares on the
// diagonal and parts of the rectangles beside them, large ones first.
func cutTriangle(ul blas.Uplo, n, threads int, kn *kernel) []block {
	var parts, diagonal []block
	queue := []block{{0, 0, n, n}}
	for len(queue) > 0 {
		square := queue[0]
		queue = queue[1:]
		if square.rows <= squareMost {
			diagonal = append(diagonal, square)
			continue
		}
		at := square.row
		first := roundUp(square.rows/2, squareUnit)
		rest := square.rows - first
		beside := block{at, at + first, first, rest}
		if ul == blas.Lower {
			beside = block{at + first, at, rest, first}
		}
		parts = append(parts, cut(beside, threads, kn)...)
		queue = append(queue, block{at, at, first, first}, block{at + first, at + first, rest, rest})
	}
	return append(parts, diagonal...)
}
