// Package parallel does numbered pieces of work on several goroutines, so that
// neither results nor errors depend on how many there are.
package parallel

import (
	"context"
	"sync"
	"sync/atomic"
)

// Do calls work(i, worker) once for each i = 0..n-1, from so many workers
// (numbered from 0, at least one). It returns the error of the smallest i that
// has one, or that of a context that has ended; pieces that were not begun by
// then are left out. Pieces put their results into slots of their own, so that
// nothing depends on the order.
func Do(ctx context.Context, workers, n int, work func(i, worker int) error) error {
	errs := make([]error, n)
	var next atomic.Int64
	var failed atomic.Bool
	var group sync.WaitGroup
	for worker := range max(1, min(workers, n)) {
		group.Go(func() {
			for !failed.Load() && ctx.Err() == nil {
				i := int(next.Add(1)) - 1
				if i >= n {
					return
				}
				if errs[i] = work(i, worker); errs[i] != nil {
					failed.Store(true)
				}
			}
		})
	}
	group.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return ctx.Err()
}
