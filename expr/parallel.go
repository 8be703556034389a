package expr

import (
	"runtime"
	"sync"
)

// parallelLeast is the number of pieces, each of some ten microseconds, from
// which a second core pays.
var parallelLeast = 12

// InParallel calls work for 0, ..., n-1, on two cores if there are enough of
// them, and returns the error of the least index. The calls must not depend on
// each other.
func InParallel(n int, work func(i int) error) error {
	if n < parallelLeast || runtime.GOMAXPROCS(0) < 2 {
		for i := range n {
			if err := work(i); err != nil {
				return err
			}
		}
		return nil
	}
	errs := make([]error, n)
	var wg sync.WaitGroup
	for start := range 2 {
		wg.Go(func() {
			for i := start; i < n; i += 2 {
				errs[i] = work(i)
			}
		})
	}
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}
