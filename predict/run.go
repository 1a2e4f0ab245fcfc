package predict

import (
	"context"
	"sync"

	"gonum.org/v1/gonum/blas/blas64"

	"kindwell/internal/parallel"
)

const (
	blockBytes  = 8 << 20 // about what the tables of a block take
	widestBlock = 128     // columns
	panel       = 16      // block widths are multiples of it
)

// columns are trait columns standardised over all people, made when needed.
type columns interface {
	// count is the number of columns.
	count() int
	// fillTo sets column c of dst to column first+c, row r being person
	// order[r].
	fillTo(dst blas64.General, first int, order []int)
}

// A visitor takes what the folds say of the columns. For one block of columns
// its methods are called from one goroutine, folds in order.
type visitor interface {
	// fold is called with the fold at place i of the stage.
	fold(b *block, i int, f *fold)
	// done is called when a block has been through a stage.
	done(b *block)
	// repeated is called, from one goroutine, when all columns have been
	// through all folds of a repeat.
	repeated(repeat int)
}

// run takes all columns through all folds: repeat by repeat, stage by stage,
// blocks of columns in parallel. Columns are independent, so that neither the
// number of workers nor the blocks change a result. progress is told the share
// of the work done, from one goroutine at a time.
func (d *Design) run(ctx context.Context, cols columns, search bool, v visitor, progress func(done float64)) error {
	folds := 0
	for _, l := range d.layouts {
		folds += l.outerCount()
	}
	var mutex sync.Mutex
	finished, all := 0, folds*cols.count()
	for i, s := range d.stages {
		decomposed, err := d.folds(ctx, i)
		if err != nil {
			return err
		}
		l := d.layouts[s.repeat]
		ordered := d.source.inOrder(l)
		width := d.blockWidth(l, decomposed)
		blocks := (cols.count() + width - 1) / width
		workspaces := make([]*block, min(d.opt.Workers, blocks))
		err = parallel.Do(ctx, d.opt.Workers, blocks, func(i, worker int) error {
			b := workspaces[worker]
			if b == nil {
				b = d.newBlock(l, ordered, decomposed, min(width, cols.count()), search)
				workspaces[worker] = b
			}
			b.resize(i*width, min(width, cols.count()-i*width))
			cols.fillTo(b.y, b.first, l.order)
			b.run(v.fold)
			v.done(b)
			if progress != nil {
				mutex.Lock()
				finished += b.width * len(decomposed)
				progress(float64(finished) / float64(all))
				mutex.Unlock()
			}
			return nil
		})
		if err != nil {
			return err
		}
		if s.to == l.outerCount() {
			v.repeated(s.repeat)
		}
	}
	return nil
}

// blockWidth returns how many columns go together so that the tables of a
// block stay near blockBytes.
func (d *Design) blockWidth(l *layout, folds []*fold) int {
	numbers := 3*l.people() + 8*d.directions() + len(d.opt.Penalties)
	m := d.source.all.Cols
	if !d.rows {
		numbers += m * (len(folds) + 6)
		if l.cells != nil {
			for _, f := range folds {
				numbers += m * (len(l.cells[f.outer]) + 1)
			}
		}
	}
	width := blockBytes / 8 / numbers / panel * panel
	return min(max(width, panel), widestBlock)
}

// directions is the largest number of directions and basis columns of a split.
func (d *Design) directions() int { return min(d.source.p, d.people) + d.source.k }

// newBlock returns a workspace for up to so many columns.
func (d *Design) newBlock(l *layout, sources *sources, folds []*fold, width int, search bool) *block {
	b := &block{d: d, l: l, sources: sources, folds: folds, search: search}
	n, k, m := l.people(), d.source.k, sources.all.Cols
	table := func(rows int) blas64.General { return newTable(rows, width) }
	b.y, b.squared = table(n), table(n)
	b.inside, b.errors = table(len(folds)), table(len(d.opt.Penalties))
	b.weights = newTable(len(folds), n)
	largestInner, largestHeld := 0, 0
	for i, f := range folds {
		copy(row(b.weights, i), f.innerHeld)
		largestHeld = max(largestHeld, f.to-f.from)
		for _, in := range f.inner {
			largestInner = max(largestInner, len(in.split.held))
		}
	}
	if d.rows {
		b.pair = table(n)
	} else {
		b.pair, b.left, b.train, b.everyone = table(2*m), table(m), table(m), table(m)
		for range folds {
			b.held = append(b.held, table(m))
		}
		if l.cells == nil {
			b.gathered = table(largestInner)
		} else {
			b.newCells(table, m)
		}
	}
	r := d.directions()
	b.whole, b.z, b.v, b.u, b.terms = table(r), table(r), table(r), table(r), table(2*r)
	b.total, b.least = make([]float64, width), make([]float64, width)
	b.out = outcome{
		choice: make([]int, width), mse: make([]float64, width), constant: make([]bool, width),
		sum: make([]float64, width), square: make([]float64, width), b: table(r - k),
	}
	b.moments = newMoments(width)
	b.heldOut = predictions{table(largestHeld), table(largestHeld), table(largestHeld)}
	return b
}

// newCells makes room for the sums of every cell with people in the stage.
func (b *block) newCells(table func(rows int) blas64.General, m int) {
	count := 0
	for _, cells := range b.l.cells {
		for _, s := range cells {
			count = max(count, s.cell+1)
		}
	}
	for range count {
		b.byCell = append(b.byCell, table(m))
	}
	for _, f := range b.folds {
		sums := cellSums{at: make([]int, count)}
		for c := range sums.at {
			sums.at[c] = -1
		}
		for i, s := range b.l.cells[f.outer] {
			sums.at[s.cell] = i
			sums.sums = append(sums.sums, table(m))
		}
		b.cells = append(b.cells, sums)
	}
}

// resize makes the block hold columns first..first+width-1.
func (b *block) resize(first, width int) {
	b.first, b.width = first, width
	again := func(a *blas64.General) { *a = reshaped(*a, a.Rows, width) }
	for _, a := range []*blas64.General{&b.y, &b.squared, &b.inside, &b.errors, &b.left, &b.train, &b.everyone} {
		again(a)
	}
	for i := range b.held {
		again(&b.held[i])
	}
	for i := range b.byCell {
		again(&b.byCell[i])
	}
	for i := range b.cells {
		for c := range b.cells[i].sums {
			again(&b.cells[i].sums[c])
		}
	}
	b.total, b.least = b.total[:width], b.least[:width]
	b.out.choice, b.out.mse, b.out.constant = b.out.choice[:width], b.out.mse[:width], b.out.constant[:width]
	b.out.sum, b.out.square = b.out.sum[:width], b.out.square[:width]
}
