package predict

import (
	"math"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
)

const (
	// sameError is the relative difference of mean squared errors within which
	// two penalties are as good; the larger one is then taken.
	sameError = 1e-12
	// nothingLeft is the share of a column's mean square, over all people, that
	// its residuals in a training set must keep to be told from rounding.
	nothingLeft = 1e-12
)

// searchPenalty sets choice and mse of every column for the fold at place i of
// the stage.
func (b *block) searchPenalty(i int, f *fold) {
	if !b.search {
		for c := range b.width {
			b.out.choice[c], b.out.mse[c] = 0, math.NaN()
		}
		return
	}
	clear(b.errors.Data)
	for s := range f.inner {
		in := &f.inner[s]
		if b.d.rows {
			b.pairOfRows(in.split.held, in.split.train)
		} else {
			b.innerSums(i, in, s == len(f.inner)-1)
		}
		b.addErrors(in)
	}
	b.choose(b.inside.Data[i*b.inside.Stride:][:b.width], len(f.inner))
}

// pairOfRows puts the traits of the held-out, then of the training people
// into pair.
func (b *block) pairOfRows(held, train []int) {
	b.pair = reshaped(b.pair, len(held)+len(train), b.width)
	gatherTo(rowsOf(b.pair, 0, len(held)), b.y, held)
	gatherTo(rowsOf(b.pair, len(held), b.pair.Rows), b.y, train)
}

// innerSums puts the cross-products of an inner fold's people, then of its
// training people, into pair.
func (b *block) innerSums(i int, in *innerFold, last bool) {
	m := b.train.Rows
	b.pair = reshaped(b.pair, 2*m, b.width)
	held, train := rowsOf(b.pair, 0, m).Data[:m*b.width], rowsOf(b.pair, m, 2*m).Data
	switch {
	case b.l.cells != nil:
		whole := b.byCell[in.cell].Data
		if at := b.cells[i].at[in.cell]; at >= 0 {
			floats.SubTo(held, whole, b.cells[i].sums[at].Data)
		} else {
			copy(held, whole)
		}
	case last:
		copy(held, b.left.Data)
	default:
		b.gathered = reshaped(b.gathered, len(in.split.held), b.width)
		gatherTo(b.gathered, b.y, in.split.held)
		multiplyTo(rowsOf(b.pair, 0, m), 1, turned, in.x, plain, b.gathered, 0)
		floats.Sub(b.left.Data, held)
	}
	floats.SubTo(train, b.train.Data, held)
}

// addErrors adds the mean squared errors of one inner fold, without the mean
// squares of y, to errors.
func (b *block) addErrors(in *innerFold) {
	r, k, held := in.r, in.k, b.pair.Rows-in.z.Cols
	b.z, b.v = reshaped(b.z, r+k, b.width), reshaped(b.v, r+k, b.width)
	b.terms = reshaped(b.terms, 2*r+k, b.width)
	multiplyTo(b.z, 1, plain, in.z, plain, rowsOf(b.pair, held, b.pair.Rows), 0)
	multiplyTo(b.v, 1, plain, in.v, plain, b.pair, 0)

	first := b.terms.Data[:(r+k)*b.width]
	timesTo(first, b.z.Data, b.v.Data)
	second := b.terms.Data[(r+k)*b.width:]
	if in.u.Rows == 0 && len(in.pairs) == 0 {
		for j, h := range in.diag {
			squaresTo(second[j*b.width:][:b.width], row(b.z, j), h)
		}
	} else {
		timesTo(second, b.z.Data[:r*b.width], b.closeTerms(in).Data)
	}
	multiplyTo(b.errors, 1, plain, in.sum, plain, b.terms, 1)
}

// closeTerms returns u = H_ii z_i + the sum over close pairs of H_ij z_j.
func (b *block) closeTerms(in *innerFold) blas64.General {
	b.u = reshaped(b.u, in.r, b.width)
	z := rowsOf(b.z, 0, in.r)
	if in.u.Rows > 0 {
		multiplyTo(b.u, 1, plain, in.u, plain, z, 0)
		return b.u
	}
	for j, h := range in.diag {
		floats.ScaleTo(row(b.u, j), h, row(z, j))
	}
	for _, c := range in.pairs {
		floats.AddScaled(row(b.u, c.i), c.h, row(z, c.j))
		floats.AddScaled(row(b.u, c.j), c.h, row(z, c.i))
	}
	return b.u
}

