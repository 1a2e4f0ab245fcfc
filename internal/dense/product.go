package dense

import (
	"math"

	"gonum.org/v1/gonum/blas"
)

// operand is a matrix as a factor of a product, transposed or not.
type operand struct {
	data       []float64
	stride     int
	transposed bool
}

// from returns the operand without its first rows and columns.
func (o operand) from(row, column int) operand {
	if o.transposed {
		row, column = column, row
	}
	o.data = o.data[row*o.stride+column:]
	return o
}

// steps returns how far apart in memory neighbours in a column and in a row are.
func (o operand) steps() (down, along int) {
	if o.transposed {
		return 1, o.stride
	}
	return o.stride, 1
}

// flipped returns the operand transposed.
func (o operand) flipped() operand {
	o.transposed = !o.transposed
	return o
}

// product is C = alpha*A*B + beta*C with sums of k terms.
type product struct {
	alpha float64
	a, b  operand
	k     int
	beta  float64
	c     matrix
}

// part returns the product that computes one block of C.
func (p product) part(b block) product {
	p.a, p.b, p.c = p.a.from(b.row, 0), p.b.from(0, b.column), p.c.part(b)
	return p
}

// Dgemm computes
//
//	C = alpha * op(A) * op(B) + beta * C
//
// with arguments and panics as in gonum, and sums as in the package comment.
func (im implementation) Dgemm(tA, tB blas.Transpose, m, n, k int, alpha float64, a []float64, lda int, b []float64, ldb int, beta float64, c []float64, ldc int) {
	checkTranspose(tA)
	checkTranspose(tB)
	checkCount("m", m)
	checkCount("n", n)
	checkCount("k", k)
	aRows, aColumns := stored(tA, m, k)
	bRows, bColumns := stored(tB, k, n)
	checkStride("A", lda, aColumns)
	checkStride("B", ldb, bColumns)
	checkStride("C", ldc, n)
	if m == 0 || n == 0 {
		return
	}
	checkLength("a", a, aRows, aColumns, lda)
	checkLength("b", b, bRows, bColumns, ldb)
	checkLength("c", c, m, n, ldc)

	to := matrix{rows: m, columns: n, data: c, stride: ldc}
	if alpha == 0 || k == 0 {
		to.scale(beta)
		return
	}
	p := product{
		alpha: alpha, a: operand{a, lda, tA != blas.NoTrans}, b: operand{b, ldb, tB != blas.NoTrans},
		k: k, beta: beta, c: to,
	}
	im.run(p, m*n*k, func(threads int) []block { return cut(block{0, 0, m, n}, threads, im.kernel) })
}

// run computes a product of so many multiply-adds: number by number, on this
// goroutine, or on several that take part after part of what divide makes of C.
func (im implementation) run(p product, work int, divide func(threads int) []block) {
	if work <= im.smallWork {
		p.computeSmall()
		return
	}
	threads := im.workers(work)
	if threads == 1 {
		s := borrow()
		p.compute(im.kernel, s)
		s.giveBack()
		return
	}
	p.computeParts(divide(threads), threads, im.kernel)
}

// computeParts is apart from run lest small products pay for its closure.
func (p product) computeParts(parts []block, threads int, kn *kernel) {
	share(parts, threads, func(s *scratch, b block) { p.part(b).compute(kn, s) })
}

// computeSmall computes the product number by number, without packing.
func (p product) computeSmall() {
	p.c.scale(p.beta)
	aDown, aAlong := p.a.steps()
	bDown, bAlong := p.b.steps()
	for i := range p.c.rows {
		from, to := p.c.span(i)
		row := p.c.data[i*p.c.stride:]
		for j := from; j < to; j++ {
			for l := 0; l < p.k; {
				sum := 0.0
				for end := min(l+blockDepth, p.k); l < end; l++ {
					sum = math.FMA(p.alpha*p.a.data[i*aDown+l*aAlong], p.b.data[l*bDown+j*bAlong], sum)
				}
				row[j] += sum
			}
		}
	}
}

// compute computes the product on the calling goroutine.
func (p product) compute(kn *kernel, s *scratch) {
	p.c.scale(p.beta)
	m, n := p.c.rows, p.c.columns
	rowsAtOnce := roundUp(min(m, blockRows), kn.height())
	asIs := inPlace(p.b, m, kn.height())
	for j := 0; j < n; j += blockColumns {
		columns := min(blockColumns, n-j)
		for l := 0; l < p.k; l += blockDepth {
			depth := min(blockDepth, p.k-l)
			right := s.packColumns(p.b.from(l, j), depth, columns, kn.width, asIs)
			for i := 0; i < m; i += rowsAtOnce {
				rows := min(rowsAtOnce, m-i)
				c := p.c.part(block{i, j, rows, columns})
				if c.empty() {
					continue
				}
				left := s.packRows(p.a.from(i, l), depth, rows, kn.height(), p.alpha)
				kn.addTiles(c, left, right, s)
			}
		}
	}
}

// addTiles adds the product of packed rows and columns to C, strip by strip:
// a strip of columns stays in the first cache for all rows.
func (kn *kernel) addTiles(c matrix, left panels, right strips, s *scratch) {
	for strip := range right.count() {
		b, bStride := right.at(strip)
		column := strip * kn.width
		width := min(kn.width, c.columns-column)
		row := 0
		for panel := range left.count {
			height := left.height(panel)
			a := &left.data[row*left.depth]
			to := c.part(block{row, column, height, width})
			row += height
			switch {
			case to.empty():
			case to.whole() && width == kn.width:
				kn.tiles[height-1](left.depth, a, b, bStride, &to.data[0], to.stride)
			default: // a tile that sticks out of C is computed beside it
				beside := matrix{rows: height, columns: width, data: s.edge[:], stride: kn.width}
				copyTo(beside, to, to)
				kn.tiles[height-1](left.depth, a, b, bStride, &s.edge[0], kn.width)
				copyTo(to, beside, to)
			}
		}
	}
}

func ceilDiv(a, b int) int { return (a + b - 1) / b }

func roundUp(a, unit int) int { return ceilDiv(a, unit) * unit }
