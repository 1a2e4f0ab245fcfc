package predict

import (
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
)

// A block is the workspace in which a few trait columns go through the outer
// folds of a stage together. Every column has its own place in every table and
// no sum runs over columns, so that results do not depend on the neighbours.
type block struct {
	d       *Design
	l       *layout
	sources *sources // in the order of the layout
	folds   []*fold
	search  bool

	first, width int            // columns first..first+width-1
	y            blas64.General // people x width, in the order of the layout
	total        []float64      // sum of squares of each column over all people

	weights blas64.General // folds x people: fold.innerHeld
	squared blas64.General // people x width
	inside  blas64.General // folds x width: mean squares of the inner folds, added up

	everyone blas64.General   // cross-products of all people
	held     []blas64.General // per fold of the stage: cross-products of its people
	cells    []cellSums       // per fold of the stage
	byCell   []blas64.General // per cell: cross-products over all outer folds
	pair     blas64.General   // one split's sums: held-out people, then training people
	left     blas64.General   // training people of the fold, less the inner folds done
	train    blas64.General   // training people of the fold

	gathered blas64.General // rows of y of one inner fold

	whole          blas64.General // z and c of the outer fold
	z, v, u, terms blas64.General // of an inner fold
	errors         blas64.General // penalties x width, without the squares of y
	least          []float64      // of each column's errors

	out     outcome
	moments moments
	heldOut predictions
	kept    pairs
}

// cellSums are the cross-products of those cells of one outer fold that hold
// people.
type cellSums struct {
	at   []int // per cell: place in sums, or -1
	sums []blas64.General
}

// outcome is what one outer fold says of each column.
type outcome struct {
	choice   []int          // the penalty's place
	mse      []float64      // mean over inner folds of the mean squared error at it; NaN without a search
	constant []bool         // nothing is left of the trait in training: predictions are 0
	sum      []float64      // over the held-out people, of y
	square   []float64      // and of its square
	c        blas64.General // k x width: coefficients on the basis
	b        blas64.General // r x width: weights of the directions
}

// run takes columns first..first+width-1, which y holds, through the folds.
func (b *block) run(visit func(b *block, i int, f *fold)) {
	b.sumSquares()
	if !b.d.rows {
		b.crossProducts()
	}
	for i, f := range b.folds {
		b.fit(i, f)
		b.searchPenalty(i, f)
		b.weigh(f)
		visit(b, i, f)
	}
}

func (b *block) sumSquares() {
	clear(b.total)
	for i := range b.y.Rows {
		from, to := row(b.y, i), row(b.squared, i)
		for c, v := range from {
			to[c] = v * v
			b.total[c] += to[c]
		}
	}
	if b.search {
		multiplyTo(b.inside, 1, plain, b.weights, plain, b.squared, 0)
	}
}

// crossProducts sums sources times traits over the people of each outer fold,
// or of each cell, and over everyone.
func (b *block) crossProducts() {
	from, to := b.folds[0].from, b.folds[len(b.folds)-1].to
	if b.l.cells != nil {
		for _, sums := range b.byCell {
			clear(sums.Data)
		}
		for o, cells := range b.l.cells {
			inStage := o >= b.folds[0].outer && o <= b.folds[len(b.folds)-1].outer
			for c, s := range cells {
				if !inStage {
					b.over(s.from, s.to, b.byCell[s.cell], 1)
					continue
				}
				sums := b.cells[o-b.folds[0].outer].sums[c]
				b.over(s.from, s.to, sums, 0)
				floats.Add(b.byCell[s.cell].Data, sums.Data)
			}
		}
		for i := range b.folds {
			clear(b.held[i].Data)
			for _, sums := range b.cells[i].sums {
				floats.Add(b.held[i].Data, sums.Data)
			}
		}
		copy(b.everyone.Data, b.byCell[0].Data)
		for _, sums := range b.byCell[1:] {
			floats.Add(b.everyone.Data, sums.Data)
		}
		return
	}
	b.over(0, from, b.everyone, 0)
	b.over(to, b.y.Rows, b.everyone, 1)
	for i, f := range b.folds {
		b.over(f.from, f.to, b.held[i], 0)
		floats.Add(b.everyone.Data, b.held[i].Data)
	}
}

// over adds the cross-products of rows from..to-1 to beta times sums.
func (b *block) over(from, to int, sums blas64.General, beta float64) {
	multiplyTo(sums, 1, turned, rowsOf(b.sources.all, from, to), plain, rowsOf(b.y, from, to), beta)
}
