package study

import (
	"context"
	"sync"
	"sync/atomic"
)

// inParallel does work 0..n-1 on so many workers, each piece once. It returns
// the error of the first piece, by number, that failed, or that of a context
// that was ended; pieces not yet begun are then left out. Pieces put their
// results into slots of their own, so that nothing depends on the order.
func inParallel(ctx context.Context, workers, n int, work func(i int) error) error {
	var next atomic.Int64
	var failed atomic.Bool
	errs := make([]error, n)
	var wait sync.WaitGroup
	for range max(1, min(workers, n)) {
		wait.Go(func() {
			for !failed.Load() && ctx.Err() == nil {
				i := int(next.Add(1)) - 1
				if i >= n {
					return
				}
				if errs[i] = work(i); errs[i] != nil {
					failed.Store(true)
				}
			}
		})
	}
	wait.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return ctx.Err()
}
