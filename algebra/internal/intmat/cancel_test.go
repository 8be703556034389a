package intmat

import (
	"context"
	"math/rand/v2"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
)

func TestCancellationStopsSoon(t *testing.T) {
	r := rand.New(rand.NewPCG(17, 18))
	a := random(r, 250, 250, 1<<60)
	b := random(r, 250, 9, 1<<60)
	for name, run := range map[string]func(context.Context) error{
		"CharPoly": func(ctx context.Context) error { _, err := CharPoly(ctx, a); return err },
		"Det":      func(ctx context.Context) error { _, err := Det(ctx, a); return err },
		"Solve":    func(ctx context.Context) error { _, _, err := Solve(ctx, a, b); return err },
		"Inverse":  func(ctx context.Context) error { _, _, err := Inverse(ctx, a); return err },
		"Kernel":   func(ctx context.Context) error { _, err := Kernel(ctx, a[:125]); return err },
		"MinPoly":  func(ctx context.Context) error { _, err := MinPoly(ctx, a); return err },
	} {
		t.Run(name, func(t *testing.T) {
			ctx, cancel := context.WithCancel(t.Context())
			var at time.Time
			timer := time.AfterFunc(60*time.Millisecond, func() { at = time.Now(); cancel() })
			defer timer.Stop()
			err := run(ctx)
			require.ErrorIs(t, err, context.Canceled)
			require.Less(t, time.Since(at), 2*time.Second) // 100 ms, with room for a busy machine and the race detector
		})
	}
}

func TestCancelledBeforehand(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	a := identity(5)
	_, err := CharPoly(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, err = Det(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, _, err = Inverse(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, err = Kernel(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
	_, err = MinPoly(ctx, a)
	require.ErrorIs(t, err, context.Canceled)
}
