package report

import (
	"context"
	"sync"
)

// inTurn does the tasks 0 … count-1 with several workers, who take them in rising
// order. A task has two parts: work is done beside other tasks, finish alone and in the
// order of the tasks; a worker does both before it takes another one. The error is that
// of the lowest task that fails, whatever the schedule.
func inTurn(ctx context.Context, workers, count int, work, finish func(worker, task int) error) error {
	var (
		lock  sync.Mutex
		turn  = sync.NewCond(&lock)
		next  int // task to be taken
		done  int // tasks that are finished
		fault error
		group sync.WaitGroup
	)
	take := func() (task int, ok bool) {
		lock.Lock()
		defer lock.Unlock()
		next++
		return next - 1, next <= count && fault == nil
	}
	inOrder := func(worker, task int, err error) {
		lock.Lock()
		defer lock.Unlock()
		for done != task {
			turn.Wait()
		}
		if fault == nil && err == nil {
			err = finish(worker, task)
		}
		if fault == nil {
			fault = err
		}
		done++
		turn.Broadcast()
	}
	for worker := range min(workers, count) {
		group.Go(func() {
			for {
				task, ok := take()
				if !ok {
					return
				}
				err := ctx.Err()
				if err == nil {
					err = work(worker, task)
				}
				inOrder(worker, task, err)
			}
		})
	}
	group.Wait()
	return fault
}
