package dense

import (
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync/atomic"
	"testing"
)

// Rows come panel by panel, term by term, row by row, times alpha, and panels
// differ by at most one row.
func TestPackRows(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, transposed := range []bool{false, true} {
		for rows := 1; rows < 40; rows++ {
			const depth, height, stride, alpha = 7, 12, 45, -1.5
			a := operand{randomNumbers(stride*stride, r), stride, transposed}
			got := (&scratch{}).packRows(a, depth, rows, height, alpha)
			at, row := 0, 0
			for panel := range got.count {
				h := got.height(panel)
				if h > height || h < rows/got.count {
					t.Fatalf("%d rows: panel %d has %d", rows, panel, h)
				}
				for l := range depth {
					for i := range h {
						if want := alpha * a.from(row+i, l).data[0]; got.data[at] != want {
							t.Fatalf("%d rows, transposed %v: term %d of row %d is %v, want %v", rows, transposed, l, row+i, got.data[at], want)
						}
						at++
					}
				}
				row += h
			}
			if row != rows || at != len(got.data) {
				t.Fatalf("%d rows: %d packed, %d numbers of %d", rows, row, at, len(got.data))
			}
		}
	}
}

// Columns come strip by strip, and a strip wider than what is left is filled
// with zeros, whatever the memory held before.
func TestPackColumns(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for _, transposed := range []bool{false, true} {
		for _, asIs := range []bool{false, true} {
			if transposed && asIs {
				continue
			}
			for columns := 1; columns < 40; columns++ {
				const depth, width, stride = 7, 8, 45
				b := operand{randomNumbers(stride*stride, r), stride, transposed}
				dirty := slices.Repeat([]float64{math.NaN()}, 1000)
				got := (&scratch{columns: dirty}).packColumns(b, depth, columns, width, asIs)
				for strip := range got.count() {
					start, step := got.at(strip)
					for l := range depth {
						for j := range width {
							column, want := strip*width+j, 0.0
							if column < columns {
								want = b.from(l, column).data[0]
							}
							if v := numberAfter(got, start, l*step+j); v != want {
								t.Fatalf("%d columns, transposed %v, in place %v: term %d of column %d is %v, want %v",
									columns, transposed, asIs, l, column, v, want)
							}
						}
					}
				}
			}
		}
	}
}

// numberAfter returns the number that stands so far after the start of a strip.
func numberAfter(s strips, start *float64, after int) float64 {
	for _, memory := range [][]float64{s.data, s.last} {
		for i := range memory {
			if &memory[i] == start {
				return memory[i+after]
			}
		}
	}
	panic("the strip starts nowhere")
}

func TestUnpackUndoesPack(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for vectors := 1; vectors < 12; vectors++ {
		const depth, stride = 9, 11
		src := randomNumbers(vectors*stride, r)
		packed, back := make([]float64, depth*vectors), slices.Clone(src)
		packAlong(packed, src, stride, depth, vectors, vectors)
		for i := range vectors {
			clear(back[i*stride:][:depth])
		}
		unpackAlong(back, packed, stride, depth, vectors)
		if !slices.Equal(back, src) {
			t.Errorf("%d vectors come back changed", vectors)
		}
	}
}

// Every part is done once, on as many goroutines as there are threads: the
// first parts wait for each other, and nobody takes a further one meanwhile.
func TestShare(t *testing.T) {
	for _, threads := range []int{1, 3} {
		var begun atomic.Int64
		var times [20]atomic.Int64
		together := make(chan struct{})
		var parts []block
		for i := range times {
			parts = append(parts, block{row: i})
		}
		share(parts, threads, func(_ *scratch, b block) {
			times[b.row].Add(1)
			if begun.Add(1) == int64(threads) {
				for range 1000 {
					runtime.Gosched() // room for a goroutine too many
				}
				if n := begun.Load(); n != int64(threads) {
					t.Errorf("%d parts at a time on %d threads", n, threads)
				}
				close(together)
			}
			<-together
		})
		for i := range times {
			if n := times[i].Load(); n != 1 {
				t.Errorf("%d threads: part %d was done %d times", threads, i, n)
			}
		}
	}
}