// choose takes for each column the largest penalty whose error is within
// sameError of the least; for a constant column, predicted by 0 whatever the
// penalty, the largest of all. The constant, the mean squares of y, does not enter
// the comparison, where it would only eat digits, but what sameError is
// relative to.
func (b *block) choose(constant []float64, folds int) {
	last := b.errors.Rows - 1
	copy(b.least, row(b.errors, 0))
	for l := 1; l <= last; l++ {
		for c, e := range row(b.errors, l) {
			if e < b.least[c] {
				b.least[c] = e
			}
		}
	}
	for c, least := range b.least {
		within := least + sameError*max(0, constant[c]+least)
		l := last
		for l > 0 && !b.out.constant[c] && !(b.errors.Data[l*b.width+c] <= within) {
			l--
		}
		b.out.choice[c] = l
		b.out.mse[c] = (constant[c] + b.errors.Data[l*b.width+c]) / float64(folds)
	}
}

// fit computes, for the fold at place i of the stage, what does not depend on
// the penalty: the directions z, the coefficients on the basis and which
// columns are constant in training.
func (b *block) fit(i int, f *fold) {
	fit := f.fit
	b.whole = reshaped(b.whole, fit.r+fit.k, b.width)
	if b.d.rows {
		b.pairOfRows(f.split.held, f.split.train)
		multiplyTo(b.whole, 1, plain, fit.z, plain, rowsOf(b.pair, len(f.split.held), b.pair.Rows), 0)
	} else {
		floats.SubTo(b.train.Data, b.everyone.Data, b.held[i].Data)
		copy(b.left.Data, b.train.Data)
		multiplyTo(b.whole, 1, plain, fit.z, plain, b.train, 0)
	}
	b.out.c = rowsOf(b.whole, fit.r, fit.r+fit.k)
	clear(b.out.sum)
	clear(b.out.square)
	for r := f.from; r < f.to; r++ {
		floats.Add(b.out.sum, row(b.y, r))
		floats.Add(b.out.square, row(b.squared, r))
	}
	b.findConstant(f)
}

// findConstant marks the columns of which the confounds leave nothing in the
// training set.
func (b *block) findConstant(f *fold) {
	k := f.fit.k
	share := nothingLeft * float64(len(f.split.train)) / float64(b.y.Rows)
	for c := range b.width {
		left := b.total[c] - b.out.square[c]
		for i := range k {
			for j := range k {
				left -= b.out.c.Data[i*b.width+c] * b.out.c.Data[j*b.width+c] * f.fit.within.Data[i*k+j]
			}
		}
		b.out.constant[c] = left <= share*b.total[c]
	}
}

// weigh sets the weights of the directions at the penalties chosen.
func (b *block) weigh(f *fold) {
	penalties := len(b.d.opt.Penalties)
	b.out.b = reshaped(b.out.b, f.fit.r, b.width)
	for j := range f.fit.r {
		g := f.fit.shrink[j*penalties:][:penalties]
		z, to := row(b.whole, j), row(b.out.b, j)
		for c := range to {
			to[c] = z[c] * g[b.out.choice[c]]
			if b.out.constant[c] {
				to[c] = 0
			}
		}
	}
}

// reshaped returns a, which has room for it, with another shape.
func reshaped(a blas64.General, rows, cols int) blas64.General {
	return blas64.General{Rows: rows, Cols: cols, Stride: cols, Data: a.Data[:rows*cols]}
}

func timesTo(dst, a, b []float64) {
	a, b = a[:len(dst)], b[:len(dst)]
	for i := range dst {
		dst[i] = a[i] * b[i]
	}
}

func squaresTo(dst, a []float64, factor float64) {
	a = a[:len(dst)]
	for i := range dst {
		dst[i] = a[i] * a[i] * factor
	}
}
