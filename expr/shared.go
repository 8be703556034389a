package expr

import (
	"context"
	"sync"
)

// shared is a value that is computed when first asked for, once for all who
// ask. Whoever waits for the computation of another stops when their own
// context ends, and takes over when the other fails. The zero value is ready.
type shared[T any] struct {
	mu    sync.Mutex
	done  bool
	value T
	busy  chan struct{} // closed when the computation under way ends
}

func (s *shared[T]) get(ctx context.Context, compute func(context.Context) (T, error)) (T, error) {
	for {
		s.mu.Lock()
		if s.done {
			s.mu.Unlock()
			return s.value, nil
		}
		if s.busy == nil {
			break
		}
		busy := s.busy
		s.mu.Unlock()
		select {
		case <-busy:
		case <-ctx.Done():
			var zero T
			return zero, ctx.Err()
		}
	}
	s.busy = make(chan struct{})
	s.mu.Unlock()
	value, err := compute(ctx)
	s.mu.Lock()
	defer s.mu.Unlock()
	if err == nil {
		s.done, s.value = true, value
	}
	close(s.busy)
	s.busy = nil
	return value, err
}
