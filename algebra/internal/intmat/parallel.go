package intmat

import (
	"context"
	"sync"
	"sync/atomic"
)

// parallelNanos is the estimated work above which a second goroutine pays.
const parallelNanos = 1e6

// forEach runs task(ctx, 0), ..., task(ctx, n-1), on two goroutines when the
// estimated total of nanos is worth it. Tasks write to slots of their own, so
// that the result does not depend on the schedule. It returns the error of
// the least index that failed.
func forEach(ctx context.Context, n int, nanos float64, task func(context.Context, int) error) error {
	if n < 2 || nanos < parallelNanos {
		for i := range n {
			if err := task(ctx, i); err != nil {
				return err
			}
		}
		return nil
	}
	errs := make([]error, n)
	var next atomic.Int64
	var failed atomic.Bool
	worker := func() {
		for !failed.Load() {
			i := int(next.Add(1)) - 1
			if i >= n {
				return
			}
			if errs[i] = task(ctx, i); errs[i] != nil {
				failed.Store(true)
			}
		}
	}
	var wg sync.WaitGroup
	wg.Go(worker)
	worker()
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}
