package predict

import "math"

// tally is the visitor of Null: it keeps a number or two a column while the
// folds go by, and has the statistic of every column in the end.
type tally struct {
	metric Metric
	pooled bool      // over all held-out pairs of a repeat, not fold by fold
	scale  []float64 // per trait, what one unit of the columns is
	people float64

	values []float64 // per column: sum over folds, or repeats when pooled
	parts  int       // how many are summed

	sums     moments   // pooled, per column: of the repeat so far
	absolute []float64 // pooled MAE, per column: likewise
}

func newTally(d *Design, cols *rearranged) *tally {
	count := cols.count()
	t := &tally{
		metric: d.opt.Metric,
		pooled: d.perFamily || !d.opt.Metric.perFold(),
		scale:  cols.scale,
		people: float64(d.people),
		values: make([]float64, count),
		parts:  d.sizes.folds,
	}
	if t.pooled {
		t.parts = len(d.layouts)
	}
	switch {
	case t.pooled && t.metric == MAE:
		t.absolute = make([]float64, count)
	case t.pooled && t.metric != Rho:
		t.sums = newMoments(count)
	}
	return t
}

func (t *tally) fold(b *block, i int, f *fold) {
	switch t.metric {
	case Rho:
		b.keepPairs(f)
	case MAE:
		sums, people := b.absoluteErrors(f)
		if t.pooled {
			addTo(t.absolute[b.first:], sums, 1)
		} else {
			addTo(t.values[b.first:], sums, 1/people)
		}
	default:
		sums := b.sumsOf(i, f)
		if t.pooled {
			t.sums.add(sums, b.first)
			return
		}
		for c := range b.width {
			value, _ := scoreSums(t.metric, sums, c)
			t.values[b.first+c] += value
		}
	}
}

func (t *tally) done(b *block) {
	if t.metric != Rho {
		return
	}
	for c := range b.width {
		target, predicted := b.pairsOf(c)
		value, _ := scorePairs(Rho, target, predicted)
		t.values[b.first+c] += value
	}
}

func (t *tally) repeated(int) {
	switch {
	case t.absolute != nil:
		addTo(t.values, t.absolute, 1/t.people)
		clear(t.absolute)
	case t.sums.n != nil:
		for c := range t.values {
			value, _ := scoreSums(t.metric, t.sums, c)
			t.values[c] += value
		}
		t.sums.clear()
	}
}

// statistics returns the mean over folds or repeats of every column, errors in
// the units of the trait.
func (t *tally) statistics() []float64 {
	for c := range t.values {
		t.values[c] /= float64(t.parts)
		if t.metric.LowerIsBetter() {
			t.values[c] *= t.scale[c%len(t.scale)]
		}
	}
	return t.values
}

func addTo(dst, x []float64, factor float64) {
	for i, v := range x {
		dst[i] += factor * v
	}
}

// absoluteErrors returns the sum of absolute errors of each column over the
// people held out, and how many they are.
func (b *block) absoluteErrors(f *fold) (sums []float64, people float64) {
	held := b.predict(f)
	sums = make([]float64, b.width)
	for r := range held.target.Rows {
		target, predicted := row(held.target, r), row(held.predicted, r)
		for c, v := range target {
			sums[c] += math.Abs(v - predicted[c])
		}
	}
	return sums, float64(held.target.Rows)
}
