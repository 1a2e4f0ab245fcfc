package dense

import (
	"math"
	"sync"
	"sync/atomic"
)

const (
	// workPerThread is how many multiply-adds a thread must have to do before
	// it is worth waking: a sixth of a millisecond with the fastest kernel.
	workPerThread = 8_000_000
	// smallWork is up to how many multiply-adds packing is not worth it.
	smallWork = 128
)

// scratch is the memory that one goroutine packs into.
type scratch struct {
	rows, columns []float64
	edge          [largestTile]float64
	turned        []float64 // the unknowns of Dtrsm, transposed
}

// spare keeps scratch between calls. It carries no values from one call to the
// next: whatever is read was written before in the same call.
var spare = sync.Pool{New: func() any { return new(scratch) }}

func borrow() *scratch { return spare.Get().(*scratch) }

func (s *scratch) giveBack() { spare.Put(s) }

// grow returns n numbers of the buffer, made anew where it is too small.
func grow(buffer *[]float64, n int) []float64 {
	if cap(*buffer) < n {
		*buffer = make([]float64, n)
	}
	return (*buffer)[:n]
}

// share does every part once, on so many goroutines, the calling one among
// them; each takes the next part when it is done with one.
func share(parts []block, threads int, do func(s *scratch, part block)) {
	var next atomic.Int64
	work := func() {
		s := borrow()
		for i := int(next.Add(1)) - 1; i < len(parts); i = int(next.Add(1)) - 1 {
			do(s, parts[i])
		}
		s.giveBack()
	}
	var others sync.WaitGroup
	for range min(threads, len(parts)) - 1 {
		others.Go(work)
	}
	work()
	others.Wait()
}

// packCost is what copying one number into a panel costs, in multiply-adds.
const packCost = 50

// cut divides a block of C over so many threads, with boundaries that leave
// whole tiles. Of the grids with about one or two parts a thread it takes the
// one whose slowest thread has the least to do: multiply-adds, and copies of
// each part's rows of A and columns of B.
func cut(whole block, threads int, kn *kernel) []block {
	var rows, columns int
	least := math.MaxInt
	for down := 1; down <= 2*threads; down++ {
		for each := 1; each <= 2; each++ {
			across := ceilDiv(each*threads, down)
			r := roundUp(ceilDiv(whole.rows, down), kn.height())
			c := roundUp(ceilDiv(whole.columns, across), kn.width)
			rounds := ceilDiv(ceilDiv(whole.rows, r)*ceilDiv(whole.columns, c), threads)
			if cost := rounds * (r*c + packCost*(r+c)); cost < least {
				rows, columns, least = r, c, cost
			}
		}
	}
	var parts []block
	for i := 0; i < whole.rows; i += rows {
		for j := 0; j < whole.columns; j += columns {
			parts = append(parts, block{
				whole.row + i, whole.column + j,
				min(rows, whole.rows-i), min(columns, whole.columns-j),
			})
		}
	}
	return parts
}
