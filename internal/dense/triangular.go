package dense

import "gonum.org/v1/gonum/blas"

const (
	// triangleMost is up to which size gonum solves a triangular system itself.
	triangleMost = 12
	// triangleUnit divides larger triangles at whole tiles.
	triangleUnit = 12
	// turnedMost is how many systems of the right side are transposed at a
	// time: whole tiles, and no power of two, which would crowd the cache.
	turnedMost = 240
)

// triangle is a triangular matrix as the coefficient of a system.
type triangle struct {
	size   int
	data   []float64
	stride int
	uplo   blas.Uplo
	trans  blas.Transpose
	diag   blas.Diag
}

// lower reports whether the matrix is lower triangular once it is transposed
// as asked.
func (t triangle) lower() bool { return (t.uplo == blas.Lower) == (t.trans == blas.NoTrans) }

// transposed returns the triangle whose coefficients are those of t transposed.
func (t triangle) transposed() triangle {
	if t.trans == blas.NoTrans {
		t.trans = blas.Trans
	} else {
		t.trans = blas.NoTrans
	}
	return t
}

// halves returns the two triangles on the diagonal and the square beside them,
// as a factor.
func (t triangle) halves() (first, second triangle, beside operand) {
	n := roundUp(t.size/2, triangleUnit)
	first, second = t, t
	first.size, second.size = n, t.size-n
	second.data = t.data[n*t.stride+n:]
	beside = operand{t.data[n:], t.stride, t.trans != blas.NoTrans}
	if t.uplo == blas.Lower {
		beside.data = t.data[n*t.stride:]
	}
	return first, second, beside
}

// Dtrsm solves
//
//	op(A) * X = alpha * B   or   X * op(A) = alpha * B
//
// for X, which replaces B, with arguments and panics as in gonum.
func (im implementation) Dtrsm(side blas.Side, ul blas.Uplo, tA blas.Transpose, d blas.Diag, m, n int, alpha float64, a []float64, lda int, b []float64, ldb int) {
	if side != blas.Left && side != blas.Right {
		panic("blas: illegal side")
	}
	checkUplo(ul)
	checkTranspose(tA)
	if d != blas.NonUnit && d != blas.Unit {
		panic("blas: illegal diagonal")
	}
	checkCount("m", m)
	checkCount("n", n)
	size, systems := m, n
	if side == blas.Right {
		size, systems = n, m
	}
	checkStride("A", lda, size)
	checkStride("B", ldb, n)
	if m == 0 || n == 0 {
		return
	}
	checkLength("a", a, size, size, lda)
	checkLength("b", b, m, n, ldb)
	if alpha == 0 {
		matrix{rows: m, columns: n, data: b, stride: ldb}.scale(0)
		return
	}

	t, x := triangle{size, a, lda, ul, tA, d}, matrix{rows: m, columns: n, data: b, stride: ldb}
	threads := im.workers(m * n * size / 2)
	each := roundUp(ceilDiv(systems, threads), im.kernel.width)
	solve := im.solve
	if side == blas.Right {
		each = min(each, turnedMost)
		solve = im.solveTurned
	}
	var parts []block
	for first := 0; first < systems; first += each {
		count := min(each, systems-first)
		if side == blas.Left {
			parts = append(parts, block{0, first, m, count})
		} else {
			parts = append(parts, block{first, 0, count, n})
		}
	}
	share(parts, threads, func(s *scratch, b block) { solve(t, alpha, x.part(b), s) })
}

// solveTurned solves X * t = alpha * B as the transposed system on the left.
func (im implementation) solveTurned(t triangle, alpha float64, x matrix, s *scratch) {
	turned := matrix{rows: x.columns, columns: x.rows, data: grow(&s.turned, x.rows*x.columns), stride: x.rows}
	packAlong(turned.data, x.data, x.stride, turned.rows, turned.columns, turned.columns)
	im.solve(t.transposed(), alpha, turned, s)
	unpackAlong(x.data, turned.data, x.stride, turned.rows, turned.columns)
}

// solve solves t * X = alpha * B, where x holds B and then X. The half of
// the unknowns that stands alone in its equations is solved for first and put
// into the equations of the other.
func (im implementation) solve(t triangle, alpha float64, x matrix, s *scratch) {
	if t.size <= triangleMost {
		im.Implementation.Dtrsm(blas.Left, t.uplo, t.trans, t.diag, x.rows, x.columns, alpha, t.data, t.stride, x.data, x.stride)
		return
	}
	first, second, beside := t.halves()
	known := x.part(block{0, 0, first.size, x.columns})
	other := x.part(block{first.size, 0, second.size, x.columns})
	if !t.lower() {
		first, second = second, first
		known, other = other, known
	}
	im.solve(first, alpha, known, s)
	product{
		alpha: -1, a: beside, b: operand{known.data, known.stride, false},
		k: known.rows, beta: alpha, c: other,
	}.compute(im.kernel, s)
	im.solve(second, 1, other, s)
}
