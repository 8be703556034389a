package expr

import (
	"context"
	"errors"
	"sync"
	"sync/atomic"
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestShared(t *testing.T) {
	var s shared[int]
	var calls atomic.Int32
	started, release := make(chan struct{}), make(chan struct{})
	slow := func(context.Context) (int, error) {
		calls.Add(1)
		close(started)
		<-release
		return 7, nil
	}
	var group sync.WaitGroup
	group.Go(func() {
		x, err := s.get(context.Background(), slow)
		assert.Equal(t, 7, x)
		assert.NoError(t, err)
	})
	<-started
	// A waiter whose context ends does not wait.
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	never := func(context.Context) (int, error) { panic("computed twice") }
	_, err := s.get(ended, never)
	assert.ErrorIs(t, err, context.Canceled)
	for range 4 {
		group.Go(func() {
			x, err := s.get(context.Background(), never)
			assert.Equal(t, 7, x)
			assert.NoError(t, err)
		})
	}
	close(release)
	group.Wait()
	assert.EqualValues(t, 1, calls.Load())
}

// A failure is not kept: the next one computes again.
func TestSharedFailure(t *testing.T) {
	var s shared[string]
	failure := errors.New("failure")
	_, err := s.get(context.Background(), func(context.Context) (string, error) { return "", failure })
	assert.ErrorIs(t, err, failure)
	x, err := s.get(context.Background(), func(context.Context) (string, error) { return "value", nil })
	assert.NoError(t, err)
	assert.Equal(t, "value", x)
}
