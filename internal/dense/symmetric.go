package dense

import "gonum.org/v1/gonum/blas"

const (
	// diagonalMost is the most rows of a block on the diagonal; half of such a
	// block is computed for nothing.
	diagonalMost = 64
	// diagonalUnit divides the heights and widths of all tiles.
	diagonalUnit = 48
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

	left := operand{a, lda, tA != blas.NoTrans}
	p := product{alpha: alpha, a: left, b: left.flipped(), k: k, beta: beta, c: matrix{n, n, c, ldc}}
	if alpha == 0 || k == 0 {
		for i := range n {
			p.c.part(inTriangle(ul, i, n)).scale(beta)
		}
		return
	}
	threads := im.workers(n * (n + 1) / 2 * k)
	diagonal, beside := coverTriangle(ul, n)
	var parts []block
	for _, b := range beside {
		if threads == 1 {
			parts = append(parts, b)
		} else {
			parts = append(parts, cut(b, threads, im.kernel)...)
		}
	}
	parts = append(parts, diagonal...)
	share(len(parts), threads, func(s *scratch, i int) {
		q := p.part(parts[i])
		if parts[i].row == parts[i].column {
			q.computeTriangle(ul, im.kernel, s)
		} else {
			q.compute(im.kernel, s)
		}
	})
}

// inTriangle is the part of row i of an n x n matrix that lies in a triangle.
func inTriangle(ul blas.Uplo, i, n int) block {
	if ul == blas.Upper {
		return block{i, i, 1, n - i}
	}
	return block{i, 0, 1, i + 1}
}

// coverTriangle divides a triangle, the diagonal included, into squares on the
// diagonal and rectangles beside it, large rectangles first.
func coverTriangle(ul blas.Uplo, n int) (diagonal, beside []block) {
	queue := []block{{0, 0, n, n}}
	for len(queue) > 0 {
		square := queue[0]
		queue = queue[1:]
		if square.rows <= diagonalMost {
			diagonal = append(diagonal, square)
			continue
		}
		at := square.row
		first := roundUp(square.rows/2, diagonalUnit)
		rest := square.rows - first
		if ul == blas.Upper {
			beside = append(beside, block{at, at + first, first, rest})
		} else {
			beside = append(beside, block{at + first, at, rest, first})
		}
		queue = append(queue, block{at, at, first, first}, block{at + first, at + first, rest, rest})
	}
	return diagonal, beside
}

// computeTriangle computes one triangle of a square product, by way of a full
// square: the other triangle of C belongs to the caller.
func (p product) computeTriangle(ul blas.Uplo, kn *kernel, s *scratch) {
	n := p.c.rows
	full := p
	full.c = matrix{n, n, grow(&s.square, n*n), n}
	clear(full.c.data)
	for i := range n {
		line := inTriangle(ul, i, n)
		copy(full.c.part(line).row(0), p.c.part(line).row(0))
	}
	full.compute(kn, s)
	for i := range n {
		line := inTriangle(ul, i, n)
		copy(p.c.part(line).row(0), full.c.part(line).row(0))
	}
}
