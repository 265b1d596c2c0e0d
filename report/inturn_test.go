package report

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"sync/atomic"
	"testing"
)

// Tasks are finished in order, each by the worker that did it, whatever their number.
func TestInTurn(t *testing.T) {
	for _, workers := range []int{1, 2, 8} {
		for _, count := range []int{0, 1, 2, 100} {
			results := make([]int, workers)
			var finished []int
			err := inTurn(context.Background(), workers, count, func(worker, task int) error {
				results[worker] = task
				return nil
			}, func(worker, task int) error {
				if results[worker] != task {
					t.Errorf("worker %d finishes task %d with the result of %d", worker, task, results[worker])
				}
				finished = append(finished, task)
				return nil
			})
			if err != nil || len(finished) != count || !slices.IsSorted(finished) {
				t.Errorf("%d workers, %d tasks: finished %v, error %v", workers, count, finished, err)
			}
		}
	}
}

// The error is that of the lowest task that fails; none above it is finished, and most
// are not begun.
func TestInTurnAfterAFault(t *testing.T) {
	for _, isFinish := range []bool{false, true} {
		for range 20 {
			var begun atomic.Int64
			last := -1
			fail := func(task int) error {
				if task >= 30 {
					return fmt.Errorf("task %d", task)
				}
				return nil
			}
			err := inTurn(context.Background(), 4, 100_000, func(_, task int) error {
				begun.Add(1)
				if isFinish {
					return nil
				}
				return fail(task)
			}, func(_, task int) error {
				last = task
				return fail(task)
			})
			want := 29
			if isFinish {
				want = 30
			}
			if err == nil || err.Error() != "task 30" || last != want || begun.Load() > 40 {
				t.Fatalf("error %v, finished up to %d, begun %d", err, last, begun.Load())
			}
		}
	}
}

func TestInTurnCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	err := inTurn(ctx, 3, 1000, func(_, task int) error {
		if task == 10 {
			cancel()
		}
		return nil
	}, func(_, task int) error { return nil })
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
}
