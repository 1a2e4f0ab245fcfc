package parallel

import (
	"context"
	"errors"
	"testing"
)

func TestEveryPieceOnce(t *testing.T) {
	for _, workers := range []int{0, 1, 3, 100} {
		done := make([]int, 50)
		if err := Do(context.Background(), workers, len(done), func(i, worker int) error {
			if worker < 0 || worker >= max(workers, 1) {
				t.Errorf("worker %d of %d", worker, workers)
			}
			done[i]++
			return nil
		}); err != nil {
			t.Fatal(err)
		}
		for i, n := range done {
			if n != 1 {
				t.Errorf("%d workers: piece %d was done %d times", workers, i, n)
			}
		}
	}
}

func TestFirstErrorByNumber(t *testing.T) {
	first, second := errors.New("first"), errors.New("second")
	both := make(chan struct{})
	err := Do(context.Background(), 2, 2, func(i, _ int) error {
		if i == 0 {
			<-both // fails after the other piece has
			return first
		}
		close(both)
		return second
	})
	if err != first {
		t.Errorf("got %v", err)
	}
}

func TestStops(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	count := 0
	err := Do(ctx, 1, 100, func(i, _ int) error {
		if count++; i == 4 {
			cancel()
		}
		return nil
	})
	if err != context.Canceled || count != 5 {
		t.Errorf("%v after %d pieces", err, count)
	}
	if err := Do(context.Background(), 2, 0, nil); err != nil {
		t.Errorf("no work: %v", err)
	}
}
