package predict

import (
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
)

// moments are, for every column of a block and one outer fold or all folds of
// a repeat together, the sums that correlations and squared errors need: t is
// the target, p the prediction.
type moments struct {
	n                []float64
	t, tt, p, pp, tp []float64
}

func newMoments(columns int) moments {
	v := make([]float64, 6*columns)
	part := func(i int) []float64 { return v[i*columns:][:columns:columns] }
	return moments{part(0), part(1), part(2), part(3), part(4), part(5)}
}

// add adds the columns of m to those of the receiver from place first on.
func (to moments) add(m moments, first int) {
	width := len(m.n)
	for _, pair := range [][2][]float64{{to.n, m.n}, {to.t, m.t}, {to.tt, m.tt}, {to.p, m.p}, {to.pp, m.pp}, {to.tp, m.tp}} {
		floats.Add(pair[0][first:][:width], pair[1])
	}
}

// sumsOf returns the moments of the fold from sums alone, without a
// prediction of any person: with b the weights of the directions,
// sum pp = b'Hb, sum tp = b'w, and t'y and C'y give the sums of t.
func (b *block) sumsOf(i int, f *fold) moments {
	fit, width := f.fit, b.width
	b.v = reshaped(b.v, fit.r+fit.k, width)
	held, train := blas64.General{}, b.train
	if b.d.rows {
		b.pairOfRows(f.split.held, f.split.train)
		held, train = rowsOf(b.pair, 0, len(f.split.held)), rowsOf(b.pair, len(f.split.held), b.pair.Rows)
	} else {
		held = b.held[i]
	}
	multiplyTo(b.v, 1, plain, columnsOf(fit.v, 0, held.Rows), plain, held, 0)
	multiplyTo(b.v, 1, plain, columnsOf(fit.v, held.Rows, fit.v.Cols), plain, train, 1)
	b.u = reshaped(b.u, fit.r, width)
	multiplyTo(b.u, 1, plain, fit.h, plain, b.out.b, 0)

	m := b.moments.first(width)
	people := float64(f.to - f.from)
	for c := range width {
		m.n[c], m.p[c], m.pp[c], m.tp[c] = people, 0, 0, 0
		m.tt[c] = b.out.square[c]
		// The first basis column is 1: v there is (the sum of C c) - 2 (the sum of y).
		m.t[c] = -b.v.Data[fit.r*width+c] - b.out.sum[c]
	}
	for j := range fit.r {
		weights, w, hb := row(b.out.b, j), row(b.v, j), row(b.u, j)
		total := fit.total[j]
		for c, weight := range weights {
			m.p[c] += weight * total
			m.pp[c] += weight * hb[c]
			m.tp[c] += weight * w[c]
		}
	}
	for j := range fit.k {
		coefficient, v := row(b.out.c, j), row(b.v, fit.r+j)
		for c, value := range coefficient {
			m.tt[c] += value * v[c]
		}
	}
	for c := range width {
		m.tt[c], m.pp[c] = max(m.tt[c], 0), max(m.pp[c], 0)
	}
	return m
}

func (m moments) clear() {
	for _, v := range [][]float64{m.n, m.t, m.tt, m.p, m.pp, m.tp} {
		clear(v)
	}
}

// first returns the first columns of m.
func (m moments) first(columns int) moments {
	return moments{m.n[:columns], m.t[:columns], m.tt[:columns], m.p[:columns], m.pp[:columns], m.tp[:columns]}
}

// predictions are the people held out of one outer fold, one row a person.
type predictions struct {
	baseline, target, predicted blas64.General
}

// predict returns every held-out person's values on the columns' own scale
// (mean square 1 over all people).
func (b *block) predict(f *fold) predictions {
	people := f.to - f.from
	out := &b.heldOut
	out.baseline = reshaped(out.baseline, people, b.width)
	out.target = reshaped(out.target, people, b.width)
	out.predicted = reshaped(out.predicted, people, b.width)
	multiplyTo(out.baseline, 1, plain, f.fit.cHeld, plain, b.out.c, 0)
	floats.SubTo(out.target.Data, rowsOf(b.y, f.from, f.to).Data[:people*b.width], out.baseline.Data)
	multiplyTo(out.predicted, 1, plain, f.fit.p, plain, b.out.b, 0)
	return *out
}

// pairs are the targets and predictions of all people of a repeat, a column of
// the block after another.
type pairs struct{ target, predicted []float64 }

// keepPairs puts the people of a fold into the block's pairs.
func (b *block) keepPairs(f *fold) {
	held, people := b.predict(f), b.y.Rows
	if len(b.kept.target) < people*b.width {
		b.kept = pairs{make([]float64, people*b.width), make([]float64, people*b.width)}
	}
	for r := range held.target.Rows {
		target, predicted := row(held.target, r), row(held.predicted, r)
		for c := range target {
			b.kept.target[c*people+f.from+r], b.kept.predicted[c*people+f.from+r] = target[c], predicted[c]
		}
	}
}

// pairsOf returns the pairs of column c.
func (b *block) pairsOf(c int) (target, predicted []float64) {
	people := b.y.Rows
	return b.kept.target[c*people:][:people], b.kept.predicted[c*people:][:people]
}
